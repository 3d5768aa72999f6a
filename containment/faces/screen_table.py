"""Screens of the property tables: the list, and one entry with its laws drawn over temperature."""

import math
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.faces.character_plot import character_plot
from containment.faces.screen import Screen, quantity_text
from containment.faces.table_rows import value_at
from containment.given.tables import DriveEntry, GrainEntry, LiquidEntry, Property
from containment.given.tables.laws import LAWS

__all__ = ["entry_screen", "list_screen"]

_SHOWN = {
    # property: (factor, unit, logarithmic plot, rows of the plot)
    "viscosity": (1.0, "Pa s", True, 9),
    "density": (1.0, "kg/m^3", False, 5),
    "surface_tension": (1e3, "mN/m", False, 5),
    "vapour_pressure": (1.0, "Pa", True, 7),
}


def _celsius(kelvin: float) -> str:
    return f"{kelvin + ABSOLUTE_ZERO_CELSIUS:.4g}"


def _range(ends: tuple[float, float]) -> str:
    return f"{_celsius(ends[0])} to {_celsius(ends[1])} degC"


def _number(value: float | None, digits: int = 4) -> str:
    if value is None:
        return "-"
    text = f"{value:.{digits}g}"
    return f"{value:.0f}" if "e+" in text and abs(value) < 1e6 else text


def list_screen(
    entries: Mapping[str, Sequence[Any]],
    kelvin: float,
    *,
    left_out: Sequence[str] = (),
    notices: Sequence[str] = (),
    plain: bool = False,
) -> Screen:
    """Build the list of the tables; values at a temperature (K)."""
    screen = Screen(plain=plain)
    if entries["liquid"]:
        screen.heading("Liquids")
        screen.text(f"at {_celsius(kelvin)} degC; the last numbers are the range of temperature")
        rows: list[tuple[str, ...]] = [("name", "Pa s", "kg/m^3", "mN/m", "degC", "")]
        for entry in entries["liquid"]:
            tension = value_at(entry.surface_tension, kelvin)
            rows.append(
                (
                    entry.name,
                    _number(value_at(entry.viscosity, kelvin), 3),
                    _number(value_at(entry.density, kelvin)),
                    _number(None if tension is None else 1e3 * tension, 3),
                    f"{_celsius(entry.range_K[0])}..{_celsius(entry.range_K[1])}",
                    "not Newtonian" if entry.rheology is not None else "",
                )
            )
        screen.rows(rows, right=(1, 2, 3, 4))
    if entries["grain"]:
        screen.heading("Granular materials")
        rows = [("name", "kg/m^3", "d50", "repose", "")]
        rows += [
            (
                entry.name,
                _number(entry.bulk_density),
                quantity_text(entry.d50, "m"),
                f"{math.degrees(entry.angle_of_repose_rad):.0f} deg",
                "free-flowing" if entry.unconfined_yield_strength_Pa is None
                else f"cohesive, {_number(entry.unconfined_yield_strength_Pa, 3)} Pa",
            )
            for entry in entries["grain"]
        ]  # fmt: skip
        screen.rows(rows, right=(1, 2, 3))
    if entries["drive"]:
        screen.heading("Drives (generic classes; the data sheet prevails)")
        rows = [("name", "stroke p-p", "acceleration", "Hz")]
        rows += [
            (entry.name, quantity_text(entry.max_stroke, "m"), quantity_text(entry.max_acceleration, "m/s^2"), _hertz(entry))
            for entry in entries["drive"]
        ]
        screen.rows(rows, right=(1, 2, 3))
    if not any(entries.values()):
        screen.text("No entry matches.")
    if left_out:
        screen.heading("Left out")
        screen.text(f"The viscosity does not hold at {_celsius(kelvin)} degC for: {', '.join(left_out)}.")
    if notices:
        screen.heading("Your tables")
        screen.listing(notices)
    if any(entries.values()):
        screen.heading("More")
        screen.text("containment table NAME shows an entry with its laws, sources and hazards.")
    return screen


def _hertz(entry: DriveEntry) -> str:
    return "-" if entry.frequency_range is None else f"{entry.frequency_range[0]:g}..{entry.frequency_range[1]:g}"


def entry_screen(entries: Sequence[Any], kelvin: float, *, plain: bool = False) -> Screen:
    """Build the screen of one entry, or of the entries of several kinds that share a name."""
    screen = Screen(plain=plain)
    for entry in entries:
        screen.heading(entry.name)
        screen.text(entry.title + ("" if entry.origin == "built in" else f" (from {entry.origin})"))
        if entry.synonyms:
            screen.text("also: " + ", ".join(entry.synonyms))
        if isinstance(entry, LiquidEntry):
            _liquid(screen, entry, kelvin)
        elif isinstance(entry, GrainEntry):
            _grain(screen, entry)
        else:
            _drive(screen, entry)
        hazards, notes = getattr(entry, "hazards", ()), getattr(entry, "notes", ())
        if hazards:
            screen.heading("Hazards")
            screen.rows([hazard.partition(": ")[::2] for hazard in hazards])
        if notes:
            screen.heading("Notes")
            screen.listing(notes)
    return screen


def _liquid(screen: Screen, entry: LiquidEntry, kelvin: float) -> None:
    rows = []
    for of in entry.properties:
        factor, unit, _, _ = _SHOWN[of.name]
        value = value_at(of, kelvin)
        shown = f"{_number(value * factor)} {unit}" if value is not None else "out of range"
        rows.append((of.name.replace("_", " "), shown, f"+-{100.0 * of.relative_uncertainty:.2g} %", _range(of.range_K)))
    if entry.vapour_pressure is None:
        rows.append(("vapour pressure", "negligible", "", entry.vapour_pressure_note))
    if entry.flash_point_K is not None:
        rows.append(("flash point", f"{_celsius(entry.flash_point_K)} degC", "", ""))
    screen.heading("Values")
    screen.text(f"at {_celsius(kelvin)} degC, with spread and the range of temperature in which the law holds")
    screen.rows(rows, right=(1, 2))
    if entry.rheology is not None:
        screen.heading("Not Newtonian")
        screen.rows(
            [(key, _number(value) if isinstance(value, float) else str(value)) for key, value in entry.rheology.items()]
        )
    for of in entry.properties:
        _plot(screen, of)
    screen.heading("Laws and sources")
    screen.text("T in K, t in degC")
    laws = []
    for of in entry.properties:
        tabulated = of.law.startswith("tabulated")
        pairs = "; ".join(f"{key}{':' if tabulated else ' ='} {value:.8g}" for key, value in of.coefficients.items())
        laws += [
            (of.name.replace("_", " "), f"{of.law}: {LAWS[of.law].formula}"),
            ("", f"{pairs}; in {of.unit}"),
            ("", f"{of.source} ({'source read' if of.source_read else 'source not read'})"),
        ]
    screen.rows(laws)


def _plot(screen: Screen, of: Property) -> None:
    if of.law == "constant":
        return
    factor, unit, logarithmic, height = _SHOWN[of.name]
    width = min(screen.width, 80) - 20
    kelvin = np.linspace(*of.range_K, 3 * width)
    values = np.asarray(of.value(kelvin)) * factor
    lines = character_plot(
        [float(t) for t in kelvin + ABSOLUTE_ZERO_CELSIUS], [float(v) for v in values], width=width, height=height,
        logarithmic=logarithmic and bool(np.all(values > 0.0)), x_unit="degC",
    )  # fmt: skip
    screen.heading(of.name.replace("_", " "))
    screen.text(unit + (", logarithmic scale" if logarithmic else ""))
    screen.text("\n".join(lines))


def _grain(screen: Screen, entry: GrainEntry) -> None:
    strength = entry.unconfined_yield_strength_Pa
    values = {
        "bulk_density": f"{_number(entry.bulk_density)} kg/m^3",
        "particle_density": f"{_number(entry.particle_density)} kg/m^3",
        "d10": quantity_text(entry.d10, "m"),
        "d50": quantity_text(entry.d50, "m"),
        "d90": quantity_text(entry.d90, "m"),
        "angle_of_repose": f"{math.degrees(entry.angle_of_repose_rad):.3g} deg",
        "wall_friction": f"{entry.wall_friction:.3g} on smooth steel",
        "unconfined_yield_strength": "free-flowing" if strength is None else f"{_number(strength, 3)} Pa",
    }
    screen.heading("Values")
    rows = []
    for name, shown in values.items():
        spread = entry.uncertainty.get(name)
        rows.append((name.replace("_", " "), shown, "" if spread is None else f"+-{100.0 * spread:.2g} %"))
    screen.rows(rows, right=(2,))
    screen.heading("Sources")
    by_source: dict[str, list[str]] = {}
    for name, source in entry.sources.items():
        by_source.setdefault(source, []).append(name.replace("_", " "))
    for_all = len(by_source) == 1
    screen.rows([("all" if for_all else ", ".join(names), source) for source, names in by_source.items()])


def _drive(screen: Screen, entry: DriveEntry) -> None:
    screen.heading("Limits")
    rows = [
        ("stroke, peak to peak", quantity_text(entry.max_stroke, "m")),
        ("velocity, peak", f"{_number(entry.max_velocity)} m/s" if entry.max_velocity is not None else "-"),
        ("acceleration, peak", quantity_text(entry.max_acceleration, "m/s^2")),
        ("force, peak", f"{_number(entry.max_force)} N" if entry.max_force is not None else "-"),
        ("moving mass", f"{_number(entry.moving_mass)} kg" if entry.moving_mass is not None else "-"),
        ("frequency", "-" if entry.frequency_range is None else _hertz(entry).replace("..", " to ") + " Hz"),
    ]
    screen.rows(rows)
    screen.heading("Source")
    screen.text(entry.source)
    if entry.note:
        screen.heading("Note")
        screen.text(entry.note)
