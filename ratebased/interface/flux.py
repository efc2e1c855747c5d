"""`interface_flux`: the interface between two bulks, solved; paths in their order, tests of the answer, errors."""
from __future__ import annotations

import warnings
from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import batch_shape, mole_fractions, pair_matrix, positive_array, positive_scalar
from ..errors import (
    ApproximationWarning,
    HighFluxWarning,
    InputError,
    NoSolutionError,
    OtherSolutionWarning,
    PropertyRangeError,
    UnstableMixtureError,
)
from ..film import krishna_standart
from ..properties.protocol import PropertyModel
from .answer import answer
from .averaging import averaging_error
from .film_rows import FilmMethod
from .newton import Iterate
from .paths import Found, find
from .problem import entries, prepare
from .records import Bulk, InterfaceFlux, InterfaceStatus

Array = NDArray[np.float64]

ACKERMANN_LIMIT = 30.0

AVERAGING_DOUBT = 0.005
"""Estimated max|dN|/max|N| of taking [Gamma] at the mean composition of each film above which a warning is given."""


def interface_flux(vapor: Bulk, liquid: Bulk, properties: PropertyModel, P: ArrayLike, *,
                   film: FilmMethod = krishna_standart, start: InterfaceFlux | None = None, derivatives: bool = False,
                   estimate: bool = False, throw: bool = True, tolerance: float = 1e-10) -> InterfaceFlux:
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
    estimate : also `error`, what the choice of one [Gamma] for each film may cost: the change of N, relative to the
        largest flux, with the 1-4-1 average of [Gamma] over interface, mean and bulk in its place (one step of Newton
        from the answer). Zero for ideal phases. Against films integrated with [Gamma] everywhere it was 0.01 to 3.5
        times the error: a flag, no bound.
    throw : False returns NaN and the `status` of a failed interface instead of raising.
    tolerance : largest error of N (relative to the largest flux), T_I (relative) and fractions, judged on the step.

    Returns
    -------
    InterfaceFlux, fluxes positive from vapour to liquid.

    Raises
    ------
    InputError : bad shapes or values; a non-condensing component in the liquid, a non-volatile one in the vapour; no
        component that passes the interface.
    NoSolutionError : no path leads to a solution (carries the last iterates z and the mask of failures).
    UnstableMixtureError : the liquid would split in two ([Gamma] with an eigenvalue <= 0).
    PropertyRangeError : T_I outside the range of the model.

    Warns
    -----
    OtherSolutionWarning : the answer lies beyond a fold from the zero-flux state: other solutions exist.
    HighFluxWarning : Ackermann exponent beyond +-30.
    ApproximationWarning : `error` (asked for by `estimate`) above 0.5 %; `film=numerical` does not help, it takes the
        same one [Gamma].

    Sources: films Krishna & Standart (1976), exact for ideal mixtures with constant coefficients, [Gamma] at the mean
    of interface and bulk otherwise; conduction Ackermann (1937).
    """
    tolerance = positive_scalar("tolerance", tolerance)
    if not callable(film):
        raise InputError(f"film: expected a film method, `krishna_standart` say, got {film!r}")
    vapor, liquid, P_array, batch = checked(vapor, liquid, properties, P)
    n = len(properties.names)
    count = int(np.prod(batch, dtype=int))
    problem = prepare(flat(vapor, batch, n), flat(liquid, batch, n), entries(properties, np.arange(count)),
                      np.broadcast_to(P_array, batch).reshape(count), film)
    found = find(problem, None if start is None else _restart(start, batch, n), tolerance)
    result, rate_factor = answer(problem, found, derivatives, batch, properties.names)
    if estimate:
        result = replace(result, error=averaging_error(problem, found, result.solved.reshape(-1)).reshape(batch))
    _report(result, found, rate_factor, throw)
    return result


# ------------------------------------------------------------------------------------------------------------- input
def checked(vapor: Bulk, liquid: Bulk, properties: PropertyModel, P: ArrayLike
             ) -> tuple[Bulk, Bulk, Array, tuple[int, ...]]:
    for label, bulk in (("vapor", vapor), ("liquid", liquid)):
        if not isinstance(bulk, Bulk):
            raise InputError(f"{label}: expected a `Bulk`, got {bulk!r}")
    if not hasattr(properties, "names"):
        raise InputError(f"properties: expected a property model, got {properties!r}")
    n = len(properties.names)
    condensable, volatile = np.asarray(properties.condensable, bool), np.asarray(properties.volatile, bool)
    if n < 2:
        raise InputError(f"properties: an interface needs two components or more, got {n}")
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
    shapes = {"P": pressure.shape}
    for label, b in zip(("vapor", "liquid"), checked):
        shapes |= {f"{label}.composition": b.composition.shape[:-1], f"{label}.temperature": b.temperature.shape,
                   f"{label}.kappa": b.kappa.shape[:-2], f"{label}.heat_transfer": b.heat_transfer.shape,
                   f"{label}.molar_density": b.molar_density.shape}
    batch = batch_shape(**shapes)
    low, high = getattr(properties, "T_range", (0.0, np.inf))
    for label, b in zip(("vapor", "liquid"), checked):
        outside = (b.temperature < low) | (b.temperature > high)
        if outside.any():
            where = tuple(int(i) for i in np.argwhere(outside)[0])
            raise PropertyRangeError(f"{label}.temperature{list(where) if where else ''} = {b.temperature[where]:.6g} "
                                     f"K: outside the range {low:g} to {high:g} K of the property model")
    return checked[0], checked[1], pressure, batch


def flat(bulk: Bulk, batch: tuple[int, ...], n: int) -> Bulk:
    def flat(value: Array, *core: int) -> Array:
        return np.ascontiguousarray(np.broadcast_to(value, (*batch, *core))).reshape(-1, *core)

    return Bulk(flat(bulk.composition, n), flat(bulk.temperature), flat(bulk.kappa, n, n), flat(bulk.heat_transfer),
                flat(bulk.molar_density))


def _restart(earlier: InterfaceFlux, batch: tuple[int, ...], n: int) -> Iterate:
    if not isinstance(earlier, InterfaceFlux):
        raise InputError(f"start: expected an `InterfaceFlux`, got {earlier!r}")
    if earlier.T_I.shape != batch or earlier.N.shape[-1] != n:
        raise InputError(f"start: expected a result of batch shape {batch} and {n} components, got "
                         f"{earlier.T_I.shape} and {earlier.N.shape[-1]}")
    z = np.concatenate((earlier.N, earlier.u, earlier.T_I[..., None]), axis=-1).reshape(-1, 2 * n + 1)
    good = np.asarray(np.isfinite(z).all(-1))
    return Iterate(z, earlier.y_I.reshape(-1, n), good, np.zeros(len(z), np.int64))


# ------------------------------------------------------------------------------------------------- errors and warnings
def _report(result: InterfaceFlux, found: Found, rate_factor: Array, throw: bool) -> None:
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
        batch = status.shape
        reached = found.reached.reshape(batch)[where]
        raise NoSolutionError(
            f"{label}: no steady interface found from zero flux, from T_L and by continuation, which came "
            f"{100 * reached:.4g} % of the way from the zero-flux state of the liquid to these bulks{count}",
            best=found.z.reshape(*batch, found.z.shape[-1]), failed=failed)
    if result.error is not None:
        doubtful = result.solved & (result.error > AVERAGING_DOUBT)
        if doubtful.any():
            where = tuple(int(i) for i in np.argwhere(doubtful)[0])
            warnings.warn(f"{int(doubtful.sum())} interface(s), the first at {list(where)}: one [Gamma] at the mean "
                          f"composition of a film may change N by {result.error[where]:.2g} of the largest flux",
                          ApproximationWarning, stacklevel=3)
    other = int((status == InterfaceStatus.OTHER_BRANCH).sum())
    if other:
        where = tuple(int(i) for i in np.argwhere(status == InterfaceStatus.OTHER_BRANCH)[0])
        warnings.warn(f"{other} interface(s), the first at {list(where)}, lie beyond a fold from the zero-flux state "
                      "of their liquid: other solutions exist (see `solutions`)", OtherSolutionWarning, stacklevel=3)
    large = result.solved & (rate_factor > ACKERMANN_LIMIT)
    if large.any():
        where = tuple(int(i) for i in np.argwhere(large)[0])
        warnings.warn(f"{int(large.sum())} interface(s), the first at {list(where)}, with sum N cp/h beyond "
                      f"{ACKERMANN_LIMIT:g}: the film model is doubtful", HighFluxWarning, stacklevel=3)
