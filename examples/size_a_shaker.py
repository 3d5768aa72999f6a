"""Size one shaker for a family of vessels (invented scenario: carriers of a damping fluid at a fill-and-flip station).

A grid of drive points is judged for every vessel. Of the points that hold all of them, the one that asks for the least
acceleration is proven vessel by vessel, and turned into what the shaker's data sheet must say.
"""

import numpy as np

import containment as ct

DIAMETERS = (0.040, 0.055, 0.070)  # m
DEPTH = "25 mm"
FLUID = {"name": "custom", "density": "1.26 g/cm**3", "viscosity": "1.4 Pa*s", "surface_tension": "64 mN/m"}
DWELL = "60 s"
PAYLOAD = 4.0  # kg of table, clamp and carriers
FREQUENCIES = np.geomspace(40.0, 200.0, 60)  # Hz
LEVELS = np.geomspace(20.0, 120.0, 90) * 9.80665  # m/s^2, peak
RESERVE = 1.3  # of the data sheet over what is needed


def main() -> None:
    grid = ct.sweep(
        **FLUID, depth=DEPTH, dwell=DWELL, surface="clean", cylinder=DIAMETERS, frequency=FREQUENCIES, acceleration=LEVELS,
        proof=False,
    )  # fmt: skip
    held = (grid.grid("verdict") == "held").all(axis=0)
    print(f"{len(grid)} cases; {held.sum()} of {held.size} drive points hold all {len(DIAMETERS)} vessels")
    if not held.any():
        return
    at, level = min(np.argwhere(held), key=lambda point: LEVELS[point[1]])
    motion = ct.Motion(frequency=FREQUENCIES[at], acceleration=LEVELS[level])
    print(f"least acceleration: {motion.acceleration / 9.80665:.1f} g_n at {motion.frequency:.1f} Hz")
    for diameter in DIAMETERS:
        verdict = ct.assess(
            ct.Liquid(density=FLUID["density"], viscosity=FLUID["viscosity"], surface_tension=FLUID["surface_tension"]),
            ct.Cylinder(diameter=diameter, depth=DEPTH), motion, dwell=DWELL, surroundings=ct.Surroundings(surface="clean"),
        )  # fmt: skip
        proof = "proven" if verdict.proven else "not proven"
        print(f"  {1e3 * diameter:.0f} mm: {verdict.answer.value}, {proof}")
    product = sum(0.25 * np.pi * diameter**2 for diameter in DIAMETERS) * 0.025 * 1260.0
    force = (PAYLOAD + product) * motion.acceleration
    print(f"the shaker's data sheet, with a reserve of {RESERVE:g}:")
    print(f"  stroke       {1e3 * motion.stroke * RESERVE:.2f} mm peak to peak")
    print(f"  velocity     {motion.velocity * RESERVE:.2f} m/s peak")
    print(f"  acceleration {motion.acceleration * RESERVE / 9.80665:.1f} g_n peak")
    print(f"  force        {force * RESERVE:.0f} N peak")


if __name__ == "__main__":
    main()
