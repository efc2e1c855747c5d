"""Figures: every one is made for plain and for awkward input, says its units, and leaves matplotlib as it was."""
from __future__ import annotations

import itertools
import re
import subprocess
import sys
from dataclasses import fields, replace
from functools import cache
from pathlib import Path
from typing import Any

import matplotlib
import numpy as np
import pytest
from matplotlib.figure import Figure

from ratebased.column import (
    Column,
    DistillateRate,
    EntropyProduction,
    LiquidFeed,
    Profile,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    VaporFeed,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.efficiency import EfficiencyTable, Interval, UncertaintyResult, efficiency_table
from ratebased.equipment import FixedCoefficients, Hydraulics
from ratebased.errors import InputError
from ratebased.explanation import explain_flux
from ratebased.figures import (
    efficiency_figure,
    entropy_figure,
    figure_svg,
    flux_split_figure,
    hetp_figure,
    operating_figure,
    profile_figure,
    save_figure,
    triangle_figure,
)
from ratebased.figures.labels import Curve, label_curves
from ratebased.figures.triangle_axes import HEIGHT, Triangle
from ratebased.properties import ConstantVolatility
from ratebased.stage_profile import ProfileFeed

NAMES = ("n-hexane", "2,2,4-trimethylpentane", "methylcyclohexane", "toluene", "n-octane", "ethylbenzene")


def pairs(n: int, low: float, high: float) -> np.ndarray:
    k = np.exp(np.random.default_rng(n).uniform(np.log(low), np.log(high), (n, n)))
    return np.asarray(np.sqrt(k * k.T))


@cache
def distillation(n: int) -> tuple[Profile, Profile, EfficiencyTable]:
    """A column of n components by both models, and the table of the rate-based one."""
    mixture = ConstantVolatility(NAMES[:n], np.linspace(4.0, 1.0, n), np.linspace(27e3, 36e3, n), a=22.5, b=4000.0,
                                 vapor_heat_capacity=90.0, liquid_heat_capacity=160.0, reference_temperature=350.0,
                                 vapor_molar_density=35.0, liquid_molar_density=9e3)
    flows, temperature = np.full(n, 70.0 / n), 352.0
    column = Column(9, [LiquidFeed(5, flows, temperature)], 101325.0, condenser=TotalCondenser(), reboiler=Reboiler(),
                    specifications=[RefluxRatio(2.5), DistillateRate(30.0)])
    trays = FixedCoefficients(pairs(n, 0.012, 0.1), pairs(n, 1.5e-4, 9e-4), 120.0, h_vapor=80.0, h_liquid=1500.0)
    rate = solve_ratebased(column, mixture, trays)
    feed = ProfileFeed(5, "liquid", 70.0, flows / 70.0, temperature)
    table = efficiency_table(rate.to_frame()[[c for c in rate.to_frame() if "flux" not in c]], trays, mixture,
                             feeds=(feed,))
    return solve_equilibrium(column, mixture, 0.7), rate, table


@cache
def absorber() -> tuple[Profile, Profile, EfficiencyTable]:
    """A packed absorber: a gas that never condenses, two solutes, an oil that never boils."""
    mixture = ConstantVolatility(["air", "first", "second", "oil"], [1.0, 1.2, 0.2, 1.0], [0.0, 20e3, 26e3, 50e3],
                                 a=17.0, b=2600.0, vapor_heat_capacity=[29.0, 70.0, 95.0, 200.0],
                                 liquid_heat_capacity=[60.0, 120.0, 150.0, 350.0], reference_temperature=298.15,
                                 condensable=[False, True, True, True], volatile=[True, True, True, False],
                                 vapor_molar_density=40.0, liquid_molar_density=6e3)
    lean, rich = np.array([0.0, 0.0, 0.3, 60.0]), np.array([85.0, 10.0, 5.0, 0.0])
    column = Column(5, [LiquidFeed(1, lean, 300.0), VaporFeed(5, rich, 308.0)], 101325.0, segment_height=0.3)
    bed = FixedCoefficients(pairs(4, 0.02, 0.05), pairs(4, 1e-4, 2e-4), 25.0, h_vapor=60.0, h_liquid=900.0)
    rate = solve_ratebased(column, mixture, bed)
    feeds = (ProfileFeed(1, "liquid", 60.3, lean / 60.3, 300.0), ProfileFeed(5, "vapor", 100.0, rich / 100.0, 308.0))
    frame = rate.to_frame()
    table = efficiency_table(frame, bed, mixture, feeds=feeds)
    return solve_equilibrium(column, mixture, 0.7), rate, table


def with_intervals(table: EfficiencyTable, width: float = 0.2) -> EfficiencyTable:
    """Invented intervals; a pole in the first row."""
    r = table.rows
    pole = np.zeros(r.murphree.shape, bool)
    pole[0] = True

    def around(value: np.ndarray) -> Interval:
        return Interval(value - width, value, value + width)

    hetp = np.zeros(r.murphree.shape)
    if r.packed is not None:
        hetp[r.packed.position] = r.packed.HETP
    return replace(table, uncertainty=UncertaintyResult(
        ("vapor",), around(r.murphree), around(r.y_out - r.y_in), None if r.packed is None else around(hetp), pole,
        np.zeros(pole.shape), np.ones((*pole.shape, 1)), ~pole, np.ones(pole.shape), ()))


def one_stage(table: EfficiencyTable, j: int = 2) -> EfficiencyTable:
    """The table of a single row."""
    r, cut = table.rows, {}
    R = r.number.size
    for f in fields(r):
        value = getattr(r, f.name)
        if isinstance(value, np.ndarray) and value.shape[:1] == (R,) and f.name != "ordinary":
            cut[f.name] = value[j:j + 1]
    return EfficiencyTable(replace(r, **cut, kind=r.kind[j:j + 1], interfaces=(), packed=None), "one row")


def hydraulics(table: EfficiencyTable, **limits: Any) -> EfficiencyTable:
    return replace(table, rows=replace(table.rows, hydraulics=Hydraulics(**{"flooding": None, **limits})))


def texts(figure: Figure) -> list[str]:
    """Everything written in a figure."""
    artists = figure.findobj(matplotlib.text.Text)
    return [a.get_text() for a in artists if a.get_visible() and a.get_text().strip()]


def overlapping(figure: Figure) -> list[tuple[str, str]]:
    """Pairs of visible texts whose boxes, as turned, cover a common point."""
    figure.draw_without_rendering()
    renderer = figure.canvas.get_renderer()  # type: ignore[attr-defined]
    undrawn = set()
    for axis in (axis for ax in figure.axes for axis in (ax.xaxis, ax.yaxis)):
        low, high = sorted(axis.get_view_interval())
        for tick in (*axis.get_major_ticks(), *axis.get_minor_ticks()):
            if not (axis.axes.axison and tick.get_visible() and low <= tick.get_loc() <= high):
                undrawn |= {tick.label1, tick.label2}
    found = []
    for text in figure.findobj(matplotlib.text.Text):
        shown = text.get_visible() and text.get_text().strip() and (text.axes is None or text.axes.get_visible())
        if shown and text not in undrawn and (text.axes is None or text.axes.axison or text in text.axes.texts):
            found.append((text.get_text(), corners(text, renderer)))
    for words, box in found:
        assert (box >= -1).all() and (box <= figure.bbox.max + 1).all(), f"{words!r} leaves the figure"
    return [(a, b) for (a, p), (b, q) in itertools.combinations(found, 2) if cover(p, q) and cover(q, p)]


def corners(text: matplotlib.text.Text, renderer: Any) -> np.ndarray:
    """Corners of a text as it is turned, (4, 2)."""
    turned = text.get_window_extent(renderer)
    angle = text.get_rotation()
    text.set_rotation(0.0)
    level = text.get_window_extent(renderer)
    text.set_rotation(angle)
    half = np.array([[-1, -1], [1, -1], [1, 1], [-1, 1]]) * (np.array(level.size) / 2 - 0.6)
    c, s = np.cos(np.radians(angle)), np.sin(np.radians(angle))
    return np.asarray((turned.min + turned.max) / 2 + half @ np.array([[c, s], [-s, c]]))


def cover(p: np.ndarray, q: np.ndarray) -> bool:
    """Whether no side of the rectangle p separates it from q."""
    for way in (p[1] - p[0], p[2] - p[1]):
        a, b = p @ way, q @ way
        if a.max() <= b.min() or b.max() <= a.min():
            return False
    return True


def labels_have_units(figure: Figure) -> None:
    """Every axis that shows its numbers has a label; every label but the stage number has a unit in brackets."""
    for ax in figure.axes:
        if not ax.axison or not ax.get_visible():
            continue
        labels = [ax.get_xlabel()] if ax.get_xlabel() else [t.get_text() for t in figure.texts]
        assert any(re.search(r"\((K|–|%|W/K|m|[mµn]?mol/\(m² s\))\)$", label) for label in labels), labels


CASES = {
    "efficiencies": lambda: efficiency_figure(distillation(3)[2]),
    "efficiencies, two components": lambda: efficiency_figure(distillation(2)[2]),
    "efficiencies, five, intervals": lambda: efficiency_figure(with_intervals(distillation(5)[2])),
    "efficiencies, six": lambda: efficiency_figure(distillation(6)[2]),
    "efficiencies, wide intervals": lambda: efficiency_figure(with_intervals(distillation(3)[2], 50.0)),
    "efficiencies, masked": lambda: efficiency_figure(absorber()[2]),
    "efficiencies, one stage": lambda: efficiency_figure(one_stage(distillation(3)[2])),
    "efficiencies, one stage, intervals": lambda: efficiency_figure(with_intervals(one_stage(distillation(3)[2]))),
    "HETP": lambda: hetp_figure(absorber()[2]),
    "HETP, intervals": lambda: hetp_figure(with_intervals(absorber()[2])),
    "profiles": lambda: profile_figure(*distillation(3)[:2]),
    "profiles, two components": lambda: profile_figure(*distillation(2)[:2]),
    "profiles, six components": lambda: profile_figure(*distillation(6)[:2]),
    "profiles, masked": lambda: profile_figure(*absorber()[:2]),
    "triangle": lambda: triangle_figure(distillation(3)[2]),
    "triangle, films": lambda: triangle_figure(distillation(3)[2], stage=6),
    "triangle, five": lambda: triangle_figure(distillation(5)[2], stage=3, components=["toluene", NAMES[0], NAMES[1]]),
    "triangle, masked": lambda: triangle_figure(absorber()[2], stage=5),
    "triangle, profile": lambda: triangle_figure(distillation(3)[1], stage=4),
    "triangle, loaded profile": lambda: triangle_figure(replace(distillation(3)[1], properties=None)),
    "triangle, one stage": lambda: triangle_figure(one_stage(distillation(3)[2])),
    "flux split": lambda: flux_split_figure(distillation(3)[2].explain(3), NAMES[1]),
    "flux split, two components": lambda: flux_split_figure(distillation(2)[2].explain(3), NAMES[1]),
    "flux split, masked": lambda: flux_split_figure(absorber()[2].explain(2), "air"),
    "entropy": lambda: entropy_figure(distillation(3)[1].entropy_production()),
    "entropy, packed": lambda: entropy_figure(absorber()[1].entropy_production()),
    "operating": lambda: operating_figure(hydraulics(
        distillation(3)[2], flooding=np.linspace(0.6, 1.3, 7), weeping=np.linspace(0.4, 0.2, 7),
        downcomer=np.array([0.5, 0.5, np.nan, np.nan, 0.6, 0.6, 0.6]))),
    "operating, one stage": lambda: operating_figure(hydraulics(one_stage(distillation(3)[2]),
                                                                flooding=np.array([0.7]))),
}


@pytest.mark.parametrize("case", CASES)
def test_made_readable_and_the_same_twice(case: str) -> None:
    before = dict(matplotlib.rcParams)
    figure = CASES[case]()
    labels_have_units(figure)
    assert not overlapping(figure)
    assert all("nan" not in words.split() for words in texts(figure))
    if case in ("efficiencies, five, intervals", "profiles, masked", "triangle, films", "flux split"):
        assert figure_svg(figure) == figure_svg(CASES[case]())
    assert dict(matplotlib.rcParams) == before


def test_all_flagged() -> None:
    table = distillation(3)[2]
    figure = efficiency_figure(replace(table, rows=replace(table.rows, flagged=np.ones_like(table.rows.flagged))))
    assert [t.get_text() for t in figure.legends[0].texts] == ["driving force too small for E"]
    crosses = [line for ax in figure.axes for line in ax.lines if line.get_marker() == "x"]
    assert sum(len(line.get_xdata()) for line in crosses) == table.rows.murphree.size


def test_stages_increase_downwards() -> None:
    for case in ("efficiencies", "profiles", "entropy", "operating"):
        low, high = CASES[case]().axes[0].get_ylim()
        assert low > high


def test_values_and_intervals_are_where_they_belong() -> None:
    table = with_intervals(distillation(3)[2])
    r = table.rows
    figure = efficiency_figure(table)
    for i, ax in enumerate(figure.axes):
        signs = [line for line in ax.lines if line.get_marker() == "o"]
        drawn = np.sort(np.concatenate([line.get_xdata() for line in signs]))
        sound = ~r.flagged[:, i] & (r.murphree[:, i] > -2) & (r.murphree[:, i] < 3)
        assert drawn == pytest.approx(np.sort(r.murphree[sound, i]))
        hollow = next(line for line in signs if line.get_markerfacecolor() == "white")
        assert list(hollow.get_ydata()) == list(r.number[:1][sound[:1]])
        assert len(ax.collections[0].get_segments()) == sound[1:].sum()


def test_a_value_beyond_the_axis_is_written() -> None:
    table = distillation(3)[2]
    E = table.rows.murphree.copy()
    E[1, 0], E[2, 1] = 37.5, -12.0
    table = replace(table, rows=replace(table.rows, murphree=E, flagged=np.zeros_like(table.rows.flagged)))
    written = texts(efficiency_figure(table))
    assert "37.5 →" in written and "← -12" in written


def test_masked_components_are_named() -> None:
    figure = efficiency_figure(absorber()[2])
    assert any("air, oil: in one phase only" in words.replace("\n", " ") for words in texts(figure))
    assert [ax.get_title(loc="left") for ax in figure.axes if ax.get_visible()] == ["first", "second"]


def test_triangle_says_what_is_left_out() -> None:
    figure = triangle_figure(distillation(5)[2], components=["toluene", NAMES[0], NAMES[1]])
    note = " ".join(texts(figure)).replace("\n", " ")
    assert "renormalised" in note and "Left out: methylcyclohexane, n-octane" in note


def test_triangle_shows_the_films_of_the_interface() -> None:
    table = distillation(3)[2]
    member, interface = table.rows.interfaces[0]
    j = int(np.flatnonzero(member == table.row_of(6))[0])
    film = interface.vapor_film.profile(np.linspace(0.0, 1.0, 41))[j]
    drawn = [line.get_xydata() for line in triangle_figure(table, stage=6).axes[0].lines]
    assert any(d.shape == (41, 2) and np.allclose(d, Triangle.whole().place(film)) for d in drawn)
    chord = film[0] + np.linspace(0.0, 1.0, 41)[:, None] * (film[-1] - film[0])
    assert np.abs(film - chord).max() > 1e-5  # strongly unequal coefficients bend the path


def test_triangle_coordinates() -> None:
    corners = Triangle.whole().place(np.eye(3))
    assert corners == pytest.approx(np.array([[0.5, HEIGHT], [0.0, 0.0], [1.0, 0.0]]))
    points = np.random.default_rng(1).dirichlet(np.ones(3), 20)
    part = Triangle.around(points[:3])
    assert part.low.sum() + part.side == pytest.approx(1.0)
    placed = part.place(points[:3])
    assert (placed[:, 1] >= 0).all() and (placed[:, 1] <= HEIGHT).all()
    lone = Triangle.around(points[:1])
    assert lone.side > 0 and np.isfinite(lone.place(points[:1])).all()
    assert Triangle.around(np.array([[0.0, 0.0, 1.0]])).side == pytest.approx(1e-4)


def test_bars_of_a_flux_add_up() -> None:
    explanation = distillation(3)[2].explain(3)
    figure = flux_split_figure(explanation, NAMES[0])
    unit = {"mol": 1.0, "mmol": 1e-3, "µmol": 1e-6}[re.search(r"\((\w+)/", figure.axes[0].get_xlabel())[1]]  # type: ignore[index]
    for ax in figure.axes:
        widths = [p.get_width() for p in ax.patches]
        assert sum(widths[:-1]) == pytest.approx(widths[-1])
        assert widths[-1] * unit == pytest.approx(explanation.N[0])


def test_entropy_bars_add_up() -> None:
    production = distillation(3)[1].entropy_production()
    figure = entropy_figure(production)
    bars = [p for p in figure.axes[0].patches if hasattr(p, "get_width")]
    total = sum(p.get_width() for p in bars)
    assert total == pytest.approx(production.total.sum(), rel=0.02)


def test_nothing_produced_is_drawn_too() -> None:
    zero = np.zeros(2)
    figure = entropy_figure(EntropyProduction(np.array([2, 3]), *(zero,) * 9))
    assert not figure.legends


def test_overlap_is_seen() -> None:
    figure = CASES["operating"]()
    for angle in (0.0, 60.0):
        assert not overlapping(figure)
        text = figure.axes[0].text(1.0, 1.0, "over", transform=figure.axes[0].get_xaxis_transform(),
                                   rotation=angle, fontsize=7.0)
        assert [set(pair) for pair in overlapping(figure)] == [{"limit", "over"}]
        text.remove()


def test_labels_keep_clear() -> None:
    figure = efficiency_figure(distillation(2)[2])
    ax = figure.axes[0]
    ax.set_xlim(0.0, 1.0)
    before = len(ax.texts)
    crowd = np.stack(np.meshgrid(np.linspace(0, 1, 20), np.linspace(*ax.get_ylim(), 20)), -1).reshape(-1, 2)
    assert label_curves(ax, [Curve("lost", crowd), Curve("", np.array([[np.nan, 1.0]]))]) == ["lost"]
    assert len(ax.texts) == before


def test_svg_stands_in_a_page() -> None:
    one, two = figure_svg(CASES["operating"]()), figure_svg(CASES["entropy"]())
    assert one.startswith("<svg") and 'role="img"' in one and "<!DOCTYPE" not in one
    ids = [set(re.findall(r' id="([^"]+)"', text)) for text in (one, two)]
    assert ids[0] and not ids[0] & ids[1]
    assert set(re.findall(r"(?:url\(#|href=\"#)([^\")]+)", one)) == ids[0]
    assert not re.search(r"20\d\d-\d\d-\d\d", one)


@pytest.mark.parametrize("kind", ["png", "svg", "pdf"])
def test_files_are_whole_and_the_same_twice(tmp_path: Path, kind: str) -> None:
    paths = [save_figure(CASES["operating"](), tmp_path / "new" / f"{name}.{kind}") for name in "ab"]
    data = [path.read_bytes() for path in paths]
    assert data[0] == data[1] and len(data[0]) > 1000
    assert sorted(p.name for p in (tmp_path / "new").iterdir()) == [f"a.{kind}", f"b.{kind}"]


def test_an_unwritable_path(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    for kind in ("png", "svg"):
        with pytest.raises(InputError, match="cannot be written"):
            save_figure(CASES["operating"](), tmp_path / "file" / f"figure.{kind}")


BAD = {
    "no table": (lambda: efficiency_figure(3), "table: expected an EfficiencyTable, got int"),
    "no profile": (lambda: profile_figure(None, None), "equilibrium: expected a Profile"),
    "models swapped": (lambda: profile_figure(*distillation(3)[1::-1]), "equilibrium: expected a profile of the equil"),
    "other components": (lambda: profile_figure(distillation(2)[0], distillation(3)[1]), "equilibrium: components"),
    "other stages": (lambda: profile_figure(replace(distillation(3)[0], kinds=("tray",)), distillation(3)[1]),
                     "equilibrium: 1 stages"),
    "two components": (lambda: triangle_figure(distillation(2)[2]), "2 components, a triangle needs three"),
    "two names": (lambda: triangle_figure(distillation(3)[2], components=NAMES[:2]), "three different names"),
    "one name thrice": (lambda: triangle_figure(distillation(3)[2], components=[NAMES[0]] * 3), "three different"),
    "unknown name": (lambda: triangle_figure(distillation(3)[2], components=[*NAMES[:2], "xenon"]),
                     r"components\[2\] = 'xenon'"),
    "unknown stage": (lambda: triangle_figure(distillation(3)[2], stage=99), "stage = 99"),
    "unknown stage of a profile": (lambda: triangle_figure(distillation(3)[1], stage=1), "stage = 1: no contact"),
    "films of equilibrium": (lambda: triangle_figure(distillation(3)[0], stage=3), "has no fluxes"),
    "not a source": (lambda: triangle_figure("table"), "source: expected"),
    "no interface": (lambda: triangle_figure(one_stage(distillation(3)[2]), stage=4), "no interface"),
    "no explanation": (lambda: flux_split_figure({}, "a"), "explanation: expected"),
    "not explained": (lambda: flux_split_figure(distillation(3)[2].explain(3), "xenon"), "name = 'xenon'"),
    "no production": (lambda: entropy_figure(distillation(3)[1]), "production: expected"),
    "no limits": (lambda: operating_figure(distillation(3)[2]), "no method for flooding"),
    "no packing": (lambda: hetp_figure(distillation(3)[2]), "no packed rows"),
    "no figure": (lambda: figure_svg("figure"), "figure: expected a matplotlib Figure"),
    "ending": (lambda: save_figure(CASES["operating"](), "figure.bmp"), "expected the ending .png, .svg, .pdf"),
}


@pytest.mark.parametrize("case", BAD)
def test_bad_arguments(case: str) -> None:
    call, message = BAD[case]
    with pytest.raises(InputError, match=message):
        call()


def test_without_matplotlib(monkeypatch: pytest.MonkeyPatch) -> None:
    table = distillation(3)[2]
    monkeypatch.setitem(sys.modules, "matplotlib", None)
    with pytest.raises(InputError, match="optional extra `plot`"):
        efficiency_figure(table)
    with pytest.raises(InputError, match="optional extra `plot`"):
        figure_svg(None)  # type: ignore[arg-type]


def test_matplotlib_is_loaded_when_a_figure_is_made() -> None:
    code = """
import sys
import numpy as np
from ratebased.column import EntropyProduction
from ratebased.figures import entropy_figure, figure_svg
assert "matplotlib" not in sys.modules
figure_svg(entropy_figure(EntropyProduction(np.array([1]), *(np.ones(1),) * 9)))
assert "matplotlib.pyplot" not in sys.modules
"""
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr


def test_explanation_of_an_interface_alone() -> None:
    interface = distillation(3)[2].rows.interfaces[0][1]
    assert flux_split_figure(explain_flux(interface, (0,)), NAMES[0]).axes
