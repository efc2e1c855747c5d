"""The code of the README runs as it stands, and what it says of the command is true."""
from __future__ import annotations

import re
import warnings
from pathlib import Path

import numpy as np
import pytest

from ratebased.command.words import FORMATS, parser

ROOT = Path(__file__).parents[1]
TEXT = (ROOT / "README.md").read_text()


def test_code_blocks(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    """All blocks in order, in one namespace, from the folder of the repository; `runs` goes elsewhere."""
    monkeypatch.chdir(ROOT)
    names: dict[str, object] = {}
    blocks = re.findall(r"```python\n(.*?)```", TEXT, re.DOTALL)
    assert len(blocks) == 5
    for block in blocks:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            exec(block.replace('out="runs"', f"out={str(tmp_path)!r}"), names)
    printed = capsys.readouterr().out
    assert "Stage 19, ethanol: E = -" in printed and "licensed practice" in printed
    assert "the largest" in printed
    rates, fed = names["rates"], names["fed"]
    again = names["solve_equilibrium"](names["column"], names["mixture"],  # type: ignore[operator]
                                       rates.efficiency().vaporization_set())  # type: ignore[attr-defined]
    assert np.abs(again.x - rates.x).max() < 1e-8, "the table of a rate-based column closes the gap"  # type: ignore[attr-defined]
    assert fed.given.sum() == 18  # type: ignore[attr-defined]


def test_the_command_as_described() -> None:
    described = set(re.findall(r"^    ratebased (\w+) ", TEXT, re.MULTILINE))
    actions = next(action for action in parser()._actions if action.dest == "command")
    assert described == set(actions.choices)  # type: ignore[arg-type]
    assert all(f"`{word}`" in TEXT for word in FORMATS[1:])


@pytest.mark.parametrize("name", ["rate", "column", "flux", "catalogue", "new"])
def test_help_teaches_by_example(name: str, capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as stop:
        parser().parse_args([name, "--help"])
    assert stop.value.code == 0
    text = capsys.readouterr().out
    assert text.count(f"  ratebased {name}") >= 3 and "exit codes: 0 done, 1 no solution, 2 bad input" in text
