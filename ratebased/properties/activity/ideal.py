"""Raoult's law."""
from __future__ import annotations

import numpy as np

from ..jet import Jet
from ..protocol import Array


class Ideal:
    """An ideal liquid mixture of `size` components: ln gamma = 0."""

    def __init__(self, size: int) -> None:
        self.size = size

    def ln_gamma(self, T: Array, x: Array, order: int = 0) -> Jet:
        """Zero, (..., n)."""
        zero = np.zeros(np.broadcast_shapes((*np.shape(T), self.size), np.shape(x)))
        return Jet([zero] * (order + 1))

    def mole_number_derivatives(self, T: Array, x: Array) -> Array:
        """Zero, (..., n, n)."""
        return np.zeros((*np.broadcast_shapes(np.shape(T), np.shape(x)[:-1]), self.size, self.size))

    def describe(self) -> str:
        return "ideal solution (Raoult's law)"
