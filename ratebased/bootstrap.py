"""How the fluxes of a film are closed: one linear relation nu . N = s (Krishna and Standart 1976).

The film equations fix n-1 combinations of the n fluxes. Each class here gives the coefficients of the missing one.
"""
from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .arguments import component_index, finite_array
from .errors import InputError

Array = NDArray[np.float64]


class Bootstrap(Protocol):
    """Anything that closes a film."""

    @property
    def component(self) -> int | None:
        """The component the relation is about, if it is about one."""
        ...

    def linear_form(self, n: int) -> tuple[Array, Array]:
        """nu, (..., n), and s, (...), of nu . N = s for n components."""
        ...


def _index(name: str, component: int, n: int | None = None) -> int:
    if np.ndim(component):
        raise InputError(f"{name} = {component!r}: expected the index of one component. Ratios of all components "
                         "together with the compositions at both faces are more equations than unknowns")
    return component_index(name, component, n)


@dataclass(frozen=True)
class Equimolar:
    """No net molar flux, sum N = 0."""

    @property
    def component(self) -> None:
        """The relation is about all components."""
        return None

    def linear_form(self, n: int) -> tuple[Array, Array]:
        """nu = 1, s = 0."""
        return np.ones(n), np.zeros(())


@dataclass(frozen=True)
class Stagnant:
    """One component does not move, N_k = 0."""

    component: int

    def __post_init__(self) -> None:
        _index("component", self.component)

    def linear_form(self, n: int) -> tuple[Array, Array]:
        """nu = e_k, s = 0."""
        nu = np.zeros(n)
        nu[_index("component", self.component, n)] = 1.0
        return nu, np.zeros(())


@dataclass(frozen=True)
class FluxRatio:
    """One component carries a given share of the total, N_k = z sum N (z of any sign, scalar or (...))."""

    component: int
    z: ArrayLike

    def __post_init__(self) -> None:
        _index("component", self.component)
        finite_array("z", self.z)

    def linear_form(self, n: int) -> tuple[Array, Array]:
        """nu = e_k - z, s = 0."""
        z = finite_array("z", self.z)
        nu = np.broadcast_to(-z[..., None], (*z.shape, n)).copy()
        nu[..., _index("component", self.component, n)] += 1.0
        return nu, np.zeros(())


@dataclass(frozen=True)
class LatentHeat:
    """No net flux of latent heat, sum lambda_i N_i = 0; molar_latent J/mol, (..., n)."""

    molar_latent: ArrayLike

    def __post_init__(self) -> None:
        _weights("molar_latent", self.molar_latent, None)

    @property
    def component(self) -> None:
        """The relation is about all components."""
        return None

    def linear_form(self, n: int) -> tuple[Array, Array]:
        """nu = lambda, s = 0."""
        return _weights("molar_latent", self.molar_latent, n), np.zeros(())


@dataclass(frozen=True)
class TotalFlux:
    """The total flux is known, sum N = N_t; N_t mol/(m2 s), scalar or (...)."""

    N_t: ArrayLike

    def __post_init__(self) -> None:
        finite_array("N_t", self.N_t)

    @property
    def component(self) -> None:
        """The relation is about all components."""
        return None

    def linear_form(self, n: int) -> tuple[Array, Array]:
        """nu = 1, s = N_t."""
        return np.ones(n), finite_array("N_t", self.N_t)


@dataclass(frozen=True)
class LinearBootstrap:
    """The general relation nu . N = s; nu (..., n), s (...). It can hold a different closure for every film."""

    nu: ArrayLike
    s: ArrayLike = 0.0

    def __post_init__(self) -> None:
        _weights("nu", self.nu, None)
        finite_array("s", self.s)

    @property
    def component(self) -> None:
        """The relation is about all components."""
        return None

    def linear_form(self, n: int) -> tuple[Array, Array]:
        """nu and s as given."""
        return _weights("nu", self.nu, n), finite_array("s", self.s)


def _weights(name: str, value: ArrayLike, n: int | None) -> Array:
    weights = finite_array(name, value)
    if weights.ndim < 1 or (n is not None and weights.shape[-1] != n):
        raise InputError(f"{name}: expected {n or 'some'} components on the last axis, got shape {weights.shape}")
    if not weights.any(-1).all():
        where = [int(i) for i in np.argwhere(~weights.any(-1))[0]] if weights.ndim > 1 else ""
        raise InputError(f"{name}{where}: all coefficients are zero, nothing is closed")
    return weights
