"""Energy flux through one film, conduction with the high-flux (Ackermann) factor, and its derivatives.

In a film E = q + sum_i N_i H_i(T) is constant. With the mean heat capacity of each component between the two
temperatures of the film, cp_i = (H_i(T_b) - H_i(T_I))/(T_b - T_I) (its limit dH_i/dT where they are equal), a = sum_i
N_i cp_i/h and B(z) = z/(e^z - 1), conduction at the bulk face is h B(a) (T_V - T_I) in the vapour and
h B(-a) (T_I - T_L) in the liquid (Ackermann 1937), and E written at the bulk face and at the interface agree for every
H(T), because B(-a) - B(a) = a.

Both temperatures take the partial molar enthalpies at the bulk composition of the film: E then is one constant along
the film, and its value at the bulk face is the one the balances of the bulk need.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

EQUAL_TEMPERATURES = 1e-3
"""K. Closer than this the difference quotient of H is replaced by dH/dT at the interface temperature."""


def bernoulli(z: Array) -> Array:
    """B(z) = z/(e^z - 1): 1 at zero, free of overflow."""
    z = np.asarray(z, dtype=float)
    small = np.abs(z) < 1e-4
    safe = np.where(small, 1.0, z)
    # z/(e^z - 1) = z e^-z/(1 - e^-z): the exponential never overflows
    value = np.abs(safe) / -np.expm1(-np.abs(safe)) * np.where(safe > 0, np.exp(-np.abs(safe)), 1.0)
    return np.where(small, 1.0 - z / 2.0 + z * z / 12.0, value)


def bernoulli_slope(z: Array) -> Array:
    """dB/dz: -1/2 at zero, free of overflow."""
    z = np.asarray(z, dtype=float)
    small = np.abs(z) < 1e-2
    safe = np.where(small, 1.0, z)
    e = np.exp(-np.abs(safe))
    d = -np.expm1(-np.abs(safe))
    # with e = e^-|z|: (e - z e)/d - z e^2/d^2 for z > 0; by B(-z) = B(z) + z, dB/dz(-z) = -dB/dz(z) - 1
    positive = e / d - np.abs(safe) * e / (d * d)
    value = np.where(safe > 0, positive, -1.0 - positive)
    return np.where(small, -0.5 + z / 6.0 - z ** 3 / 180.0, value)


@dataclass(frozen=True)
class FilmEnergy:
    """Energy flux of one film from vapour to liquid, W/m2, (...), and what it depends on.

    E : energy flux. q_bulk, q_interface : conduction at the two faces. rate_factor : a = sum N cp/h.
    dN (..., n), dT_interface (...) : derivatives of E by the fluxes and by T_I.
    dbulk (..., n + 1) or None : by the bulk composition (column j along e_j - e_n, the last zero) and its temperature;
    dbulk_enthalpy : the part of it that is sum_i N_i dH_i, the rest belongs to q_bulk.
    """

    E: Array
    q_bulk: Array
    q_interface: Array
    rate_factor: Array
    dN: Array
    dT_interface: Array
    dbulk: Array | None
    dbulk_enthalpy: Array | None


def film_energy(N: Array, T_interface: Array, T_bulk: Array, h: Array, H_bulk: Array, H_interface: Array,
                slope_interface: Array, side: int, *, slope_bulk: Array | None = None,
                H_bulk_composition: Array | None = None, H_interface_composition: Array | None = None) -> FilmEnergy:
    """`FilmEnergy` of the vapour (side = 1) or liquid (side = -1) film.

    N (..., n); T, h (...); H_bulk, H_interface: partial molar enthalpies at the bulk composition and the two
    temperatures, J/mol, (..., n); slope_*: dH/dT there; H_*_composition: dH_i/dc_j along e_j - e_n, (..., n, n), None
    where H does not depend on composition.
    """
    jump = T_bulk - T_interface
    near = np.abs(jump) < EQUAL_TEMPERATURES
    cp = np.where(near[..., None], slope_interface, (H_bulk - H_interface) / np.where(near, 1.0, jump)[..., None])
    a = (N * cp).sum(-1) / h
    B, dB = bernoulli(side * a), bernoulli_slope(side * a)
    q = side * h * B * jump
    E = q + (N * H_bulk).sum(-1)
    dN = H_bulk + (dB * jump)[..., None] * cp
    dT_interface = -side * h * B + dB * (N * (cp - slope_interface)).sum(-1)
    dbulk = dbulk_enthalpy = None
    if slope_bulk is not None:
        dbulk_enthalpy = np.zeros((*np.shape(E), N.shape[-1] + 1))
        dbulk_enthalpy[..., -1] = (N * slope_bulk).sum(-1)
        dbulk = np.array(dbulk_enthalpy)
        dbulk[..., -1] += side * h * B + dB * (dbulk_enthalpy[..., -1] - (N * cp).sum(-1))
        if H_bulk_composition is not None and H_interface_composition is not None:
            dbulk_enthalpy[..., :-1] = (N[..., None] * H_bulk_composition).sum(-2)
            by_interface = (N[..., None] * H_interface_composition).sum(-2)
            dbulk[..., :-1] = dbulk_enthalpy[..., :-1] + dB[..., None] * (dbulk_enthalpy[..., :-1] - by_interface)
    return FilmEnergy(E, q, side * h * bernoulli(-side * a) * jump, a, dN, dT_interface, dbulk, dbulk_enthalpy)
