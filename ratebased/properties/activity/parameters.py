"""Binary parameters that depend on temperature, shared by the local-composition models."""
from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike

from ...arguments import finite_array
from ...errors import InputError
from ..jet import Jet, temperature
from ..protocol import Array

TERMS = ("a", "b", "c", "d", "e", "f")


class PairFunction:
    """a + b/T + c ln T + d T + e/T2 + f T2 for every ordered pair (i, j), T in K.

    `coefficients` : those of a to f that are not zero, each (n, n) or one number for all pairs off the diagonal; the
    diagonal is zero. `name` stands before the letter in messages.
    Raises `InputError` for a shape other than (n, n), an entry that is not finite, a diagonal entry that is not zero.
    """

    def __init__(self, size: int, name: str, coefficients: Mapping[str, ArrayLike | None]) -> None:
        self.size = size
        self._constant = np.zeros((size, size))
        self._slopes: dict[str, Array] = {}
        for key in TERMS:
            value = coefficients.get(key)
            if value is None:
                continue
            matrix = pair_coefficients(f"{name}_{key}", value, size)
            if key == "a":
                self._constant = matrix
            elif matrix.any():
                self._slopes[key] = matrix

    def __call__(self, T: Array, order: int) -> Jet:
        """The function and its temperature derivatives, (..., n, n)."""
        jet = temperature(np.asarray(T, float)[..., None, None], order)
        total: Jet | None = None
        for key, matrix in self._slopes.items():
            term = _SHAPES[key](jet) * matrix
            total = term if total is None else total + term
        if total is None:
            total = Jet([np.zeros((*np.shape(T), self.size, self.size))] * (order + 1))
        return total + self._constant


_SHAPES = {"b": lambda T: T.reciprocal(), "c": lambda T: T.log(), "d": lambda T: T, "e": lambda T: (T * T).reciprocal(),
           "f": lambda T: T * T}


def pair_coefficients(name: str, value: ArrayLike, size: int) -> Array:
    """`value` as an (n, n) matrix with a zero diagonal; one number stands for all pairs."""
    matrix = finite_array(name, value)
    if matrix.shape == ():
        matrix = np.where(np.eye(size, dtype=bool), 0.0, matrix)
    if matrix.shape != (size, size):
        raise InputError(f"{name}: expected shape ({size}, {size}), got {matrix.shape}")
    for i in np.flatnonzero(np.diagonal(matrix)):
        raise InputError(f"{name}[{i}, {i}] = {matrix[i, i]}: expected zero on the diagonal")
    return matrix
