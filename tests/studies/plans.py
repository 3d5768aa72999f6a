"""Small plans that the tests share; liquids and figures are invented."""

SYRUP = {"name": "custom", "density": 1410.0, "viscosity": 10.0, "surface_tension": 0.08}
CUP = {"cylinder": "70 mm", "depth": "30 mm"}

GRID = {
    "study": {"proof": False},
    "fixed": {**SYRUP, **CUP},
    "vary": {
        "frequency": {"from": "30 Hz", "to": "80 Hz", "count": 30},
        "acceleration": {"from": "5 g_n", "to": "100 g_n", "count": 40},
    },
}

DRAWN = {
    "study": {"proof": False},
    "fixed": {"name": "custom", "density": 1410.0, "surface_tension": 0.08, **CUP, "frequency": "50 Hz"},
    "vary": {"acceleration": ["28 g_n", "32 g_n"]},
    "uncertain": {"viscosity": {"distribution": "lognormal", "median": "10 Pa*s", "factor": 1.3}},
    "sample": {"method": "latin hypercube", "count": 300, "seed": 5},
}

TOML = """
[study]
title = "Carriers (invented)"
proof = false

[fixed]
name = "custom"
density = "1410 kg/m**3"
viscosity = "10 Pa*s"
surface_tension = "80 mN/m"
cylinder = "70 mm"
depth = "30 mm"

[vary]
frequency = {from = "30 Hz", to = "80 Hz", count = FREQUENCIES}
acceleration = {from = "5 g_n", to = "100 g_n", count = 100}
"""


def toml_plan(folder, frequencies=20):
    """Write the plan of a grid and return its path."""
    path = folder / "plan.toml"
    path.write_text(TOML.replace("FREQUENCIES", str(frequencies)))
    return path
