"""The text of a column that was not solved."""
from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from ..errors import ConvergenceError


def convergence_error(what: str, tried: Sequence[str], worst: str, residual: float, margin: float | None,
                      best: Any) -> ConvergenceError:
    """What was tried, where the first attempt was worst and what the dry-section estimate says."""
    text = f"{what}: no solution found. Tried: {'; '.join(tried)}. Worst: {worst}."
    if margin is not None:
        if margin <= 0:
            text += (f" The specifications seem to leave a section without vapour or liquid (estimate {margin:.2g} of "
                     "the distillate): try a larger reflux ratio.")
        else:
            text += f" The dry-section estimate finds at least {margin:.2g} times the distillate in every section."
    return ConvergenceError(text, best=best, residual=residual)
