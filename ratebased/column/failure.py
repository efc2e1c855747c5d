"""The text of a column that was not solved."""
from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from ..errors import ConvergenceError
from ..properties.protocol import Array
from ..properties.saturation import smallest_gamma_eigenvalue
from .problem import Problem


def convergence_error(what: str, tried: Sequence[str], worst: str, residual: float, margin: float | None,
                      best: Any, unstable: str = "") -> ConvergenceError:
    """What was tried, where the first attempt was worst and what the dry-section estimate says."""
    text = f"{what}: no solution found. Tried: {'; '.join(tried)}. Worst: {worst}.{unstable}"
    if margin is not None:
        if margin <= 0:
            text += (f" The specifications seem to leave a section without vapour or liquid (estimate {margin:.2g} of "
                     "the distillate): try a larger reflux ratio.")
        else:
            text += f" The dry-section estimate finds at least {margin:.2g} times the distillate in every section."
    return ConvergenceError(text, best=best, residual=residual)


def unstable_liquid(problem: Problem, T: Array, l: Array) -> str:
    """A sentence on the first stage whose liquid would split in two, or nothing."""
    x = l / l.sum(1, keepdims=True)
    low, high = problem.temperature_limits
    eigenvalues = smallest_gamma_eigenvalue(problem.properties, np.clip(T, low, high), problem.P, x)
    split = np.flatnonzero(eigenvalues <= 0)
    if split.size == 0:
        return ""
    j = int(split[0])
    return (f" The liquid of stage {j + 1} would split in two ([Gamma] has an eigenvalue of {eigenvalues[j]:.2g}): one "
            "liquid phase is all these columns know.")
