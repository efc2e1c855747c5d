"""Entropy production by stage and cause."""
from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ..column import EntropyProduction
from ..errors import InputError
from .style import finish, new_figure, stage_axis, stage_height, styled

if TYPE_CHECKING:
    from matplotlib.figure import Figure

CAUSES = (
    ("vapor_diffusion", "diffusion, vapour film", "#1a1a1a", ""),
    ("liquid_diffusion", "diffusion, liquid film", "#ffffff", "////"),
    ("vapor_conduction", "conduction, vapour film", "#D55E00", "\\\\\\\\"),
    ("liquid_conduction", "conduction, liquid film", "#56B4E9", "xxxx"),
    ("vapor_mixing", "mixing, vapour", "#9a9a9a", ""),
    ("liquid_mixing", "mixing, liquid", "#e9e9e9", "----"),
    ("inconsistency", "inconsistency of the properties", "#ffffff", "++++"))
NEGLIGIBLE = 2e-3
"""A cause below this share of every stage's production is named in a note instead of drawn."""


@styled
def entropy_figure(production: EntropyProduction) -> Figure:
    """Entropy production of each contact stage by cause: in W/K, and as shares of the stage's own.

    Causes below 0.2 % of every stage are named below instead. Negative parts (mixing with heat taken out,
    inconsistent properties) go to the left. Raises `InputError`.
    """
    from matplotlib.patches import Patch

    if not isinstance(production, EntropyProduction):
        raise InputError(f"production: expected an EntropyProduction, got {type(production).__name__}")
    number, total = np.asarray(production.stage), production.total
    if not number.size:
        raise InputError("production: no stages")
    size = sum(np.abs(getattr(production, name)) for name, *_ in CAUSES)
    scale = np.where(size > 0, size, 1.0)
    figure = new_figure()
    left, right = figure.subplots(1, 2, sharey=True)
    handles, small = [], []
    for ax, per, label in ((left, np.ones(number.size), "Entropy production (W/K)"),
                           (right, scale / 100.0, "Share of the stage (%)")):
        stage_axis(ax, number)
        ax.set_xlabel(label)
        ends = {1: np.zeros(number.size), -1: np.zeros(number.size)}
        for name, words, color, hatch in CAUSES:
            value = getattr(production, name)
            if (np.abs(value) < NEGLIGIBLE * scale).all():
                if ax is left:
                    small.append(words)
                continue
            for sign in (1, -1):
                part = np.where(sign * value > 0, value, 0.0) / per
                if part.any():
                    ax.barh(number, part, left=ends[sign], height=0.78, facecolor=color, edgecolor="black",
                            linewidth=0.5, hatch=hatch)
                    ends[sign] = ends[sign] + part
            if ax is left:
                handles.append(Patch(facecolor=color, edgecolor="black", linewidth=0.5, hatch=hatch, label=words))
        span = max(ends[1].max() - ends[-1].min(), 1e-300)
        ax.set_xlim(ends[-1].min() - 0.03 * span * bool(ends[-1].any()), ends[1].max() + 0.03 * span)
        ax.axvline(0.0, color="black", linewidth=0.7)
    right.set_ylabel("")
    notes = [f"Whole column: {total.sum():.4g} W/K on {number.size} contact stage{'s' * (number.size > 1)}."]
    if any((getattr(production, name) < -NEGLIGIBLE * scale).any() for name, *_ in CAUSES):
        notes.append("Shares: of the sum of the sizes of the parts.")
    if small:
        notes.append(f"Below {100 * NEGLIGIBLE:.1g} % of every stage, not drawn: {'; '.join(small)}.")
    finish(figure, stage_height(number.size), handles=handles, notes=[" ".join(notes)])
    figure.set_label("Entropy production of each contact stage by cause")
    return figure
