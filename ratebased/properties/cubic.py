"""Cubic equations of state: fugacity coefficients of either phase, all stages at once.

P = R T/(v - b) - a/((v + d1 b)(v + d2 b)), a and b by the van der Waals mixing rules,

    ln phi_i = b_i/b (Z - 1) - ln(Z - B) - A/(B (d1 - d2)) (2 sum_j z_j a_ij/a - b_i/b) ln((Z + d1 B)/(Z + d2 B)).

Where the isotherm has one real root, and it belongs to the other phase, the missing root is continued by the real part
of the complex pair. It meets the true root where that one ends, so an iteration can cross the gap; it is no state of
the mixture, and `exists` tells the two apart.
"""
from __future__ import annotations

from dataclasses import dataclass
from enum import Enum

import numpy as np
from numpy.typing import ArrayLike

from ..arguments import component_vector
from ..errors import InputError
from .activity.parameters import pair_coefficients
from .jet import Jet, common_state, temperature
from .protocol import GAS_CONSTANT, Array, Mask


class Phase(Enum):
    """Which root of the equation."""

    LIQUID = "liquid"
    VAPOR = "vapor"


@dataclass(frozen=True)
class CubicForm:
    """Constants of one equation: d1, d2, a = omega_a R2 Tc2/Pc (1 + m (1 - Tr^1/2))2, b = omega_b R Tc/Pc.

    m = m0 + m1 omega + m2 omega2. shift_scale, shift_centre: c = shift_scale R Tc/Pc (shift_centre - Z_RA) is taken
    from the liquid volume (Peneloux, Rauzy & Freze, Fluid Phase Equilibria 8 (1982) 7), Z_RA = 0.29056 - 0.08775 omega.
    """

    d1: float
    d2: float
    omega_a: float
    omega_b: float
    m: tuple[float, float, float]
    shift_scale: float
    shift_centre: float
    source: str


def _peng_robinson() -> CubicForm:
    """The constants follow from the critical point: both derivatives of P by v vanish there."""
    eta = 1.0 / (1.0 + np.cbrt(4.0 - 2.0 * np.sqrt(2.0)) + np.cbrt(4.0 + 2.0 * np.sqrt(2.0)))
    root = float(np.sqrt(2.0))
    return CubicForm(1.0 + root, 1.0 - root, float((8.0 + 40.0 * eta) / (49.0 - 37.0 * eta)),
                     float(eta / (3.0 + eta)), (0.37464, 1.54226, -0.26992), 0.50033, 0.25969,
                     "Peng & Robinson, Ind. Eng. Chem. Fundam. 15 (1976) 59; volume shift of Jhaveri & Youngren, "
                     "SPE Reserv. Eng. 3 (1988) 1033")


PENG_ROBINSON = _peng_robinson()
SOAVE = CubicForm(1.0, 0.0, float(1.0 / (9.0 * (np.cbrt(2.0) - 1.0))), float((np.cbrt(2.0) - 1.0) / 3.0),
                  (0.480, 1.574, -0.176), 0.40768, 0.29441, "Soave, Chem. Eng. Sci. 27 (1972) 1197")


class CubicEquation:
    """One cubic equation of state for n components.

    critical_temperature K, critical_pressure Pa, acentric_factor: (n,). k_ij: binary interaction parameters, (n, n),
    symmetric, zero diagonal, or one number for all pairs.
    Raises `InputError` for a wrong shape, a critical constant not above zero, k_ij that is not symmetric.
    """

    def __init__(self, form: CubicForm, critical_temperature: ArrayLike, critical_pressure: ArrayLike,
                 acentric_factor: ArrayLike, k_ij: ArrayLike = 0.0) -> None:
        self.form = form
        n = len(np.atleast_1d(np.asarray(critical_temperature, float)))
        self.size = n
        self._Tc = component_vector("critical_temperature", critical_temperature, n, positive=True)
        Pc = component_vector("critical_pressure", critical_pressure, n, positive=True)
        omega = component_vector("acentric_factor", acentric_factor, n)
        k = pair_coefficients("k_ij", k_ij, n)
        if not np.allclose(k, k.T, rtol=0.0, atol=1e-12):
            i, j = (int(index) for index in np.argwhere(np.abs(k - k.T) > 1e-12)[0])
            raise InputError(f"k_ij[{i}, {j}] = {k[i, j]} differs from k_ij[{j}, {i}] = {k[j, i]}")
        self._attraction = 1.0 - k
        size = GAS_CONSTANT * self._Tc / Pc
        self._root_a = np.sqrt(form.omega_a * GAS_CONSTANT * self._Tc * size)
        self._b = form.omega_b * size
        self._m = form.m[0] + form.m[1] * omega + form.m[2] * omega ** 2
        self.volume_shift = form.shift_scale * size * (form.shift_centre - (0.29056 - 0.08775 * omega))

    # parts ------------------------------------------------------------------------------------------------------

    def _mixture(self, T: Array, P: Array, z: Array, order: int) -> tuple[Jet, Jet, Jet, Jet, Jet, Array]:
        """A, B, sum_j z_j a_ij, a, sqrt(a_i) as jets, and b as an array."""
        Tj = temperature(T[..., None], order)
        root = ((Tj * (1.0 / self._Tc)) ** 0.5 * -self._m + (1.0 + self._m)) * self._root_a
        root = root * np.sign(root.value)
        cross = root * ((root * z) @ self._attraction)
        a = (cross * z).sum(-1)
        b = z @ self._b
        RT = temperature(T, order) * GAS_CONSTANT
        A = a * P / (RT * RT)
        B = P * b / RT
        return A, B, cross, a, root, b

    def _coefficients(self, A: Jet | Array, B: Jet | Array) -> tuple[Jet | Array, Jet | Array, Jet | Array]:
        """c2, c1, c0 of Z3 + c2 Z2 + c1 Z + c0 = 0."""
        u, w = self.form.d1 + self.form.d2, self.form.d1 * self.form.d2
        BB = B * B
        return B * (u - 1.0) - 1.0, A + BB * (w - u) - B * u, -(A * B + BB * w + BB * B * w)

    def _real_roots(self, A: Array, B: Array) -> tuple[Array, Array, Mask]:
        """Smallest real root above B, largest real root, and whether there are three, (...)."""
        c2, c1, c0 = (np.asarray(c) for c in self._coefficients(A, B))
        p = c1 - c2 * c2 / 3.0
        q = 2.0 * c2 ** 3 / 27.0 - c2 * c1 / 3.0 + c0
        three = q * q / 4.0 + p ** 3 / 27.0 < 0
        radius = np.sqrt(np.where(three, -p / 3.0, 1.0))
        angle = np.arccos(np.clip(np.where(three, -q / (2.0 * radius ** 3), 1.0), -1.0, 1.0)) / 3.0
        root = np.sqrt(np.where(three, 0.0, q * q / 4.0 + p ** 3 / 27.0))
        # of the two cube roots take the one that does not cancel, the other follows from their product -p/3
        big = np.cbrt(-q / 2.0 - np.copysign(root, q))
        single = big - p / (3.0 * np.where(big == 0.0, 1.0, big)) - c2 / 3.0
        high = np.where(three, 2.0 * radius * np.cos(angle) - c2 / 3.0, single)
        low = np.where(three, 2.0 * radius * np.cos(angle + 2.0 * np.pi / 3.0) - c2 / 3.0, single)
        three = three & (low > B)
        low = np.where(three, low, high)
        polished = []
        for Z in (low, high):
            for _ in range(3):
                slope = (3.0 * Z + 2.0 * c2) * Z + c1
                Z = Z - (((Z + c2) * Z + c1) * Z + c0) / np.where(slope == 0.0, 1.0, slope)
            polished.append(Z)
        return polished[0], polished[1], three

    def _missing(self, Z: Array, A: Array, B: Array, three: Mask, phase: Phase) -> Mask:
        """Where the only root belongs to the other phase: told by the side of the point where the complex pair lies."""
        c2 = np.asarray(self._coefficients(A, B)[0])
        pair = -0.5 * (c2 + Z)
        other = pair > Z if phase is Phase.VAPOR else pair < Z
        return ~three & other & (pair > B * (1.0 + 1e-6))

    def _root(self, A: Jet, B: Jet, phase: Phase) -> tuple[Jet, Mask]:
        """Z of a phase with temperature derivatives, and where it is the continuation."""
        low, high, three = self._real_roots(A.value, B.value)
        real = low if phase is Phase.LIQUID else high
        c2, c1, c0 = self._coefficients(A, B)
        start = np.zeros_like(A.terms)
        start[0] = real
        Z = Jet(start)
        for _ in range(len(A.terms) - 1):  # each Newton step in jets makes one more derivative exact
            slope = (Z * 3.0 + c2 * 2.0) * Z + c1
            Z = Z - (((Z + c2) * Z + c1) * Z + c0) / slope
        missing = self._missing(real, A.value, B.value, three, phase)
        if missing.any():
            pair = (Z + c2) * -0.5
            Z = Jet(np.where(missing, pair.terms, Z.terms))
        return Z, missing

    # results ----------------------------------------------------------------------------------------------------

    def ln_phi(self, T: Array, P: Array, z: Array, phase: Phase, order: int = 0) -> Jet:
        """ln phi_i with temperature derivatives at constant P and composition, (..., n)."""
        T, P, z = common_state(T, P, z)
        A, B, cross, a, _, b = self._mixture(T, P, z, order)
        Z, _ = self._root(A, B, phase)
        d1, d2 = self.form.d1, self.form.d2
        spread = ((Z + B * d1) / (Z + B * d2)).log() * (A / B) * (1.0 / (d1 - d2))
        share = self._b / b[..., None]
        pull = cross * 2.0 / a[..., None] - share
        return (Z - 1.0)[..., None] * share - (Z - B).log()[..., None] - spread[..., None] * pull

    def mole_number_derivatives(self, T: Array, P: Array, z: Array, phase: Phase) -> Array:
        """d ln phi_i / d n_j at constant T and P and one mole in all, (..., n, n)."""
        T, P, z = common_state(T, P, z)
        A_jet, B_jet, cross_jet, a_jet, root_jet, b = self._mixture(T, P, z, 0)
        A, B, cross, a, root = A_jet.value, B_jet.value, cross_jet.value, a_jet.value, root_jet.value
        Z_jet, missing = self._root(A_jet, B_jet, phase)
        Z = Z_jet.value
        d1, d2 = self.form.d1, self.form.d2
        u, w = d1 + d2, d1 * d2
        share = self._b / b[..., None]
        # per mole of j: a is of second degree in the mole numbers, b of first
        dA = A[..., None] * 2.0 * (cross / a[..., None] - 1.0)
        dB = B[..., None] * (share - 1.0)
        dc2 = (u - 1.0) * dB
        real = np.where(missing, -2.0 * Z - np.asarray(self._coefficients(A, B)[0]), Z)
        c2, c1, _ = (np.asarray(c) for c in self._coefficients(A, B))
        by_A = real - B
        by_B = (u - 1.0) * real ** 2 + (2.0 * (w - u) * B - u) * real - (A + 2.0 * w * B + 3.0 * w * B * B)
        slope = (3.0 * real + 2.0 * c2) * real + c1
        dZ = -(by_A[..., None] * dA + by_B[..., None] * dB) / slope[..., None]
        dZ = np.where(missing[..., None], -0.5 * (dc2 + dZ), dZ)
        ratio = np.log((Z + d1 * B) / (Z + d2 * B)) / (d1 - d2)
        d_ratio = (B[..., None] * -dZ + Z[..., None] * dB) / ((Z + d1 * B) * (Z + d2 * B))[..., None]
        strength = A / B
        d_strength = strength[..., None] * (dA / A[..., None] - dB / B[..., None])
        relative = cross / a[..., None]
        pull = 2.0 * relative - share
        a_ij = root[..., :, None] * root[..., None, :] * self._attraction
        d_pull = (2.0 * (a_ij / a[..., None, None] - relative[..., :, None])
                  - 4.0 * relative[..., :, None] * (relative - 1.0)[..., None, :]
                  + share[..., :, None] * (share - 1.0)[..., None, :])
        result: Array = (
            share[..., :, None] * (dZ - (share - 1.0) * (Z - 1.0)[..., None])[..., None, :]
            - ((dZ - dB) / (Z - B)[..., None])[..., None, :]
            - pull[..., :, None] * (d_strength * ratio[..., None] + strength[..., None] * d_ratio)[..., None, :]
            - (strength * ratio)[..., None, None] * d_pull)
        return result

    def compressibility(self, T: Array, P: Array, z: Array, phase: Phase) -> Array:
        """Z = P v/(R T) of a phase, without the volume shift, (...)."""
        A, B, *_ = self._mixture(*common_state(T, P, z), 0)
        return self._root(A, B, phase)[0].value

    def exists(self, T: Array, P: Array, z: Array, phase: Phase) -> Mask:
        """Whether the phase has a root of its own at this state, (...)."""
        A, B, *_ = self._mixture(*common_state(T, P, z), 0)
        return ~self._root(A, B, phase)[1]


class CubicVapor:
    """The vapour root of a cubic equation as a `VaporModel`."""

    def __init__(self, equation: CubicEquation) -> None:
        self.equation = equation

    def ln_phi(self, T: Array, P: Array, y: Array, order: int = 0) -> Jet:
        """ln phi with temperature derivatives, (..., n)."""
        return self.equation.ln_phi(T, P, y, Phase.VAPOR, order)

    def mole_number_derivatives(self, T: Array, P: Array, y: Array) -> Array:
        """d ln phi_i / d n_j, (..., n, n)."""
        return self.equation.mole_number_derivatives(T, P, y, Phase.VAPOR)

    def compressibility(self, T: Array, P: Array, y: Array) -> Array:
        """Z, (...)."""
        return self.equation.compressibility(T, P, y, Phase.VAPOR)

    def describe(self) -> str:
        return self.equation.form.source
