"""The flux of a component in parts: own gradient, non-ideality, pull of each other component, bulk flow, high flux."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..maxwell_stefan import composition_matrix

Array = NDArray[np.float64]


@dataclass(frozen=True)
class FluxSplit:
    """Parts of the flux through one film, mol/(m2 s), positive from face 0 to face delta; they sum to N exactly.

    own : D_i/Kbar_i, diffusion down the own gradient after Wilke. nonideality : (([Gamma] - I)D)_i/Kbar_i. pull :
    (..., n, n), row i, column j: what the motion of j does to i beyond Wilke's rule; zero for equal diffusivities.
    bulk_flow : x_i N_t. high_flux : ([Gamma](C - I)D)_i/Kbar_i.
    """

    own: Array
    nonideality: Array
    pull: Array
    bulk_flow: Array
    high_flux: Array

    @property
    def total(self) -> Array:
        """The flux N, (..., n)."""
        return np.asarray(self.own + self.nonideality + self.pull.sum(-1) + self.bulk_flow + self.high_flux)


def flux_split(N: Array, x0: Array, xd: Array, K: Array, gamma: Array | None = None) -> FluxSplit:
    """Split the fluxes of a film at its mean composition x_m = (x_0 + x_delta)/2, D = x_0 - x_delta.

    N_i = D_i/Kbar_i + (([Gamma] - I)D)_i/Kbar_i + sum_j x_i (K_ij/Kbar_i - 1)(J_j + x_j J_i/(1 - x_i)) + x_i N_t
    + ([Gamma](C - I)D)_i/Kbar_i, Kbar_i = sum_(j != i) x_j K_ij/(1 - x_i), J = N - x_m N_t, C = (Z/2) coth(Z/2).
    N (..., n); x0, xd (..., n); K = 1/(c kappa) (..., n, n) with zero diagonal; gamma (..., n-1, n-1) at x_m or None.
    Exact for the film with constant [Gamma]; no part depends on the order of the components. [Gamma] C D is taken as
    M(x_m) N, which it equals in a solved film. A component that is all there is (x_m = 1) has no Kbar: its parts but
    the bulk flow are zero.
    """
    n = N.shape[-1]
    x = 0.5 * (x0 + xd)
    D = x0 - xd
    lonely = x >= 1.0
    Kbar = (K @ x[..., None])[..., 0] / np.where(lonely, 1.0, 1.0 - x)
    usable = Kbar > 0
    per = np.where(usable, 1.0 / np.where(usable, Kbar, 1.0), 0.0)
    if gamma is None:
        GD = D
    else:
        first = np.einsum("...ij,...j->...i", gamma, D[..., :-1])
        GD = np.concatenate((first, -first.sum(-1, keepdims=True)), -1)
    curved = (composition_matrix(x, K) @ N[..., None])[..., 0]
    total = N.sum(-1, keepdims=True)
    J = N - x * total
    assumed = x[..., None, :] * (J / np.where(lonely, 1.0, 1.0 - x))[..., None]
    pull = x[..., None] * (K * per[..., None] - 1.0) * (J[..., None, :] + assumed)
    pull = np.where(usable[..., None] & ~np.eye(n, dtype=bool), pull, 0.0)
    return FluxSplit(D * per, (GD - D) * per, pull, x * total, (curved - GD) * per)
