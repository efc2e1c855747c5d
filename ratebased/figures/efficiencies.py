"""Component efficiencies and HETPs by stage, one panel a component, with their intervals."""
from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..efficiency import EfficiencyTable, Interval
from ..errors import InputError
from .style import (
    GREY,
    PALE,
    SMALL,
    WIDTH,
    breaks,
    finish,
    folded,
    new_figure,
    stage_axis,
    stage_height,
    styled,
    value_axis,
)

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

LOWEST, HIGHEST = -2.0, 3.0
"""Murphree efficiencies outside are written at the edge of the axis: one of them would hide all others."""
REACH = 0.75
"""How far an interval may stretch the axis beyond the values."""


@dataclass(frozen=True)
class _Series:
    """What one panel shows, over the rows: value where `sound`, interval where `spread`, a cross where `void`."""

    name: str
    value: Array
    sound: Mask
    void: Mask
    low: Array
    high: Array
    spread: Mask


@styled
def efficiency_figure(table: EfficiencyTable) -> Figure:
    """Murphree vapour efficiency of each component by stage, with its 5 to 95 % interval where the table has one.

    One panel for each component that is in both phases, all to one scale. A cross in the grey band: driving force too
    small for an efficiency. A hollow sign: the driving force changes sign within the uncertainty, no interval exists.
    Values below -2 or above 3 are written at the edge. Raises `InputError`.
    """
    r = rated_table(table).rows
    u = table.uncertainty
    series = []
    for i in np.flatnonzero(r.ordinary):
        sound = ~r.flagged[:, i] & np.isfinite(r.murphree[:, i])
        spread = np.zeros_like(sound) if u is None else sound & ~u.pole[:, i]
        low, high = _interval(None if u is None else u.murphree, r.murphree, int(i))
        series.append(_Series(r.names[i], r.murphree[:, i], sound, ~sound, low, high, spread))
    masked = [r.names[i] for i in np.flatnonzero(~r.ordinary)]
    note = f"E = (y_out − y_in)/(y* − y_in), y* at the {r.star_basis} of the leaving liquid."
    if masked:
        note += f" {', '.join(masked)}: in one phase only, no efficiency."
    return _panels(r.number, series, (LOWEST, HIGHEST), "Murphree vapour efficiency E (–)", (0.0, 1.0), u is not None,
                   "driving force too small for E", [note])


@styled
def hetp_figure(table: EfficiencyTable) -> Figure:
    """HETP of each component by packed segment, m, with its 5 to 95 % interval where the table has one.

    A cross in the grey band: no HETP exists. Values above four times the median are written at the edge. Raises
    `InputError` for a table without packed rows.
    """
    r = rated_table(table).rows
    packed, u = r.packed, table.uncertainty
    if packed is None:
        raise InputError("table: no packed rows, a tray has no HETP")
    series, every = [], []
    number = r.number[packed.position]
    for i in np.flatnonzero(r.ordinary):
        sound = ~packed.undefined[:, i]
        hetp = None if u is None else u.hetp
        value = np.zeros(r.murphree.shape)
        value[packed.position] = packed.HETP
        low, high = (a[packed.position] for a in _interval(hetp, value, int(i)))
        spread = sound & (hetp is not None)
        series.append(_Series(r.names[i], packed.HETP[:, i], sound, ~sound, low, high, spread))
        every.append(packed.HETP[sound, i])
    values = np.concatenate(every) if every else np.empty(0)
    top = 4.0 * float(np.median(values)) if values.size else 1.0
    return _panels(number, series, (0.0, top), "Height equivalent to a theoretical plate, HETP (m)", (0.0,),
                   u is not None and u.hetp is not None, "no HETP", [])


def rated_table(table: EfficiencyTable) -> EfficiencyTable:
    if not isinstance(table, EfficiencyTable):
        raise InputError(f"table: expected an EfficiencyTable, got {type(table).__name__}")
    if not table.rows.number.size:
        raise InputError("table: no rated rows")
    return table


def _interval(interval: Interval | None, value: Array, i: int) -> tuple[Array, Array]:
    return (value[:, i], value[:, i]) if interval is None else (interval.p05[:, i], interval.p95[:, i])


def _panels(number: NDArray[np.int64], series: list[_Series], window: tuple[float, float], label: str,
            lines: tuple[float, ...], intervals: bool, void: str, notes: list[str]) -> Figure:
    if not series:
        raise InputError("table: no component is in both phases")
    columns = len(series) if len(series) <= 4 else -(-len(series) // 2) if len(series) <= 8 else 4
    rows = -(-len(series) // columns)
    figure = new_figure()
    axes = figure.subplots(rows, columns, squeeze=False, sharex=True, sharey=True)
    low, high = _limits(series, window, lines)
    band = 0.10 * (high - low)
    titles = [folded(s.name, (WIDTH - 0.8) / columns) for s in series]
    tall = 0.08 + 0.15 * max(title.count("\n") + 1 for title in titles)
    for k, ax in enumerate(axes.flat):
        if k >= len(series):
            ax.set_visible(False)
            continue
        _panel(ax, number, series[k], intervals, low, high, band)
        value_axis(ax, 6 if columns < 4 else 4)
        for line in lines:
            ax.axvline(line, color=GREY, linewidth=0.8, zorder=0.6)
        ax.set_title(titles[k], loc="left")
        ax.tick_params(labelbottom=k + columns >= len(series), left=k % columns == 0)
        if k % columns:
            ax.set_ylabel("")
    height = min(stage_height(number.size), 6.5 / rows)
    bottom, _ = finish(figure, rows * height + (rows - 1) * (tall + 0.1), hspace=(tall + 0.1) / height, top=tall,
                       handles=_signs(series, intervals, void, low, high), notes=notes)
    figure.text(0.5, (bottom - 0.24) / figure.get_figheight(), label, fontsize=8.5, ha="center", va="top")
    figure.set_label(f"{label} by stage")
    return figure


def _limits(series: list[_Series], window: tuple[float, float], lines: tuple[float, ...]) -> tuple[float, float]:
    """Axis limits: all values within the window, and intervals up to `REACH` beyond the values."""
    values = np.concatenate([s.value[s.sound] for s in series])
    values = values[(values >= window[0]) & (values <= window[1])]
    known = [*lines, *values] or [0.0]
    if len(known) < 2 or max(known) == min(known):
        known = [*known, max(known) + 1.0]
    low, high = min(known), max(known)
    reach = REACH * (high - low)
    ends = np.concatenate([np.concatenate((s.low[s.spread], s.high[s.spread])) for s in series])
    if ends.size:
        low, high = max(min(low, ends.min()), low - reach), min(max(high, ends.max()), high + reach)
    pad = 0.05 * (high - low)
    return float(low - pad), float(high + pad)


def _panel(ax: Axes, number: NDArray[np.int64], s: _Series, intervals: bool, low: float, high: float,
           band: float) -> None:
    """Draw one component."""
    stage_axis(ax, number)
    ax.set_xlim(low - band, high)
    ax.axvspan(low - band, low, color=PALE, linewidth=0, zorder=0.4)
    inside = s.sound & (s.value >= low) & (s.value <= high)
    for run in breaks(number, inside):
        ax.plot(s.value[run], number[run], color="black", linewidth=0.7, zorder=2.0)
    bars = np.flatnonzero(s.spread)
    ax.hlines(number[bars], np.clip(s.low[bars], low, high), np.clip(s.high[bars], low, high), color="black",
              linewidth=1.1, zorder=2.2)
    for end, sign in ((s.low, "<"), (s.high, ">")):
        cut = s.spread & ((end < low) | (end > high))
        ax.plot(np.clip(end[cut], low, high), number[cut], linestyle="none", marker=sign, markersize=3.5,
                color="black", zorder=2.4, clip_on=False)
    plain = inside & (s.spread | (not intervals))
    for where, face in ((plain, "black"), (inside & ~plain, "white")):
        ax.plot(s.value[where], number[where], linestyle="none", marker="o", markersize=4.0, color="black",
                markerfacecolor=face, zorder=2.6)
    ax.plot(np.full(s.void.sum(), low - 0.5 * band), number[s.void], linestyle="none", marker="x", color="black",
            markersize=4.0, zorder=2.6)
    outside = np.flatnonzero(s.sound & ~inside)
    for j in outside:
        right = s.value[j] > high
        ax.annotate(f"{s.value[j]:.3g} →" if right else f"← {s.value[j]:.3g}", (high if right else low, number[j]),
                    fontsize=SMALL, ha="right" if right else "left", va="center", zorder=3.0)


def _signs(series: list[_Series], intervals: bool, void: str, low: float, high: float) -> list[Any]:
    from matplotlib.lines import Line2D

    def sign(marker: str, face: str, words: str, line: Any = "none") -> Any:
        return Line2D([], [], color="black", marker=marker, markerfacecolor=face, linestyle=line, markersize=4.0,
                      label=words)

    handles = []
    if any((s.sound & s.spread).any() for s in series):
        handles.append(sign("o", "black", "value, 5 to 95 % interval", "-"))
    if intervals and any((s.sound & ~s.spread).any() for s in series):
        handles.append(sign("o", "white", "value, interval undefined"))
    if any(s.void.any() for s in series):
        handles.append(sign("x", "black", void))
    if any((s.spread & ((s.low < low) | (s.high > high))).any() for s in series):
        handles.append(sign(">", "black", "interval goes on"))
    return handles
