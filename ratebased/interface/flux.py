"""`interface_flux`: the interface between two bulks, solved; paths in their order, tests of the answer, errors."""
from __future__ import annotations

import warnings
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import mole_fractions, pair_matrix, positive_array
from ..errors import (
    HighFluxWarning,
    InputError,
    NoSolutionError,
    OtherSolutionWarning,
    PropertyRangeError,
    UnstableMixtureError,
)
from ..film import krishna_standart
from ..properties.protocol import PropertyModel
from .blocks import InterfaceBlocks, at_rest, evaluate
from .branch import continuation, determinant_sign, zero_flux_sign
from .equilibrium import normalized, zero_flux_temperature
from .film_rows import FilmMethod
from .newton import Iterate, newton, solve_linear
from .problem import InterfaceProblem, entries, prepare
from .records import Bulk, FilmCoefficients, InterfaceDerivatives, InterfaceFlux, InterfaceStatus

Array = NDArray[np.float64]

PHYSICAL = -1e-10
"""Fractions below this make an answer unphysical; closer to zero they are rounding and set to zero."""
RESIDUAL_LIMIT = 1e-7
"""Scaled residual above which a converged iterate is not believed."""
ACKERMANN_LIMIT = 30.0


def interface_flux(vapor: Bulk, liquid: Bulk, properties: PropertyModel, P: ArrayLike, *,
                   film: FilmMethod = krishna_standart, start: InterfaceFlux | None = None, derivatives: bool = False,
                   throw: bool = True, tolerance: float = 1e-10) -> InterfaceFlux:
    """Fluxes through the interface of two bulks: two films, equilibrium between them, one energy flux through both.

    Parameters
    ----------
    vapor, liquid : `Bulk` records; batch shapes broadcast against each other and P.
    properties : a `PropertyModel`. A model whose parameters vary over the batch has a method `entries(index)` that
        gives the model of some entries of the flattened batch.
    P : Pa, (...).
    film : film method for both films. `krishna_standart` and `linearized` are solved through their own equations, any
        other function of the same signature through differences of its N.
    start : an earlier result of the same batch shape to start from; its branch is followed, so the sign test is left
        out where this start succeeds.
    derivatives : also the derivatives by both bulk states (`InterfaceDerivatives`).
    throw : False returns NaN and the `status` of a failed interface instead of raising.
    tolerance : largest error of N (relative to the largest flux), T_I (relative) and fractions, judged on the step.

    Returns
    -------
    InterfaceFlux, fluxes positive from vapour to liquid.

    Raises
    ------
    InputError : bad shapes or values; a non-condensing component in the liquid, a non-volatile one in the vapour; no
        component that passes the interface.
    NoSolutionError : no path leads to a solution (carries the best iterates, residuals and the mask of failures).
    UnstableMixtureError : the liquid would split in two ([Gamma] with an eigenvalue <= 0).
    PropertyRangeError : T_I outside the range of the model.

    Warns
    -----
    OtherSolutionWarning : the answer lies beyond a fold from the zero-flux state: other solutions exist.
    HighFluxWarning : Ackermann exponent beyond +-30.

    Sources: films Krishna & Standart (1976), exact for ideal mixtures with constant coefficients, [Gamma] at the mean
    of interface and bulk otherwise; conduction Ackermann (1937).
    """
    n = len(properties.names)
    vapor, liquid, P_array, batch = _checked(vapor, liquid, properties, P)
    count = int(np.prod(batch, dtype=int))
    problem = prepare(_flat(vapor, batch, n), _flat(liquid, batch, n), entries(properties, np.arange(count)),
                      np.broadcast_to(P_array, batch).reshape(count), film)
    found = _solve(problem, None if start is None else _restart(start, batch, n), tolerance)
    result, blocks = _result(problem, found, derivatives, batch, properties.names)
    _report(result, found, blocks, batch, throw)
    return result


# ------------------------------------------------------------------------------------------------------------- input
def _checked(vapor: Bulk, liquid: Bulk, properties: PropertyModel, P: ArrayLike
             ) -> tuple[Bulk, Bulk, Array, tuple[int, ...]]:
    n = len(properties.names)
    condensable, volatile = np.asarray(properties.condensable, bool), np.asarray(properties.volatile, bool)
    if not (condensable & volatile).any():
        raise InputError("properties: no component is both condensable and volatile, nothing can pass the interface")
    checked = []
    for label, bulk, allowed, word in (("vapor", vapor, volatile, "not volatile"),
                                       ("liquid", liquid, condensable, "not condensable")):
        x = mole_fractions(f"{label}.composition", bulk.composition, n)
        wrong = (x > 0) & ~allowed
        if wrong.any():
            where = tuple(int(i) for i in np.argwhere(wrong)[0])
            raise InputError(f"{label}.composition{list(where)} = {x[where]:.6g}: {properties.names[where[-1]]} is "
                             f"{word}, its mole fraction must be 0")
        checked.append(Bulk(x, positive_array(f"{label}.temperature", bulk.temperature),
                            pair_matrix(f"{label}.kappa", bulk.kappa, n),
                            positive_array(f"{label}.heat_transfer", bulk.heat_transfer),
                            positive_array(f"{label}.molar_density", bulk.molar_density)))
    pressure = positive_array("P", P)
    shapes = [pressure.shape]
    for b in checked:
        shapes += [b.composition.shape[:-1], b.temperature.shape, b.kappa.shape[:-2], b.heat_transfer.shape,
                   b.molar_density.shape]
    try:
        batch = np.broadcast_shapes(*shapes)
    except ValueError as error:
        raise InputError(f"vapor, liquid, P: batch shapes {shapes} do not broadcast") from error
    low, high = getattr(properties, "T_range", (0.0, np.inf))
    for label, b in zip(("vapor", "liquid"), checked):
        outside = (b.temperature < low) | (b.temperature > high)
        if outside.any():
            where = tuple(int(i) for i in np.argwhere(outside)[0])
            raise PropertyRangeError(f"{label}.temperature{list(where) if where else ''} = {b.temperature[where]:.6g} "
                                     f"K: outside the range {low:g} to {high:g} K of the property model")
    return checked[0], checked[1], pressure, batch


def _flat(bulk: Bulk, batch: tuple[int, ...], n: int) -> Bulk:
    def flat(value: Array, *core: int) -> Array:
        return np.ascontiguousarray(np.broadcast_to(value, (*batch, *core))).reshape(-1, *core)

    return Bulk(flat(bulk.composition, n), flat(bulk.temperature), flat(bulk.kappa, n, n), flat(bulk.heat_transfer),
                flat(bulk.molar_density))


def _restart(earlier: InterfaceFlux, batch: tuple[int, ...], n: int) -> Iterate:
    if earlier.T_I.shape != batch or earlier.N.shape[-1] != n:
        raise InputError(f"start: expected a result of batch shape {batch} and {n} components, got "
                         f"{earlier.T_I.shape} and {earlier.N.shape[-1]}")
    z = np.concatenate((earlier.N, earlier.u, earlier.T_I[..., None]), axis=-1).reshape(-1, 2 * n + 1)
    good = np.asarray(np.isfinite(z).all(-1))
    return Iterate(z, earlier.y_I.reshape(-1, n), good, np.zeros(len(z), np.int64))


# ------------------------------------------------------------------------------------------------------------- paths
@dataclass(frozen=True)
class _Found:
    """z, y (B, ...), status, iterations and, where the continuation ended early, the fraction of the way it came."""

    z: Array
    y: Array
    status: NDArray[np.int64]
    iterations: NDArray[np.int64]
    reached: Array


def _physical(problem: InterfaceProblem, run: Iterate) -> NDArray[np.bool_]:
    """Converged with no negative fraction."""
    n = problem.n
    positive = (run.z[:, n:2 * n].min(-1) >= PHYSICAL) & (run.y.min(-1) >= PHYSICAL)
    return np.asarray(run.converged & positive)


def _solve(problem: InterfaceProblem, restart: Iterate | None, tolerance: float) -> _Found:
    B, n = len(problem.y), problem.n
    z, y = np.full((B, 2 * n + 1), np.nan), np.full((B, n), np.nan)
    status, iterations = np.full(B, int(InterfaceStatus.FAILED)), np.zeros(B, np.int64)
    reached, untested = np.zeros(B), np.zeros(B, bool)

    def attempt(index: NDArray[np.int64], run: Iterate, label: InterfaceStatus) -> None:
        good = _physical(problem.take(index), run)
        kept = index[good]
        z[kept], y[kept], status[kept], iterations[kept] = run.z[good], run.y[good], int(label), run.iterations[good]
        worst = index[~good]
        z[worst], iterations[worst] = run.z[~good], run.iterations[~good]

    if restart is not None and restart.converged.any():
        index = np.flatnonzero(restart.converged)
        run = newton(problem.take(index), restart.z[index], restart.y[index], tolerance=tolerance, max_iterations=12)
        attempt(index, run, InterfaceStatus.SOLVED)
        untested = status == InterfaceStatus.SOLVED
    for label in (InterfaceStatus.SOLVED, InterfaceStatus.SECOND_START, InterfaceStatus.CONTINUATION):
        index = np.flatnonzero(status == InterfaceStatus.FAILED)
        if not len(index):
            break
        left = problem.take(index)
        if label == InterfaceStatus.CONTINUATION:
            run, reached[index] = continuation(left, tolerance)
        else:
            T = zero_flux_temperature(left, 1e-2) if label == InterfaceStatus.SOLVED else left.T_L
            run = newton(left, at_rest(left, T), left.y, tolerance=tolerance)
        attempt(index, run, label)
    return _Found(z, y, status, iterations, reached) if untested.all() else _branch_tested(
        problem, _Found(z, y, status, iterations, reached), ~untested, tolerance)


def _branch_tested(problem: InterfaceProblem, found: _Found, test: NDArray[np.bool_], tolerance: float) -> _Found:
    """The sign test; where it fails the root connected with zero flux is sought."""
    index = np.flatnonzero((found.status <= InterfaceStatus.CONTINUATION) & test)
    if not len(index):
        return found
    z, y, status, iterations = found.z.copy(), found.y.copy(), found.status.copy(), found.iterations.copy()
    p = problem.take(index)
    expected = zero_flux_sign(p)
    actual = determinant_sign(evaluate(p, z[index], y[index], False).dz)
    other = actual != expected
    if other.any():
        q, rows = p.take(other), index[other]
        run, _ = continuation(q, tolerance)
        good = _physical(q, run)
        good &= determinant_sign(evaluate(q, run.z, run.y, False).dz) == expected[other]
        status[rows] = int(InterfaceStatus.OTHER_BRANCH)
        kept = rows[good]
        z[kept], y[kept], iterations[kept] = run.z[good], run.y[good], run.iterations[good]
        status[kept] = int(InterfaceStatus.CONTINUATION)
    return _Found(z, y, status, iterations, found.reached)


# ------------------------------------------------------------------------------------------------------------ results
def _result(problem: InterfaceProblem, found: _Found, derivatives: bool, batch: tuple[int, ...],
            names: tuple[str, ...]) -> tuple[InterfaceFlux, InterfaceBlocks]:
    n = problem.n
    status = found.status.copy()
    z = found.z.copy()
    solved = status <= InterfaceStatus.OTHER_BRANCH
    z[~solved] = at_rest(problem, problem.T_L)[~solved]
    blocks = evaluate(problem, z, np.where(solved[:, None], found.y, problem.y), derivatives)
    residual = np.abs(blocks.residual).max(-1) / blocks.terms
    status[solved & ~(residual < RESIDUAL_LIMIT)] = int(InterfaceStatus.FAILED)
    if not problem.ideal_liquid:
        status[solved & (_smallest_eigenvalue(problem, blocks.x_I, z[:, 2 * n]) <= 0)] = int(
            InterfaceStatus.UNSTABLE_LIQUID)
    low, high = problem.limits
    at_end = (found.z[:, 2 * n] <= low) | (found.z[:, 2 * n] >= high)
    status[(status == InterfaceStatus.FAILED) & at_end] = int(InterfaceStatus.OUT_OF_RANGE)
    solved = status <= InterfaceStatus.OTHER_BRANCH

    def shaped(value: Array, *core: int) -> Array:
        value = np.broadcast_to(value, (len(status), *core))
        return np.where(solved.reshape(-1, *[1] * len(core)), value, np.nan).reshape((*batch, *core))

    N = np.where(problem.ordinary, z[:, :n], 0.0)
    x_I, y_I = np.maximum(blocks.x_I, 0.0), np.maximum(blocks.y_I, 0.0)
    equilibrium_residual = np.where(problem.ordinary, np.abs(y_I - blocks.K * x_I), 0.0).max(-1)
    size_E = (np.abs(N * problem.H_V) + np.abs(N * problem.H_L)).sum(-1) + np.abs(blocks.q_vapor_bulk) \
        + np.abs(blocks.q_liquid_bulk)
    gap = np.abs(blocks.E_V - blocks.E_L)
    energy_residual = gap / np.where(size_E > 0, size_E, 1.0)
    m = n - 1

    def gamma(value: Array | None) -> Array | None:
        return None if value is None else np.where(solved[:, None, None], value, np.eye(m)).reshape(*batch, m, m)

    films = FilmCoefficients(problem.y.reshape(*batch, n), problem.x.reshape(*batch, n),
                             problem.K_V.reshape(*batch, n, n),
                             problem.K_L.reshape(*batch, n, n), gamma(blocks.gamma_vapor), gamma(blocks.gamma_liquid))
    result = InterfaceFlux(
        N=shaped(N, n), y_I=shaped(y_I, n), x_I=shaped(x_I, n), T_I=shaped(z[:, 2 * n]),
        q_vapor_bulk=shaped(blocks.q_vapor_bulk), q_vapor_interface=shaped(blocks.q_vapor_interface),
        q_liquid_interface=shaped(blocks.q_liquid_interface), q_liquid_bulk=shaped(blocks.q_liquid_bulk),
        energy_flux=shaped(blocks.E_V), residual=shaped(residual), equilibrium_residual=shaped(equilibrium_residual),
        energy_residual=shaped(energy_residual), iterations=found.iterations.reshape(batch),
        status=status.reshape(batch), size=shaped(blocks.size), u=shaped(z[:, n:2 * n], n), names=tuple(names),
        films=films, derivatives=_derivatives(problem, blocks, z, shaped) if derivatives else None)
    return result, blocks


def _derivatives(problem: InterfaceProblem, blocks: InterfaceBlocks, z: Array,
                 shaped: Callable[..., Array]) -> InterfaceDerivatives:
    """dz/dw = -(dF/dz)^-1 dF/dw, fractions as mole numbers at one mole in all."""
    n = problem.n
    if blocks.dw is None or blocks.dE_V_dw is None or blocks.dq_vapor_bulk_dw is None:
        raise ValueError("blocks without bulk derivatives")
    dz = -solve_linear(blocks.dz, blocks.dw)
    dE = blocks.dE_V_dw + (blocks.dE_V_dz[:, None, :] @ dz)[:, 0]
    dq = blocks.dq_vapor_bulk_dw + (blocks.dq_vapor_bulk_dz[:, None, :] @ dz)[:, 0]
    for slopes in (dz, dE, dq):                               # from along e_j - e_n to mole numbers
        for first, fractions in ((0, problem.y), (n + 1, problem.x)):
            part = slopes[..., first:first + n]
            weights = fractions if slopes.ndim == 2 else fractions[:, None, :]
            part -= (part * weights).sum(-1, keepdims=True)
    dz[:, :n][:, ~problem.ordinary] = 0.0
    w = 2 * n + 2
    return InterfaceDerivatives(shaped(dz[:, :n], n, w), shaped(dE, w), shaped(dq, w), shaped(dz[:, 2 * n], w),
                                shaped(dz, 2 * n + 1, w))


def _smallest_eigenvalue(problem: InterfaceProblem, x_I: Array, T_I: Array) -> Array:
    """Smallest real part of the eigenvalues of [Gamma] at the bulk, the interface and their mean, (B,)."""
    x_I = normalized(x_I)
    x = np.stack([problem.x, x_I, normalized(problem.x + x_I)])
    T = np.stack([problem.T_L, T_I, 0.5 * (problem.T_L + T_I)])
    gamma = np.asarray(problem.properties.thermodynamic_factor(T, problem.P, x))
    return np.asarray(np.linalg.eigvals(gamma).real.min((0, -1)))


# ------------------------------------------------------------------------------------------------- errors and warnings
def _report(result: InterfaceFlux, found: _Found, blocks: InterfaceBlocks, batch: tuple[int, ...],
            throw: bool) -> None:
    status = result.status
    if throw and not result.solved.all():
        failed = ~result.solved
        where = tuple(int(i) for i in np.argwhere(failed)[0])
        label = f"interface{list(where) if where else ''}"
        count = f"; {int(failed.sum())} of {failed.size} interfaces failed" if failed.size > 1 else ""
        first = int(status[where])
        if first == InterfaceStatus.UNSTABLE_LIQUID:
            raise UnstableMixtureError(f"{label}: [Gamma] has an eigenvalue that is not positive between bulk and "
                                       f"interface, the liquid would split in two{count}")
        if first == InterfaceStatus.OUT_OF_RANGE:
            raise PropertyRangeError(f"{label}: T_I runs out of the temperature range of the property model{count}")
        reached = found.reached.reshape(batch)[where]
        residual = np.abs(blocks.residual).max(-1).reshape(batch)
        raise NoSolutionError(
            f"{label}: no steady interface found from zero flux, from T_L and by continuation, which came "
            f"{100 * reached:.4g} % of the way from the zero-flux state of the liquid to these bulks{count}",
            best=found.z.reshape(*batch, -1), residual=residual, failed=failed)
    other = int((status == InterfaceStatus.OTHER_BRANCH).sum())
    if other:
        where = tuple(int(i) for i in np.argwhere(status == InterfaceStatus.OTHER_BRANCH)[0])
        warnings.warn(f"{other} interface(s), the first at {list(where)}, lie beyond a fold from the zero-flux state "
                      "of their liquid: other solutions exist (see `solutions`)", OtherSolutionWarning, stacklevel=3)
    large = result.solved & (blocks.rate_factor.reshape(batch) > ACKERMANN_LIMIT)
    if large.any():
        where = tuple(int(i) for i in np.argwhere(large)[0])
        warnings.warn(f"{int(large.sum())} interface(s), the first at {list(where)}, with sum N cp/h beyond "
                      f"{ACKERMANN_LIMIT:g}: the film model is doubtful", HighFluxWarning, stacklevel=3)
