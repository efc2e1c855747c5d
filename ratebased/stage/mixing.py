"""Mixing of the liquid along its path over a tray, from what the froth does at the outlet.

With w the component flows of the liquid and R(w) what the whole tray would give it at the state w, pools in series obey
w_(k-1) = w_k - R(w_k)/p. Linearised at the leaving liquid, R_k = R_p + [B](w_k - w_p), the mean over the tray is
f(-[B]) R_p with f(z) = ((1 + z/p)^p - 1)/z; plug flow and eddy diffusion differ in f alone. With constant flows and the
liquid on its bubble line this is [E_MV] = [E] f([S][E]) of the textbooks (Gerster et al., AIChE Bubble-Tray Design
Manual 1958; matrix form, Krishna, Martinez, Sreedhar & Standart, Trans. IChemE 55 (1977) 178); here flows may
change and components may be masked.
"""
from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from ..arguments import positive_array
from ..equipment.protocol import Array
from ..errors import ConvergenceError, InputError

Complex = NDArray[np.complex128]

SMALL = 1e-3
"""Below this |z| the factors are taken from their series (three terms: relative error below 1e-10)."""

PLUG_POOLS = 40.0
"""Pools that stand for plug flow where it has to be marched."""


class LiquidMixing(Protocol):
    """How the liquid is mixed along its path.

    `factor` is f(z), `factor_slope` (f(z) - 1)/z. `stretch(share)`: the mixing of a part of the path, share (...) of
    it, None where the path cannot be cut (its parts mix with each other). `pools`: how many pools mix alike.
    """

    def factor(self, z: Complex) -> Complex: ...

    def factor_slope(self, z: Complex) -> Complex: ...

    def taken(self, index: NDArray[np.int64]) -> LiquidMixing:
        """The mixing of some trays of a batch."""
        ...

    def stretch(self, share: Array) -> LiquidMixing | None: ...

    @property
    def pools(self) -> Array: ...


@dataclass(frozen=True)
class WellMixed:
    """One pool: f = 1."""

    def factor(self, z: Complex) -> Complex:
        return np.ones_like(z)

    def factor_slope(self, z: Complex) -> Complex:
        return np.zeros_like(z)

    def taken(self, index: NDArray[np.int64]) -> LiquidMixing:
        return self

    def stretch(self, share: Array) -> LiquidMixing | None:
        return None

    @property
    def pools(self) -> Array:
        return np.ones(())


@dataclass(frozen=True)
class Pools:
    """`count` equal pools in series, a real number of one or more, (...): f = ((1 + z/p)^p - 1)/z."""

    count: Array

    def __post_init__(self) -> None:
        count = positive_array("count", self.count)
        if (count < 1 - 1e-9).any():
            raise InputError(f"count = {count.min()}: expected one pool or more")

    def factor(self, z: Complex) -> Complex:
        p = np.asarray(self.count, float)[..., None]
        series = 1.0 + z * (1.0 - 1.0 / p) / 2.0 * (1.0 + z * (1.0 - 2.0 / p) / 3.0)
        return _quotient(z, (1.0 + z / p) ** p - 1.0, series)

    def factor_slope(self, z: Complex) -> Complex:
        p = np.asarray(self.count, float)[..., None]
        q = (1.0 - 1.0 / p) / 2.0
        return _quotient(z, self.factor(z) - 1.0,
                         q * (1.0 + z * (1.0 - 2.0 / p) / 3.0 * (1.0 + z * (1.0 - 3.0 / p) / 4.0)))

    def taken(self, index: NDArray[np.int64]) -> LiquidMixing:
        return self if np.ndim(self.count) == 0 else Pools(np.asarray(self.count)[index])

    def stretch(self, share: Array) -> LiquidMixing | None:
        return Pools(np.where(share > 0, self.count * share, 1.0))

    @property
    def pools(self) -> Array:
        return np.asarray(self.count, float)


@dataclass(frozen=True)
class PlugFlow:
    """No mixing along the path, vapour mixed between trays (case 1 of Lewis 1936): f = (e^z - 1)/z."""

    def factor(self, z: Complex) -> Complex:
        return _quotient(z, np.expm1(z), 1.0 + z / 2.0 * (1.0 + z / 3.0))

    def factor_slope(self, z: Complex) -> Complex:
        return _quotient(z, self.factor(z) - 1.0, 0.5 * (1.0 + z / 3.0 * (1.0 + z / 4.0)))

    def taken(self, index: NDArray[np.int64]) -> LiquidMixing:
        return self

    def stretch(self, share: Array) -> LiquidMixing | None:
        return self

    @property
    def pools(self) -> Array:
        return np.asarray(PLUG_POOLS)


@dataclass(frozen=True)
class EddyDiffusion:
    """Eddy diffusion with the Peclet number of the liquid path, (...), positive (Gerster et al. 1958)."""

    peclet: Array

    def __post_init__(self) -> None:
        positive_array("peclet", self.peclet)

    def factor(self, z: Complex) -> Complex:
        Pe = np.asarray(self.peclet, float)[..., None]
        zero = z == 0
        w = np.where(zero, 1.0, z)
        b = 2.0 * w / (1.0 + np.sqrt(1.0 + 4.0 * w / Pe))
        both = b + Pe
        both = np.where(np.abs(both + b) < 1e-9 * Pe, both * (1.0 + 1e-9), both)  # removable: b = -Pe/2
        f = -np.expm1(-both) / (both * (1.0 + both / b)) + np.expm1(b) / (b * (1.0 + b / both))
        return np.where(zero, 1.0, f)

    def factor_slope(self, z: Complex) -> Complex:
        Pe = np.asarray(self.peclet, float)[..., None]
        small = np.abs(z) < 1e-5
        return np.where(small, self._first(Pe), (self.factor(z) - 1.0) / np.where(small, 1.0, z))

    def taken(self, index: NDArray[np.int64]) -> LiquidMixing:
        return self if np.ndim(self.peclet) == 0 else EddyDiffusion(np.asarray(self.peclet)[index])

    def stretch(self, share: Array) -> LiquidMixing | None:
        return None

    @property
    def pools(self) -> Array:
        return np.asarray((np.asarray(self.peclet, float) + 2.0) / 2.0)

    @staticmethod
    def _first(Pe: Array) -> Array:
        """f'(0) = 1/2 - 1/Pe + (1 - exp(-Pe))/Pe^2: a half in plug flow, nil for a well-mixed liquid."""
        small = Pe < 1e-2
        safe = np.where(small, 1.0, Pe)
        return np.where(small, Pe / 6.0 - Pe**2 / 24.0, 0.5 - 1.0 / safe - np.expm1(-safe) / safe**2)


def mixed_tray(mixing: LiquidMixing, transfer: Array, slope: Array) -> tuple[Array, Array]:
    """Mean transfer over a tray and mean departure of its liquid from the leaving one.

    transfer: R_p at the leaving liquid, (..., m). slope: [B] = dR/dw there, (..., m, m). Returns f(-[B]) R_p and the
    mean of w - w_p, both (..., m); not finite where the response grows beyond all bounds along the path. Raises
    `ConvergenceError` where a real number of pools has no real answer.
    """
    w, U = np.linalg.eig(-slope)
    poor = np.linalg.cond(U) > 1e8
    if poor.any():
        # Nearly defective: a relative change of 1e-8 moves the eigenvalues apart and the answer by about as much.
        m = slope.shape[-1]
        shift = 1e-8 * np.abs(slope).max((-2, -1), keepdims=True) * np.diag(np.arange(1.0, m + 1.0))
        again, vectors = np.linalg.eig(-slope + shift)
        w, U = np.where(poor[..., None], again, w), np.where(poor[..., None, None], vectors, U)
    w, U = w.astype(complex), U.astype(complex)
    r = np.linalg.solve(U, transfer.astype(complex)[..., None])[..., 0]
    with np.errstate(over="ignore", invalid="ignore"):  # a path too steep for a linear response: not finite, not hidden
        complete = np.einsum("...ij,...j->...i", U, mixing.factor(w) * r)
        departure = -np.einsum("...ij,...j->...i", U, mixing.factor_slope(w) * r).real
    mean = complete.real
    if (np.abs(complete.imag) > 1e-6 * np.abs(complete).max(-1, keepdims=True)).any():
        raise ConvergenceError("mixing of the liquid: a real number of pools has no real answer for a transfer that "
                               "falls off so steeply along the path; use whole pools or plug flow")
    # mean(w - w_p) = (f(-B) - I) B^-1 R_p, and (f(z) - 1)/z at z = -B carries the opposite sign
    return mean, departure


def _quotient(z: Complex, numerator: Complex, series: Complex) -> Complex:
    small = np.abs(z) < SMALL
    return np.where(small, series, numerator / np.where(small, 1.0, z))
