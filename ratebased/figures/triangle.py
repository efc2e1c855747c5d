"""The stage path of a column in a composition triangle, and the films of one stage."""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..column import Profile
from ..efficiency import EfficiencyTable, equilibrium_vapor
from ..errors import InputError
from .efficiencies import rated_table
from .labels import Curve, label_curves
from .style import GREY, SMALL, finish, folded, mark, new_figure, styled
from .triangle_axes import CORNER, HEIGHT, Triangle

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

Array = NDArray[np.float64]

WIDE, SIDE, SMALL_SIDE = 5.4, 3.9, 1.55
"""Width of the figure, sides of the large triangle and of the films' triangles, inch."""
ETA = np.linspace(0.0, 1.0, 41)
FAINT = 1e-12
"""Sum of the three fractions shown below which a point has no place in the triangle."""


@dataclass(frozen=True)
class _Path:
    """Stages top to bottom, compositions (S, n); `star` the equilibrium vapour or None; films: (p, n) or None."""

    names: tuple[str, ...]
    number: NDArray[np.int64]
    x: Array
    y: Array
    star: Array | None
    stage: int | None
    vapor_film: Array | None
    liquid_film: Array | None
    straight: bool


@styled
def triangle_figure(source: EfficiencyTable | Profile, *, stage: int | None = None,
                    components: Sequence[str] | None = None) -> Figure:
    """Stage path and tie lines of a column in a triangular diagram; with `stage`, the films of that stage as well.

    source: an efficiency table (films from its own interfaces, in the middle of the froth or segment) or a column's
    profile (a rate-based one knows the faces of the films, straight lines join them). stage: its number. components:
    three names, for the top, left and right corner; None takes the three of the largest mean fractions. Of more than
    three the fractions shown are renormalised, and the figure says so. A tie line joins the liquid leaving a stage and
    the vapour in equilibrium with it, as the Murphree efficiency takes it; of a loaded profile, without properties, the
    two streams leaving. Raises `InputError`: fewer than three components, unknown names, a stage that is not there or
    has no films.
    """
    path = _table_path(source, stage) if isinstance(source, EfficiencyTable) else _profile_path(source, stage)
    pick = _choose(path, components)
    names = [path.names[i] for i in pick]
    figure = new_figure(WIDE)
    ax = figure.add_axes((0.0, 0.0, 1.0, 1.0))
    whole = Triangle.whole()
    obstacles = whole.draw(ax, names, SMALL + 0.5, 1.0 / SIDE, corners=True)
    handles, labels = _stages(ax, whole, path, pick, obstacles)
    zooms: list[tuple[Axes, list[Curve]]] = []
    if stage is not None and path.vapor_film is not None and path.liquid_film is not None:
        handles += _films_in_whole(ax, whole, path, pick, stage)
        for phase, film in (("Vapour", path.vapor_film), ("Liquid", path.liquid_film)):
            zoom = figure.add_axes((0.0, 0.0, 1.0, 1.0))
            zooms.append((zoom, _film(zoom, phase, _part(film, pick), names, stage, path.straight)))
    lines = folded(names[0], CORNER).count("\n") + 1
    large, small = SIDE * HEIGHT + 0.66 + 0.16 * lines, (SMALL_SIDE * HEIGHT + 1.15) if zooms else 0.0
    bottom, top = finish(figure, large + small, bottom=0.0, handles=handles, notes=_notes(path, pick))
    _settle(figure, ax, (0.0, top - large, WIDE, top - 0.02), SIDE, 0.55)
    for k, (zoom, _) in enumerate(zooms):
        _settle(figure, zoom, (0.5 * WIDE * k, bottom, 0.5 * WIDE * (k + 1), bottom + small), SMALL_SIDE, 0.6)
    figure.set_label("Composition triangle: stage path and tie lines" + (f", films of stage {stage}" if stage else ""))
    label_curves(ax, _apart(ax, labels))
    for zoom, curves in zooms:
        label_curves(zoom, curves)
    return figure


def _settle(figure: Figure, ax: Axes, box: tuple[float, float, float, float], side: float, below: float) -> None:
    """Put axes into a box of the figure, inch, with a triangle of the side given, `below` above the lower edge."""
    x0, y0, x1, y1 = box
    width, height = figure.get_size_inches()
    ax.set_position((x0 / width, y0 / height, (x1 - x0) / width, (y1 - y0) / height))
    beside = 0.5 * ((x1 - x0) / side - 1.0)
    ax.set_xlim(-beside, 1.0 + beside)
    ax.set_ylim(-below / side, (y1 - y0 - below) / side)


def _apart(ax: Axes, curves: list[Curve]) -> list[Curve]:
    """The curves without the names of points that nearly coincide with a named one."""
    kept: list[Curve] = []
    for curve in curves:
        here = ax.transData.transform(curve.points)
        if not (curve.name and any(k.name and np.hypot(*(ax.transData.transform(k.points) - here)[0]) < 14.0
                                   for k in kept)):
            kept.append(curve)
    return kept


def _table_path(table: EfficiencyTable, stage: int | None) -> _Path:
    r = rated_table(table).rows
    vapor = liquid = None
    if stage is not None:
        row = table.row_of(stage)
        for member, interface in r.interfaces:
            where = np.flatnonzero(member == row)
            if where.size:
                k = int(where[0])
                shape = (*interface.N.shape[:-1], ETA.size, len(r.names))
                vapor = np.broadcast_to(interface.vapor_film.profile(ETA), shape)[k]
                liquid = np.broadcast_to(interface.liquid_film.profile(ETA), shape)[k]
        if vapor is None:
            raise InputError(f"stage = {stage}: the table holds no interface of it")
    return _Path(r.names, r.number, r.x, r.y_out, r.y_star, stage, vapor, liquid, False)


def _profile_path(profile: Profile, stage: int | None) -> _Path:
    if not isinstance(profile, Profile):
        raise InputError(f"source: expected an EfficiencyTable or a Profile, got {type(profile).__name__}")
    c = profile.contact_index
    vapor = liquid = star = None
    if stage is not None:
        record = profile.record()
        found = np.flatnonzero(record.stage == stage)
        if not found.size:
            raise InputError(f"stage = {stage}: no contact stage; there are {record.stage.tolist()}")
        k = int(found[0])
        vapor = record.y_bulk[k] + ETA[:, None] * (record.y_I[k] - record.y_bulk[k])
        liquid = record.x_I[k] + ETA[:, None] * (record.x_bulk[k] - record.x_I[k])
    if profile.properties is not None:
        entering = profile.entering_vapor()[c]
        y_in = entering / entering.sum(-1, keepdims=True)
        star = equilibrium_vapor(profile.properties, profile.P[c], profile.x[c], profile.T_L[c], y_in).composition
    return _Path(profile.names, c + 1, profile.x[c], profile.y[c], star, stage, vapor, liquid, True)


def _choose(path: _Path, components: Sequence[str] | None) -> NDArray[np.intp]:
    n = len(path.names)
    if n < 3:
        raise InputError(f"source: {n} components, a triangle needs three")
    if components is None:
        return np.sort(np.argsort(-(path.x.mean(0) + path.y.mean(0)), kind="stable")[:3])
    chosen = tuple(components) if not isinstance(components, str) else (components,)
    if len(chosen) != 3 or len(set(chosen)) != 3:
        raise InputError(f"components = {list(chosen)}: expected three different names")
    for k, name in enumerate(chosen):
        if name not in path.names:
            raise InputError(f"components[{k}] = {name!r}: expected one of {', '.join(path.names)}")
    return np.array([path.names.index(name) for name in chosen])


def _part(z: Array, pick: NDArray[np.intp]) -> Array:
    """The three fractions renormalised; NaN where there is nothing of them."""
    three = z[..., pick]
    total = three.sum(-1, keepdims=True)
    return np.asarray(np.where(total > FAINT, three / np.where(total > FAINT, total, 1.0), np.nan))


def _stages(ax: Axes, whole: Triangle, path: _Path, pick: NDArray[np.intp],
            obstacles: list[Array]) -> tuple[list[Any], list[Curve]]:
    x, y = whole.place(_part(path.x, pick)), whole.place(_part(path.y, pick))
    tied = y if path.star is None else whole.place(_part(path.star, pick))
    ties = np.stack((x, tied, np.full_like(x, np.nan)), 1).reshape(-1, 2)
    handles = [*ax.plot(*x.T, color="black", marker="o", markersize=4.0, linewidth=1.1, zorder=2.4,
                        label="liquid leaving a stage"),
               *ax.plot(*y.T, color=mark(1).color, marker="s", markersize=4.2, markerfacecolor="white", linewidth=1.1,
                        linestyle=(0, (4, 1.5)), zorder=2.3, label="vapour leaving a stage"),
               *ax.plot(*ties.T, color=GREY, linewidth=0.7, zorder=1.4, label="tie line to the equilibrium vapour"
                        if path.star is not None else "joins the streams of a stage")]
    curves = [Curve("", line) for line in (x, y, ties, *obstacles)]
    S = path.number.size
    for j in sorted({0, S - 1, *range(0, S, max(1, round(S / 5)))}):
        if not 0 < S - 1 - j < S / 10:
            curves.append(Curve(f"{path.number[j]}", x[j:j + 1]))
    return handles, curves


def _films_in_whole(ax: Axes, whole: Triangle, path: _Path, pick: NDArray[np.intp], stage: int) -> list[Any]:
    assert path.vapor_film is not None and path.liquid_film is not None
    vapor, liquid = (whole.place(_part(film, pick)) for film in (path.vapor_film, path.liquid_film))
    jump = np.stack((vapor[-1], liquid[0]))
    kwargs: dict[str, Any] = {"color": mark(2).color, "zorder": 2.8}
    ax.plot(*liquid.T, linewidth=2.4, **kwargs)
    return [*ax.plot(*vapor.T, linewidth=2.4, label=f"films of stage {stage}", **kwargs),
            *ax.plot(*jump.T, linewidth=1.2, linestyle=(0, (1, 1)), label=f"interface of stage {stage}", **kwargs)]


def _film(ax: Axes, phase: str, film: Array, names: Sequence[str], stage: int, straight: bool) -> list[Curve]:
    """A film magnified: from bulk to interface in the vapour, from interface to bulk in the liquid."""
    if not np.isfinite(film).all():
        ax.set_axis_off()
        ax.text(0.5, 0.5, f"{phase} film of stage {stage}:\nnone of the three components", fontsize=SMALL, ha="center",
                va="center", transform=ax.transAxes)
        return []
    part = Triangle.around(film)
    obstacles = part.draw(ax, names, SMALL, 1.0 / SMALL_SIDE, corners=False)
    line = part.place(film)
    bulk, face = (line[0], line[-1]) if phase == "Vapour" else (line[-1], line[0])
    ax.plot(*line.T, color=mark(2).color, linewidth=1.8, zorder=2.2)
    chord = line[[0, -1]]
    if not straight:
        ax.plot(*chord.T, color="black", linewidth=0.8, linestyle=(0, (1, 1.6)), zorder=2.0)
    sign = "s" if phase == "Vapour" else "o"
    ax.plot(*bulk, marker=sign, color=mark(2).color, markersize=5.5, zorder=2.5)
    ax.plot(*face, marker="D", color=mark(2).color, markerfacecolor="white", markersize=5.0, zorder=2.5)
    ax.text(0.5, HEIGHT + 0.2 / SMALL_SIDE, f"{phase} film of stage {stage} (× {_times(part.side)})",
            fontsize=SMALL, fontweight="bold", ha="center", va="bottom")
    return [*(Curve("", a) for a in (line, chord, *obstacles)), Curve("bulk", bulk[None]), Curve("interface",
                                                                                                face[None])]


def _times(side: float) -> str:
    ratio = 1.0 / side
    return f"{ratio:.2g}" if ratio < 100 else f"{float(f'{ratio:.2g}'):.0f}"


def _notes(path: _Path, pick: NDArray[np.intp]) -> list[str]:
    notes = ["Sides: mole fractions. Numbers at the path: stages from the top."]
    if len(path.names) > 3:
        rest = [i for i in range(len(path.names)) if i not in pick]
        most = max(float(path.x[:, rest].sum(-1).max()), float(path.y[:, rest].sum(-1).max()))
        notes = ["Sides: mole fractions of the three shown, renormalised to add up to one. Left out: "
                 f"{', '.join(path.names[i] for i in rest)} (together up to {most:.2g} of a phase). Numbers at the "
                 "path: stages from the top."]
    if path.vapor_film is not None:
        notes.append("Films: filled, the bulk; hollow, the interface; " + (
            "a straight line joins them." if path.straight else
            "dotted, the straight line between them; in the middle of the froth over the leaving liquid, or of the "
            "segment."))
    return [" ".join(notes)]
