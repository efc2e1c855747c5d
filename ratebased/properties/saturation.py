"""Bubble points, dew points and the stability of a liquid, for any property model and whole batches.

The equations of both saturation points are the same with the phases exchanged: ln w_i = ln z_i + s ln K_i(T, x, y) for
every component in both phases (z the known composition, w the other one, s = +1 at a bubble point and -1 at a dew
point) and sum w = 1. They are solved by Newton's method in (ln w, T) with the model's own derivatives of ln K by
temperature and by both compositions. ln(sum w) replaces the sum, because it is nearly straight in 1/T: the start
hardly matters (Michelsen & Mollerup, Thermodynamic Models, 2nd ed. 2007, ch. 11).
"""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..arguments import finite_array, mole_fractions, positive_array
from ..errors import ConvergenceError, InputError, PropertyRangeError
from .differences import k_value_derivatives
from .protocol import Array, PropertyModel

TOLERANCE = 1e-11
MAX_ITERATIONS = 60
DEFAULT_START = 350.0


def bubble_point(properties: PropertyModel, P: ArrayLike, x: ArrayLike, T_guess: ArrayLike | None = None, *,
                 y_noncondensing: ArrayLike | None = None) -> tuple[Array, Array]:
    """Bubble temperature and the vapour in equilibrium: (T, y), K and (..., n).

    P (...) Pa; x (..., n) liquid mole fractions; `T_guess` (...) K (the middle of the model's `T_range`, else 350 K).
    A component that is not volatile is present in x and absent from y. A component that is not condensable is
    absent from x; its share of the vapour is given in `y_noncondensing` (..., n) (default none), and what the others
    bring to a sum of one is solved for: with an inert gas this is the temperature at which a liquid boils at its
    partial pressure.
    Raises `InputError` for bad arguments, `PropertyRangeError` when the solution lies outside the model's
    `T_range`, `ConvergenceError` (with the best (T, y) and the mask of failures) when the iteration fails.
    """
    return _saturation_point(properties, P, "x", x, "y_noncondensing", y_noncondensing, T_guess, sign=1.0)


def dew_point(properties: PropertyModel, P: ArrayLike, y: ArrayLike, T_guess: ArrayLike | None = None, *,
              x_nonvolatile: ArrayLike | None = None) -> tuple[Array, Array]:
    """Dew temperature and the liquid in equilibrium: (T, x), K and (..., n).

    P (...) Pa; y (..., n) vapour mole fractions, non-condensable gases included (they lower the dew point and are
    absent from x); `x_nonvolatile` (..., n) the share of non-volatile components in the liquid (default none). Errors
    as for `bubble_point`.
    """
    return _saturation_point(properties, P, "y", y, "x_nonvolatile", x_nonvolatile, T_guess, sign=-1.0)


def _saturation_point(properties: PropertyModel, P: ArrayLike, known_name: str, known: ArrayLike, share_name: str,
                      share: ArrayLike | None, T_guess: ArrayLike | None, *, sign: float) -> tuple[Array, Array]:
    n = len(properties.names)
    P, z = positive_array("P", P), mole_fractions(known_name, known, n)
    condensable, volatile = np.asarray(properties.condensable, bool), np.asarray(properties.volatile, bool)
    ordinary = condensable & volatile
    known_mask, other_mask = (condensable, volatile) if sign > 0 else (volatile, condensable)
    batch = np.broadcast_shapes(P.shape, z.shape[:-1], () if T_guess is None else np.shape(T_guess))
    absent = (z > 0) & ~known_mask
    if absent.any():
        i = int(np.argwhere(absent)[0][-1])
        raise InputError(f"{known_name}: {properties.names[i]} cannot be in this phase, its mole fraction must be 0")
    fixed = np.zeros((*batch, n))
    if share is not None:
        given = finite_array(share_name, share)
        if given.shape[-1:] != (n,) or (given < 0).any() or (given[..., ordinary | ~other_mask] > 0).any() \
                or (given.sum(-1) >= 1).any():
            raise InputError(f"{share_name}: expected {n} fractions, above zero only for components in no other "
                             f"phase, of sum below 1, got {share!r}")
        fixed = np.broadcast_to(given, fixed.shape)
    P, z = np.broadcast_to(P, batch), np.broadcast_to(z, (*batch, n))
    if (z[..., ordinary].sum(-1) <= 0).any():
        raise InputError(f"{known_name}: no component that is both volatile and condensable is present")
    low, high = getattr(properties, "T_range", (1.0, 1e5))
    start = (0.5 * (low + high) if high < 1e5 else DEFAULT_START) if T_guess is None else positive_array(
        "T_guess", T_guess)
    T = np.clip(np.broadcast_to(np.asarray(start, float), batch), low, high).copy()
    target = np.log1p(-fixed.sum(-1))
    present = ordinary & (z > 0)
    ln_z = np.log(np.where(present, z, 1.0))

    def other(ln_w: Array) -> Array:
        w = np.where(present, np.exp(ln_w), 0.0)
        w *= (np.exp(target) / w.sum(-1))[..., None]
        return w + fixed

    def phases(w: Array) -> tuple[Array, Array]:
        return (z, w) if sign > 0 else (w, z)

    def ln_k_at(T: Array, w: Array) -> Array:
        return np.log(np.where(present, properties.k_value(T, P, *phases(w)), 1.0))

    # Two substitution steps give the other phase its character before Newton sees it. Its share of one stays exact
    # in every iterate, so the model is never asked about a mixture that does not sum to one.
    ln_w = np.where(present, ln_z, 0.0)
    for _ in range(2):
        ln_w = np.where(present, ln_z + sign * ln_k_at(T, other(ln_w)), 0.0)
        ln_w -= (np.log(np.where(present, np.exp(ln_w), 0.0).sum(-1)) - target)[..., None]
    diagonal = np.eye(n)
    norm = np.full(batch, np.inf)
    for _ in range(MAX_ITERATIONS):
        w = other(ln_w)
        residual = np.where(present, ln_w - ln_z - sign * ln_k_at(T, w), 0.0)
        portions = np.where(present, np.exp(ln_w), 0.0)
        total = portions.sum(-1)
        closure = np.log(total) - target
        norm = np.maximum(np.abs(residual).max(-1), np.abs(closure))
        if (norm <= TOLERANCE).all():
            break
        slopes = k_value_derivatives(properties, T, P, *phases(w))
        by_other = slopes.vapor if sign > 0 else slopes.liquid
        jacobian = np.zeros((*batch, n + 1, n + 1))
        jacobian[..., :n, :n] = diagonal - sign * np.where(present[..., :, None] & present[..., None, :],
                                                           by_other * portions[..., None, :], 0.0)
        jacobian[..., :n, n] = np.where(present, -sign * slopes.temperature, 0.0)
        jacobian[..., n, :n] = portions / total[..., None]
        step = np.linalg.solve(jacobian, -np.concatenate([residual, closure[..., None]], -1)[..., None])[..., 0]
        # ln w may jump by the ratio of vapour pressures; T is held to a tenth of itself, ln w follows in proportion.
        size = np.maximum(np.abs(step[..., n]) / (0.1 * T), np.abs(step[..., :n]).max(-1) / 3.0)
        scale = 1.0 / np.maximum(1.0, size)
        ln_w = ln_w + scale[..., None] * step[..., :n]
        T = np.clip(T + scale * step[..., n], low, high)
    w = other(ln_w)
    failed = norm > TOLERANCE
    if failed.any():
        where = tuple(int(i) for i in np.argwhere(failed)[0])
        label = "bubble" if sign > 0 else "dew"
        at_end = failed & ((T <= low) | (T >= high))
        if at_end.any():
            where = tuple(int(i) for i in np.argwhere(at_end)[0])
            raise PropertyRangeError(
                f"{label} point{list(where) if where else ''} at P = {P[where]:.6g} Pa, {known_name} = "
                f"{np.array2string(z[where], precision=6)}: outside the property model's range {low:g} to {high:g} K")
        raise ConvergenceError(f"{label} point{list(where) if where else ''}: no solution after {MAX_ITERATIONS} "
                               f"iterations, residual {norm[where]:.2g} at T = {T[where]:.6g} K",
                               best=(T, w), residual=norm, failed=failed)
    return T, w


def smallest_gamma_eigenvalue(properties: PropertyModel, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
    """Smallest real part among the eigenvalues of the liquid's [Gamma], (...).

    Positive in a stable or metastable liquid, zero on the spinodal, negative where the liquid must split in two
    (Taylor & Krishna, Multicomponent Mass Transfer, 1993, section 3.3). Components absent from x take no part: their
    eigenvalue is one by construction.
    """
    x = mole_fractions("x", x, len(properties.names))
    gamma = properties.thermodynamic_factor(positive_array("T", T), positive_array("P", P), x)
    if gamma.shape[-1] == 0:
        return np.ones(gamma.shape[:-2])
    smallest: Array = np.linalg.eigvals(gamma).real.min(-1)
    return smallest
