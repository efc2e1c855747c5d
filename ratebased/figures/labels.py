"""Names written at curves where they cover neither a curve nor each other."""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from .style import SMALL, renderer_of

if TYPE_CHECKING:
    from matplotlib.axes import Axes

Array = NDArray[np.float64]

STEP = 4.0
"""Spacing of the points that stand for a curve, pixels of the layout."""
SIGN = 6.5
"""Room for the sign on a curve, pixels."""
FREE = 3.0
"""Least room between a name and any other line, pixels."""
APART = 4.0
"""Room between two names, pixels."""
NEARER = 1.3
"""How many times further than its own curve any other named curve must be from a name."""
FAR = 16.0
"""Clearance from other curves beyond which more is no better, pixels."""
GAPS = (7.5, 10.0, 14.0)
"""Distances tried between a curve and its name, pixels."""


@dataclass(frozen=True)
class Curve:
    """A named curve in data coordinates, (k, 2); NaN breaks it. An empty name is only an obstacle."""

    name: str
    points: Array
    color: str = "black"


def label_curves(ax: Axes, curves: Sequence[Curve], size: float = SMALL) -> list[str]:
    """Write each name beside its curve, in a place that covers nothing; returns the names no place was found for.

    The figure must be finished. Curves of one name share one label.
    """
    renderer = renderer_of(ax.figure)
    dense = [_dense(ax.transData.transform(curve.points)) for curve in curves]
    frame = ax.get_window_extent(renderer)
    taken = [_box(text, renderer) for text in ax.texts if text.get_text()]
    left_out = []
    names = list(dict.fromkeys(curve.name for curve in curves if curve.name))
    for name in names:
        own = [k for k, curve in enumerate(curves) if curve.name == name]
        mine = np.concatenate([dense[k] for k in own])
        if not mine.size:
            continue
        others = [k for k, curve in enumerate(curves) if curve.name != name]
        rest = _joined([dense[k] for k in others])
        rivals = _joined([dense[k] for k in others if curves[k].name])
        text = ax.text(0.0, 0.0, name, fontsize=size, color=curves[own[0]].color, ha="center", va="center")
        extent = text.get_window_extent(renderer)
        half = np.array([extent.width, extent.height]) / 2.0
        middle = _candidates(mine, half)
        inside = ((middle - half >= [frame.x0 + 2.0, frame.y0 + 2.0]) & (middle + half <= [frame.x1, frame.y1])).all(-1)
        for low, high in taken:
            inside &= ~((middle + half + APART > low) & (middle - half - APART < high)).all(-1)
        near, clearance = _clearance(middle, half, mine), _clearance(middle, half, rest)
        inside &= (near > SIGN) & (clearance > FREE) & (_clearance(middle, half, rivals) > NEARER * near)
        if inside.any():
            score = np.where(inside, np.minimum(clearance, FAR) - near, -np.inf)
            best = middle[int(np.argmax(np.round(score, 6)))]
            x, y = ax.transData.inverted().transform(best)
            text.set_position((float(x), float(y)))
            taken.append((best - half, best + half))
            continue
        text.remove()
        left_out.append(name)
    return left_out


def _joined(parts: list[Array]) -> Array:
    return np.concatenate(parts) if parts else np.empty((0, 2))


def _box(text: Any, renderer: Any) -> tuple[Array, Array]:
    extent = text.get_window_extent(renderer)
    return np.array([extent.x0, extent.y0]), np.array([extent.x1, extent.y1])


def _dense(points: Array) -> Array:
    """Points every `STEP` pixels along a curve."""
    finite = np.isfinite(points).all(-1)
    parts = [points[finite]]
    for a, b in zip(points[:-1], points[1:]):
        if np.isfinite(a).all() and np.isfinite(b).all():
            count = int(np.hypot(*(b - a)) / STEP)
            parts.append(a + (b - a) * np.linspace(0.0, 1.0, count + 2)[1:-1, None])
    return np.concatenate(parts)


def _candidates(points: Array, half: Array) -> Array:
    """Middles of boxes around points of a curve, (m, 2)."""
    pick = points[np.unique(np.linspace(0, len(points) - 1, 32).astype(int))]
    angle = np.linspace(0.0, 2.0 * np.pi, 8, endpoint=False)
    way = np.round(np.stack((np.cos(angle), np.sin(angle)), -1), 12)
    offsets = np.concatenate([np.sign(way) * half + gap * way for gap in GAPS])
    middle: Array = (pick[:, None] + offsets).reshape(-1, 2)
    return middle


def _clearance(middle: Array, half: Array, points: Array) -> Array:
    """Distance of each box from the nearest point, zero inside, (m,)."""
    if not points.size:
        return np.full(len(middle), np.inf)
    found = np.empty(len(middle))
    for start in range(0, len(middle), 256):
        out = np.maximum(np.abs(middle[start:start + 256, None] - points) - half, 0.0)
        found[start:start + 256] = np.hypot(out[..., 0], out[..., 1]).min(-1)
    return found
