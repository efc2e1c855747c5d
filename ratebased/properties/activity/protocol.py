"""What the library asks of an activity model."""
from __future__ import annotations

from typing import Protocol

from ..jet import Jet
from ..protocol import Array


class ActivityModel(Protocol):
    """Activity coefficients of a liquid mixture of `size` components, all stages at once.

    T (...) K, x (..., size) mole fractions of sum one. T and x broadcast against each other.
    """

    @property
    def size(self) -> int: ...

    def ln_gamma(self, T: Array, x: Array, order: int = 0) -> Jet:
        """ln gamma, (..., size), with its temperature derivatives up to `order` (0, 1 or 2) at constant composition."""
        ...

    def mole_number_derivatives(self, T: Array, x: Array) -> Array:
        """d ln gamma_i / d n_j at constant T, other n, and one mole in all, (..., size, size).

        Symmetric (second derivatives of the excess Gibbs energy), and sum_j x_j J_ij = 0 (Gibbs-Duhem).
        """
        ...

    def describe(self) -> str:
        """The model and its source, one line."""
        ...


class SharesInteractions(Protocol):
    """A model that gives both quantities from one evaluation of its temperature-dependent interactions."""

    def ln_gamma_and_derivatives(self, T: Array, x: Array, order: int) -> tuple[Jet, Array]:
        """What `ln_gamma` and `mole_number_derivatives` give."""
        ...


def ln_gamma_and_derivatives(model: ActivityModel, T: Array, x: Array, order: int) -> tuple[Jet, Array]:
    """ln gamma (to a temperature order) and the mole-number derivatives of any model, shared work done once."""
    shared: SharesInteractions | None = model if hasattr(model, "ln_gamma_and_derivatives") else None  # type: ignore
    if shared is not None:
        return shared.ln_gamma_and_derivatives(T, x, order)
    return model.ln_gamma(T, x, order), model.mole_number_derivatives(T, x)
