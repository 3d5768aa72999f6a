"""Help texts: a page each, lines that fit, examples that run."""

import shlex

import pytest

from containment.faces.command import SUBCOMMANDS, main
from containment.faces.help_texts import EXAMPLES


def help_of(command, capsys, monkeypatch, columns="80"):
    monkeypatch.setenv("COLUMNS", columns)
    with pytest.raises(SystemExit) as stop:
        main([*command, "--help"])
    assert stop.value.code == 0
    return capsys.readouterr().out


@pytest.mark.parametrize("command", [[], *([name] for name in SUBCOMMANDS)], ids=lambda c: c[0] if c else "all")
def test_help_fits_a_page(command, capsys, monkeypatch):
    text = help_of(command, capsys, monkeypatch)
    assert text.count("\n") <= 76
    assert max(map(len, text.splitlines())) <= 80
    assert "exit status: 0 held, 1 not held, 2 bad input" in text


@pytest.mark.parametrize("columns", ["60", "100", "200"])
def test_help_follows_the_width(capsys, monkeypatch, columns):
    text = help_of(["table"], capsys, monkeypatch, columns)
    assert max(map(len, text.splitlines())) <= max(int(columns), 80)


@pytest.mark.parametrize("command", EXAMPLES)
def test_there_are_three_examples(command, capsys, monkeypatch):
    text = help_of([command], capsys, monkeypatch)
    assert len(EXAMPLES[command]) == 3
    for example in EXAMPLES[command]:
        assert "\n  " + example in text


@pytest.mark.parametrize("example", [line for lines in EXAMPLES.values() for line in lines])
def test_example_runs(example, capsys, monkeypatch, tmp_path):
    monkeypatch.chdir(tmp_path)
    words = shlex.split(example.replace("\\\n", " "))
    assert words[0] == "containment"
    assert main(words[1:]) in (0, 1, 3)
    out = capsys.readouterr()
    assert out.out and not out.err


@pytest.mark.parametrize("command", ["liquid", "window", "grains"])
def test_no_two_options_share_a_help_line_by_accident(command, capsys, monkeypatch):
    lines = [line for line in help_of([command], capsys, monkeypatch).splitlines() if line.startswith("  --")]
    names = [line.split()[0] for line in lines]
    assert len(names) == len(set(names)) and all(len(line.split(None, 2)) >= 2 for line in lines)
