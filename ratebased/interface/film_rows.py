"""Film equations of any film method as rows with a Jacobian: its own blocks, or differences of its N."""
from __future__ import annotations

import inspect
import warnings
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..bootstrap import TotalFlux
from ..errors import RateBasedWarning
from ..film import FilmFlux, krishna_standart, linearized
from ..film.blocks import FilmBlocks, coth_blocks, linearized_blocks

Array = NDArray[np.float64]
FilmMethod = Callable[..., FilmFlux]
"""A film function of the package's one signature, f(x0, xd, kappa, c_t, bootstrap, *, gamma=None)."""
FilmRows = Callable[[Array, Array, Array, Array, Array | None, Array | None], FilmBlocks]
"""(N, K, x0, xd, gamma, gamma_slope) -> `FilmBlocks`."""

STEP = 1e-5


def rows_of(film: FilmMethod) -> FilmRows:
    """The rows of a film method: coth form, its linearised form, or differences."""
    if film is krishna_standart:
        return coth_blocks
    if film is linearized:
        return linearized_blocks
    return DifferencedRows(film)


@dataclass(frozen=True)
class DifferencedRows:
    """Rows (N_i - f_i) Kbar, f the fluxes of the method at the total flux of N, Kbar the mean resistance of the film.

    The method is called once for the point and all its neighbours: mole numbers of both faces (forward, second order,
    never off the simplex) and the total flux (central).
    """

    film: FilmMethod

    def __call__(self, N: Array, K: Array, x0: Array, xd: Array, gamma: Array | None,
                 gamma_slope: Array | None) -> FilmBlocks:
        n = N.shape[-1]
        batch = np.broadcast_shapes(N.shape[:-1], K.shape[:-2], x0.shape[:-1], xd.shape[:-1],
                                    () if gamma is None else gamma.shape[:-2])
        K = np.broadcast_to(K, (*batch, n, n))
        faces = [_on_simplex(np.broadcast_to(x, (*batch, n))) for x in (x0, xd)]
        N_t = np.broadcast_to(N.sum(-1), batch)
        mean_K = K.sum((-1, -2)) / (n * (n - 1))
        step_N = STEP / mean_K
        states, totals = [faces, faces, faces], [N_t, N_t + step_N, N_t - step_N]
        moves: list[tuple[int, int, float]] = []
        for face in (0, 1):
            for j in range(n):
                for length in (STEP, 2.0 * STEP):
                    moves.append((face, j, length))
                    moved = faces[face] / (1.0 + length)
                    moved[..., j] += length / (1.0 + length)
                    states.append([moved, faces[1]] if face == 0 else [faces[0], moved])
                    totals.append(N_t)
        gammas = None
        if gamma is not None:
            gammas = np.stack([gamma] * 3 + [gamma + self._drift(faces[face], gamma_slope, j, length)
                                             for face, j, length in moves])
        with np.errstate(divide="ignore"):
            kappa = np.where(K > 0, 1.0 / K, 1.0)
        f = self._fluxes(np.stack([s[0] for s in states]), np.stack([s[1] for s in states]), kappa,
                         TotalFlux(np.stack(totals)), gammas)
        weight = mean_K[..., None]
        by_total = (f[1] - f[2]) / (2.0 * step_N)[..., None]
        dN = (np.eye(n) - by_total[..., None])[..., :-1, :] * weight[..., None]
        by_mole = (-3.0 * f[0] + 4.0 * f[3::2] - f[4::2]) / (2.0 * STEP)
        slopes = []
        for face in (0, 1):
            columns = by_mole[face * n:(face + 1) * n]
            slopes.append(-np.moveaxis(columns[:-1] - columns[-1], 0, -1)[..., :-1, :] * weight[..., None])
        size = (np.abs(N) + np.abs(f[0])).max(-1) * mean_K
        return FilmBlocks(((N - f[0]) * weight)[..., :-1], dN, slopes[0], slopes[1], size)

    @staticmethod
    def _drift(x: Array, slope: Array | None, j: int, length: float) -> Array | float:
        """Change of [Gamma], taken at the mean of the faces, when `length` moles of j join one face."""
        if slope is None:
            return 0.0
        along = -(x[..., :-1, None, None] * slope).sum(-3)
        if j < x.shape[-1] - 1:
            along = along + slope[..., j, :, :]
        return np.asarray(0.5 * length * along)

    def _fluxes(self, x0: Array, xd: Array, kappa: Array, bootstrap: TotalFlux, gamma: Array | None) -> Array:
        options: dict[str, Any] = {} if gamma is None else {"gamma": gamma}
        if "throw" in inspect.signature(self.film).parameters:
            options["throw"] = False
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", RateBasedWarning)     # about iterates, not about the answer
            N: Any = self.film(x0, xd, kappa, np.ones(()), bootstrap, **options).N
        return np.array(N, dtype=np.float64)


def _on_simplex(x: Array) -> Array:
    x = np.maximum(x, 0.0)
    return x / x.sum(-1, keepdims=True)
