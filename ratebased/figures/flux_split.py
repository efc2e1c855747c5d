"""The parts of one component's flux, film by film."""
from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ..errors import InputError
from ..explanation import FilmExplanation, FluxExplanation
from .style import GREY, SMALL, finish, new_figure, renderer_of, styled

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
    figure = new_figure(5.2)
    axes = figure.subplots(2, 1)
    share = explanation.vapor_share
    for ax, film, values, s in zip(axes, (explanation.vapor, explanation.liquid), parts, (share, 1.0 - share)):
        unit = _waterfall(ax, values, float(explanation.N[i]))
        ax.set_xlabel(f"Flux of {name} ({unit})")
        ax.annotate(f"{film.phase.capitalize()} film: {film.regime[i]} diffusion, {100 * s:.0f} % of the dissipation",
                    (0.02, 1.0), (0.0, 4.0), xycoords=("figure fraction", "axes fraction"), textcoords="offset points",
                    fontweight="bold", annotation_clip=False)
    renderer = renderer_of(figure)
    left = max(text.get_window_extent(renderer).width for ax in axes for text in ax.get_yticklabels()) / figure.dpi
    height = 0.19 * (len(parts[0]) + 1)
    finish(figure, 2 * height + 0.75, left=left + 0.2, right=0.6, top=0.3, hspace=0.75 / height, notes=[
        "Positive towards the liquid. Each bar starts where the one above ends; they add up to N. Dissipation: entropy "
        "production by diffusion in both films."])
    figure.set_label(f"Parts of the flux of {name} in both films")
    return figure


def _parts(film: FilmExplanation, names: tuple[str, ...], i: int) -> list[tuple[str, float]]:
    s = film.split
    pulls = [(f"pull of {other}", float(s.pull[i, j])) for j, other in enumerate(names) if j != i]
    return [("own gradient", float(s.own[i])), ("non-ideality", float(s.nonideality[i])), *pulls,
            ("bulk flow", float(s.bulk_flow[i])), ("high-flux correction", float(s.high_flux[i]))]


def _waterfall(ax: Axes, parts: list[tuple[str, float]], flux: float) -> str:
    """Draw the parts and the flux; returns the unit."""
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
    low, high = min(0.0, ends.min(), flux) / unit, max(0.0, ends.max(), flux) / unit
    pad = 0.04 * (high - low) or 1.0
    ax.set_xlim(low - pad, high + pad)
    decimals = max(0, 2 - int(np.floor(np.log10(max(largest / unit, 1e-3)))))
    for row, value in zip([*rows, len(parts)], [*values, flux]):
        told = f"{value / unit:+.{decimals}f}"
        told = told.replace("-", "−") if float(told) else "0"
        ax.text(1.02, row, told, transform=ax.get_yaxis_transform(), fontsize=SMALL, ha="left",
                va="center")
    return words
