"""The command as a user runs it: the example cases, the files it writes, and input that fails well."""
from __future__ import annotations

import json
import os
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
    text = text.replace("samples = 128", "samples = 16")
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
    """Intervals included: their samples have a seed."""
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


TEMPLATES = Path(__file__).parents[1] / "ratebased" / "case" / "template"
FILES = {"rate": ["table.csv", "table.json", "table.md"],
         "column": ["column.json", "column.md", "comparison.csv", "efficiencies.csv", "profiles.csv"],
         "flux": ["flux.csv", "flux.json", "flux.md"]}


@pytest.mark.parametrize("kind", list(FILES))
def test_from_new_to_report(kind: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A new user's path: a case is written, runs as it is, gives its files, the same bytes each time."""
    assert main(["new", str(tmp_path), "--kind", kind]) == DONE
    assert capsys.readouterr().out == f"ratebased {kind} {tmp_path / 'case.toml'}\n"
    case = tmp_path / "case.toml"
    assert all(word in case.read_text() for word in ("# ", "[mixture]", f"ratebased {kind} case.toml"))
    quick = ["--quick"] if kind == "column" else []
    assert main([kind, str(case), *quick, "--report"]) == DONE
    text = capsys.readouterr().out
    assert text.startswith("My ") and "licensed practice" in text
    results = tmp_path / "results"
    assert sorted(path.name for path in results.iterdir()) == sorted([*FILES[kind], "report.html", "report.md"])
    assert main([kind, str(case), *quick, "--report", "--out", str(tmp_path / "again")]) == DONE
    for path in results.iterdir():
        assert path.read_bytes() == (tmp_path / "again" / path.name).read_bytes(), path.name


@pytest.mark.parametrize("kind", list(FILES))
def test_formats_are_the_files(kind: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """What goes to standard output in a format is the file of that format, and nothing else."""
    shown = {"rate": ("table.csv", "table.md", "table.json"), "column": ("profiles.csv", "column.md", "column.json"),
             "flux": ("flux.csv", "flux.md", "flux.json")}[kind]
    assert main(["new", str(tmp_path), "--kind", kind]) == DONE
    forms = list(zip(("csv", "markdown", "json"), shown))
    for form, name in forms[:1] if kind == "column" else forms:
        capsys.readouterr()
        quick = ["--quick"] if kind == "column" else []
        assert main([kind, str(tmp_path / "case.toml"), *quick, "--format", form]) == DONE
        assert capsys.readouterr().out == (tmp_path / "results" / name).read_text()


def test_column_numbers(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """The column fed with component efficiencies is the rate-based one; the counts of stages are asked for."""
    assert main(["new", str(tmp_path), "--kind", "column"]) == DONE
    assert main(["column", str(tmp_path / "case.toml")]) == DONE
    assert "contact stages needed" in capsys.readouterr().out
    record = json.loads((tmp_path / "results" / "column.json").read_text())
    one, fed, rate = record["models"]
    assert fed["top_x_methanol"] == pytest.approx(rate["top_x_methanol"], abs=1e-9)
    assert abs(one["top_x_methanol"] - rate["top_x_methanol"]) > 1e-3
    assert rate["contact_stages_needed"] == 10
    for solved in record["solution"].values():
        assert solved["component_closure"] < 1e-12 and solved["energy_closure"] < 1e-10
    frame = pd.read_csv(tmp_path / "results" / "profiles.csv")
    assert frame["stage"].tolist() == list(range(1, 13))


FILM = """\
title = "Diffusion in a ternary gas"
[film]
components = ["hydrogen", "nitrogen", "carbon dioxide"]
face_0 = {nitrogen = 0.4999, "carbon dioxide" = 0.5001}
face_delta = {hydrogen = 0.5012, nitrogen = 0.4988}
diffusivity_m2_s = {"hydrogen / nitrogen" = 8.33e-5, "hydrogen / carbon dioxide" = 6.8e-5,\
                    "carbon dioxide / nitrogen" = 1.68e-5}
thickness_m = 0.0859
molar_density_mol_m3 = 39.5
closure = "equimolar"
"""


def test_film_case(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Capillary between two bulbs, after Duncan & Toor (1962), compositions and diffusivities from memory: nitrogen
    moves although its fractions are nearly equal, dragged by carbon dioxide; no net flux. The pairs may be named in
    either order."""
    (tmp_path / "case.toml").write_text(FILM)
    assert main(["flux", str(tmp_path / "case.toml"), "--format", "csv"]) == DONE
    capsys.readouterr()
    frame = pd.read_csv(tmp_path / "results" / "flux.csv").set_index("component")
    N = frame["N_mol_m2_s"]
    assert abs(N.sum()) < 1e-9 * N.abs().max(), "the file has ten digits"
    assert 0.5 * N["carbon dioxide"] < N["nitrogen"] < N["carbon dioxide"]
    assert frame.loc["nitrogen", "regime"] == "osmotic"
    (tmp_path / "case.toml").write_text(FILM.replace('method = "exact"', "").replace(
        'closure = "equimolar"', 'closure = "stagnant"\ncomponent = "nitrogen"\nmethod = "linearized"'))
    assert main(["flux", str(tmp_path / "case.toml")]) == DONE
    assert pd.read_csv(tmp_path / "results" / "flux.csv").set_index("component").loc["nitrogen", "N_mol_m2_s"] == 0


def test_interface_with_hardware(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Coefficients of a tray in place of numbers: its correlations are named in the report."""
    text = (TEMPLATES / "flux.toml").read_text()
    for line in text.splitlines():
        if line.startswith(("kappa_m_s", "heat_transfer")):
            text = text.replace(line + "\n", "")
    text = text.replace("T_K = 350.0", "T_K = 350.0\nflow_mol_s = 35.0").replace(
        "T_K = 346.0", "T_K = 346.0\nflow_mol_s = 25.0")
    text += '[[hardware]]\ntype = "sieve tray"\ndiameter_m = 1.1\nspacing_m = 0.5\nweir_height_m = 0.05\n' \
            "hole_diameter_m = 0.005\nhole_area_fraction = 0.10\n"
    (tmp_path / "case.toml").write_text(text)
    assert main(["flux", str(tmp_path / "case.toml"), "--report"]) == DONE
    assert "Interface at " in capsys.readouterr().out
    assert "Bubble-Tray Design Manual" in (tmp_path / "results" / "report.md").read_text()


def test_catalogue(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["catalogue"]) == DONE
    every = capsys.readouterr().out.splitlines()
    assert len(every) > 80
    assert main(["catalogue", "PACKING", "onda", "--format", "json", "--out", str(tmp_path)]) == DONE
    records = json.loads(capsys.readouterr().out)
    assert {row["correlation"] for row in records} >= {"packing_area.onda", "packing_coefficients.onda_vapor"}
    assert len(records) < len(every)
    assert json.loads((tmp_path / "catalogue.json").read_text()) == records
    assert len(pd.read_csv(tmp_path / "catalogue.csv")) == len(records)


def test_other_mixtures(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """The same column with an equation of state, with parameters of one's own, and with constant volatilities."""
    text = (TEMPLATES / "column.toml").read_text()
    hydrocarbons = text.replace('"methanol", "2-propanol", "water"', '"n-butane", "n-pentane", "n-hexane"').replace(
        'activity = "unifac-modified"', 'model = "equation of state"\nT_range_K = [270.0, 400.0]').replace(
        'methanol = 0.40, "2-propanol" = 0.20, water = 0.40', 'n-butane = 0.4, n-pentane = 0.3, n-hexane = 0.3')
    zero = "[[0, 0, 0], [0, 0, 0], [0, 0, 0]]"
    nrtl = text.replace('activity = "unifac-modified"', f'activity = "nrtl"\nparameters = {{tau_b = {zero}}}')
    ideal = text.replace('activity = "unifac-modified"', 'activity = "ideal"')
    tops = []
    for words in (hydrocarbons, nrtl, ideal):
        (tmp_path / "case.toml").write_text(words)
        assert main(["column", str(tmp_path / "case.toml"), "--quick", "--format", "json"]) == DONE
        rate = json.loads(capsys.readouterr().out)["models"][-1]
        tops.append([value for key, value in rate.items() if key.startswith("top_x_")])
    assert tops[0][0] > 0.9
    assert tops[1] == pytest.approx(tops[2], abs=1e-8), "NRTL without interaction is an ideal mixture"


def test_a_pipe_that_closes(tmp_path: Path) -> None:
    """`ratebased catalogue | head -1` ends quietly."""
    run = subprocess.run(f"{sys.executable} -m ratebased.command catalogue --format json | head -1", shell=True,
                         capture_output=True, text=True, check=True)
    assert run.stdout == "[\n" and run.stderr == ""


def test_progress_on_a_terminal_only(tmp_path: Path) -> None:
    """On a terminal a line tells what is under way; it goes to standard error and is wiped when done."""
    pty, termios = pytest.importorskip("pty"), pytest.importorskip("termios")
    case = tmp_path / "case.toml"
    case.write_text((TEMPLATES / "flux.toml").read_text())
    master, slave = pty.openpty()
    termios.tcsetwinsize(slave, (24, 80))
    run = subprocess.Popen([sys.executable, "-m", "ratebased.command", "flux", str(case), "--format", "csv"],
                           stdout=subprocess.PIPE, stderr=slave, text=True)
    text, _ = run.communicate(timeout=60)
    os.close(slave)
    shown = os.read(master, 100_000).decode()
    os.close(master)
    assert run.returncode == DONE
    assert "reading case, building properties ..." in shown and "written: " in shown
    assert text == (tmp_path / "results" / "flux.csv").read_text()
