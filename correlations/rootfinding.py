"""Roots of many scalar equations at once."""
from __future__ import annotations

from collections.abc import Callable

import numpy as np

from .validity import Array, Mask


def bracketed_root(function: Callable[[Array], Array], low: Array, high: Array) -> Array:
    """Root of `function` between `low` and `high`, entry by entry (Chandrupatla 1997, Adv. Eng. Softw. 28, 145).

    The function must change sign between the bounds in every entry; it is called with arrays of their common shape.
    """
    a, b = (np.array(v, dtype=float) for v in np.broadcast_arrays(high, low))
    fa, fb = function(a), function(b)
    if (np.sign(fa) * np.sign(fb) > 0).any():
        raise ArithmeticError("the bounds do not enclose a root")
    c, fc = a, fa
    t = np.full(a.shape, 0.5)
    for _ in range(100):
        trial = a + t * (b - a)
        value = function(trial)
        same = np.sign(value) == np.sign(fa)
        c, fc = np.where(same, a, b), np.where(same, fa, fb)
        b, fb = np.where(same, b, a), np.where(same, fb, fa)
        a, fa = trial, value
        best = np.where(np.abs(fa) < np.abs(fb), a, b)
        tolerance = 4 * np.finfo(float).eps * np.abs(best)
        width = np.abs(b - a)
        if ((width <= 2 * tolerance) | (fa == 0) | (fb == 0)).all():
            return best
        with np.errstate(divide="ignore", invalid="ignore"):
            xi, phi = (a - b) / (c - b), (fa - fb) / (fc - fb)
            interpolate = (phi ** 2 < xi) & ((1 - phi) ** 2 < 1 - xi)
            quadratic = fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
            limit = np.clip(tolerance / width, 0.0, 0.5)
        t = np.where(interpolate & np.isfinite(quadratic), quadratic, 0.5)
        t = np.clip(t, limit, 1 - limit)
        t = np.where(np.isfinite(t), t, 0.5)
    return best


def climbed_root(curve: Callable[[Array], tuple[Array, Array, Mask]], start: Array) -> tuple[Array, Mask]:
    """Lowest root of y = curve(y), entry by entry, and where there is none.

    The curve is convex and rises from `start`, which lies below the root: Newton's method climbs without overshooting.
    `curve` gives the value, its slope and where it is undefined (numbers of any kind there).
    """
    y = start.copy()
    failed = np.zeros(y.shape, bool)
    for _ in range(100):
        value, slope, undefined = curve(y)
        failed |= undefined | (slope >= 1)
        open_ = ~failed & (np.abs(value - y) > 1e-14 * value)
        if not open_.any():
            break
        y = np.where(open_, y + (value - y) / np.where(open_, 1 - slope, 1.0), y)
    return y, failed | open_
