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


OVERFLOW = 300.0
"""Argument of the exponential beyond which B(z) is zero to all digits."""


def bernoulli(z: Array) -> Array:
    """B(z) = z/(e^z - 1): 1 at zero, free of overflow."""
    size = np.abs(np.asarray(z, dtype=float))
    small = size < 1e-4
    if small.any():
        size = np.where(small, 1.0, size)
    positive = size / np.expm1(np.minimum(size, OVERFLOW))      # B(|z|); B(-|z|) = B(|z|) + |z|
    value = np.where(z > 0, positive, positive + size)
    return np.where(small, 1.0 - z / 2.0 + z * z / 12.0, value)


def bernoulli_slope(z: Array) -> Array:
    """dB/dz: -1/2 at zero, free of overflow."""
    size = np.abs(np.asarray(z, dtype=float))
    small = size < 1e-2
    if small.any():
        size = np.where(small, 1.0, size)
    d = np.expm1(np.minimum(size, OVERFLOW))
    positive = (1.0 - size / d * (d + 1.0)) / d                 # at |z|; dB/dz(-z) = -1 - dB/dz(z)
    value = np.where(z > 0, positive, -1.0 - positive)
    return np.where(small, -0.5 + z / 6.0 - z ** 3 / 180.0, value)


@dataclass(frozen=True)
class Conduction:
    """Energy flux of one film at given N and T_I, and what its derivatives are made of, (...) each but cp (..., n).

    E : W/m2 from vapour to liquid. q_bulk : conduction at the bulk face. rate_factor : a = sum N cp/h. jump : T_b -
    T_I.
    """

    E: Array
    q_bulk: Array
    rate_factor: Array
    jump: Array
    cp: Array


def conduction(N: Array, T_interface: Array, T_bulk: Array, h: Array, H_bulk: Array, H_interface: Array,
               slope_interface: Array, side: int) -> Conduction:
    """`Conduction` of the vapour (side = 1) or liquid (side = -1) film; arguments as in `film_energy`."""
    jump = T_bulk - T_interface
    near = np.abs(jump) < EQUAL_TEMPERATURES
    if near.any():
        cp = np.where(near[..., None], slope_interface, (H_bulk - H_interface) / np.where(near, 1.0, jump)[..., None])
    else:
        cp = (H_bulk - H_interface) / jump[..., None]
    a = dot(N, cp) / h
    q = side * h * bernoulli(side * a) * jump
    return Conduction(q + dot(N, H_bulk), q, a, jump, cp)


def dot(a: Array, b: Array) -> Array:
    """Sum over components."""
    return np.asarray(np.einsum("...i,...i->...", a, b))


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
    c = conduction(N, T_interface, T_bulk, h, H_bulk, H_interface, slope_interface, side)
    B, dB = bernoulli(side * c.rate_factor), bernoulli_slope(side * c.rate_factor)
    dN = H_bulk + (dB * c.jump)[..., None] * c.cp
    dT_interface = -side * h * B + dB * dot(N, c.cp - slope_interface)
    dbulk = dbulk_enthalpy = None
    if slope_bulk is not None:
        dbulk_enthalpy = np.zeros((*np.shape(c.E), N.shape[-1] + 1))
        dbulk_enthalpy[..., -1] = dot(N, slope_bulk)
        dbulk = np.array(dbulk_enthalpy)
        dbulk[..., -1] += side * h * B + dB * (dbulk_enthalpy[..., -1] - dot(N, c.cp))
        if H_bulk_composition is not None and H_interface_composition is not None:
            dbulk_enthalpy[..., :-1] = (N[..., None] * H_bulk_composition).sum(-2)
            by_interface = (N[..., None] * H_interface_composition).sum(-2)
            dbulk[..., :-1] = dbulk_enthalpy[..., :-1] + dB[..., None] * (dbulk_enthalpy[..., :-1] - by_interface)
    return FilmEnergy(c.E, c.q_bulk, side * h * bernoulli(-side * c.rate_factor) * c.jump, c.rate_factor, dN,
                      dT_interface, dbulk, dbulk_enthalpy)
