"""Size a shaker for a family of vessels (invented scenario: carriers of a damping fluid at a fill-and-flip station).

For each vessel: the least acceleration within a shaker's reach that leaves a factor of 1.25 to both edges of the ideal
layer, and the full verdict there, which also asks for the drag of the walls and a skin on the surface.
"""

import numpy as np

import containment as ct

DIAMETERS = (40.0, 55.0, 70.0)  # mm, invented
DEPTH = "25 mm"
FLUID = ct.Liquid(density="1.26 g/cm**3", viscosity="1.4 Pa*s", surface_tension="64 mN/m", name="damping fluid (invented)")
SHAKER = ct.DriveLimits(
    max_stroke="25 mm", max_velocity="1.8 m/s", max_acceleration="70 g_n", frequency_range=("20 Hz", "200 Hz")
)
FACTOR = 1.25


def main() -> None:
    frequencies = np.geomspace(20.0, 200.0, 60)
    print("vessel    frequency  acceleration  stroke")
    for diameter in DIAMETERS:
        vessel = ct.Cylinder(diameter=f"{diameter} mm", depth=DEPTH)
        window = ct.holding_window(FLUID, vessel, frequencies=frequencies, dwell="60 s", drive=SHAKER)
        need = FACTOR * window.lower
        fits = np.flatnonzero(FACTOR * need <= window.ceiling)
        if not len(fits):
            print(f"{diameter:3.0f} mm    no point of this shaker holds with a factor of {FACTOR:g}")
            continue
        best = fits[np.argmin(need[fits])]
        stroke = 2e3 * need[best] / (2.0 * np.pi * frequencies[best]) ** 2
        point = ct.Motion(frequency=float(frequencies[best]), acceleration=float(need[best]))
        verdict = ct.assess(FLUID, vessel, point, dwell="60 s", margin_factor=1.2)
        print(
            f"{diameter:3.0f} mm    {frequencies[best]:6.1f} Hz  {need[best] / 9.80665:8.1f} g_n  {stroke:5.2f} mm p-p, ",
            f"{verdict.answer.value}: {verdict.reason}"
        )


if __name__ == "__main__":
    main()
