"""Temperature and composition of a column by both models, together."""
from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..column import Profile
from ..errors import InputError
from .labels import Curve, label_curves
from .style import GREY, SMALL, finish, mark, new_figure, stage_axis, stage_height, styled, value_axis

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

Array = NDArray[np.float64]

EQUILIBRIUM_DASH: Any = (0, (4, 2))
ABSENT = 1e-9
"""Mole fraction below which a component is not in a phase: one that never boils, or never condenses."""
SEPARATE = 0.02
"""K. Vapour and liquid of a stage this close share one curve."""


@styled
def profile_figure(equilibrium: Profile, ratebased: Profile) -> Figure:
    """Temperatures, liquid and vapour compositions of the same column by both models.

    Rate-based: full lines, filled signs; equilibrium stages: dashed lines, hollow signs. Raises `InputError` if the
    profiles are not of these two models, or not of one column.
    """
    for name, profile, model in (("equilibrium", equilibrium, "equilibrium"), ("ratebased", ratebased, "rate-based")):
        if not isinstance(profile, Profile):
            raise InputError(f"{name}: expected a Profile, got {type(profile).__name__}")
        if profile.model != model:
            raise InputError(f"{name}: expected a profile of the {model} model, got one of the {profile.model} model")
    if equilibrium.names != ratebased.names:
        raise InputError(f"equilibrium: components {', '.join(equilibrium.names)}, but ratebased has "
                         f"{', '.join(ratebased.names)}")
    if equilibrium.kinds != ratebased.kinds:
        raise InputError(f"equilibrium: {equilibrium.stages} stages, but ratebased has {ratebased.stages}, or their "
                         "kinds differ")
    number = np.arange(1, ratebased.stages + 1)
    figure = new_figure(6.2)
    axes = figure.subplots(1, 3, sharey=True)
    curves = [_temperatures(axes[0], number, equilibrium, ratebased)]
    for ax, phase in zip(axes[1:], ("liquid", "vapour")):
        curves.append(_compositions(ax, number, phase, equilibrium, ratebased))
    for ax in axes[1:]:
        ax.set_ylabel("")
    joins = _feeds(axes, number, ratebased)
    handles = [_sign("black", "o", "-", "black", "rate-based"),
               _sign("black", "o", EQUILIBRIUM_DASH, "white", "equilibrium stages")]
    handles += [_sign(mark(i).color, mark(i).marker, "none", mark(i).color, name)
                for i, name in enumerate(ratebased.names)]
    finish(figure, stage_height(number.size, 0.15), right=0.4, handles=handles)
    figure.set_label("Temperatures and compositions by stage, equilibrium-stage and rate-based")
    for ax, drawn in zip(axes, curves):
        low, high = ax.get_xlim()
        label_curves(ax, [*drawn, *(Curve("", np.array([[low, j], [high, j]])) for j in joins)])
    return figure


def _sign(color: str, marker: str, dash: Any, face: str, words: str) -> Any:
    from matplotlib.lines import Line2D

    return Line2D([], [], color=color, marker=marker, linestyle=dash, markerfacecolor=face, label=words)


def _draw(ax: Axes, value: Array, number: NDArray[np.int64], color: str, marker: str, rate: bool, phase: int) -> None:
    """One curve; signs of neighbours sit on different stages, those of the two models half a step apart."""
    every = min(max(2, number.size // 7), number.size)
    first = (phase + (0 if rate else every // 2)) % every
    ax.plot(value, number, color=color, marker=marker, markersize=4.2 if rate else 4.8, markevery=(first, every),
            linestyle="-" if rate else EQUILIBRIUM_DASH, linewidth=1.3 if rate else 1.1,
            markerfacecolor=color if rate else "white", zorder=2.2 if rate else 2.4)


def _temperatures(ax: Axes, number: NDArray[np.int64], equilibrium: Profile, ratebased: Profile) -> list[Curve]:
    stage_axis(ax, number)
    ax.set_xlabel("Temperature (K)")
    curves = []
    apart = max(float(np.abs(p.T_V - p.T_L).max()) for p in (equilibrium, ratebased)) > SEPARATE
    for profile, rate in ((ratebased, True), (equilibrium, False)):
        own = float(np.abs(profile.T_V - profile.T_L).max()) > SEPARATE
        for k, (T, words) in enumerate(((profile.T_L, "liquid"), (profile.T_V, "vapour"))):
            if k and not own:
                continue
            m = mark(k)
            _draw(ax, T, number, m.color, m.marker, rate, k)
            name = "" if not apart or (not own and not rate) else words
            curves.append(Curve(name, np.stack((T, number), -1), m.color))
    return curves


def _compositions(ax: Axes, number: NDArray[np.int64], phase: str, equilibrium: Profile,
                  ratebased: Profile) -> list[Curve]:
    stage_axis(ax, number)
    top = max(float(z.max()) for profile in (equilibrium, ratebased) for z in (profile.x, profile.y))
    right = min(1.3 * top, 1.0)
    ax.set_xlim(-0.03 * right, 1.03 * right)
    value_axis(ax, 5)
    ax.set_xlabel(f"Mole fraction, {phase} (–)")
    curves = []
    for i, name in enumerate(ratebased.names):
        for profile, rate in ((ratebased, True), (equilibrium, False)):
            z = profile.x[:, i] if phase == "liquid" else np.where(profile.V > 0, profile.y[:, i], np.nan)
            if not np.nanmax(z, initial=0.0) > ABSENT:
                continue
            m = mark(i)
            _draw(ax, z, number, m.color, m.marker, rate, i)
            curves.append(Curve(name, np.stack((z, number), -1), m.color))
    return curves


def _feeds(axes: Any, number: NDArray[np.int64], profile: Profile) -> list[int]:
    """A thin line where a feed joins; returns the stages."""
    joins = np.flatnonzero((profile.feeds.vapor + profile.feeds.liquid).sum(-1) > 0)
    for ax in axes:
        for j in joins:
            ax.axhline(number[j], color=GREY, linewidth=0.8, linestyle=(0, (1, 2)), zorder=0.7)
    for j in joins:
        axes[-1].text(1.01, number[j], "feed", transform=axes[-1].get_yaxis_transform(), fontsize=SMALL, ha="left",
                      va="center", color=GREY)
    return [int(number[j]) for j in joins]
