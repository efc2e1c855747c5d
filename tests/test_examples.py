"""Every example does what its README says: each command and script in them is run."""
from __future__ import annotations

import re
import runpy
import warnings
from pathlib import Path

import pytest

from ratebased.command import DONE, main

ROOT = Path(__file__).parents[1]
EXAMPLES = ROOT / "examples"
FOLDERS = sorted(path.name for path in EXAMPLES.iterdir() if path.is_dir() and not path.name.startswith("_"))


def commands(folder: str) -> list[list[str]]:
    """The indented lines of a README, brackets of optional words left out."""
    text = (EXAMPLES / folder / "README.md").read_text()
    lines = re.findall(r"^    ((?:ratebased|python) .*)$", text, re.MULTILINE)
    return [re.sub(r" \[.*\]", "", line).split() for line in lines]


@pytest.mark.parametrize("folder", FOLDERS)
def test_readme(folder: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
                ) -> None:
    """The report and the counts of stages are left to tests of their own."""
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("MPLBACKEND", "Agg")
    found = commands(folder)
    assert found, "no command in the README"
    for program, *words in found:
        words = [str(ROOT / word) if word.startswith("examples/") else word for word in words]
        if program == "ratebased":
            more = ["--quick"] if words[0] == "column" else []
            words.remove("--report")
            assert main([*words, *more, "--out", str(tmp_path / "out")]) == DONE
        else:
            script = Path(words[0])
            monkeypatch.setattr("sys.argv", [str(script), *words[1:]])
            with warnings.catch_warnings():
                warnings.simplefilter("default")
                runpy.run_path(str(script if script.is_absolute() else EXAMPLES / folder / script),
                               run_name="__main__")
        assert capsys.readouterr().out.strip()


def test_every_example_has_its_text() -> None:
    for folder in FOLDERS:
        text = (EXAMPLES / folder / "README.md").read_text()
        assert text.startswith("# ") and 5 < text.count(" ") < 400
