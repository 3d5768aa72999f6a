"""The example runs, and what it prints agrees with the verdict it stands on."""

import importlib.util
from pathlib import Path

EXAMPLES = Path(__file__).parent.parent.parent / "examples"


def test_larger_vessels_need_more(capsys):
    spec = importlib.util.spec_from_file_location("size_a_shaker", EXAMPLES / "size_a_shaker.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    module.main()
    rows = capsys.readouterr().out.splitlines()[1:]
    levels = [float(row.split("Hz")[1].split("g_n")[0]) for row in rows]
    assert len(levels) == 3
    assert levels == sorted(levels)  # a larger vessel has longer, slower modes to hold
    assert all("not held" not in row for row in rows)
