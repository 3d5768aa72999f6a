"""Every command in the README runs, and the screen that it shows is the one that the tool prints."""

import re
import shlex
from pathlib import Path

import pytest

from containment.faces.command import main

README = (Path(__file__).parent.parent / "README.md").read_text(encoding="utf-8")
BLOCKS = re.findall(r"^```\n(.*?)^```", README, re.MULTILINE | re.DOTALL)
COMMANDS = [
    line.split("  #")[0].strip()
    for block in BLOCKS
    for line in block.splitlines()
    if re.match(r"containment \w+ ", line)
]


def test_there_are_commands():
    assert len(COMMANDS) >= 6


@pytest.mark.parametrize("command", COMMANDS)
def test_command_runs(command, capsys):
    assert main(shlex.split(command)[1:]) in (0, 1, 3)
    out = capsys.readouterr()
    assert out.out and not out.err


def test_screen_is_the_real_one(capsys):
    shown = next(block for block in BLOCKS if block.startswith("HELD"))
    main(shlex.split(COMMANDS[0])[1:])
    assert capsys.readouterr().out.strip().split() == shown.strip().split()


def test_script_in_the_readme_runs(capsys):
    (script,) = re.findall(r"^```python\n(.*?)^```", README, re.MULTILINE | re.DOTALL)
    exec(compile(script, "README.md", "exec"), {})
    assert capsys.readouterr().out
