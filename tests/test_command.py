"""The command as a user runs it: the example cases, the files it writes, and input that fails well."""
from __future__ import annotations

import json
import shutil
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pandas as pd
import pytest

from ratebased.command import BAD_INPUT, DONE, main

EXAMPLES = Path(__file__).parents[1] / "examples"


@pytest.fixture
def case(tmp_path: Path) -> Path:
    """A copy of the solvent-recovery case, to be spoiled."""
    for name in ("case.toml", "profile.csv"):
        shutil.copy(EXAMPLES / "solvent_recovery" / name, tmp_path / name)
    text = (tmp_path / "case.toml").read_text().replace('point = "integral"', 'point = "midpoint"')
    (tmp_path / "case.toml").write_text(text)
    return tmp_path / "case.toml"


def test_solvent_recovery(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """The main job: a negative and an above-one efficiency that are not flagged; balances and residuals below 1e-9."""
    assert main(["rate", str(EXAMPLES / "solvent_recovery" / "case.toml"), "--out", str(tmp_path)]) == DONE
    text = capsys.readouterr().out
    assert "licensed practice" in text
    assert len([line for line in text.splitlines() if line.split()[:1] and line.split()[0].isdigit()]) == 18
    record = json.loads((tmp_path / "table.json").read_text())
    values = [row[f"E_{name}"] for row in record["rows"] for name in record["components"]]
    assert min(v for v in values if v is not None) < 0
    assert max(v for v in values if v is not None) > 1
    assert None in values
    for row in record["rows"]:
        for column in ("component_closure", "energy_closure", "interface_residual", "energy_residual"):
            assert row[column] < 1e-9
    frame = pd.read_csv(tmp_path / "table.csv")
    assert frame["stage"].tolist() == list(range(2, 20))
    assert (tmp_path / "table.md").read_text().startswith("# Solvent recovery")


def test_packed_absorber(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["rate", str(EXAMPLES / "packed_absorber" / "case.toml"), "--out", str(tmp_path), "--format",
                 "csv"]) == DONE
    frame = pd.read_csv(tmp_path / "table.csv")
    assert capsys.readouterr().out.splitlines()[0] == ",".join(frame.columns)
    assert frame["HETP_acetone_m"].between(0.2, 2.0).all()
    assert (frame["N_air_mol_m2_s"] == 0).all()
    assert frame["HETP_air_m"].isna().all()


def test_same_input_same_bytes(case: Path, tmp_path: Path) -> None:
    for folder in ("one", "two"):
        assert main(["rate", str(case), "--out", str(tmp_path / folder)]) == DONE
    for name in ("table.csv", "table.md", "table.json"):
        assert (tmp_path / "one" / name).read_bytes() == (tmp_path / "two" / name).read_bytes()
    assert not list(tmp_path.rglob("*.part"))


def replace(name: str, old: str, new: str) -> Callable[[Path], None]:
    def spoil(folder: Path) -> None:
        text = (folder / name).read_text()
        assert old in text
        (folder / name).write_text(text.replace(old, new, 1))
    return spoil


def remove(name: str) -> Callable[[Path], None]:
    return lambda folder: (folder / name).unlink()


BAD = [
    (remove("profile.csv"), "profile.csv: no such file"),
    (remove("case.toml"), "case.toml: no such file"),
    (replace("case.toml", 'title = "', "title = "), "not a TOML file"),
    (replace("case.toml", "hole_diameter_m", "hole_diametre_m"), "key hole_diameter_m is missing (found "
                                                                 "'hole_diametre_m': is that it?)"),
    (replace("case.toml", "weir_height_m = 0.05", "weir_height_m = 0.05\nweir_hight_m = 0.04"),
     "unknown key 'weir_hight_m'; did you mean 'weir_height_m'?"),
    (replace("case.toml", 'type = "sieve tray"', 'type = "seive tray"'), "did you mean 'sieve tray'?"),
    (replace("case.toml", "diameter_m = 1.75", "diameter_m = -1.75"), "diameter_m = -1.75: expected a number above 0"),
    (replace("case.toml", "diameter_m = 1.75", 'diameter_m = "1.75"'), "expected a finite number"),
    (replace("case.toml", "stages = [2, 19]", "stages = [2, 12]"), "hardware, stage 13: no section"),
    (replace("case.toml", "water = 0.55", "water = 0.85"), "must sum to one"),
    (replace("case.toml", "ethanol = 0.20", "methanol = 0.20"), "unknown key 'methanol'; did you mean 'ethanol'?"),
    (replace("case.toml", '"acetone", "ethanol", "water"', '"acetone", "ethanol", "unobtainium"'),
     "composition: unknown key 'water'; known keys: acetone, ethanol, unobtainium"),
    (replace("case.toml", 'activity = "unifac-modified"', 'activity = "unifak"'), "activity"),
    (replace("case.toml", "T_K = 341.45", "T_K = 68.3"), "T_K = 68.3"),
    (replace("case.toml", "stage = 6", "stage = 60"), "feed: stage 60 is not in"),
    (replace("profile.csv", "tray,329.", "tray,56."), "column T_K: 56."),
    (replace("profile.csv", "stage,kind", "stage,sort"), "row 1, column V_mol_s: 0.0: a flow must be above zero"),
    (replace("profile.csv", "x_water", "x_wine"), "column x_water is missing"),
    (replace("profile.csv", "\n3,tray", "\n4,tray"), "stages must be consecutive, expected 3"),
    (replace("case.toml", 'point = "midpoint"', 'point = "middle"'), "expected one of 'midpoint', 'integral'"),
]


@pytest.mark.parametrize(("spoil", "message"), BAD, ids=range(len(BAD)))
def test_bad_input_gives_one_clear_line_and_exit_code_2(case: Path, spoil: Callable[[Path], None], message: str,
                                                        capsys: pytest.CaptureFixture[str]) -> None:
    spoil(case.parent)
    assert main(["rate", str(case), "--out", str(case.parent / "out")]) == BAD_INPUT
    streams = capsys.readouterr()
    errors = [line for line in streams.err.splitlines() if line.startswith("ratebased: bad input:")]
    assert len(errors) == 1 and message in errors[0], streams.err
    assert streams.out == ""
    assert not (case.parent / "out").exists()


def test_no_traceback_through_the_installed_command(tmp_path: Path) -> None:
    """Through a process of its own: exit code 2, one line on standard error, nothing on standard output."""
    run = subprocess.run([sys.executable, "-m", "ratebased.command", "rate", str(tmp_path / "none.toml")],
                         capture_output=True, text=True, check=False)
    assert run.returncode == BAD_INPUT
    assert run.stdout == ""
    assert "Traceback" not in run.stderr and "none.toml: no such file" in run.stderr


def test_import_is_lean() -> None:
    """`import ratebased` loads neither thermo, pandas nor matplotlib."""
    code = "import sys, ratebased; print(sorted({'thermo', 'pandas', 'matplotlib', 'scipy'} & set(sys.modules)))"
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert run.stdout.strip() == "[]"
