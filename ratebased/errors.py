"""Errors and warning categories of the library: one place, so that callers can catch them by name.

Bad input raises an `InputError` (a `ValueError`) that names the argument, the offending entry and its value. A solver
that finds no solution raises a `ConvergenceError` that carries the best iterate. Doubts about an answer that was found
are warnings with a category of their own, never prints.
"""
from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from correlations.errors import InputError as InputError
from correlations.errors import NoPhysicalRootError as NoPhysicalRootError

# One class for both packages: bad input, a ValueError; the message names the argument, the entry and the value.


class UnstableMixtureError(InputError):
    """A liquid inside its spinodal: [Gamma] has an eigenvalue that is not positive, no steady film exists."""


class PropertyRangeError(InputError):
    """A property was asked for outside the range its model was built for."""


class ConvergenceError(RuntimeError):
    """No solution was found.

    Attributes
    ----------
    best : the best iterate (meaning told by the solver that raises), or None.
    residual : its scaled residual, one entry a problem of the batch, or None.
    failed : boolean mask over the batch, true where no solution was found, or None for a single problem.
    """

    def __init__(self, message: str, *, best: Any = None, residual: NDArray[np.float64] | float | None = None,
                 failed: NDArray[np.bool_] | None = None) -> None:
        super().__init__(message)
        self.best = best
        self.residual = residual
        self.failed = failed


class NoSolutionError(ConvergenceError):
    """The problem as posed has no solution (or no single one); the message says why."""


class RateBasedWarning(UserWarning):
    """Base of all warnings of this library."""


class OtherSolutionWarning(RateBasedWarning):
    """The solution returned lies on a branch separated by a fold from the zero-flux state; others exist."""


class HighFluxWarning(RateBasedWarning):
    """Rate factors so large that the film model itself is doubtful."""


class ApproximationWarning(RateBasedWarning):
    """An approximation made inside (constant [Gamma] in a film, say) is larger than its usual error."""


class PropertyWarning(RateBasedWarning):
    """A property was estimated outside the range of its correlation, or by a fallback."""


class PlausibilityWarning(RateBasedWarning):
    """Input that is legal but looks wrong (an open balance, a temperature in another unit)."""
