"""Run an example as its reader would."""

import functools
import subprocess
import sys
from pathlib import Path

EXAMPLES = Path(__file__).parent.parent.parent / "examples"


@functools.cache
def output_of(name):
    """Return what an example prints; it must not say anything on the error stream."""
    done = subprocess.run([sys.executable, EXAMPLES / name], capture_output=True, text=True, check=False)
    assert (done.returncode, done.stderr) == (0, ""), done.stderr
    return done.stdout
