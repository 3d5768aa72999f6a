"""Make the pictures of the README with the tool itself: python examples/pictures/make_pictures.py."""

import contextlib
import io
import shlex
from pathlib import Path

from containment.faces.command import main
from containment.faces.screen_svg import screen_svg

HERE = Path(__file__).parent
COMMAND = """containment window glycerol --cylinder 70mm --depth 30mm \\
    --frequency 100Hz --acceleration 60g_n --dwell 60s"""


def screen_picture() -> str:
    """Return the picture of what the terminal shows."""
    printed = io.StringIO()
    with contextlib.redirect_stdout(printed):
        main([*shlex.split(COMMAND.replace("\\\n", " "))[1:], "--plain"])
    return screen_svg(printed.getvalue(), command=COMMAND)


if __name__ == "__main__":
    (HERE / "window_screen.svg").write_text(screen_picture(), encoding="utf-8", newline="\n")
    chart = [*shlex.split(COMMAND.replace("\\\n", " "))[1:], "--chart", str(HERE / "window.svg")]
    with contextlib.redirect_stdout(io.StringIO()):
        main(chart)
