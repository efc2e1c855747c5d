"""What a film method gives back: the fluxes, and what can be asked of the film afterwards."""
from __future__ import annotations

from dataclasses import dataclass
from enum import Enum
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import finite_array
from ..errors import InputError
from ..maxwell_stefan import face_entropy, film_matrix, pair_dissipation, reduced, resistances, solve
from ..show import Shown
from .blocks import FilmBlocks, coth_blocks, linearized_blocks
from .grid import chebyshev_points, double_exponential, interpolation
from .spectral import coth_columns, coth_function, profile_shape

if TYPE_CHECKING:
    import pandas as pd

Array = NDArray[np.float64]

REGIME_THRESHOLD = 0.01
"""A driving force, or a diffusion flux, counts as nil below this fraction of the largest of the film."""


class RateFactor(Enum):
    """Which fluxes make the rate factor of a method: all (exact), the total times x_m (linearised), none."""

    FLUXES = 0
    TOTAL = 1
    NONE = 2


@dataclass(frozen=True)
class FilmDerivatives:
    """Derivatives of the fluxes at constant bootstrap.

    dx0, dxd (..., n, n-1) : column j along e_j - e_n, the last component making up the sum, mol/(m2 s).
    dkappa (..., n, n, n) : entry ikl = dN_i/dkappa_kl, kappa_kl = kappa_lk moved together; zero for k = l; mol/m3.
    """

    dx0: Array
    dxd: Array
    dkappa: Array


def regimes(N: Array, x0: Array, xd: Array) -> NDArray[np.str_]:
    """How each component diffuses, (..., n): ordinary, osmotic, barrier or reverse; see `FilmFlux.regime`."""
    D = np.broadcast_to(x0 - xd, N.shape)
    J = N - 0.5 * (x0 + xd) * N.sum(-1, keepdims=True)
    no_force = np.abs(D) <= REGIME_THRESHOLD * np.abs(D).max(-1, keepdims=True)
    no_flux = np.abs(J) <= REGIME_THRESHOLD * np.abs(J).max(-1, keepdims=True)
    names = np.where(J * D < 0, "reverse", "ordinary")
    names = np.where(no_flux & ~no_force, "barrier", names)
    names = np.where(no_force & ~no_flux, "osmotic", names)
    return np.where(no_force & no_flux, "ordinary", names)


@dataclass(frozen=True)
class FilmFlux(Shown):
    """Fluxes through a film and the problem they answer. Fluxes are positive from face 0 to face delta.

    N : molar fluxes, mol/(m2 s), (..., n); NaN where `status` says that no solution was found.
    x0, xd : mole fractions at the faces, (..., n). kappa : m/s, (..., n, n). c_t : mol/m3, (...).
    nu, s : the bootstrap nu . N = s. gamma : [Gamma] used, (..., n-1, n-1), or None for an ideal mixture.
    iterations : linear solves and residual evaluations spent, (...). status : `FilmStatus` codes, (...).
    error : estimated max|dN|/max|N| of the method, (...), or None where it makes no estimate.
    rate : which fluxes make the rate factor [Phi], see `RateFactor`.
    inside, dissipated : of `numerical`: mole fractions at Chebyshev points, (..., p, n), and the entropy production.
    """

    N: Array
    x0: Array
    xd: Array
    kappa: Array
    c_t: Array
    nu: Array
    s: Array
    gamma: Array | None
    iterations: NDArray[np.int64]
    status: NDArray[np.int8]
    error: Array | None = None
    rate: RateFactor = RateFactor.FLUXES
    inside: Array | None = None
    dissipated: Array | None = None

    @property
    def N_t(self) -> Array:
        """Total flux, mol/(m2 s), (...)."""
        total: Array = self.N.sum(-1)
        return total

    @property
    def J(self) -> Array:
        """Diffusion fluxes at face 0 against the molar-average velocity, N - x0 N_t, mol/(m2 s), (..., n)."""
        return self.N - self.x0 * self.N_t[..., None]

    @cached_property
    def _K(self) -> Array:
        return resistances(self.kappa, self.c_t)

    @cached_property
    def _gamma(self) -> Array:
        return np.eye(self.N.shape[-1] - 1) if self.gamma is None else self.gamma

    @cached_property
    def _rate_factor(self) -> Array:
        """Z = Gamma^-1 Phi, zero where the fluxes are NaN."""
        carried = self.N
        if self.rate is RateFactor.TOTAL:
            carried = 0.5 * (self.x0 + self.xd) * self.N_t[..., None]
        carried = np.where(np.isfinite(carried), carried, 0.0)
        return solve(self._gamma, reduced(film_matrix(carried, self._K)))

    @cached_property
    def k(self) -> Array:
        """Low-flux coefficients [k] = [R]^-1 [Gamma] at face 0, m/s, (..., n-1, n-1)."""
        R = reduced(film_matrix(self.x0, resistances(self.kappa, np.ones(()))))
        return solve(R, np.broadcast_to(self._gamma, np.broadcast_shapes(R.shape, self._gamma.shape)))

    @cached_property
    def correction(self) -> Array:
        """High-flux matrix [Xi] = Z (exp Z - 1)^-1 at face 0, (..., n-1, n-1): J = c_t [k][Xi](x0 - xd)."""
        return coth_function(self._rate_factor) - 0.5 * self._rate_factor

    def profile(self, eta: ArrayLike) -> Array:
        """Mole fractions inside the film at eta = z/delta, 0..1.

        One eta gives (..., n), p of them (..., p, n). Both faces are met exactly. Raises InputError.
        """
        eta = finite_array("eta", eta)
        if eta.ndim > 1 or (eta < 0).any() or (eta > 1).any():
            raise InputError(f"eta: expected numbers from 0 to 1 on one axis, got {eta}")
        if self.inside is not None:
            x = interpolation(chebyshev_points(self.inside.shape[-2] - 1), np.atleast_1d(eta)) @ self.inside
            return x if eta.ndim else x[..., 0, :]
        D = (self.xd - self.x0)[..., :-1]
        Z = np.broadcast_to(self._rate_factor, (*self.N.shape[:-1], *self._rate_factor.shape[-2:]))
        step = profile_shape(Z, np.atleast_1d(eta), np.broadcast_to(D, self.N[..., :-1].shape))
        step = np.concatenate((step, -step.sum(-1, keepdims=True)), axis=-1)
        x = self.x0[..., None, :] + step
        return x if eta.ndim else x[..., 0, :]

    @cached_property
    def entropy_production(self) -> Array:
        """W/(m2 K), (...), never negative. Infinite where a component that moves is absent at one face.

        Ideal film with N exact: R sum N_i ln(x0_i/xd_i), the integral of the dissipation. Otherwise the pair form
        R/2 sum K_ij (x_j N_i - x_i N_j)^2/(x_i x_j) integrated over the profile; `numerical` adds to the ideal part the
        integral of the activity coefficients along its film.
        """
        if self.dissipated is not None:
            return self.dissipated
        if self.gamma is None and self.rate is RateFactor.FLUXES:
            return np.maximum(face_entropy(self.N, self.x0, self.xd), 0.0)  # below zero by rounding only
        points, weights = double_exponential()
        x = np.maximum(self.profile(points), 0.0)
        local = pair_dissipation(x, self.N[..., None, :], self._K[..., None, :, :])
        total: Array = local @ weights
        moving = self.N != 0
        absent = (((self.x0 == 0) != (self.xd == 0)) & moving).any(-1)
        return np.where(absent, np.inf, total)

    @cached_property
    def regime(self) -> NDArray[np.str_]:
        """How each component diffuses, (..., n): ordinary, osmotic, barrier or reverse (Toor 1957).

        From its driving force D_i = x0_i - xd_i and its diffusion flux J_i = N_i - x_i N_t at the mean composition,
        each nil below `REGIME_THRESHOLD` of the largest of the film. osmotic: J_i without D_i; barrier: D_i without
        J_i; reverse: J_i D_i < 0; ordinary: the rest.
        """
        return regimes(self.N, self.x0, self.xd)

    def blocks(self) -> FilmBlocks:
        """Residual and Jacobian of the film equations at N, with [Gamma] held constant; NaN for a film without N.

        Raises InputError for a method that has no film equations.
        """
        blocks = self._blocks()
        return FilmBlocks(*(self._where_solved(part) for part in vars(blocks).values()))

    def _blocks(self) -> FilmBlocks:
        """The same, with zero fluxes for a film without N."""
        if self.rate is RateFactor.NONE:
            raise InputError("blocks, derivatives: this method has no film equations; take differences of N")
        form = coth_blocks if self.rate is RateFactor.FLUXES else linearized_blocks
        return form(self._finite_N, self._K, self.x0, self.xd, self.gamma)

    @cached_property
    def _finite_N(self) -> Array:
        return np.where(np.isfinite(self.N), self.N, 0.0)

    def _where_solved(self, part: Array) -> Array:
        """`part`, batch axes first, with NaN for the films without N."""
        lost = ~np.isfinite(self.N).all(-1)
        if not lost.any():
            return part
        return np.where(lost.reshape(*lost.shape, *[1] * (part.ndim - lost.ndim)), np.nan, part)

    def derivatives(self) -> FilmDerivatives:
        """dN by x0, xd and kappa through the implicit function theorem, [Gamma] and the bootstrap held constant.

        For `krishna_standart` and `linearized`; InputError for the other methods.
        """
        blocks = self._blocks()
        n = self.N.shape[-1]
        batch = self.N.shape[:-1]
        J = np.concatenate((np.broadcast_to(blocks.dN, (*batch, n - 1, n)),
                            np.broadcast_to(self.nu, (*batch, n))[..., None, :]), axis=-2)
        right = np.zeros((*batch, n, 2 * (n - 1) + n * n))
        right[..., :-1, :n - 1] = blocks.dx0
        right[..., :-1, n - 1:2 * (n - 1)] = blocks.dxd
        right[..., :-1, 2 * (n - 1):] = self._pair_columns()
        solved = self._where_solved(-solve(J, right))
        by_K = solved[..., 2 * (n - 1):].reshape(*batch, n, n, n)
        off = ~np.eye(n, dtype=bool)
        kappa = np.where(off, self.kappa, 1.0)
        dkappa = by_K * (-self._K / kappa)[..., None, :, :]
        return FilmDerivatives(solved[..., :n - 1], solved[..., n - 1:2 * (n - 1)], dkappa)

    def _pair_columns(self) -> Array:
        """Derivative of the residual by K_kl = K_lk, (..., n-1, n*n)."""
        n = self.N.shape[-1]
        batch = self.N.shape[:-1]
        one = np.eye(n)
        pair = np.einsum("ik,jl->ijkl", one, one) + np.einsum("il,jk->ijkl", one, one)
        pair = (pair * ~np.eye(n, dtype=bool)).reshape(n * n, n, n)
        mean = np.broadcast_to(0.5 * (self.x0 + self.xd), self.N.shape)[..., None, :]
        N = self._finite_N[..., None, :]
        carried = N if self.rate is RateFactor.FLUXES else mean * N.sum(-1, keepdims=True)
        directions = solve(self._gamma[..., None, :, :], reduced(film_matrix(carried, pair)))
        D = np.broadcast_to((self.x0 - self.xd)[..., :-1], (*batch, n - 1))
        Z = np.broadcast_to(self._rate_factor, (*batch, n - 1, n - 1))
        bent: Array = self._gamma @ coth_columns(Z, directions, D)
        straight = (film_matrix(mean, pair) @ N[..., None])[..., :-1, 0]
        return np.swapaxes(straight, -1, -2) - bent

    def to_frame(self) -> pd.DataFrame:
        """One row a film and component: N, J, x0, xd, regime, status."""
        import pandas as pd

        shape = self.N.shape
        index: Any = pd.MultiIndex.from_product([range(k) for k in shape],
                                                names=[*(f"batch_{i}" for i in range(len(shape) - 1)), "component"])
        return pd.DataFrame({"N_mol_m2_s": self.N.ravel(), "J_mol_m2_s": self.J.ravel(),
                             "x0": np.broadcast_to(self.x0, shape).ravel(),
                             "xd": np.broadcast_to(self.xd, shape).ravel(), "regime": self.regime.ravel(),
                             "status": np.broadcast_to(self.status[..., None], shape).ravel()}, index=index)
