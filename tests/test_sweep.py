"""Sweeps: the points, what is resumed, failures as rows, processes, and the recipe for dask on its local scheduler."""
from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from ratebased import sweep as sweep_module
from ratebased.errors import InputError
from ratebased.sweep import run_point, sweep, sweep_points

CASE = """\
title = "Three components of constant volatility"
[mixture]
model = "constant volatility"
components = ["light", "middle", "heavy"]
volatility = {light = 4.0, middle = 2.0, heavy = 1.0}
latent_heat_J_mol = 3.0e4
a = 21.0
b_K = 3600.0
[column]
stages = 8
condenser = "total"
reboiler = true
pressure_Pa = 101325.0
[[column.feed]]
stage = 3
flow_mol_s = 1.0
vapor_fraction = 1.0
composition = {light = 0.5, middle = 0.5}
[[column.feed]]
stage = 5
flow_mol_s = 10.0
vapor_fraction = 0.0
composition = {light = 0.3, middle = 0.3, heavy = 0.4}
[column.specifications]
reflux_ratio = 2.0
distillate_mol_s = 5.0
[[hardware]]
type = "fixed coefficients"
kappa_vapor_m_s = {"light / middle" = 0.05, "light / heavy" = 0.04, "middle / heavy" = 0.02}
kappa_liquid_m_s = 2.0e-4
area_m2 = 10.0
heat_vapor_W_m2_K = 60.0
heat_liquid_W_m2_K = 2000.0
[compare]
efficiency = 0.7
"""


@pytest.fixture
def case(tmp_path: Path) -> Path:
    path = tmp_path / "case.toml"
    path.write_text(CASE)
    return path


def test_tidy_table(case: Path) -> None:
    """One row a point and model, in the order of the settings; more reflux, purer top at a given efficiency."""
    frame = sweep(case, {"reflux_ratio": [2.0, 3.0], "column.feed.2.flow_mol_s": np.array([10.0, 11.0])}, workers=1)
    assert len(frame) == 2 * 2 * 3
    assert frame.columns[:4].tolist() == ["reflux_ratio", "column.feed.2.flow_mol_s", "status", "message"]
    assert frame["reflux_ratio"].tolist() == [2.0] * 6 + [3.0] * 6
    assert (frame["status"] == "solved").all()
    wide = frame.pivot(index=["reflux_ratio", "column.feed.2.flow_mol_s"], columns="model", values="top_x_light")
    one = wide["equilibrium, one efficiency"]
    assert (one[3.0] > one[2.0]).all()
    assert np.allclose(wide["rate-based"], wide["equilibrium, component efficiencies"], rtol=1e-9)


def test_only_new_points_are_computed(case: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """What stands in the folder is not computed again; the table is the same as that of one go."""
    out, ran = tmp_path / "runs", []

    def counted(point: sweep_module.SweepPoint, folder: Path | None = None) -> list[dict[str, object]]:
        ran.append(point.settings["reflux_ratio"])
        return run_point(point, folder)

    monkeypatch.setattr(sweep_module, "run_point", counted)
    first = sweep(case, {"reflux_ratio": [2.0, 3.0]}, out=out, workers=1)
    assert ran == [2.0, 3.0]
    again = sweep(case, {"reflux_ratio": [2.0, 3.0, 4.0]}, out=out, workers=1)
    assert ran == [2.0, 3.0, 4.0]
    pd.testing.assert_frame_equal(again[:6], first)
    case.write_text(CASE.replace("area_m2 = 10.0", "area_m2 = 12.0"))
    sweep(case, {"reflux_ratio": [2.0]}, out=out, workers=1)
    assert ran == [2.0, 3.0, 4.0, 2.0], "a case that has changed makes new points"
    assert len(list((out / "points").glob("*.json"))) == 4
    assert not list(out.rglob("*.part"))


def test_interrupted_and_resumed(case: Path, tmp_path: Path) -> None:
    """A process stopped in the middle of its sweep keeps every finished point; the next run computes the rest only,
    and the table has the bytes of a run in one go."""
    out = tmp_path / "runs"
    settings = {"reflux_ratio": np.linspace(1.5, 6.0, 24).tolist()}
    script = tmp_path / "script.py"
    script.write_text("import signal\nfrom ratebased.sweep import sweep\nif __name__ == '__main__':\n"
                      "    signal.signal(signal.SIGINT, signal.default_int_handler)\n"
                      f"    sweep({str(case)!r}, {settings!r}, out={str(out)!r}, workers=1)\n")
    process = subprocess.Popen([sys.executable, str(script)], stderr=subprocess.DEVNULL,
                               env={**os.environ, "OPENBLAS_NUM_THREADS": "1"})
    until = time.monotonic() + 60.0
    while time.monotonic() < until and len(list(out.glob("points/*.json"))) < 3:
        time.sleep(0.01)
    process.send_signal(signal.SIGINT)
    assert process.wait(60) != 0
    kept = {path: path.stat().st_mtime_ns for path in out.glob("points/*.json")}
    assert 3 <= len(kept) < 24
    assert not (out / "sweep.csv").exists()
    resumed = sweep(case, settings, out=out, workers=1)
    assert all(path.stat().st_mtime_ns == before for path, before in kept.items()), "a finished point was recomputed"
    assert len(list(out.glob("points/*.json"))) == 24
    fresh = sweep(case, settings, out=tmp_path / "fresh", workers=1)
    pd.testing.assert_frame_equal(resumed, fresh)
    assert (out / "sweep.csv").read_bytes() == (tmp_path / "fresh" / "sweep.csv").read_bytes()


def test_processes_give_the_same(case: Path, tmp_path: Path) -> None:
    settings = {"reflux_ratio": [2.0, 3.0, 4.0], "area_m2": [8.0, 12.0]}
    many = sweep(case, settings, out=tmp_path / "many", workers=2)
    pd.testing.assert_frame_equal(many, sweep(case, settings, workers=1))


def test_a_point_without_solution_is_a_row(case: Path) -> None:
    """Too much distillate is bad input; neither it nor an unknown word stops the others."""
    frame = sweep(case, {"distillate_mol_s": [5.0, 50.0], "condenser": ["total", "tootal"]}, workers=1)
    status = frame.groupby(["distillate_mol_s", "condenser"])["status"].first()
    assert status.tolist() == ["bad input", "solved", "bad input", "bad input"]
    assert "did you mean 'total'?" in frame.loc[frame["condenser"] == "tootal", "message"].iloc[0]


def test_rating_case(tmp_path: Path) -> None:
    """A rating case gives one row a stage and component."""
    from ratebased.command import main
    assert main(["new", str(tmp_path / "new")]) == 0
    frame = sweep(tmp_path / "new" / "case.toml", {"weir_height_m": [0.03, 0.06]}, workers=1)
    assert len(frame) == 2 * 10 * 3
    mean = frame.groupby("weir_height_m")["E"].mean()
    assert mean[0.06] > mean[0.03], "a higher weir holds more liquid"


def test_dask_recipe(case: Path, tmp_path: Path) -> None:
    """The recipe of the module's docstring, on dask's own local scheduler."""
    dask = pytest.importorskip("dask")
    grid = {"reflux_ratio": [2.0, 3.0]}
    tasks = [dask.delayed(run_point)(point, tmp_path / "runs") for point in sweep_points(case, grid)]
    rows = dask.compute(*tasks, scheduler="threads", num_workers=1)
    frame = sweep(case, grid, out=tmp_path / "runs")
    assert frame["top_x_light"].tolist() == [row["top_x_light"] for point in rows for row in point]


def test_a_spoiled_point_is_told(case: Path, tmp_path: Path) -> None:
    (point,) = sweep_points(case, {"reflux_ratio": [2.0]})
    run_point(point, tmp_path)
    path = tmp_path / "points" / f"{point.key}.json"
    assert json.loads(path.read_text())["settings"] == {"reflux_ratio": 2.0}
    path.write_text("{")
    with pytest.raises(InputError, match="not a finished point"):
        sweep(case, {"reflux_ratio": [2.0]}, out=tmp_path)


@pytest.mark.parametrize(("settings", "message"), [
    ({"reflux": [1.0]}, "did you mean 'reflux_ratio'"),
    ({"flow_mol_s": [1.0]}, "stands in several places: column.feed.1.flow_mol_s, column.feed.2.flow_mol_s"),
    ({"reflux_ratio": 2.0}, "expected a list of values"),
    ({"reflux_ratio": []}, "expected a list of values"),
    ({"reflux_ratio": "23"}, "expected a list of values"),
    ({"reflux_ratio": range(1000), "area_m2": range(1000)}, "1000000 points"),
    ({"column.feed.3.stage": [1]}, "no key 'column.feed.3.stage'"),
])
def test_bad_settings(case: Path, settings: dict[str, object], message: str) -> None:
    with pytest.raises(InputError, match=message):
        sweep(case, settings)  # type: ignore[arg-type]


def test_bad_workers(case: Path) -> None:
    with pytest.raises(InputError, match="workers = 0"):
        sweep(case, {"reflux_ratio": [2.0]}, workers=0)
