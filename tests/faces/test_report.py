"""Reports: one page, escaped, without script or network, whole in a browser and on paper, and as Markdown."""

import json
import re
import shlex
import shutil
import subprocess
from html.parser import HTMLParser

import numpy as np
import pytest

from containment.faces.command import main
from containment.faces.report_html import html_report
from containment.faces.report_markdown import markdown_report
from containment.faces.report_page import ReportPage, Table
from containment.judgement.findings import Answer

CASE = [
    "liquid", "glycerol", "--cylinder", "70mm", "--depth", "30mm", "--frequency", "100Hz", "--acceleration", "60g_n", "--dwell",
    "60s", "--max-stroke", "25mm",
]  # fmt: skip
HOSTILE = (
    "x</title></pre><script>alert(1)</script><img src=http://a.b/c onerror=alert(2)>\"'&`|*_[a](javascript:1)\u202e\x1b[31m"
)
CHROMIUM = shutil.which("chromium") or shutil.which("chromium-browser")
needs_chromium = pytest.mark.skipif(CHROMIUM is None, reason="chromium is not installed: pages were not rendered")
VOID = {"meta", "br", "img", "link", "input", "hr"}


class Page(HTMLParser):
    """Collects elements, checks nesting, and keeps the text outside styles."""

    def __init__(self):
        super().__init__()
        self.open, self.elements, self.text = [], [], []

    def handle_starttag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag):
        assert self.open and self.open.pop() == tag, f"</{tag}> closes nothing"

    def handle_data(self, data):
        if "style" not in self.open:
            self.text.append(data)


def parsed(html):
    page = Page()
    page.feed(html)
    page.close()
    assert page.open == []
    return page


@pytest.fixture(scope="module")
def report(tmp_path_factory):
    file = tmp_path_factory.mktemp("report") / "report.html"
    assert main([*CASE, "--report", str(file)]) == 0
    return file


def test_page_has_all_that_a_reviewer_asks_for(report):
    page = parsed(report.read_text(encoding="utf-8"))
    text = " ".join(" ".join(page.text).split())
    for words in ("HELD", "glycerol", "Case", "Margins at this frequency", "Other limits", "Cautions", "loss of power",
                  "Assumed", "Sources and method", "Pictures", "Inputs as given", "Review", "Signature", "Prepared by",
                  "Reviewed by", "containment 0", "numpy", "Python", "Figure 1.", "Figure 2."):  # fmt: skip
        assert words in text, words
    headings = [tag for tag, _ in page.elements if tag in ("h1", "h2", "h3")]
    assert headings.count("h1") == 1 and "h3" not in headings
    tables = sum(tag == "table" for tag, _ in page.elements)
    assert tables >= 8 and all("scope" in attrs for tag, attrs in page.elements if tag == "th")


def test_every_picture_is_told_in_words(report):
    page = parsed(report.read_text(encoding="utf-8"))
    pictures = [attrs for tag, attrs in page.elements if tag == "svg"]
    assert len(pictures) >= 4
    for attrs in pictures:
        assert attrs["role"] == "img" and len(attrs["aria-label"]) > 40
    assert sum(tag == "figcaption" for tag, _ in page.elements) == len(pictures)
    assert any("Least acceleration: 15 Hz, 6.35 g_n" in attrs["aria-label"] for attrs in pictures)


def test_nothing_is_run_and_nothing_is_fetched(report):
    html = report.read_text(encoding="utf-8")
    page = parsed(html)
    for tag, attrs in page.elements:
        assert tag not in ("script", "iframe", "object", "embed", "link", "img", "form")
        assert not any(name.startswith("on") for name in attrs)
        for name in ("src", "href", "xlink:href", "action", "data", "srcset"):
            assert attrs.get(name, "#").startswith("#"), (tag, attrs)
    assert not re.search(r"url\((?!#)", html) and "@import" not in html
    policy = next(attrs["content"] for tag, attrs in page.elements if attrs.get("http-equiv") == "Content-Security-Policy")
    assert policy == "default-src 'none'; style-src 'unsafe-inline'"
    ids = [attrs["id"] for _, attrs in page.elements if "id" in attrs]
    assert len(ids) == len(set(ids))


def test_the_command_on_the_page_gives_the_same_verdict(report, capsys):
    text = "".join(parsed(report.read_text(encoding="utf-8")).text)
    command = text[text.index("To run it again:") :].split("containment liquid", 1)[1].split("What this is")[0]
    assert main(["liquid", *shlex.split(command.replace("\\\n", " ")), "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert main([*CASE, "--json"]) == 0
    assert json.loads(capsys.readouterr().out) == found


def hostile_page():
    page = ReportPage(title=HOSTILE)
    page.verdict(Answer.NOT_HELD, HOSTILE, HOSTILE, HOSTILE)
    page.heading(HOSTILE)
    page.rows([(HOSTILE, HOSTILE), ("", "long" * 500)], right=(1,))
    page.blocks.append(Table([[HOSTILE, "x"]], (1,), (HOSTILE, "")))
    page.listing([HOSTILE, "1. not a list", "- nor this"])
    page.text(HOSTILE)
    page.preformatted(HOSTILE + "\n```\n</pre>")
    return page


def test_hostile_text_stays_text_in_html():
    html = html_report(hostile_page(), when=HOSTILE, made_by=HOSTILE)
    page = parsed(html)
    tags = {tag for tag, _ in page.elements}
    assert not tags & {"script", "img"}
    assert "\x1b" not in html and "\u202e" not in html
    assert "".join(page.text).count("<script>alert(1)</script>") >= 8


def test_hostile_text_stays_text_in_markdown():
    text = markdown_report(hostile_page(), when=HOSTILE, made_by=HOSTILE)
    outside = re.sub(r"^(`{4,})text\n.*?^\1$", "", text, flags=re.MULTILINE | re.DOTALL)
    assert "<script" not in outside and "<img" not in outside
    assert not re.search(r"(?<!\\)\]\(", outside), "a link"
    assert "http://" not in outside and "\x1b" not in text and "\u202e" not in text
    assert "\n- 1\\. not a list" in text and "\n- \\- nor this" in text
    tables = [line for line in outside.split("\n") if line.startswith("|")]
    assert all(len(re.findall(r"(?<!\\)\|", line)) in (3, 5) for line in tables)


@pytest.mark.parametrize("ending", ["html", "md"])
def test_hostile_name_of_a_file_reaches_the_page_as_text(tmp_path, ending):
    table = tmp_path / "x<img src=q onerror=alert(1)>`|.csv"
    rows = [("density", 1350, "kg/m**3"), ("viscosity", 8, "Pa*s"), ("surface_tension", 70, "mN/m")]
    table.write_text(
        "kind,name,field,law,value,unit,from [degC],to [degC],uncertainty,source,read\n"
        + "".join(f"liquid,my paste,{f},constant,{v},{u},10,40,0.05,own measurement,yes\n" for f, v, u in rows)
        + "liquid,my paste,vapour_pressure_note,,non-volatile,,,,,own measurement,yes\n"
        + "liquid,my paste,title,,invented paste,,,,,own measurement,yes\n",
        encoding="utf-8",
    )
    file = tmp_path / f"report.{ending}"
    arguments = ["liquid", "my paste", "--table", str(table), "--cylinder", "70mm", "--depth", "30mm", "--report", str(file)]
    assert main(arguments) in (0, 1, 3)
    text = file.read_text(encoding="utf-8")
    if ending == "html":
        page = parsed(text)
        assert not any(tag == "img" for tag, _ in page.elements)
        assert "x<img src=q onerror=alert(1)>`|.csv" in "".join(page.text)
    else:
        assert "<img" not in re.sub(r"^```text\n.*?^```$", "", text, flags=re.MULTILINE | re.DOTALL)


def test_markdown_has_the_chart_and_the_numbers(tmp_path):
    file = tmp_path / "report.md"
    assert main([*CASE, "--report", str(file)]) == 0
    text = file.read_text(encoding="utf-8")
    assert text.startswith("# Upside-down hold of glycerol\n")
    for words in ("```text", "frequency [Hz]", "## Other limits", "## Cautions", "| Prepared by | | | |",
                  "containment liquid glycerol"):  # fmt: skip
        assert words in text
    for block in re.findall(r"(?:^\|.*\n)+", text, flags=re.MULTILINE):
        assert len({len(re.findall(r"(?<!\\)\|", line)) for line in block.splitlines()}) == 1, block


def test_page_without_matplotlib_says_the_same_in_characters(tmp_path, monkeypatch):
    monkeypatch.setattr("containment.faces.picture_file.drawable", lambda: False)
    file = tmp_path / "report.html"
    assert main([*CASE, "--report", str(file)]) == 0
    page = parsed(file.read_text(encoding="utf-8"))
    assert not any(tag == "svg" for tag, _ in page.elements)
    text = "".join(page.text)
    assert "frequency [Hz]" in text and "When one input at a time is off" in text and "extra: plot" in text


@pytest.mark.parametrize(
    "more",
    [
        ["--max-acceleration", "5g_n"],
        ["--contact-line", "pinned"],
        ["--cushion", "20mm"],
        ["--frequency", "50Hz", "--acceleration", "10g_n"],
        ["--below", "water", "--below-depth", "20mm", "--interfacial-tension", "30mN/m"],
        ["--rheology", "jeffreys:viscosity=10Pa*s,relaxation=10ms,retardation=2ms"],
        ["--frequency", "50Hz", "--acceleration", "40g_n", "--rheology", "power-law:consistency=10,index=0.9"],
    ],
    ids=lambda more: more[-2].strip("-") + more[-1][:9],
)
def test_cases_of_every_kind_give_a_page(tmp_path, more):
    file = tmp_path / "report.html"
    base = ["liquid", "custom", "--density", "1410kg/m^3", "--viscosity", "10Pa*s", "--surface-tension", "80mN/m"]
    assert main([*base, "--cylinder", "70mm", "--depth", "30mm", *more, "--report", str(file)]) in (0, 1, 3)
    parsed(file.read_text(encoding="utf-8"))


def test_grains_give_a_page(tmp_path):
    file = tmp_path / "report.html"
    arguments = ["grains", "wheat flour", "--outlet", "60mm", "--cylinder", "300mm", "--depth", "500mm", "--report", str(file)]
    assert main(arguments) in (0, 1, 3)
    text = " ".join(parsed(file.read_text(encoding="utf-8")).text)
    assert "wheat flour" in text and "Review" in text and "dust explosion" in text


def test_date_can_be_settled(tmp_path, monkeypatch):
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "86400")
    files = [tmp_path / name for name in ("a.html", "b.html")]
    for file in files:
        main([*CASE, "--report", str(file)])
    assert "2 January 1970" in files[0].read_text(encoding="utf-8")
    assert files[0].read_bytes() == files[1].read_bytes()


def chromium(*arguments):
    command = [CHROMIUM, "--headless=new", "--no-sandbox", "--disable-gpu", "--hide-scrollbars", *arguments]
    return subprocess.run(command, capture_output=True, timeout=120, check=True)


@needs_chromium
@pytest.mark.parametrize("width", [520, 1000])
def test_page_is_whole_in_a_browser(report, tmp_path, width):
    """Rendered at two widths: something is drawn from top to bottom, and nothing sticks out at the right."""
    from matplotlib.image import imread

    shot = tmp_path / "shot.png"
    chromium(f"--window-size={width},3000", f"--screenshot={shot}", report.as_uri())
    picture = imread(shot)[..., :3]
    assert picture.shape[1] == width
    dark = picture.min(axis=2) < 0.6
    rows = dark.any(axis=1)
    assert rows[:2900].mean() > 0.2 and rows[2000:].any()
    assert not dark[:, -8:].any(), "something reaches the right border"
    assert np.count_nonzero(dark[:, : width // 2]) > 1000


@needs_chromium
@pytest.mark.parametrize(("paper", "size"), [("A4", (595, 842)), ("letter", (612, 792))])
def test_page_prints_and_its_text_can_be_selected(report, tmp_path, paper, size):
    html = report.read_text(encoding="utf-8").replace("@page {", f"@page {{ size: {paper};", 1)
    page, printed = tmp_path / "page.html", tmp_path / "page.pdf"
    page.write_text(html, encoding="utf-8")
    chromium("--no-pdf-header-footer", f"--print-to-pdf={printed}", page.as_uri())
    if shutil.which("pdfinfo") is None:
        pytest.skip("pdfinfo (poppler-utils) is not installed: the printed pages were not looked into")
    info = subprocess.run(["pdfinfo", printed], capture_output=True, text=True, check=True).stdout
    assert 3 <= int(re.search(r"Pages:\s+(\d+)", info).group(1)) <= 8
    measured = [float(v) for v in re.search(r"Page size:\s+([\d.]+) x ([\d.]+)", info).groups()]
    assert measured == pytest.approx(size, abs=1.0)
    text = subprocess.run(["pdftotext", "-layout", printed, "-"], capture_output=True, text=True, check=True).stdout
    for words in ("HELD", "Other limits", "frequency [Hz]", "without shaking", "Prepared by", "held"):
        assert words in text, words
