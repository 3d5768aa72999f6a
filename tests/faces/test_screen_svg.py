"""Pictures of the screen: text that stands where the terminal has it, and the one in the documents is the real one."""

import importlib.util
import xml.etree.ElementTree as ET
from pathlib import Path

import pytest

from containment.faces.screen_svg import screen_svg

DOCS = Path(__file__).parents[2] / "examples" / "pictures"
SVG = "{http://www.w3.org/2000/svg}"


def lines_of(svg):
    return ["".join(text.itertext()).replace("\u00a0", " ") for text in ET.fromstring(svg).iter(f"{SVG}text")]


@pytest.mark.parametrize(
    "text", ["HELD: it stays\n\nCASE\n  a < b & c  d", "NOT HELD: <b>x</b> [red]\n  1   2", "no verdict at all"]
)
def test_every_line_is_there_as_it_was(text):
    assert lines_of(screen_svg(text)) == [line for line in text.split("\n") if line]


def test_lines_keep_their_columns():
    root = ET.fromstring(screen_svg("HELD: x\n  12345\n  1234567890"))
    lengths = [float(text.get("textLength")) / len("".join(text.itertext())) for text in root.iter(f"{SVG}text")]
    assert lengths == pytest.approx([lengths[0]] * 3, abs=0.01)


@pytest.mark.skipif(not DOCS.is_dir(), reason="only in a checkout")
def test_picture_in_the_documents_is_what_the_tool_prints():
    spec = importlib.util.spec_from_file_location("make_pictures", DOCS / "make_pictures.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    shown = lines_of((DOCS / "window_screen.svg").read_text(encoding="utf-8"))
    assert lines_of(module.screen_picture()) == shown, "run: python examples/pictures/make_pictures.py"
    ET.parse(DOCS / "window.svg")
