"""Every liquid at two temperatures or more against the points of its source, written down apart from the table.

Sources: (C) a general-purpose property library, evaluated by its own functions; (R) read in a public page or program;
(M) from memory. Where a law was fitted to points, the points stand here and the tolerance is that of the fit. Nominal
grades (the viscosity is part of the name) are held against their name at the temperature of the standard.
"""

import numpy as np
import pytest

from containment.given.tables import liquid_entry, liquid_names

K = 273.15

POINTS = {
    # name: (tolerance, where the points come from, {degC: mPa s})
    "water": (0.005, "M: IAPWS 2008, release values", {20: 1.0016, 25: 0.8900, 50: 0.5465, 80: 0.3543}),
    "ethanol": (0.03, "M: Handbook of Chemistry and Physics", {0: 1.786, 25: 1.074, 50: 0.694, 75: 0.476}),
    "isopropanol": (0.04, "M: Handbook of Chemistry and Physics", {25: 2.038, 50: 1.028}),
    "glycerol": (0.05, "M: Segur & Oberstar 1951", {20: 1410.0, 30: 612.0, 40: 284.0, 60: 81.3, 80: 31.9}),
    "ethylene glycol": (0.05, "M: Handbook of Chemistry and Physics", {25: 16.1, 50: 6.55, 75: 3.34, 100: 1.98}),
    "propylene glycol": (0.13, "M: Handbook of Chemistry and Physics", {25: 40.4, 50: 11.3, 75: 4.77, 100: 2.75}),
    "1,3-propanediol": (0.10, "M: literature, rounded", {20: 52.0, 25: 43.0}),
    "1-octanol": (0.04, "M: Handbook of Chemistry and Physics", {25: 7.288, 50: 3.232, 75: 1.681, 100: 0.991}),
    "cyclohexanol": (0.08, "M: Handbook of Chemistry and Physics", {25: 57.5, 50: 12.3, 75: 4.27, 100: 1.98}),
    "benzyl alcohol": (0.08, "M: Handbook of Chemistry and Physics", {25: 5.474, 50: 2.760, 75: 1.618}),
    "hexadecane": (0.05, "M: Handbook of Chemistry and Physics", {25: 3.032, 50: 1.879, 75: 1.260, 100: 0.899}),
    "mercury": (0.01, "M: Handbook of Chemistry and Physics", {25: 1.526, 50: 1.402, 75: 1.312, 100: 1.245}),
    "ethylene glycol-water 50": (0.02, "C: CoolProp INCOMP::MEG[0.5]", {20: 3.693}),
    "propylene glycol-water 50": (0.04, "C: CoolProp INCOMP::MPG[0.5]", {20: 6.394}),
    "glycerol-water 60": (0.05, "M: Segur & Oberstar 1951", {20: 10.8, 40: 5.08, 60: 2.85}),
    "glycerol-water 70": (0.05, "M: Segur & Oberstar 1951", {20: 22.5, 40: 9.40, 60: 4.86}),
    "glycerol-water 80": (0.05, "M: Segur & Oberstar 1951", {20: 60.1, 40: 20.8, 60: 9.42}),
    "glycerol-water 90": (0.05, "M: Segur & Oberstar 1951", {20: 219.0, 40: 60.0, 60: 22.5}),
    "glycerol-water 95": (0.05, "M: Segur & Oberstar 1951", {20: 523.0, 40: 121.0, 60: 39.9}),
    "sucrose 50": (0.06, "R: CRC relative to water; M: about 7.0 at 40 degC", {20: 15.43, 40: 7.0}),
    "sucrose 60": (0.06, "R: CRC in a public program", {20: 56.5, 40: 21.28, 60: 9.83, 80: 5.40}),
    "sucrose 65": (0.05, "R: CRC, between 64 and 66 %; M: ICUMSA at 40 degC", {20: 147.6, 40: 44.4}),
    "sucrose 70": (0.05, "R: CRC relative to water; M: ICUMSA at 40 degC", {20: 481.6, 40: 114.0}),
    "sucrose 75": (0.12, "M: ICUMSA", {20: 2328.0, 40: 405.0}),
    "honey 16": (0.25, "R: rounded figures for clover honey", {14: 6e4, 20: 1.9e4, 30: 6500.0, 40: 2000.0, 50: 1000.0}),
    "honey 18": (0.25, "M: USDA at 25 degC; R: 16 % at 30, 40 degC, 1 % = 3.5 K", {25: 5100.0, 23: 6500.0, 33: 2000.0}),
    "honey 20": (0.25, "M: USDA at 25 degC; R: 16 % at 40, 50 degC, 1 % = 3.5 K", {25: 2200.0, 26: 2000.0, 36: 1000.0}),
    "glucose syrup 42 DE": (0.01, "M: corn refiners' figures", {26.67: 56e3, 37.78: 14.5e3, 48.89: 4.9e3, 60: 2.0e3}),
    "corn syrup 77": (0.02, "R: 15603 t^-2.44 Pa s in a public research code", {25: 6056.0, 35: 2665.0, 45: 1443.0}),
    "castor oil": (0.04, "M: Kaye & Laby", {10: 2418.0, 20: 986.0, 30: 451.0, 40: 231.0, 100: 16.9}),
    "olive oil": (0.015, "M: Handbook of Chemistry and Physics", {10: 138.0, 20: 84.0, 40: 36.3, 70: 12.4}),
    "rapeseed oil": (0.01, "M: typical", {20: 75.0, 40: 35.0, 60: 19.2, 80: 11.9}),
    "linseed oil": (0.01, "M: Handbook of Chemistry and Physics", {30: 33.1, 50: 17.6, 90: 7.1}),
    "soybean oil": (0.01, "M: Handbook of Chemistry and Physics; R: 69.4 at 20 degC", {20: 69.4, 50: 20.6, 90: 7.8}),
    "epoxy resin": (0.02, "M: typical", {25: 12.5e3, 40: 1900.0, 60: 300.0, 80: 80.0}),
    "polyester resin 450": (0.01, "its name, and B = 5000 K", {25: 450.0, 15: 804.0}),
    "polyether polyol 3000": (0.02, "M: typical", {25: 490.0, 40: 230.0}),
    "sodium silicate solution": (0.01, "M: typical, and B = 4300 K", {20: 180.0, 40: 70.5}),
    "gallium": (0.02, "M: Assael et al. 2012", {30: 1.685, 200: 0.965}),
    "tin melt": (0.05, "M: Assael et al. 2010: lg = -0.408 + 343.4/T", {240: 1.83, 350: 1.39, 450: 1.17}),
    "soda-lime glass melt": (0.003, "R: standard glass 710", {1181.7: 1e5, 1019.0: 1e6, 905.3: 1e7}),
    "gelatine gel 6.67": (0.0, "this entry's Kelvin-Voigt viscosity", {10: 5000.0, 20: 5000.0}),
    "carbomer gel 0.2": (0.01, "this entry's Herschel-Bulkley at 10 1/s", {15: 6160.0, 30: 6160.0}),
}  # fmt: skip

KINEMATIC = {
    # name: (tolerance, where from, {degC: mm2/s})
    **{
        f"ISO VG {grade}": (0.002, "ISO 3448: the grade at 40 degC; M: typical at 100 degC", {40: grade, 100: at_100})
        for grade, at_100 in (
            (32, 5.4), (46, 6.8), (68, 8.7), (100, 11.4), (150, 15.0), (220, 19.4), (320, 25.0), (460, 31.0), (680, 39.0),
            (1000, 49.0),
        )
    },
    **{
        # suppliers' law, read: lg v = lg v25 + 763.1/(273 + t) - 2.559
        f"silicone oil {grade}": (
            0.01, "its name; R: suppliers' law",
            {25: grade, 0: grade * 10 ** (763.1 / 273 - 2.559), 100: grade * 10 ** (763.1 / 373 - 2.559)},
        )
        for grade in (100, 350, 1000, 5000, 12500, 30000, 60000, 100000)
    },
    "gear oil 80W-90": (0.002, "M: typical; SAE J306 asks for 13.5 at 100 degC", {40: 139.0, 100: 14.4}),
    "polyisobutene 900": (0.002, "M: typical", {40: 7600.0, 100: 218.0}),
    "polyisobutene 1300": (0.002, "M: typical", {40: 24000.0, 100: 630.0}),
}  # fmt: skip

DENSITIES = {
    # name: (tolerance, {degC: kg/m3}, where from)
    "water": (1e-4, {4: 999.97, 20: 998.21, 80: 971.79}, "M: IAPWS-95"),
    "ethanol": (1e-3, {20: 789.4, 50: 763.1}, "M: handbook"),
    "glycerol": (1e-3, {20: 1261.1, 60: 1236.0}, "M: handbook"),
    "ethylene glycol": (2e-3, {20: 1113.5, 60: 1085.0}, "M: handbook"),
    "propylene glycol": (2e-3, {20: 1036.2, 60: 1006.0}, "M: handbook"),
    "mercury": (1e-4, {0: 13595.1, 20: 13545.9, 100: 13351.0}, "M: handbook; the law, range apart, at 0 degC"),
    "glycerol-water 60": (1e-3, {20: 1153.8}, "M: tables of the glycerol producers"),
    "glycerol-water 80": (1e-3, {20: 1208.5}, "M: tables of the glycerol producers"),
    "glycerol-water 95": (1e-3, {20: 1248.2}, "M: tables of the glycerol producers"),
    "sucrose 65": (1e-3, {20: 1316.5}, "M: ICUMSA"),
    "castor oil": (2e-3, {20: 961.0}, "R: 961 in a public page"),
    "honey 18": (2e-3, {20: 1417.0}, "R: a beekeepers' page"),
    "glucose syrup 42 DE": (3e-3, {37.8: 1415.0}, "R: specific gravity at 100 degF"),
    "gallium": (1e-3, {30: 6080.0, 100: 6036.0}, "C: chemicals, CRC"),
    "tin melt": (1e-3, {240: 6974.0, 350: 6902.0}, "C: chemicals, CRC"),
}

TENSIONS = {
    # name: (tolerance, {degC: mN/m}, where from)
    "water": (2e-3, {20: 72.74, 50: 67.94}, "M: IAPWS R1-76"),
    "ethanol": (0.025, {20: 22.4, 50: 19.9}, "M: Jasper 1972"),
    "glycerol": (0.02, {20: 63.4, 22: 63.6, 37: 62.6}, "M: handbook; R: 22 and 37 degC in a data listing"),
    "ethylene glycol": (0.01, {20: 48.4, 50: 45.8}, "M: Jasper 1972"),
    "mercury": (0.01, {20: 486.5}, "R: Perry & Roberts 1981, quoted in a public program"),
    "benzyl alcohol": (0.12, {20: 35.5}, "C: chemicals, Jasper 1972: the two sources disagree"),
    "silicone oil 1000": (0.02, {25: 21.2}, "M: suppliers"),
    "gallium": (0.03, {30: 712.0}, "M: handbook"),
    "tin melt": (0.03, {240: 548.0}, "M: handbook"),
    "honey 18": (0.10, {20: 55.0}, "R: 50 to 60 mN/m in a public page"),
}  # fmt: skip


def test_every_liquid_has_two_points_here_or_in_the_reference_libraries():
    single = {"ethylene glycol-water 50", "propylene glycol-water 50"}  # over all temperatures in test_reference_libraries
    here = {name: len(points) for name, (_, _, points) in (POINTS | KINEMATIC).items()}
    missing = [name for name in liquid_names() if here.get(name, 0) < 2 and name not in single]
    assert not missing, f"write down two points of the source of {missing}"


@pytest.mark.parametrize("name", POINTS)
def test_viscosity(name):
    tolerance, _, points = POINTS[name]
    kelvin = np.array(list(points)) + K
    np.testing.assert_allclose(1e3 * liquid_entry(name).viscosity.value(kelvin), list(points.values()), rtol=tolerance)


@pytest.mark.parametrize("name", KINEMATIC)
def test_kinematic_viscosity(name):
    tolerance, _, points = KINEMATIC[name]
    entry = liquid_entry(name)
    kelvin = np.array(list(points)) + K
    found = 1e6 * entry.viscosity.value(kelvin) / entry.density.value(kelvin)
    np.testing.assert_allclose(found, list(points.values()), rtol=tolerance)


@pytest.mark.parametrize("name", DENSITIES)
def test_density(name):
    tolerance, points, _ = DENSITIES[name]
    of = liquid_entry(name).density
    for celsius, value in points.items():
        if of.range_K[0] <= celsius + K <= of.range_K[1]:
            assert of.value(celsius + K) == pytest.approx(value, rel=tolerance)


@pytest.mark.parametrize("name", TENSIONS)
def test_surface_tension(name):
    tolerance, points, _ = TENSIONS[name]
    for celsius, value in points.items():
        assert 1e3 * liquid_entry(name).surface_tension.value(celsius + K) == pytest.approx(value, rel=tolerance)


def viscosity_index(at_40, at_100):
    """ASTM D2270 for more than 70 mm2/s at 100 degC, from memory."""
    y = at_100
    low, high = 0.8353 * y * y + 14.67 * y - 216.0, 0.1684 * y * y + 11.85 * y - 97.0
    if at_40 >= high:
        return (low - at_40) / (low - high) * 100.0
    n = (np.log(high) - np.log(at_40)) / np.log(y)
    return (10.0**n - 1.0) / 0.00715 + 100.0


def test_polyisobutenes_have_a_usual_viscosity_index():
    # 110 to 190, rising with the molar mass: common practice, from memory
    found = []
    for name in ("polyisobutene 900", "polyisobutene 1300"):
        entry = liquid_entry(name)
        at_40, at_100 = (1e6 * entry.viscosity.value(t + K) / entry.density.value(t + K) for t in (40, 100))
        found.append(viscosity_index(at_40, at_100))
    assert 110.0 < found[0] < found[1] < 190.0


def test_the_yield_stress_gel_s_stand_in_viscosity_is_its_model_at_ten_per_second():
    gel = liquid_entry("carbomer gel")
    r = gel.rheology
    assert r is not None
    at_ten = r["yield_stress"] / 10.0 + r["consistency"] * 10.0 ** (r["index"] - 1.0)
    assert gel.viscosity.value(293.15) == pytest.approx(at_ten, rel=0.01)
