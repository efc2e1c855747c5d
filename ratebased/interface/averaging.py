"""What it costs to give each film one [Gamma], taken at the mean of interface and bulk: an estimate for an answer."""
from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..properties.protocol import PropertyModel
from .blocks import evaluate
from .equilibrium import normalized
from .newton import solve_linear
from .paths import Found
from .problem import InterfaceProblem

Array = NDArray[np.float64]


class FixedFactors:
    """A property model whose [Gamma] of each phase is given, one an interface, and does not depend on composition."""

    def __init__(self, model: PropertyModel, vapor: Array | None, liquid: Array | None) -> None:
        self.model, self.vapor, self.liquid = model, vapor, liquid

    def __getattr__(self, name: str) -> Any:
        return getattr(self.model, name)

    def vapor_thermodynamic_factor(self, T: Array, P: Array, y: Array) -> Array:
        """The matrices given."""
        return _spread(self.vapor, y)

    def thermodynamic_factor(self, T: Array, P: Array, x: Array) -> Array:
        """The matrices given."""
        return _spread(self.liquid, x)


def _spread(gamma: Array | None, composition: Array) -> Array:
    m = composition.shape[-1] - 1
    return np.array(np.broadcast_to(np.eye(m) if gamma is None else gamma, (*composition.shape[:-1], m, m)))


def averaging_error(problem: InterfaceProblem, found: Found, solved: NDArray[np.bool_]) -> Array:
    """max|dN|/max|N| when the 1-4-1 average of [Gamma] over each film replaces its mean value, (B,); NaN: unsolved.

    One step of Newton from the answer, with the equations and the Jacobian of the averaged films.
    """
    n, index = problem.n, np.flatnonzero(solved)
    error = np.full(len(solved), np.nan)
    error[index] = 0.0
    if not len(index) or (problem.ideal_vapor and problem.ideal_liquid):
        return error
    p, z, y = problem.take(index), found.z[index], found.y[index]
    T_I = z[:, 2 * n]
    x_I, y_I = normalized(np.where(p.condensable, z[:, n:2 * n], 0.0)), normalized(y)
    vapor = None if p.ideal_vapor else _average(p, "vapor_thermodynamic_factor", 0.5 * (p.T_V + T_I), p.y, y_I)
    liquid = None if p.ideal_liquid else _average(p, "thermodynamic_factor", 0.5 * (p.T_L + T_I), x_I, p.x)
    averaged: Any = FixedFactors(p.properties, vapor, liquid)
    blocks = evaluate(replace(p, properties=averaged), z, y, False)
    size = np.abs(z[:, :n]).max(-1)
    step = np.abs(solve_linear(blocks.dz, blocks.residual)[:, :n]).max(-1)
    error[index] = step / np.where(size > 0, size, 1.0)
    return error


def _average(p: InterfaceProblem, name: str, T: Array, x0: Array, xd: Array) -> Array:
    """([Gamma](x0) + 4 [Gamma](x_m) + [Gamma](xd))/6 at the mean temperature of the film."""
    states = np.stack([x0, 0.5 * (x0 + xd), xd])
    gamma = np.asarray(getattr(p.properties, name)(np.stack([T, T, T]), p.P, states))
    mean: Array = (gamma[0] + 4.0 * gamma[1] + gamma[2]) / 6.0
    return mean
