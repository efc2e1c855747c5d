"""Case files and profiles spoiled at random: an exit code of the three, one line of error, no traceback, no hang.

FUZZ=20 in the environment makes twenty times as many, others each time; without it the same ones are drawn every run.
"""
from __future__ import annotations

import contextlib
import io
import json
import os
import signal
import tempfile
import tomllib
import warnings
from collections.abc import Iterator
from pathlib import Path
from types import FrameType
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ratebased.command import BAD_INPUT, DONE, NO_SOLUTION, main

TEMPLATES = Path(__file__).parents[1] / "ratebased" / "case" / "template"
LONGEST = 20
"""Seconds after which a run counts as hung; an ordinary one takes a few hundredths."""

CONSTANT = {
    "model": "constant volatility", "components": ["methanol", "2-propanol", "water"],
    "volatility": {"methanol": 3.0, "2-propanol": 1.6, "water": 1.0}, "latent_heat_J_mol": 3.8e4, "a": 24.0,
    "b_K": 4600.0, "vapor_heat_capacity_J_mol_K": 60.0, "liquid_heat_capacity_J_mol_K": 110.0}
FIXED = [{"type": "fixed coefficients", "kappa_vapor_m_s": 0.04, "kappa_liquid_m_s": 2e-4, "area_m2": 20.0,
          "heat_vapor_W_m2_K": 60.0, "heat_liquid_W_m2_K": 2000.0}]


def template(kind: str) -> dict[str, Any]:
    """A case of `ratebased new` with a mixture that is quick to build."""
    data = tomllib.loads((TEMPLATES / f"{kind}.toml").read_text())
    data["mixture"] = CONSTANT
    if kind == "column":
        data["hardware"] = FIXED
        data["column"]["stages"] = 6
        data["column"]["feed"][0]["stage"] = 3
        data["compare"]["count_stages"] = False
    return data


def places(value: Any, path: tuple[Any, ...] = ()) -> Iterator[tuple[Any, ...]]:
    """Every table, list and value inside."""
    if path:
        yield path
    if isinstance(value, dict):
        for key, inner in value.items():
            yield from places(inner, (*path, key))
    elif isinstance(value, list):
        for k, inner in enumerate(value):
            yield from places(inner, (*path, k))


ODD = st.one_of(
    st.floats(), st.integers(), st.sampled_from([0, -1, 1, 2, 10**40, -0.0, 1e-300, 1e300, 5e-324, 1.01325, 72.0]),
    st.booleans(), st.text(max_size=8), st.sampled_from(["", "total", "liquid", "water", "../profile.csv", "\x00"]),
    st.lists(st.one_of(st.floats(), st.integers(-3, 20), st.text(max_size=3)), max_size=3),
    st.dictionaries(st.sampled_from(["water", "methanol", "2-propanol", "x", "stage"]), st.floats(), max_size=3),
    st.lists(st.dictionaries(st.sampled_from(["type", "stage", "flow_mol_s"]), st.floats(0, 9), max_size=2),
             max_size=2))


@st.composite
def spoiled(draw: st.DrawFn, kind: str) -> dict[str, Any]:
    """The template with one to three places changed, removed, renamed or scaled."""
    data = json.loads(json.dumps(template(kind)))
    for _ in range(draw(st.integers(1, 3))):
        path = draw(st.sampled_from(list(places(data))))
        target = data
        for step in path[:-1]:
            target = target[step]
        last = path[-1]
        deed = draw(st.sampled_from(["replace", "replace", "scale", "scale", "remove", "rename", "add"]))
        value = target[last]
        if deed == "scale" and isinstance(value, int | float):
            factor = draw(st.sampled_from([0.0, -1.0, 1e-3, 0.1, 0.5, 0.9, 1.1, 2.0, 10.0, 1e3]))
            target[last] = type(value)(value * factor)
        elif deed == "remove":
            del target[last]
        elif deed == "rename" and isinstance(last, str):
            target[last[1:] + last[:1]] = target.pop(last)
        elif deed == "add" and isinstance(target, dict):
            target[draw(st.text(st.characters(codec="ascii", exclude_characters="\x7f", min_codepoint=33), min_size=1,
                                max_size=6))] = draw(ODD)
        else:
            target[last] = draw(ODD)
    return data


def toml(value: Any) -> str:
    """TOML of a parsed file: tables inline, so that no layout is needed."""
    if isinstance(value, dict):
        return "{" + ", ".join(f"{json.dumps(str(key))} = {toml(inner)}" for key, inner in value.items()) + "}"
    if isinstance(value, list):
        return "[" + ", ".join(toml(inner) for inner in value) + "]"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return json.dumps(value).replace("\x7f", "\\u007f")
    return repr(value)


def document(data: dict[str, Any]) -> str:
    return "\n".join(f"{json.dumps(key)} = {toml(value)}" for key, value in data.items())


@contextlib.contextmanager
def no_hang() -> Iterator[None]:
    """An alarm that raises where a run does not end."""
    def stop(number: int, frame: FrameType | None) -> None:
        raise TimeoutError(f"still running after {LONGEST} s")

    before = signal.signal(signal.SIGALRM, stop)
    signal.alarm(LONGEST)
    try:
        yield
    finally:
        signal.alarm(0)
        signal.signal(signal.SIGALRM, before)


def run(kind: str, case: str | bytes, profile: str | bytes | None = None) -> int:
    """Run the command on files with these contents; whatever escapes `main` fails the test."""
    out, err = io.StringIO(), io.StringIO()
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        (folder / "case.toml").write_bytes(case if isinstance(case, bytes) else case.encode("utf-8", "surrogatepass"))
        if profile is not None:
            (folder / "profile.csv").write_bytes(profile if isinstance(profile, bytes) else profile.encode())
        with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err), no_hang(), warnings.catch_warnings():
            warnings.simplefilter("ignore")
            code = main([kind, str(folder / "case.toml"), "--out", str(folder / "out"), "--format", "json"])
        assert code in (DONE, NO_SOLUTION, BAD_INPUT)
        assert "Traceback" not in err.getvalue()
        if code == DONE:
            json.loads(out.getvalue())
            assert "NaN" not in out.getvalue()
        else:
            assert out.getvalue() == "" and not (folder / "out").exists()
            errors = [line for line in err.getvalue().splitlines() if line.startswith("ratebased: ")]
            assert len(errors) == 1 and len(errors[0]) > 25
    return code


TIMES = int(os.environ.get("FUZZ", "1"))
COMMON = dict(deadline=None, derandomize=TIMES == 1,
              suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large])
PROFILE = (TEMPLATES / "profile.csv").read_text()


def test_the_templates_run_unspoiled() -> None:
    for kind in ("rate", "column", "flux"):
        assert run(kind, document(template(kind)), PROFILE) == DONE


@settings(max_examples=100 * TIMES, **COMMON)  # type: ignore[arg-type]
@given(spoiled("rate"))
def test_rate_case(data: dict[str, Any]) -> None:
    run("rate", document(data), PROFILE)


@settings(max_examples=40 * TIMES, **COMMON)  # type: ignore[arg-type]
@given(spoiled("column"))
def test_column_case(data: dict[str, Any]) -> None:
    run("column", document(data))


@settings(max_examples=100 * TIMES, **COMMON)  # type: ignore[arg-type]
@given(spoiled("flux"))
def test_flux_case(data: dict[str, Any]) -> None:
    run("flux", document(data))


@st.composite
def spoiled_profile(draw: st.DrawFn) -> str:
    """The profile with some cells, rows or titles changed."""
    rows = [line.split(",") for line in PROFILE.splitlines()]
    for _ in range(draw(st.integers(1, 3))):
        deed = draw(st.sampled_from(["cell", "cell", "cell", "scale", "scale", "drop", "twice", "swap", "short"]))
        j = draw(st.integers(0, len(rows) - 1))
        k = draw(st.integers(0, len(rows[j]) - 1))
        if deed == "cell":
            rows[j][k] = draw(st.sampled_from(["", "nan", "inf", "-1", "0", "1e400", "x", '"', "1,5", "é", " 1 ", "0x1",
                                               "1e-320", "#", "True", "2026-01-01"]))
        elif deed == "scale":
            with contextlib.suppress(ValueError):
                rows[j][k] = repr(float(rows[j][k]) * draw(st.sampled_from([-1.0, 0.0, 0.99, 1.01, 1.5, 1e3, 1e-3])))
        elif deed == "drop" and len(rows) > 1:
            del rows[j]
        elif deed == "twice":
            rows.insert(j, list(rows[j]))
        elif deed == "swap":
            rows[j], rows[0] = rows[0], rows[j]
        elif deed == "short":
            rows[j] = rows[j][:k]
        if not all(rows):
            rows = [row or [""] for row in rows]
    return "\n".join(",".join(row) for row in rows)


@settings(max_examples=100 * TIMES, **COMMON)  # type: ignore[arg-type]
@given(spoiled_profile())
def test_profile(text: str) -> None:
    run("rate", document(template("rate")), text)


@pytest.mark.parametrize("kind", ["rate", "column", "flux"])
@settings(max_examples=40 * TIMES, **COMMON)  # type: ignore[arg-type]
@given(data=st.binary(max_size=80))
def test_bytes(kind: str, data: bytes) -> None:
    """No file at all: rejected as such."""
    assert run(kind, data, data) == BAD_INPUT


@settings(max_examples=40 * TIMES, **COMMON)  # type: ignore[arg-type]
@given(st.one_of(st.binary(max_size=120), st.text(max_size=120).map(lambda text: text.encode("utf-8", "replace"))))
def test_profile_of_bytes(data: bytes) -> None:
    assert run("rate", document(template("rate")), data) == BAD_INPUT
