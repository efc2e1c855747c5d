"""From the unknowns found to the `InterfaceFlux` handed back: state, conduction, residuals, derivatives."""
from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from .blocks import InterfaceBlocks, at_rest, energies, evaluate
from .equilibrium import normalized
from .newton import solve_linear
from .paths import Found
from .problem import InterfaceProblem
from .records import FilmState, InterfaceDerivatives, InterfaceFlux, InterfaceStatus

Array = NDArray[np.float64]

RESIDUAL_LIMIT = 1e-7
"""Scaled residual above which a converged iterate is not believed."""


def answer(problem: InterfaceProblem, found: Found, derivatives: bool, batch: tuple[int, ...],
           names: tuple[str, ...]) -> tuple[InterfaceFlux, Array]:
    """The result in the caller's batch shape, and the largest Ackermann exponent of the two films, (...)."""
    n, B = problem.n, len(problem.y)
    status = found.status.copy()
    solved = status <= InterfaceStatus.OTHER_BRANCH
    z = np.where(solved[:, None], found.z, at_rest(problem, problem.T_L))
    y_I, residual, size = found.y.copy(), found.residual.copy(), found.size.copy()
    blocks = None
    index = np.arange(B) if derivatives else np.flatnonzero(~found.shot)
    if derivatives or len(index):
        part = problem if len(index) == B else problem.take(index)
        blocks = evaluate(part, z[index], y_I[index], derivatives)
        y_I[index], residual[index] = blocks.y_I, np.abs(blocks.residual).max(-1) / blocks.terms
        size[index] = blocks.size
    x_I = np.where(problem.condensable, z[:, n:2 * n], 0.0)
    T_I = z[:, 2 * n]
    _judge(problem, found, status, residual, x_I, T_I)
    solved = status <= InterfaceStatus.OTHER_BRANCH

    def shaped(value: Array, *core: int) -> Array:
        if not solved.all():
            value = np.where(solved.reshape(-1, *[1] * len(core)), value, np.nan)
        return np.broadcast_to(value, (B, *core)).reshape((*batch, *core))

    N = np.where(problem.ordinary, z[:, :n], 0.0)
    x_I, y_I = np.maximum(x_I, 0.0), np.maximum(y_I, 0.0)
    vapor, liquid = energies(problem, N, T_I, False)
    terms = np.einsum("mi,mi->m", np.abs(N), np.abs(problem.H_V) + np.abs(problem.H_L)) + np.abs(vapor.q_bulk) \
        + np.abs(liquid.q_bulk)
    gap = np.abs(vapor.E - liquid.E) / np.where(terms > 0, terms, 1.0)
    K = np.asarray(problem.properties.k_value(T_I, problem.P, normalized(x_I), normalized(y_I)))
    off = np.where(problem.ordinary, np.abs(y_I - K * x_I), 0.0).max(-1)
    result = InterfaceFlux(
        N=shaped(N, n), y_I=shaped(y_I, n), x_I=shaped(x_I, n), T_I=shaped(T_I), q_vapor_bulk=shaped(vapor.q_bulk),
        q_vapor_interface=shaped(vapor.q_interface), q_liquid_interface=shaped(liquid.q_interface),
        q_liquid_bulk=shaped(liquid.q_bulk), energy_flux=shaped(vapor.E), residual=shaped(residual),
        equilibrium_residual=shaped(off), energy_residual=shaped(gap), iterations=found.iterations.reshape(batch),
        status=status.reshape(batch), size=shaped(size), u=shaped(z[:, n:2 * n], n), names=tuple(names),
        films=_films(problem, blocks, solved, batch),
        derivatives=None if blocks is None or not derivatives else _derivatives(problem, blocks, shaped))
    return result, np.maximum(np.abs(vapor.rate_factor), np.abs(liquid.rate_factor)).reshape(batch)


def _judge(problem: InterfaceProblem, found: Found, status: NDArray[np.int64], residual: Array, x_I: Array,
           T_I: Array) -> None:
    """Mark what cannot be believed: residual, unstable liquid, temperature at an end of the property range."""
    solved = status <= InterfaceStatus.OTHER_BRANCH
    status[solved & ~(residual < RESIDUAL_LIMIT)] = int(InterfaceStatus.FAILED)
    if not problem.ideal_liquid:
        # of a failed one x_I is that of the bulk
        status[~(_smallest_eigenvalue(problem, x_I, T_I) > 0)] = int(InterfaceStatus.UNSTABLE_LIQUID)
    low, high = problem.limits
    at_end = (found.z[:, -1] <= low) | (found.z[:, -1] >= high)
    status[(status == InterfaceStatus.FAILED) & at_end] = int(InterfaceStatus.OUT_OF_RANGE)


def _smallest_eigenvalue(problem: InterfaceProblem, x_I: Array, T_I: Array) -> Array:
    """Smallest real part of the eigenvalues of [Gamma] at the bulk, the interface and their mean, (B,)."""
    x_I = normalized(x_I)
    x = np.stack([problem.x, x_I, normalized(problem.x + x_I)])
    T = np.stack([problem.T_L, T_I, 0.5 * (problem.T_L + T_I)])
    gamma = np.asarray(problem.properties.thermodynamic_factor(T, problem.P, x))
    return np.asarray(np.linalg.eigvals(gamma).real.min((0, -1)))


def _films(problem: InterfaceProblem, blocks: InterfaceBlocks | None, solved: NDArray[np.bool_],
           batch: tuple[int, ...]) -> FilmState:
    n = problem.n

    def gamma(value: Array | None) -> Array | None:
        if value is None:
            return None
        return np.where(solved[:, None, None], value, np.eye(n - 1)).reshape(*batch, n - 1, n - 1)

    return FilmState(problem.y.reshape(*batch, n), problem.x.reshape(*batch, n),
                            problem.K_V.reshape(*batch, n, n), problem.K_L.reshape(*batch, n, n),
                            gamma(None if blocks is None else blocks.gamma_vapor),
                            gamma(None if blocks is None else blocks.gamma_liquid))


def _derivatives(problem: InterfaceProblem, blocks: InterfaceBlocks,
                 shaped: Callable[..., Array]) -> InterfaceDerivatives:
    """dz/dw = -(dF/dz)^-1 dF/dw, fractions as mole numbers at one mole in all."""
    n = problem.n
    if blocks.dw is None or blocks.dE_V_dw is None or blocks.dq_vapor_bulk_dw is None:
        raise ValueError("blocks without bulk derivatives")
    dz = -solve_linear(blocks.dz, blocks.dw)
    dE = blocks.dE_V_dw + (blocks.dE_V_dz[:, None, :] @ dz)[:, 0]
    dq = blocks.dq_vapor_bulk_dw + (blocks.dq_vapor_bulk_dz[:, None, :] @ dz)[:, 0]
    for slopes in (dz, dE, dq):                               # from along e_j - e_n to mole numbers
        for first, fractions, present in ((0, problem.y, problem.volatile), (n + 1, problem.x, problem.condensable)):
            part = slopes[..., first:first + n]
            weights = fractions if slopes.ndim == 2 else fractions[:, None, :]
            part -= (part * weights).sum(-1, keepdims=True)
            part[..., ~present] = 0.0
    dz[:, :n][:, ~problem.ordinary] = 0.0
    w = 2 * n + 2
    return InterfaceDerivatives(shaped(dz[:, :n], n, w), shaped(dE, w), shaped(dq, w), shaped(dz[:, 2 * n], w),
                                shaped(dz, 2 * n + 1, w))
