"""The report on a granular bed: the screen's words, set as a page."""

import argparse

from containment.faces.report_file import put_inputs, write_report
from containment.faces.report_page import ReportPage
from containment.faces.screen_grains import grains_screen
from containment.judgement.bed_verdict import BedVerdict

__all__ = ["report_grains"]


def report_grains(options: argparse.Namespace, verdict: BedVerdict) -> None:
    """Write the report that ``--report`` asks for."""
    name = "a bed" if verdict.material.name == "custom" else verdict.material.name
    page = ReportPage(title=f"Does {name} stay where it should?")
    grains_screen(verdict, detail=True, onto=page)
    put_inputs(page, options)
    page.heading("What this is")
    page.text(
        "A feasibility check: mechanisms of granular beds are known by rules and measured constants, not by theory alone. It "
        "approves nothing: local codes and the judgement of licensed practice prevail. Whoever signs below has checked that "
        "the inputs are those of the plant and that the assumptions hold there."
    )
    write_report(page, options.report)
