"""The parts of one component's flux, film by film."""
from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ..errors import InputError
from ..explanation import FilmExplanation, FluxExplanation
from .style import GREY, new_figure, notes_below, styled

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

UNITS = ((1.0, "mol/(m² s)"), (1e-3, "mmol/(m² s)"), (1e-6, "µmol/(m² s)"), (1e-9, "nmol/(m² s)"))


@styled
def flux_split_figure(explanation: FluxExplanation, name: str) -> Figure:
    """The signed parts of a component's flux in both films: each bar starts where the one above ends, the last is N.

    Positive towards the liquid. Raises `InputError` if there is no such component.
    """
    if not isinstance(explanation, FluxExplanation):
        raise InputError(f"explanation: expected a FluxExplanation, got {type(explanation).__name__}")
    if name not in explanation.names:
        raise InputError(f"name = {name!r}: expected one of {', '.join(explanation.names)}")
    i = explanation.names.index(name)
    parts = _parts(explanation.vapor, explanation.names, i), _parts(explanation.liquid, explanation.names, i)
    figure = new_figure(2.0 + 2 * 0.2 * (len(parts[0]) + 1), 5.2)
    axes = figure.subplots(2, 1)
    share = explanation.vapor_share
    for ax, film, values, s in zip(axes, (explanation.vapor, explanation.liquid), parts, (share, 1.0 - share)):
        _waterfall(ax, values, float(explanation.N[i]))
        ax.set_title(f"{film.phase.capitalize()} film: {100 * s:.0f} % of the diffusive entropy production, "
                     f"{film.regime[i]} diffusion of {name}", loc="left", fontweight="normal")
    notes_below(figure, ["Positive towards the liquid. Each bar starts where the one above ends; they add up to N."])
    figure.set_label(f"Parts of the flux of {name} in both films")
    return figure


def _parts(film: FilmExplanation, names: tuple[str, ...], i: int) -> list[tuple[str, float]]:
    s = film.split
    pulls = [(f"pull of {other}", float(s.pull[i, j])) for j, other in enumerate(names) if j != i]
    return [("own gradient", float(s.own[i])), ("non-ideality", float(s.nonideality[i])), *pulls,
            ("bulk flow", float(s.bulk_flow[i])), ("high-flux correction", float(s.high_flux[i]))]


def _waterfall(ax: Axes, parts: list[tuple[str, float]], flux: float) -> None:
    values = np.array([value for _, value in parts])
    ends = np.cumsum(values)
    starts = ends - values
    largest = float(np.abs(np.concatenate((ends, values, [flux]))).max())
    unit, words = next((u for u in UNITS if largest >= u[0]), UNITS[-1])
    rows = np.arange(len(parts))
    for row, value, start in zip(rows, values, starts):
        ax.barh(row, value / unit, left=start / unit, height=0.62, facecolor="#9a9a9a" if value >= 0 else "white",
                edgecolor="black", linewidth=0.7, hatch="" if value >= 0 else "////")
    for row, end in zip(rows, ends):
        ax.plot([end / unit] * 2, [row - 0.31, row + 1.31], color=GREY, linewidth=0.6, linestyle=":", zorder=0.9)
    ax.barh(len(parts), flux / unit, height=0.62, facecolor="black", edgecolor="black", linewidth=0.7)
    ax.axvline(0.0, color="black", linewidth=0.8)
    ax.set_ylim(len(parts) + 0.6, -0.6)
    ax.set_yticks([*rows, len(parts)], [*(word for word, _ in parts), "flux N"])
    ax.tick_params(axis="y", length=0)
    ax.set_xlabel(f"Flux ({words})")
    ax.margins(x=0.04)
    for row, value in zip([*rows, len(parts)], [*values, flux]):
        ax.text(1.02, row, f"{value / unit:+.3g}", transform=ax.get_yaxis_transform(), fontsize=7.5, ha="left",
                va="center")
