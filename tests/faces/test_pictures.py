"""Pictures: they parse, name what they show in real text, repeat themselves byte for byte, and draw the right numbers."""

import json
import math
import re
import xml.etree.ElementTree as ET

import numpy as np
import pytest

import containment as ct
from containment.faces.command import main
from containment.faces.picture_file import inline_svg, save_picture
from containment.faces.picture_growth import draw_growth
from containment.faces.picture_map import MapPoints, draw_study_map, draw_verdict_map, map_points
from containment.faces.picture_mode import draw_mode, mode_shape
from containment.faces.picture_tornado import draw_tornado
from containment.faces.picture_viscosity import draw_viscosity
from containment.faces.picture_window import draw_window
from containment.faces.report_liquid import view_of
from containment.judgement.case import Case, allowance, spectrum_of
from containment.judgement.growth_curve import growth_curve
from containment.judgement.sensitivity import margin_at, sensitivities

pytest.importorskip("matplotlib", reason="pictures need matplotlib (extra: plot)")

G = 9.80665
SVG = "{http://www.w3.org/2000/svg}"
SYRUP = dict(density=1410.0, viscosity=10.0, surface_tension=0.08)
HOSTILE = "<script>alert(1)</script> $\\frac{ & \" ' ]]> $x_2$ \u202e"


def case_of(**properties):
    return Case(ct.Liquid(**(SYRUP | properties)), ct.Cylinder(diameter=0.07, depth=0.03), allowance(depth=0.03))


def words_of(svg):
    """Return the texts of an SVG as a reader can select them."""
    return [" ".join("".join(element.itertext()).split()) for element in ET.fromstring(svg).iter(f"{SVG}text")]


def window_figure(title="syrup"):
    case = case_of()
    verdict = ct.assess(case.liquid, case.vessel, ct.Motion(frequency=50.0, acceleration=40.0 * G))
    return draw_window(view_of(case, verdict), title)


def test_window_names_everything_in_real_text():
    words = words_of(inline_svg(window_figure(), name="a", text="x"))
    for label in ("frequency [Hz]", "peak acceleration [g_n]", "falls below", "waves break it up above", "HELD", "drive point",
                  "pulls off its base above", "syrup"):  # fmt: skip
        assert label in words
    assert any(word.startswith("1 least acceleration: 15.6 Hz, 19.2 g_n") for word in words)


def test_files_of_each_kind(tmp_path, capsys):
    arguments = ["window", "glycerol", "--cylinder", "70mm", "--depth", "30mm", "--against", "stroke"]
    for ending, begins in (("svg", b"<?xml"), ("png", b"\x89PNG\r\n"), ("pdf", b"%PDF-")):
        file = tmp_path / f"window.{ending}"
        assert main([*arguments, "--chart", str(file)]) == 0
        assert file.read_bytes().startswith(begins)
    ET.parse(tmp_path / "window.svg")
    assert "drawn to" in capsys.readouterr().out


def test_equal_input_gives_equal_files(tmp_path):
    for name in ("a.svg", "b.svg", "a.pdf", "b.pdf"):
        save_picture(window_figure(), str(tmp_path / name), "--chart")
    assert (tmp_path / "a.svg").read_bytes() == (tmp_path / "b.svg").read_bytes()
    assert (tmp_path / "a.pdf").read_bytes() == (tmp_path / "b.pdf").read_bytes()


def test_pictures_of_one_page_share_no_id_and_lose_no_reference():
    first, second = (inline_svg(window_figure(), name=name, text="x") for name in ("one", "two"))
    ids = [set(re.findall(r' id="([^"]*)"', svg)) for svg in (first, second)]
    assert ids[0] and not ids[0] & ids[1]
    for svg, known in zip((first, second), ids, strict=True):
        assert set(re.findall(r'href="#([^"]*)"', svg)) | set(re.findall(r"url\(#([^)]*)\)", svg)) <= known


def test_hostile_title_is_text_and_no_formula():
    svg = inline_svg(window_figure(HOSTILE), name="a", text=HOSTILE)
    assert "<script" not in svg
    root = ET.fromstring(svg)
    assert root.get("role") == "img" and root.get("aria-label").startswith("<script>alert(1)")
    assert any("$" in word and "alert(1)" in word for word in words_of(svg))


VESSELS = [
    ct.Cylinder(diameter=0.07, depth=0.03),
    ct.Annulus(inner_diameter=0.03, outer_diameter=0.08, depth=0.02),
    ct.Box(width=0.06, length=0.08, depth=0.02),
    ct.Slot(width=0.04, depth=0.02),
]


@pytest.mark.parametrize("vessel", VESSELS, ids=lambda v: v.kind)
@pytest.mark.parametrize("number", [0, 3, 7])
def test_mode_shape_obeys_the_wave_equation(vessel, number):
    """Laplacian of the surface = -k^2 times the surface: what makes it the mode of that wavenumber, whatever the walls."""
    k = float(spectrum_of(vessel).discrete[number])
    x, y, z = mode_shape(vessel, k)
    dx, dy = x[0, 1] - x[0, 0], y[1, 0] - y[0, 0]
    middle = z[1:-1, 1:-1]
    laplacian = (z[1:-1, 2:] - 2.0 * middle + z[1:-1, :-2]) / dx**2 + (z[2:, 1:-1] - 2.0 * middle + z[:-2, 1:-1]) / dy**2
    known = np.isfinite(laplacian)
    assert np.count_nonzero(known) > 3000
    assert np.abs(laplacian + k**2 * middle)[known].max() < 0.02 * k**2
    assert np.nanmax(np.abs(z)) == pytest.approx(1.0)


@pytest.mark.parametrize("vessel", VESSELS, ids=lambda v: v.kind)
def test_mode_meets_the_walls_level(vessel):
    """Contact line free to slide at 90 degrees: no slope across a wall."""
    k = float(spectrum_of(vessel).discrete[2])
    x, y, z = mode_shape(vessel, k)
    slope_x = np.gradient(z, x[0], axis=1) / k
    slope_y = np.gradient(z, y[:, 0], axis=0) / k
    if isinstance(vessel, ct.Box | ct.Slot):
        assert np.abs(slope_x[:, [0, -1]]).max() < 0.1 and np.abs(slope_y[[0, -1]]).max() < 0.1
        return
    r, angle = np.hypot(x, y), np.arctan2(y, x)
    radial = slope_x * np.cos(angle) + slope_y * np.sin(angle)
    step = x[0, 1] - x[0, 0]
    radii = [0.5 * vessel.diameter] if isinstance(vessel, ct.Cylinder) else [
        0.5 * vessel.inner_diameter, 0.5 * vessel.outer_diameter
    ]
    for radius in radii:
        near = np.isfinite(radial) & (np.abs(r - radius) < 2.0 * step)
        assert np.abs(radial[near]).max() < 0.2, "slope at a wall"


@pytest.mark.parametrize("vessel", [ct.Unbounded(depth=0.02), ct.Cylinder(diameter=0.07, depth=0.03, contact_line="pinned")])
def test_no_shape_where_there_is_no_single_mode(vessel):
    assert mode_shape(vessel, 100.0) is None and draw_mode(vessel, 100.0) is None


def test_growth_vanishes_for_the_binding_mode_at_the_lower_edge():
    """The edge is where the binding mode neither grows nor dies out: two routes of the physics have to meet there."""
    case = case_of()
    edges = case.edges(np.array([60.0]))
    curve = growth_curve(case, frequency=60.0, acceleration=float(edges.lower[0]))
    i = int(np.argmin(np.abs(curve.modes - edges.lower_wavenumber[0])))
    assert curve.modes[i] == pytest.approx(edges.lower_wavenumber[0], rel=1e-9)
    assert abs(curve.mode_rates[i]) < 1e-6 * curve.at_rest.max()
    above = growth_curve(case, frequency=60.0, acceleration=1.2 * float(edges.lower[0]))
    assert np.all(above.mode_rates < 0.0)


def test_growth_without_shaking_is_that_of_the_layer_at_rest():
    case = case_of()
    curve = growth_curve(case, frequency=60.0, acceleration=1e-3)
    growing = curve.at_rest > 0.05
    assert np.allclose(curve.shaken[growing], curve.at_rest[growing], rtol=1e-3)


@pytest.mark.parametrize("changed", ["pinned", "cushion", "crank"])
def test_growth_curve_is_left_out_where_it_is_not_known(changed):
    vessel = ct.Cylinder(diameter=0.07, depth=0.03, contact_line="pinned" if changed == "pinned" else "sliding")
    around = ct.Surroundings(cushion=0.02) if changed == "cushion" else ct.Surroundings()
    shape = [ct.waveform(crank_ratio=0.2)] if changed == "crank" else []
    case = Case(ct.Liquid(**SYRUP), vessel, allowance(depth=0.03), around, *shape)
    assert growth_curve(case, frequency=50.0, acceleration=100.0) is None


def test_sensitivity_to_the_acceleration_is_the_ratio_itself():
    """Near the lower edge the margin is a / a_low: a tenth more acceleration is a tenth more margin."""
    case = case_of()
    lower = float(case.edges(np.array([60.0])).lower[0])
    at = {"frequency": 60.0, "acceleration": 1.3 * lower}
    assert margin_at(case, **at) == pytest.approx(1.3)
    row = next(row for row in sensitivities(case, **at) if row.name == "acceleration")
    assert (row.low, row.high) == pytest.approx((1.17, 1.43))


def test_sensitivities_are_sorted_and_use_stated_uncertainty():
    liquid = ct.liquid("glycerol")
    case = Case(liquid, ct.Cylinder(diameter=0.07, depth=0.03), allowance(depth=0.03))
    rows = sensitivities(case, frequency=100.0, acceleration=60.0 * G)
    assert [row.least for row in rows] == sorted(row.least for row in rows)
    viscosity = next(row for row in rows if row.name == "viscosity")
    assert viscosity.stated and viscosity.change == liquid.uncertainty["viscosity"]
    assert not next(row for row in rows if row.name == "depth").stated


def test_other_pictures_name_what_they_show():
    case = case_of()
    at = {"frequency": 50.0, "acceleration": 40.0 * G}
    growth = words_of(inline_svg(draw_growth(growth_curve(case, **at), case.spectrum, "title"), name="a", text="x"))
    assert {"without shaking", "at the drive point", "wavelength [mm]", "growth rate [1/s]"} <= set(growth)
    mode = words_of(inline_svg(draw_mode(case.vessel, float(case.spectrum.discrete[0])), name="a", text="x"))
    assert {"Surface from below", "base of the vessel"} <= set(mode)
    rows = sensitivities(case, **at)
    tornado = words_of(inline_svg(draw_tornado(rows, 1.9, margin_factor=1.25, title="t"), name="a", text="x"))
    assert {"edge", "marginal below", "viscosity, 10 %*"} <= set(tornado)
    liquid = ct.liquid("glycerol")
    verdict = ct.assess(liquid, case.vessel, ct.Motion(frequency=100.0, acceleration=60.0 * G), ranges=True)
    viscosity = words_of(inline_svg(draw_viscosity(liquid, verdict.held_over), name="a", text="x"))
    assert {"held", "viscosity [Pa s]", "20 degC, 1.43 Pa s"} <= set(viscosity)
    assert draw_viscosity(case.liquid, None) is None


def study_file(folder, header=True):
    lines = [json.dumps({"format": 1, "plan": {}})] if header else []
    for i, f in enumerate((20.0, 40.0, 80.0, 160.0)):
        for j, a in enumerate((5.0 * G, 50.0 * G, 500.0 * G)):
            lines.append(json.dumps({"i": 3 * i + j, "frequency_Hz": f, "acceleration_m_s2": a,
                                     "verdict": ("held", "marginal", "not held")[(i + j) % 3]}))  # fmt: skip
    file = folder / "study.jsonl"
    file.write_text("\n".join(lines) + "\n", encoding="utf-8")
    return file


def test_map_of_a_study_in_trade_units(tmp_path):
    file = study_file(tmp_path)
    figure = draw_study_map(file, x="frequency_Hz", y="acceleration_m_s2", title="study")
    words = words_of(inline_svg(figure, name="a", text="x"))
    assert {"frequency [Hz]", "acceleration [g_n]", "study"} <= set(words)
    assert "Cases: 4 held, 4 marginal, 4 not held" in words
    points = map_points(file, x="frequency_Hz", y="acceleration_m_s2")
    assert points.left_out == 0 and points.grid()[2].tolist()[0] == [2, 1, 0, 2]


def test_map_counts_failed_cases_and_takes_scattered_ones(tmp_path):
    file = study_file(tmp_path)
    with file.open("a", encoding="utf-8") as end:
        end.write(json.dumps({"i": 12, "frequency_Hz": 33.0, "acceleration_m_s2": 9.0, "error": "no"}) + "\n")
    points = map_points(file, x="frequency_Hz", y="acceleration_m_s2")
    assert points.left_out == 1 and len(points.x) == 12
    some = MapPoints([1.0, 2.0, 3.0], [1.0, 5.0, 2.0], ["held", "not held", "marginal"])
    assert some.grid() is None
    words = words_of(inline_svg(draw_verdict_map(some, x_label="x", y_label=HOSTILE), name="a", text="x"))
    assert {"held", "marginal", "not held"} <= set(words)


@pytest.mark.parametrize("content", ["", "{}\n", "not json\n", '{"frequency_Hz": "x", "verdict": "held"}\n', "[1, 2]\n"])
def test_map_refuses_files_without_cases(tmp_path, content):
    file = tmp_path / "x.jsonl"
    file.write_text(content, encoding="utf-8")
    with pytest.raises(ct.InputError, match="x.jsonl"):
        map_points(file, x="frequency_Hz", y="acceleration_m_s2")


def test_marks_are_drawn_at_their_numbers():
    figure = window_figure()
    axes = figure.axes[0]
    cross = next(line for line in axes.lines if line.get_marker() == "X")
    assert (cross.get_xdata()[0], cross.get_ydata()[0]) == pytest.approx((50.0, 40.0))
    low, high = axes.get_xlim()
    assert low < 50.0 < high and math.isfinite(low * high)
