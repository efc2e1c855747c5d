"""Bubble points, dew points and the stability of a liquid, for any property model and whole batches.

The equations of both saturation points are the same with the phases exchanged: ln w_i = ln z_i + s ln K_i(T, x, y) for
every component in both phases (z the known composition, w the other one, s = +1 at a bubble point and -1 at a dew
point) and sum w = 1. They are solved by Newton's method in (ln w, T) with the model's own derivatives of ln K by
temperature and by both compositions. ln(sum w) replaces the sum, because it is nearly straight in 1/T: the start
hardly matters (Michelsen & Mollerup, Thermodynamic Models, 2nd ed. 2007, ch. 11).
"""
from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from ..arguments import batch_shape, finite_array, mole_fractions, positive_array
from ..errors import ConvergenceError, InputError, PropertyRangeError
from .differences import k_value_derivatives
from .protocol import Array, Mask, PropertyModel

TOLERANCE = 1e-11
MAX_ITERATIONS = 60
DEFAULT_START = 350.0
SMALLEST_STEP = 1e-3
SMALLEST_FRACTION = 1e-30
RESTARTS = (0.25, 0.75, 0.1, 0.9)
UNLIMITED = (1.0, 1e5)


def bubble_point(properties: PropertyModel, P: ArrayLike, x: ArrayLike, T_guess: ArrayLike | None = None, *,
                 y_noncondensing: ArrayLike | None = None, y_guess: ArrayLike | None = None) -> tuple[Array, Array]:
    """Bubble temperature and the vapour in equilibrium: (T, y), K and (..., n).

    P (...) Pa; x (..., n) liquid mole fractions; `T_guess` (...) K (the middle of the model's `T_range`, else 350 K),
    `y_guess` (..., n) (else two substitutions from x).
    A component that is not volatile is present in x and absent from y. A component that is not condensable is
    absent from x; its share of the vapour is given in `y_noncondensing` (..., n) (default none), and what the others
    bring to a sum of one is solved for: with an inert gas this is the temperature at which a liquid boils at its
    partial pressure.
    Raises `InputError` for bad arguments, `PropertyRangeError` when the solution lies outside the model's
    `T_range`, `ConvergenceError` (with the best (T, y) and the mask of failures) when the iteration fails.
    """
    return _saturation_point(properties, P, "x", x, "y_noncondensing", y_noncondensing, T_guess, y_guess,
                             sign=1.0)


def dew_point(properties: PropertyModel, P: ArrayLike, y: ArrayLike, T_guess: ArrayLike | None = None, *,
              x_nonvolatile: ArrayLike | None = None, x_guess: ArrayLike | None = None) -> tuple[Array, Array]:
    """Dew temperature and the liquid in equilibrium: (T, x), K and (..., n).

    P (...) Pa; y (..., n) vapour mole fractions, non-condensable gases included (they lower the dew point and are
    absent from x); `x_nonvolatile` (..., n) the share of non-volatile components in the liquid (default none). Errors
    as for `bubble_point`.
    """
    return _saturation_point(properties, P, "y", y, "x_nonvolatile", x_nonvolatile, T_guess, x_guess,
                             sign=-1.0)


def _saturation_point(properties: PropertyModel, P: ArrayLike, known_name: str, known: ArrayLike, share_name: str,
                      share: ArrayLike | None, T_guess: ArrayLike | None, w_guess: ArrayLike | None, *,
                      sign: float) -> tuple[Array, Array]:
    n = len(properties.names)
    P, z = positive_array("P", P), mole_fractions(known_name, known, n)
    condensable, volatile = np.asarray(properties.condensable, bool), np.asarray(properties.volatile, bool)
    ordinary = condensable & volatile
    known_mask, other_mask = (condensable, volatile) if sign > 0 else (volatile, condensable)
    guess = None if T_guess is None else positive_array("T_guess", T_guess)
    batch = batch_shape(P=P.shape, T_guess=() if guess is None else guess.shape, **{known_name: z.shape[:-1]})
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
    low, high = getattr(properties, "T_range", UNLIMITED)
    bounded = (low, high) != UNLIMITED
    middle = 0.5 * (low + high) if bounded else DEFAULT_START
    start = np.clip(np.broadcast_to(middle if guess is None else guess, batch), low, high).reshape(-1)
    problem = _Problem(properties, P.reshape(-1), z.reshape(-1, n), fixed.reshape(-1, n),
                       (ordinary & (z > 0)).reshape(-1, n), sign, (low, high))
    first = None if w_guess is None else np.broadcast_to(finite_array("guess", w_guess), (*batch, n)).reshape(-1, n)
    T, w, norm = problem.solve(start, first)
    # Strongly non-ideal liquids can trap a descent; another start almost always leads out.
    for share_of_range in RESTARTS:
        failed = norm > TOLERANCE
        if not failed.any():
            break
        restart = low + share_of_range * (high - low) if bounded else DEFAULT_START * (0.75 + 0.5 * share_of_range)
        again = problem.at(failed).solve(np.full(int(failed.sum()), restart))
        better = again[2] < norm[failed]
        T[failed], norm[failed] = np.where(better, again[0], T[failed]), np.where(better, again[2], norm[failed])
        w[failed] = np.where(better[:, None], again[1], w[failed])
    T, w, norm = T.reshape(batch), w.reshape(*batch, n), norm.reshape(batch)
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
    return T[()], w


@dataclass(frozen=True)
class _Problem:
    """The equations of a flat batch: z known, w wanted; `fixed` the share of w that takes no part in equilibrium."""

    properties: PropertyModel
    P: Array
    z: Array
    fixed: Array
    present: Mask
    sign: float
    bounds: tuple[float, float]

    def at(self, chosen: Mask) -> _Problem:
        """The problems of a mask over the batch; a model that varies over the batch gives the model of some entries."""
        own = getattr(self.properties, "entries", None)
        model = self.properties if own is None else own(np.flatnonzero(chosen))
        return replace(self, properties=model, P=self.P[chosen], z=self.z[chosen], fixed=self.fixed[chosen],
                       present=self.present[chosen])

    def _composition(self, ln_w: Array) -> Array:
        """w from its logarithms, scaled so that it sums to one in every iterate: no model sees anything else."""
        w = np.where(self.present, np.exp(ln_w), 0.0)
        w *= ((1.0 - self.fixed.sum(-1)) / w.sum(-1))[..., None]
        return w + self.fixed

    def _phases(self, w: Array) -> tuple[Array, Array]:
        return (self.z, w) if self.sign > 0 else (w, self.z)

    def _ln_k(self, T: Array, w: Array) -> Array:
        K = np.where(self.present, self.properties.k_value(T, self.P, *self._phases(w)), 1.0)
        if not (K > 0).all():
            where = tuple(int(i) for i in np.argwhere(~(K > 0))[0])
            raise InputError(f"properties: K of {self.properties.names[where[-1]]} is {K[where]} at "
                             f"{T[where[:-1]]:.6g} K, expected a number above zero for a component in both phases")
        return np.log(K)

    def solve(self, T: Array, w: Array | None = None) -> tuple[Array, Array, Array]:
        """Newton with a step that is halved until the residual falls: T, w and the largest residual, (...)."""
        present, sign = self.present, self.sign
        low, high = self.bounds
        n = self.z.shape[-1]
        ln_z = np.log(np.where(present, self.z, 1.0))
        target = np.log1p(-self.fixed.sum(-1))
        ln_w = ln_z if w is None else np.log(np.where(present, np.maximum(w, SMALLEST_FRACTION), 1.0))
        for _ in range(2 if w is None else 0):  # substitutions give the other phase its character
            ln_w = np.where(present, ln_z + sign * self._ln_k(T, self._composition(ln_w)), 0.0)
            ln_w -= (np.log(np.where(present, np.exp(ln_w), 0.0).sum(-1)) - target)[..., None]
        T_trial, ln_w_trial = T, ln_w
        merit: Array = np.full(T.shape, np.inf)
        scale: Array = np.ones(T.shape)
        residual = np.zeros((*T.shape, n + 1))
        for _ in range(MAX_ITERATIONS):
            portions = np.where(present, np.exp(ln_w_trial), 0.0)
            trial = np.concatenate([
                np.where(present, ln_w_trial - ln_z - sign * self._ln_k(T_trial, self._composition(ln_w_trial)), 0.0),
                (np.log(portions.sum(-1)) - target)[..., None]], -1)
            trial_merit = (trial ** 2).sum(-1)
            accepted = (trial_merit < merit) | (trial_merit <= TOLERANCE ** 2) | (scale < SMALLEST_STEP)
            T = np.where(accepted, T_trial, T)
            merit = np.asarray(np.where(accepted, trial_merit, merit), float)
            ln_w = np.where(accepted[..., None], ln_w_trial, ln_w)
            residual = np.where(accepted[..., None], trial, residual)
            if (np.abs(residual).max(-1) <= TOLERANCE).all():
                break
            step = self._newton_step(T, ln_w, residual)
            # ln w may jump by the ratio of vapour pressures; T is held to a tenth of itself, ln w follows suit.
            size = np.maximum(np.abs(step[..., n]) / (0.1 * T), np.abs(step[..., :n]).max(-1) / 3.0)
            scale = np.where(accepted, 1.0 / np.maximum(1.0, size), 0.5 * scale).astype(float)
            ln_w_trial = ln_w + scale[..., None] * step[..., :n]
            T_trial = np.clip(T + scale * step[..., n], low, high)
        return T, self._composition(ln_w), np.abs(residual).max(-1)

    def _newton_step(self, T: Array, ln_w: Array, residual: Array) -> Array:
        n = self.z.shape[-1]
        portions = np.where(self.present, np.exp(ln_w), 0.0)
        slopes = k_value_derivatives(self.properties, T, self.P, *self._phases(self._composition(ln_w)))
        by_other = slopes.vapor if self.sign > 0 else slopes.liquid
        jacobian = np.zeros((*T.shape, n + 1, n + 1))
        pairs = self.present[..., :, None] & self.present[..., None, :]
        jacobian[..., :n, :n] = np.eye(n) - self.sign * np.where(pairs, by_other * portions[..., None, :], 0.0)
        jacobian[..., :n, n] = np.where(self.present, -self.sign * slopes.temperature, 0.0)
        jacobian[..., n, :n] = portions / portions.sum(-1, keepdims=True)
        try:
            step = np.linalg.solve(jacobian, -residual[..., None])
        except np.linalg.LinAlgError:  # a state on the spinodal: the shortest step that reduces the residual
            step = np.linalg.pinv(jacobian) @ -residual[..., None]
        return np.asarray(step[..., 0], dtype=np.float64)


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
