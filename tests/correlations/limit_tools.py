"""Tools of the limit tests."""
from __future__ import annotations

import numpy as np

G = 9.80665


def slope(function, argument, **state):
    """Logarithmic derivative of a correlation by one argument."""
    step = 1e-5
    up, down = (function(**{**state, argument: state[argument] * np.exp(s)}) for s in (step, -step))
    return np.log(up / down) / (2 * step)


def within(one, two, factor):
    """Two methods no further apart than a factor."""
    return np.all(np.maximum(one / two, two / one) < factor)
