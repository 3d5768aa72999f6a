"""Options and the closing table of the audit."""

import os

# one thread a process: the matrices are small, and pytest-xdist already fills the cores
for _name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS"):
    os.environ.setdefault(_name, "1")

import pytest  # noqa: E402

AUDIT_LINES = pytest.StashKey[list[str]]()


def pytest_addoption(parser):
    parser.addoption("--audit-size", type=int, default=1000, help="random drive points of the audit")
    parser.addoption("--audit-seed", type=int, default=20260117, help="seed of the audit; printed with its result")


def pytest_configure(config):
    config.stash[AUDIT_LINES] = []


@pytest.fixture
def audit_lines(request):
    """Lines that are shown at the end of the run, whatever is captured."""
    return request.config.stash[AUDIT_LINES]


def pytest_terminal_summary(terminalreporter, config):
    lines = config.stash[AUDIT_LINES]
    if lines:
        terminalreporter.section("audit")
        for line in lines:
            terminalreporter.write_line(line)
