"""Binary parameters that depend on temperature, shared by the local-composition models."""
from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike

from ...arguments import finite_array
from ...errors import InputError
from ..jet import Jet, temperature
from ..protocol import Array


class PairFunction:
    """a + b/T + c ln T + d T + e/T2 + f T2 for every ordered pair (i, j), T in K.

    Each coefficient an (n, n) array or one number for all pairs off the diagonal; those left out are zero. The diagonal
    is zero: a component does not interact with itself differently.
    Raises `InputError` for a shape other than (n, n), an entry that is not finite, a diagonal entry that is not zero.
    """

    def __init__(self, size: int, coefficients: Mapping[str, ArrayLike | None]) -> None:
        self.size = size
        self.coefficients: dict[str, Array] = {}
        for (name, value), key in zip(coefficients.items(), "abcdef"):
            if value is None:
                continue
            matrix = finite_array(name, value)
            if matrix.shape == ():
                matrix = np.where(np.eye(size, dtype=bool), 0.0, matrix)
            if matrix.shape != (size, size):
                raise InputError(f"{name}: expected shape ({size}, {size}), got {matrix.shape}")
            for i in np.flatnonzero(np.diagonal(matrix)):
                raise InputError(f"{name}[{i}, {i}] = {matrix[i, i]}: expected zero on the diagonal")
            if matrix.any():
                self.coefficients[key] = matrix

    def __call__(self, T: Array, order: int) -> Jet:
        """The function and its temperature derivatives, (..., n, n)."""
        jet = temperature(np.asarray(T, float)[..., None, None], order)
        total = Jet([np.zeros((*np.shape(T), self.size, self.size)) for _ in range(order + 1)])
        for key, matrix in self.coefficients.items():
            total = total + self._shape(key, jet) * matrix
        return total

    @staticmethod
    def _shape(key: str, T: Jet) -> Jet:
        if key == "a":
            return T * 0.0 + 1.0
        if key == "c":
            return T.log()
        return T ** {"b": -1, "d": 1, "e": -2, "f": 2}[key]
