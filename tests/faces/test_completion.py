"""Completion scripts: made from the parsers, and understood by the shell."""

import shutil
import subprocess

import pytest

from containment.faces.command import SUBCOMMANDS, main
from containment.faces.completion import SHELLS


def script(shell, capsys):
    with pytest.raises(SystemExit) as stop:
        main(["--completion", shell])
    assert stop.value.code == 0
    return capsys.readouterr().out


@pytest.mark.parametrize("shell", SHELLS)
def test_all_commands_and_options_are_in_it(shell, capsys):
    text = script(shell, capsys)
    for name in SUBCOMMANDS:
        assert name in text
    for option in ("cylinder", "save-case", "chart", "outlet", "workers", "csv"):
        assert option in text


def test_unknown_shell_is_refused(capsys):
    with pytest.raises(SystemExit) as stop:
        main(["--completion", "tcsh"])
    out = capsys.readouterr()
    assert stop.value.code == 2 and out.err.count("\n") == 1 and "tcsh" in out.err and "fish" in out.err


@pytest.mark.skipif(shutil.which("bash") is None, reason="bash is not installed")
@pytest.mark.parametrize(
    ("words", "expected"),
    [
        (["containment", "gr"], ["grains"]),
        (["containment", "liquid", "--cyl"], ["--cylinder"]),
        (["containment", "window", "--against", "st"], ["stroke"]),
        (["containment", "liquid", "glycerol", "--contact-line", ""], ["sliding", "pinned"]),
        (["containment", "table", "--outlet"], []),
    ],
)
def test_bash_completes(words, expected, capsys):
    typed = f"COMP_WORDS=({' '.join(repr(w) for w in words)}); COMP_CWORD={len(words) - 1}"
    program = f"{script('bash', capsys)}\n{typed}; _containment; printf '%s\\n' \"${{COMPREPLY[@]}}\""
    done = subprocess.run(["bash", "-c", program], capture_output=True, text=True, timeout=30, check=True)
    assert done.stderr == ""
    assert done.stdout.split() == expected
