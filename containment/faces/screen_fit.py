"""The screen of fitted laws: residuals, and the rows to paste into a table."""

import csv
import io
from collections.abc import Sequence

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.faces.screen import Screen
from containment.given.tables.fitting import Fit, PropertyFits

__all__ = ["fit_screen", "pasteable_rows"]

_LARGE = 0.05  # relative spread from which the fit is called poor


def _pairs(fit: Fit) -> str:
    sign = ":" if fit.law.startswith("tabulated") else "="
    return "; ".join(f"{key}{sign}{value:.8g}" for key, value in fit.coefficients.items())


def pasteable_rows(fits: Sequence[PropertyFits], *, name: str) -> str:
    """Return the rows of the recommended laws in the format of a table, header included."""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow(
        ["kind", "name", "field", "law", "value", "unit", "from [degC]", "to [degC]", "uncertainty", "source", "read"]
    )
    for of in fits:
        best = of.fits[0]
        ends = [f"{t + ABSOLUTE_ZERO_CELSIUS:.6g}" for t in (of.temperatures[0], of.temperatures[-1])]
        field = of.name.removeprefix("kinematic_")
        spread = f"{max(best.spread, 0.001):.2g}"
        writer.writerow(["liquid", name, field, best.law, _pairs(best), of.unit, *ends, spread, "own measurement", "yes"])
    return stream.getvalue()


def fit_screen(fits: Sequence[PropertyFits], *, plain: bool = False) -> Screen:
    """Build the screen of fits."""
    screen = Screen(plain=plain)
    for of in fits:
        screen.heading(of.name.replace("_", " "))
        screen.text(f"in {of.unit}")
        regressions = [fit for fit in of.fits if not fit.law.startswith("tabulated")]
        header = ("degC", "measured", *(f"{fit.law}, %" for fit in regressions))
        rows: list[tuple[str, ...]] = [header]
        for i, (kelvin, value) in enumerate(zip(of.temperatures, of.values, strict=True)):
            cells = [f"{100.0 * fit.residuals[i]:+.2f}" for fit in regressions]
            rows.append((f"{kelvin + ABSOLUTE_ZERO_CELSIUS:.4g}", f"{value:.4g}", *cells))
        rows.append(("", "spread", *(f"{100.0 * fit.spread:.2f}" for fit in regressions)))
        screen.rows(rows, right=range(len(header)))
        best = of.fits[0]
        screen.text(f"taken: {best.law}, {_pairs(best)}")
        if best.spread > _LARGE:
            others = [fit.law for fit in of.fits if fit.law.startswith("tabulated")]
            hint = f"; {others[0]} goes through the points" if others else ""
            screen.text(f"The spread is large: look for a wrong point, or take more{hint}.")
        if len(of.temperatures) <= len(best.coefficients):
            screen.text("As many coefficients as points: the spread says nothing about the error.")
    missing = {"density", "viscosity", "surface_tension"} - {of.name.removeprefix("kinematic_") for of in fits}
    screen.heading("To paste")
    if missing:
        absent = ", ".join(word.replace("_", " ") for word in sorted(missing))
        screen.text(f"The entry needs {absent} and a row for vapour_pressure or vapour_pressure_note as well.")
    else:
        screen.text("The entry needs a row for vapour_pressure or vapour_pressure_note as well.")
    return screen
