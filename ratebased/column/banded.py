"""Block-tridiagonal systems solved as banded ones: blocks scattered into LAPACK's band storage."""
from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import NDArray
from scipy.linalg import solve_banded

from ..properties.protocol import Array

Index = NDArray[np.signedinteger]


class BlockTridiagonal:
    """Index maps for S stages of m unknowns.

    The lower blocks (coupling to the stage above) hold the columns from `lower_from` on, the upper blocks (to the stage
    below) the columns before `upper_to`; `below` and `above` are the bandwidths that the layout of rows needs.
    """

    def __init__(self, S: int, m: int, lower_from: int, upper_to: int, below: int, above: int) -> None:
        self.S, self.m, self.below, self.above = S, m, below, above
        self.lower_from, self.upper_to = lower_from, upper_to
        stage = np.arange(S)[:, None, None]
        row, column = np.arange(m)[:, None], np.arange(m)[None, :]

        def place(i: Index, k: Index) -> Index:
            return (above + i - k) * (S * m) + k

        def inside(offset: Index, count: int) -> NDArray[np.bool_]:
            return np.broadcast_to((offset <= below) & (-offset <= above), (count, *offset.shape)).copy()

        left, right = np.arange(lower_from, m)[None, :], np.arange(upper_to)[None, :]
        self.in_diagonal = inside(row - column, S)
        self.in_lower = inside(m + row - left, max(S - 1, 0))
        self.in_upper = inside(row - m - right, max(S - 1, 0))
        self.at_diagonal = place(stage * m + row, stage * m + column)[self.in_diagonal]
        self.at_lower = place(stage[1:] * m + row, (stage[1:] - 1) * m + left)[self.in_lower]
        self.at_upper = place(stage[:-1] * m + row, (stage[:-1] + 1) * m + right)[self.in_upper]

    def solve(self, diagonal: Array, lower: Array, upper: Array, rhs: Array) -> Array:
        """(S, m); blocks (S, m, m), lower[j] couples stage j to j-1, upper[j] to j+1. Raises `LinAlgError`."""
        band = np.zeros((self.below + self.above + 1) * self.S * self.m)
        band[self.at_diagonal] = diagonal[self.in_diagonal]
        band[self.at_lower] = lower[1:, :, self.lower_from:][self.in_lower]
        band[self.at_upper] = upper[:-1, :, :self.upper_to][self.in_upper]
        solution: Array = solve_banded((self.below, self.above), band.reshape(-1, self.S * self.m), rhs.reshape(-1),
                                       overwrite_ab=True, check_finite=False)
        return solution.reshape(self.S, self.m)


@lru_cache(maxsize=64)
def block_tridiagonal(S: int, m: int, lower_from: int, upper_to: int, below: int, above: int) -> BlockTridiagonal:
    """The index maps, made once for a layout."""
    return BlockTridiagonal(S, m, lower_from, upper_to, below, above)
