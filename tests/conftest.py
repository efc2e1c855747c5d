"""The option `--references DIR` and the count it prints; one thread for linear algebra: the matrices are small."""
from __future__ import annotations

import os

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")  # before anything imports numpy

from pathlib import Path

import pytest
from reference_cases import reference_files

COUNTS = pytest.StashKey[dict[str, str]]()


def pytest_addoption(parser: pytest.Parser) -> None:
    """Another folder of reference files."""
    parser.addoption("--references", type=Path, default=Path(__file__).parent / "data", metavar="DIR",
                     help="folder of reference JSON files for tests/test_references.py")


def pytest_configure(config: pytest.Config) -> None:
    """An empty count."""
    config.stash[COUNTS] = {}


def pytest_generate_tests(metafunc: pytest.Metafunc) -> None:
    """One test a reference file."""
    if "reference_file" in metafunc.fixturenames:
        files = reference_files(metafunc.config.getoption("--references"))
        metafunc.parametrize("reference_file", files, ids=[path.stem for path in files])


@pytest.fixture
def reference_counts(request: pytest.FixtureRequest) -> dict[str, str]:
    """Where a test leaves the count of its file."""
    return request.config.stash[COUNTS]


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter, config: pytest.Config) -> None:
    """The count of each file."""
    for name, count in sorted(config.stash[COUNTS].items()):
        terminalreporter.write_line(f"{name}: {count}")
