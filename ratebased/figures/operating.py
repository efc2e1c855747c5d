"""The operating point of each stage against the limits of its hardware."""
from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ..efficiency import EfficiencyTable
from ..errors import InputError
from .efficiencies import rated_table
from .labels import Curve, label_curves
from .style import GREY, SMALL, breaks, finish, mark, new_figure, stage_axis, stage_height, styled

if TYPE_CHECKING:
    from matplotlib.figure import Figure

LIMITS = (("flooding", "flooding approach"), ("weeping", "weep ratio"), ("downcomer", "downcomer backup"))
MEANING = {
    "flooding": "Flooding approach: vapour velocity over the flooding velocity at the same liquid to vapour ratio.",
    "weeping": "Weep ratio: hole velocity at the weep point over the hole velocity.",
    "downcomer": "Downcomer backup: froth level over the height available."}


@styled
def operating_figure(table: EfficiencyTable) -> Figure:
    """Flooding approach, weep ratio and downcomer backup of each stage, each as a fraction of its limit, one.

    Whatever the hardware has no method for is left out. Raises `InputError` if that is all of them.
    """
    r = rated_table(table).rows
    found = {}
    for name, words in LIMITS:
        value = getattr(r.hydraulics, name)
        if value is not None and np.isfinite(value).any():
            found[name] = (words, np.broadcast_to(np.asarray(value, float), r.number.shape))
    if not found:
        raise InputError("table: its hardware has no method for flooding, weeping or downcomers")
    figure = new_figure(4.4)
    ax = figure.subplots()
    stage_axis(ax, r.number)
    ax.set_xlabel("Operating point over its limit (–)")
    top = max(float(np.nanmax(value)) for _, value in found.values())
    right = max(1.18, 1.08 * top)
    ax.set_xlim(0.0, right)
    ax.axvspan(1.0, right, facecolor="none", edgecolor="#c4c4c4", hatch="////", linewidth=0.0, zorder=0.3)
    ax.axvline(1.0, color="black", linewidth=1.4, zorder=0.8)
    curves = [Curve("", np.array([[1.0, r.number.min() - 0.7], [1.0, r.number.max() + 0.7]]))]
    for k, (words, value) in enumerate(found.values()):
        m = mark(k)
        for run in breaks(r.number, np.isfinite(value)):
            ax.plot(value[run], r.number[run], color=m.color, marker=m.marker, linestyle=m.dash)
            curves.append(Curve(words, np.stack((value[run], r.number[run]), -1), m.color))
    ax.text(1.0, 1.0, "limit", transform=ax.get_xaxis_transform(), fontsize=SMALL, ha="center", va="bottom",
            color=GREY)
    finish(figure, stage_height(r.number.size), top=0.22, notes=[MEANING[name] for name in found])
    figure.set_label("Operating point of each stage against flooding, weeping and downcomer limits")
    label_curves(ax, curves)
    return figure
