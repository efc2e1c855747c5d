"""Results in a notebook and in a terminal."""
from __future__ import annotations

from html.parser import HTMLParser
from pathlib import Path

import numpy as np

from ratebased import krishna_standart
from ratebased.bootstrap import Equimolar
from ratebased.case import read_column_case, read_flux_case, read_rate_case
from ratebased.explanation import explain_flux
from ratebased.interface import InterfaceFlux

TEMPLATES = Path(__file__).parents[1] / "ratebased" / "case" / "template"


def checked(result: object) -> None:
    """Short as text, a table as HTML."""
    text = str(result)
    assert len(text.splitlines()) < 60 and "array(" not in text
    html = result._repr_html_()  # type: ignore[attr-defined]
    tags: list[str] = []
    parser = HTMLParser()
    parser.handle_starttag = lambda tag, attrs: tags.append(tag)  # type: ignore[method-assign, assignment]
    parser.feed(html)
    assert "table" in tags and len(html) < 200_000


def test_column_and_what_it_gives() -> None:
    comparison = read_column_case(TEMPLATES / "column.toml").compare(count_stages=False)
    rate = comparison.profiles["rate-based"]
    for result in (comparison, rate, comparison.table, rate.entropy_production()):
        checked(result)
    assert f"{rate.T_L[0]:.5f}" in str(rate)


def test_flux() -> None:
    answer = read_flux_case(TEMPLATES / "flux.toml").solve()
    assert isinstance(answer, InterfaceFlux)
    for result in (answer, answer.vapor_film, explain_flux(answer)):
        checked(result)


def test_a_large_batch_is_cut() -> None:
    y = np.tile([0.5, 0.3, 0.2], (1000, 1))
    checked(krishna_standart(y, y[:, ::-1], 0.03, 35.0, Equimolar()))


def test_efficiency_table(tmp_path: Path) -> None:
    for source, target in (("rate.toml", "case.toml"), ("profile.csv", "profile.csv")):
        (tmp_path / target).write_text((TEMPLATES / source).read_text())
    checked(read_rate_case(tmp_path / "case.toml").rate())
