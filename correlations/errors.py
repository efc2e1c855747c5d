"""Errors and the one warning category of the correlations."""
from __future__ import annotations

import numpy as np
from numpy.typing import NDArray


class InputError(ValueError):
    """Bad input: the message names the argument, the entry and the value.

    entry : position in the array of the argument, for a caller with a better name for it; empty where there is none.
    """

    def __init__(self, message: str, entry: tuple[int, ...] = ()) -> None:
        super().__init__(message)
        self.entry = entry


class NoPhysicalRootError(ArithmeticError):
    """The equations of a correlation have no physical root at the conditions given (a packed bed beyond flooding).

    failed : boolean array over the batch, true where there is none.
    """

    def __init__(self, message: str, failed: NDArray[np.bool_]) -> None:
        count = int(np.count_nonzero(failed))
        super().__init__(f"{message} in {count} of {failed.size} entries" if failed.size > 1 else message)
        self.failed = failed


class OutOfRangeWarning(UserWarning):
    """A correlation was called outside its range; the message names the variable and by how much."""
