"""Laws fitted to measured points: laws that made the points are found again, faults are told at once."""

import numpy as np
import pytest

from containment.errors import InputError
from containment.given.tables.fitting import fit_points
from containment.given.tables.laws import LAWS


@pytest.fixture
def points(tmp_path):
    def write(text, name="points.csv"):
        path = tmp_path / name
        path.write_bytes(text.encode("utf-8") if isinstance(text, str) else text)
        return path

    return write


def made(law, coefficients, celsius, head):
    kelvin = np.asarray(celsius) + 273.15
    values = LAWS[law].function(kelvin, coefficients)
    return f"temperature [degC],{head}\n" + "".join(f"{t:.10g},{v:.12g}\n" for t, v in zip(celsius, values, strict=True))


@pytest.mark.parametrize(
    ("law", "coefficients", "head", "name"),
    [
        ("andrade", {"A": 2e-6, "B": 4200.0}, "viscosity [Pa*s]", "viscosity"),
        ("vogel", {"A": 2.2e-5, "B": 1395.0, "T0": 162.0}, "viscosity [Pa*s]", "viscosity"),
        ("walther", {"A": 8.59, "B": 3.2712}, "kinematic_viscosity [mm2/s]", "kinematic_viscosity"),
        ("polynomial", {"c0": 974.0, "c1": -0.68}, "density [kg/m3]", "density"),
        ("polynomial", {"c0": 39.0, "c1": -0.07, "c2": -2e-4}, "surface_tension [mN/m]", "surface_tension"),
        ("andrade", {"A": 2e11, "B": -6000.0}, "vapour_pressure [Pa]", "vapour_pressure"),
    ],
)
def test_finds_the_law_that_made_the_points(points, law, coefficients, head, name):
    celsius = [5.0, 15.0, 25.0, 40.0, 60.0, 80.0, 100.0]
    (found,) = fit_points(points(made(law, coefficients, celsius, head)))
    assert found.name == name
    best = found.fits[0]
    if best.law == "vogel" and law == "andrade":  # the same law with T0 near 0
        assert abs(best.coefficients["T0"]) < 5.0
    else:
        assert best.law == law
    between = np.linspace(280.0, 370.0, 37)
    fitted = LAWS[best.law].function(between, best.coefficients)
    np.testing.assert_allclose(fitted, LAWS[law].function(between, coefficients), rtol=2e-4)
    assert best.spread < 1e-4


def test_meets_the_standards_two_point_chart(points):
    # ASTM D341 through 404 mm2/s at 40 and 28 mm2/s at 100 degC gives 132.1 at 60 degC: worked example read at olezol.com
    (found,) = fit_points(points("temperature [degC],kinematic_viscosity [mm2/s]\n40,404\n100,28\n"))
    assert found.fits[0].law == "walther"
    value = LAWS["walther"].function(np.array(333.15), found.fits[0].coefficients)
    assert float(value) == pytest.approx(132.126, rel=5e-4)


def test_residuals_show_a_wrong_point(points):
    text = made("polynomial", {"c0": 1000.0, "c1": -0.6}, [0.0, 20.0, 40.0, 60.0, 80.0], "density [kg/m3]")
    (found,) = fit_points(points(text.replace("40,976", "40,1200")))
    best = found.fits[0]
    assert int(np.argmax(np.abs(best.residuals))) == 2
    assert best.spread > 0.02


def test_spread_of_noisy_points_is_the_noise(points):
    noise = np.random.default_rng(7).normal(0.0, 0.03, 200)
    celsius = np.linspace(10.0, 90.0, 200)
    values = 3e-6 * np.exp(4000.0 / (celsius + 273.15)) * (1.0 + noise)
    rows = "".join(f"{t:.6f},{v:.9g}\n" for t, v in zip(celsius, values, strict=True))
    (found,) = fit_points(points("temperature [degC],viscosity [Pa*s]\n" + rows))
    andrade = next(fit for fit in found.fits if fit.law == "andrade")
    assert andrade.spread == pytest.approx(0.03, rel=0.15)


def test_tabulated_goes_through_the_points(points):
    (found,) = fit_points(points("temperature [degC],viscosity [mPa*s]\n20,900\n40,300\n60,150\n"))
    through = next(fit for fit in found.fits if fit.law == "tabulated_log")
    at = LAWS["tabulated_log"].function(np.array([293.15, 313.15, 333.15]), through.coefficients)
    np.testing.assert_allclose(at, [0.9, 0.3, 0.15], rtol=1e-9)


def test_empty_cells_leave_out_a_point_of_one_property_only(points):
    text = "temperature [degC],viscosity [Pa*s],density [kg/m3]\n20,1.0,1000\n40,0.4,\n60,0.2,980\n"
    viscosity, density = fit_points(points(text))
    assert len(viscosity.values) == 3
    assert len(density.values) == 2


def test_tells_all_faults_at_once(points):
    text = "temperature [degC],viscosity [mPa*s]\n20,1,2\nx,3\n40,-5\n50,\"1,5\"\n"
    with pytest.raises(InputError) as error:
        fit_points(points(text))
    said = str(error.value)
    for line in ("line 2", "line 3", "line 4", "line 5"):
        assert line in said


@pytest.mark.parametrize(
    "text",
    [
        "",
        "# nothing\n",
        "temperature,viscosity [Pa*s]\n20,1\n40,2\n",
        "temperature [degC],viscosity [kg]\n20,1\n40,2\n",
        "temperature [degC],viscosity [Pa*s],viscosity [Pa*s]\n20,1,1\n40,2,2\n",
        "temperature [degC],viscosity [Pa*s],kinematic_viscosity [mm2/s]\n20,1,1\n40,2,2\n",
        "viscosity [Pa*s]\n1\n2\n",
        "temperature [degC]\n1\n2\n",
        "temperature [degC],viscosity [Pa*s]\n20,1\n",
        "temperature [degC],viscosity [Pa*s]\n20,1\n20.5,2\n",
        "temperature [degC],viscosity [Pa*s]\n20,=1+1\n40,2\n",
        "temperature [degC],viscosity [Pa*s]\n20,1e999\n40,2\n",
        "temperature [degC],viscosity [Pa*s]\n20,nan\n40,2\n",
        'temperature [degC],viscosity [Pa*s]\n20,"1\n40,2\n',
        b"\xff\xfetemperature",
        b"temperature [degC],viscosity [Pa*s]\n20,\x00\n",
        b"\x89PNG\r\n\x1a\n" * 10,
        "x" * 3_000_000,
    ],
)
def test_refuses_files_that_cannot_be_used(points, text):
    with pytest.raises(InputError):
        fit_points(points(text))
