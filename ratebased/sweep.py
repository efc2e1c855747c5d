"""The same case at many settings: a tidy table, on all cores, without losing what is finished.

    frame = sweep("case.toml", {"reflux_ratio": [2.0, 3.0, 4.0], "column.feed.1.flow_mol_s": [60.0, 80.0]}, out="runs")

Every combination is a point. A setting is a key of the case file: by its name alone where that is unique
(`reflux_ratio`), else by its whole path, tables counted from 1 (`column.feed.2.stage`, `hardware.1.diameter_m`).
With `out` each finished point is a file of its own, so a sweep that was interrupted goes on where it stopped, and one
with more settings computes only the new ones. A case, a profile or a release that has changed makes new points.

As processes are started afresh, a script guards its call: `if __name__ == "__main__":`.

On a cluster that runs dask, the points go through its own scheduler and `sweep` only collects them:

    import dask
    points = sweep_points("case.toml", grid)
    tasks = [dask.delayed(run_point)(point, "runs") for point in points]
    dask.compute(*tasks)                           # on the scheduler of the cluster's client
    frame = sweep("case.toml", grid, out="runs")   # nothing left to compute

`runs` must be a folder that all workers and the script see.
"""
from __future__ import annotations

import copy
import difflib
import hashlib
import itertools
import json
import multiprocessing
import os
import signal
import sys
import warnings
from collections.abc import Callable, Iterator, Mapping, Sequence
from concurrent.futures import FIRST_COMPLETED, Future, ProcessPoolExecutor, wait
from dataclasses import dataclass
from importlib.metadata import version
from pathlib import Path
from typing import TYPE_CHECKING, Any

from .errors import ConvergenceError, InputError, NoPhysicalRootError
from .files import checksum, write_whole
from .toml_table import TomlTable

if TYPE_CHECKING:
    import pandas as pd

LARGEST = 100_000
"""Points of one sweep: more is far more likely a slip of the pen."""

Row = dict[str, Any]


@dataclass(frozen=True)
class SweepPoint:
    """One combination of settings. case: the parsed case file with the settings in place; path: the file it is from;
    settings: key as given -> value; key: tells this point, its inputs and this release from all others."""

    case: Mapping[str, Any]
    path: Path
    settings: Mapping[str, Any]
    key: str


def sweep(case: str | Path, settings: Mapping[str, Sequence[Any]], *, out: str | Path | None = None,
          workers: int | None = None) -> pd.DataFrame:
    """All combinations of the settings of a case, in the order of `itertools.product`.

    Parameters
    ----------
    case : case file of `ratebased column` or `ratebased rate`.
    settings : key of the case file -> values to try; see the module's docstring.
    out : folder of finished points (made if need be), and of `sweep.csv` at the end. None: nothing is kept.
    workers : processes; None takes one a core. 1 computes in this process.

    Returns
    -------
    DataFrame : the settings, `status` ("solved", "no solution", "bad input") and `message` of each point, then, for a
        column case, one row for each of its models with products, recoveries and duties (`Comparison.to_frame`), for
        a rating case one row a stage and component: `E`, `eta`, `N_mol_m2_s`, `HETP_m`, `flooding`. A point that fails
        is one row.

    Raises
    ------
    InputError : a case file that cannot be read, a setting that names no key or several, no values.
    """
    import pandas as pd

    points = sweep_points(case, settings)
    folder = None if out is None else Path(out)
    finished: dict[str, list[Row]] = {}
    for point in points:
        rows = None if folder is None else _finished(folder, point)
        if rows is not None:
            finished[point.key] = rows
    for point, rows in _computed([p for p in points if p.key not in finished], folder, _cores(workers)):
        finished[point.key] = rows
    table = [{**point.settings, **row} for point in points for row in finished[point.key]]
    frame = pd.DataFrame(table)
    if folder is not None:
        write_whole(folder / "sweep.csv", frame.to_csv(index=False, lineterminator="\n"))
    return frame


def sweep_points(case: str | Path, settings: Mapping[str, Sequence[Any]]) -> list[SweepPoint]:
    """The points of a sweep, for a scheduler of one's own; arguments and errors as for `sweep`."""
    path = Path(case)
    data = TomlTable.load(path).data
    if ("column" in data) == ("profile" in data):
        raise InputError(f"{path}: a sweep needs a case with [column] or with [profile]")
    values: dict[str, list[Any]] = {}
    for name, given in settings.items():
        listed = None if isinstance(given, str | bytes | Mapping) else _plain_list(given)
        if not listed:
            raise InputError(f"settings[{name!r}] = {given!r}: expected a list of values")
        values[name] = listed
    count = 1
    for listed in values.values():
        count *= len(listed)
    if count > LARGEST:
        raise InputError(f"settings: {count} points, at most {LARGEST} in one sweep")
    places = {name: _place(data, name, path) for name in values}
    inputs = [path.parent / data["profile"]["file"]] if "profile" in data else []
    stamp = [version("ratebased"), checksum([file for file in inputs if file.is_file()])]
    points = []
    for combination in itertools.product(*values.values()):
        changed = copy.deepcopy(data)
        for name, value in zip(values, combination):
            target: Any = changed
            for step in places[name][:-1]:
                target = target[step]
            target[places[name][-1]] = value
        try:
            text = json.dumps([changed, stamp], sort_keys=True, default=str)
        except (TypeError, ValueError) as error:
            raise InputError(f"settings: a value that has no place in a case file ({error})") from error
        chosen = dict(zip(values, combination))
        points.append(SweepPoint(changed, path, chosen, hashlib.sha256(text.encode()).hexdigest()[:20]))
    return points


def run_point(point: SweepPoint, out: str | Path | None = None) -> list[Row]:
    """Compute one point; with `out` its rows are also written there, whole or not at all. No failure raises."""
    rows = _solve(point)
    if out is not None:
        text = json.dumps({"settings": dict(point.settings), "rows": rows}, indent=1, default=str)
        write_whole(_file(Path(out), point), text + "\n")
    return rows


def _solve(point: SweepPoint) -> list[Row]:
    top = TomlTable(copy.deepcopy(dict(point.case)), str(point.path))
    solve = _column_rows if "column" in point.case else _rate_rows
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        try:
            rows = solve(top, point.path)
        except InputError as error:
            return [{"status": "bad input", "message": str(error)}]
        except (ConvergenceError, NoPhysicalRootError) as error:
            return [{"status": "no solution", "message": str(error)}]
    return [{"status": "solved", "message": "", **row} for row in rows]


def _column_rows(top: TomlTable, path: Path) -> list[Row]:
    from .case.column import column_case

    comparison = column_case(top, path).compare(count_stages=False)
    return _json_rows(comparison.to_frame().drop(columns="contact_stages_needed"))


def _rate_rows(top: TomlTable, path: Path) -> list[Row]:
    from .case.rate import rate_case
    from .efficiency import compare_methods

    case = rate_case(top, path)
    frame = compare_methods(case.profile, {"": case.hardware}, case.properties, case.options)
    if "failed" in frame and frame["failed"].notna().any():
        raise ConvergenceError(str(frame["failed"].dropna().iloc[0]))
    return _json_rows(frame.drop(columns="method"))


def _json_rows(frame: pd.DataFrame) -> list[Row]:
    from .efficiency.package import plain

    return [{str(key): plain(value) for key, value in row.items()} for row in frame.to_dict("records")]


def _file(folder: Path, point: SweepPoint) -> Path:
    return folder / "points" / f"{point.key}.json"


def _finished(folder: Path, point: SweepPoint) -> list[Row] | None:
    """The rows of a point that was computed before."""
    path = _file(folder, point)
    try:
        rows: list[Row] = json.loads(path.read_text(encoding="utf-8"))["rows"]
    except FileNotFoundError:
        return None
    except (OSError, ValueError, KeyError, TypeError) as error:
        raise InputError(f"{path}: not a finished point ({error}); delete it to have it computed again") from error
    return rows


def _computed(points: list[SweepPoint], folder: Path | None, workers: int) -> Iterator[tuple[SweepPoint, list[Row]]]:
    """Points as they are finished; on an interrupt those under way are finished and kept."""
    if not points:
        return
    with _bar(len(points)) as done:
        if workers == 1 or len(points) == 1:
            for point in points:
                yield point, run_point(point, folder)
                done()
            return
        threads = {name: os.environ.get(name) for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS")}
        os.environ |= {name: "1" for name in threads}             # one thread a process: they share the cores
        pool = ProcessPoolExecutor(min(workers, len(points)), multiprocessing.get_context("spawn"), _quiet)
        try:
            waiting: dict[Future[list[Row]], SweepPoint] = {pool.submit(run_point, p, folder): p for p in points}
            while waiting:
                for future in wait(waiting, return_when=FIRST_COMPLETED).done:
                    yield waiting.pop(future), future.result()
                    done()
        finally:
            pool.shutdown(wait=True, cancel_futures=True)
            for name, value in threads.items():
                if value is None:
                    os.environ.pop(name, None)
                else:
                    os.environ[name] = value


def _quiet() -> None:
    """In a worker: an interrupt from the keyboard is for the process that started the sweep."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)


class _bar:
    """A bar on a terminal, nothing in a pipe; the context gives the function to call after each point."""

    def __init__(self, total: int) -> None:
        self.total = total
        self.bar: Any = None

    def __enter__(self) -> Callable[[], None]:
        if sys.stderr.isatty():
            from tqdm import tqdm

            self.bar = tqdm(total=self.total, desc="sweep", unit="point")
        return self.step

    def step(self) -> None:
        if self.bar is not None:
            self.bar.update()

    def __exit__(self, *error: object) -> None:
        if self.bar is not None:
            self.bar.close()


def _cores(workers: int | None) -> int:
    if workers is None:
        return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1
    if isinstance(workers, bool) or not isinstance(workers, int) or workers < 1:
        raise InputError(f"workers = {workers!r}: expected a whole number of at least one")
    return workers


def _plain_list(given: Any) -> list[Any] | None:
    """Values as plain Python objects, or None for what is no sequence."""
    try:
        return [value.item() if hasattr(value, "item") else value for value in given]
    except TypeError:
        return None


Step = str | int


def _place(data: Mapping[str, Any], name: str, path: Path) -> tuple[Step, ...]:
    """Where a setting stands in the parsed file."""
    known = dict(_leaves(data))
    if name in known:
        return known[name]
    short = [text for text in known if text.rsplit(".", 1)[-1] == name]
    if len(short) == 1:
        return known[short[0]]
    if short:
        raise InputError(f"{path}: {name!r} stands in several places: {', '.join(short)}; give one of them")
    parent = name.rpartition(".")[0]
    tables = dict(_tables(data))
    if parent in tables and name.rpartition(".")[2]:
        return (*tables[parent], name.rpartition(".")[2])
    near = difflib.get_close_matches(name, [*known, *(text.rsplit(".", 1)[-1] for text in known)], 1)
    hint = f"; did you mean {near[0]!r}?" if near else f"; keys: {', '.join(known)}"
    raise InputError(f"{path}: no key {name!r}{hint}")


def _leaves(value: Any, text: str = "", steps: tuple[Step, ...] = ()) -> Iterator[tuple[str, tuple[Step, ...]]]:
    """(path in words, steps) of every value that is no table; lists of tables are counted from 1."""
    for step, inner, word in _children(value):
        path = f"{text}.{word}" if text else word
        if isinstance(inner, dict) or _is_tables(inner):
            yield from _leaves(inner, path, (*steps, step))
        else:
            yield path, (*steps, step)


def _tables(value: Any, text: str = "", steps: tuple[Step, ...] = ()) -> Iterator[tuple[str, tuple[Step, ...]]]:
    """(path in words, steps) of every table inside, whose missing keys may be set too."""
    for step, inner, word in _children(value):
        path = f"{text}.{word}" if text else word
        if isinstance(inner, dict):
            yield path, (*steps, step)
        if isinstance(inner, dict) or _is_tables(inner):
            yield from _tables(inner, path, (*steps, step))


def _children(value: Any) -> Iterator[tuple[Step, Any, str]]:
    if isinstance(value, dict):
        yield from ((key, inner, key) for key, inner in value.items())
    else:
        yield from ((k, inner, str(k + 1)) for k, inner in enumerate(value))


def _is_tables(value: Any) -> bool:
    return isinstance(value, list) and bool(value) and all(isinstance(item, dict) for item in value)
