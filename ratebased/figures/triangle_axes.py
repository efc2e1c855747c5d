"""Triangular axes: the whole composition triangle, or an upright part of it."""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import ceil, floor, log10, sqrt
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from .style import folded

if TYPE_CHECKING:
    from matplotlib.axes import Axes

Array = NDArray[np.float64]

HEIGHT = sqrt(3.0) / 2.0
CORNER = 1.3
"""Width of a name at a corner, inch."""
SMALLEST = 1e-4
"""Side of the smallest triangle drawn: below it a path is a point."""


@dataclass(frozen=True)
class Triangle:
    """All compositions with fractions not below `low`, (3,); low.sum() + side = 1. Corners: top, left, right."""

    low: Array
    side: float

    @classmethod
    def whole(cls) -> Triangle:
        return cls(np.zeros(3), 1.0)

    @classmethod
    def around(cls, points: Array, margin: float = 0.12) -> Triangle:
        """The smallest upright triangle that holds all points, with a margin, inside the whole one."""
        low = points.min(0)
        side = max(1.0 - float(low.sum()), SMALLEST)
        low = np.maximum(low - margin * side, 0.0)
        total = float(low.sum())
        if total > 1.0 - SMALLEST:
            low = low * (1.0 - SMALLEST) / total
        return cls(low, 1.0 - float(low.sum()))

    def place(self, z: Array) -> Array:
        """Coordinates (..., 2) of compositions (..., 3)."""
        part = (np.asarray(z) - self.low) / self.side
        return np.stack((part[..., 2] + 0.5 * part[..., 0], HEIGHT * part[..., 0]), -1)

    def draw(self, ax: Axes, names: Sequence[str], size: float, inch: float, *, corners: bool) -> list[Array]:
        """Frame, grid, ticks and titles of the sides; returns what a label must not cover, as lines (2, 2).

        size: of the letters, points. inch: one inch in sides of the triangle.
        """
        ax.set_axis_off()
        frame = np.array([[0.5, HEIGHT], [0.0, 0.0], [1.0, 0.0], [0.5, HEIGHT]])
        step, decimals = _step(self.side)
        # lines of constant fraction k end on the side where `zero` vanishes; there they carry their numbers
        for k, zero, other in ((0, 2, 1), (1, 0, 2), (2, 1, 0)):
            way = _way(k, zero)
            for tick in range(ceil(self.low[k] / step), floor((self.low[k] + self.side) / step) + 1):
                part = (tick * step - self.low[k]) / self.side
                if not 0.02 < part < 0.98:
                    continue
                ends = np.zeros((2, 3))
                ends[:, k] = part
                ends[0, other], ends[1, zero] = 1.0 - part, 1.0 - part
                at, opposite = Triangle.whole().place(ends)
                ax.plot(*np.stack((at, opposite), -1), color="#d0d0d0", linewidth=0.5, zorder=0.5)
                ax.plot(*np.stack((at, at + 0.05 * inch * way), -1), color="black", linewidth=0.6, zorder=0.6)
                x, y = at + 0.08 * inch * way
                ax.text(x, y, f"{tick * step:.{decimals}f}", fontsize=size - 0.5, ha=_side(way[0]),
                        va="center" if abs(way[1]) < 0.1 else ("center_baseline" if way[1] > 0 else "top"))
        ax.plot(*frame.T, color="black", linewidth=0.9, zorder=0.8)
        wide = (0.16 + (1.5 + decimals) * 0.6 * size / 72.0) * inch
        deep = 0.3 * inch
        first, second, third = (folded(name, 1.0 / inch - 0.28) for name in names)
        up = 0.42  # of the way up a side: titles keep clear of what is written above the top
        for x, y, turn, text in ((0.5 * up - wide * HEIGHT, HEIGHT * up + 0.5 * wide, 60.0, f"{first} (–) →"),
                                 (0.5, -deep, 0.0, f"← {second} (–)"),
                                 (1.0 - 0.5 * up + wide * HEIGHT, HEIGHT * up + 0.5 * wide, -60.0, f"{third} (–) →")):
            ax.text(x, y, text, fontsize=size, rotation=turn, ha="center", va="bottom" if turn else "top",
                    rotation_mode="anchor", linespacing=1.05)
        if corners:
            for x, y, name, ha, va in ((0.5, HEIGHT + 0.06 * inch, names[0], "center", "bottom"),
                                       (-0.08 * inch, -0.21 * inch, names[1], "center", "top"),
                                       (1.0 + 0.08 * inch, -0.21 * inch, names[2], "center", "top")):
                ax.text(x, y, folded(name, CORNER), fontsize=size + 0.5, fontweight="bold", ha=ha, va=va)
        return [frame[m:m + 2] for m in range(3)]


def _way(k: int, zero: int) -> Array:
    """Direction in which the lines of constant fraction k leave the triangle through the side where `zero` is nil."""
    gain = np.zeros(3)
    gain[zero] = -1.0
    gain[3 - k - zero] = 1.0
    return np.array([gain[2] + 0.5 * gain[0], HEIGHT * gain[0]])


def _side(x: float) -> str:
    return "center" if abs(x) < 0.1 else ("left" if x > 0 else "right")


def _step(side: float) -> tuple[float, int]:
    """Distance of the ticks, about five to a side, and the decimals that tell them apart."""
    rough = side / 4.0
    decade = 10.0 ** floor(log10(rough))
    step = next(m * decade for m in (1.0, 2.0, 5.0, 10.0) if m * decade >= 0.8 * rough)
    return step, max(0, -floor(log10(step) + 1e-9))
