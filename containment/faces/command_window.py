"""``containment window``: the holding window of a liquid over frequency, as a chart, a picture or rows."""

import argparse
import sys
from typing import TYPE_CHECKING

from containment.errors import InputError
from containment.faces import case_file, command_liquid, report_file

if TYPE_CHECKING:
    from containment.faces.window_view import WindowView

__all__ = ["add_arguments", "run"]


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Add the sub-command's options."""
    command_liquid.add_case_arguments(parser)
    group = parser.add_argument_group("output")
    group.add_argument("--against", choices=("acceleration", "stroke", "velocity"), metavar="SIZE",
                       default="acceleration", help="acceleration (default), stroke or velocity")  # fmt: skip
    group.add_argument("--chart", metavar="FILE", help="draw it to FILE.svg, .png or .pdf (extra plot)")
    group.add_argument("--rows", action="store_true", help="the numbers as CSV, SI units")
    group.add_argument("--json", action="store_true", help="verdict and numbers as one JSON object, SI")
    group.add_argument("--plain", action="store_true", help="no colour and no boxes")
    report_file.add_report(group)
    case_file.add_case(parser)


def run(options: argparse.Namespace) -> int:
    """Judge the case, show its window, and return the exit status of the verdict."""
    if options.rows and options.json:
        raise InputError("--rows: given with --json; expected one of the two (the JSON has the rows)")
    if options.chart is not None:
        from containment.faces.picture_file import refuse_unless_drawable

        refuse_unless_drawable(options.chart, "--chart")
    if options.report is not None:
        report_file.refuse_unless_writable(options.report)
    case_file.apply_case(options, command_liquid.NAMES)
    from containment.faces.report_liquid import report_liquid, view_of
    from containment.faces.window_view import refuse_without_window
    from containment.judgement.findings import exit_status

    case = command_liquid.case_from(options)
    refuse_without_window(case)
    verdict = command_liquid.verdict_from(options, ranges=options.report is not None)
    view = view_of(case, verdict, against=options.against)
    if options.report is not None:
        report_liquid(options, case, verdict)
    if options.save_case is not None:
        case_file.save_case(options, case_file.remark(verdict.answer.value, verdict.reason))
    if options.chart is not None:
        from containment.faces.picture_file import save_picture
        from containment.faces.picture_window import draw_window
        from containment.faces.screen_window import window_title

        save_picture(draw_window(view, window_title(verdict)), options.chart, "--chart")
    if options.rows:
        _print_rows(view)
    elif options.json:
        import json

        rows = {"against": options.against, **view.rows()}
        result = {**verdict.to_dict(), "window": rows, "case": case_file.case_of(options)}
        print(json.dumps(result, allow_nan=False, ensure_ascii=False, indent=2))
    else:
        from containment.faces.screen_window import window_screen

        window_screen(verdict, view, plain=options.plain, chart_file=options.chart).show()
    return exit_status(verdict.answer, verdict.proven)


def _print_rows(view: "WindowView") -> None:
    import csv
    import io

    columns = view.rows()
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow(columns)
    for row in zip(*columns.values(), strict=True):
        writer.writerow(["" if v is None else str(v).lower() if isinstance(v, bool) else f"{v:.10g}" for v in row])
    sys.stdout.write(stream.getvalue())
