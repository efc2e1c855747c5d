"""A point of the froth by linear low-flux theory: the matrices of the textbooks, complete and augmented.

Both take every coefficient at y_ref = (y_in + y*)/2 and at the point liquid, the latent heats at its bubble point.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.linalg import expm

from ..equipment.protocol import Array
from ..errors import InputError
from ..maxwell_stefan import resistance_matrix
from ..properties.differences import vapor_heat_capacity
from ..properties.protocol import PropertyModel
from .bubble_line import bubble_line
from .point import FrothPoint


@dataclass(frozen=True)
class MatrixPoint:
    """Vapour above a point by linear theory.

    y (..., n); T_V K. efficiency: [E] = [I] - dy_out/dy_in on the first n-1 components, (..., n-1, n-1): y_out - y_in =
    [E](y* - y_in), in the augmented form for a vapour that enters at the bubble temperature. y_star (..., n), T_bubble
    K.
    """

    y: Array
    T_V: Array
    efficiency: Array
    y_star: Array
    T_bubble: Array


@dataclass(frozen=True)
class _Linear:
    """Matrices both forms share, on the first n-1 components."""

    y_star: Array
    T_bubble: Array
    y_ref: Array
    k_vapor: Array
    k_liquid: Array
    K_eq: Array
    T_slope: Array
    latent: Array


def textbook_matrix(point: FrothPoint, properties: PropertyModel) -> MatrixPoint:
    """y_out = y_in + ([I] - exp(-[NTU_OV]))(y* - y_in), [NTU_OV] = area c_V [K_OV]/V.

    [K_OV]^-1 = [k_V]^-1 + (c_V/c_L)[K_eq][k_L]^-1[beta_L]^-1[beta_V], beta_ij = delta_ij - z_i (lambda_j -
    lambda_n)/sum lambda_k z_k with z = y_ref (V) and x (L). No heat conduction, no high-flux correction, constant flow:
    26 to 39 % of the largest change off at worst. Sources: Toor, AIChE J. 10 (1964) 448; Krishna, Martinez, Sreedhar &
    Standart, Trans. IChemE 55 (1977) 178.
    """
    m = _linear(point, properties)
    beta_V, beta_L = _bootstrap_matrix(m.y_ref, m.latent), _bootstrap_matrix(point.x, m.latent)
    ratio = (point.c_vapor / point.c_liquid)[..., None, None]
    inverse = np.linalg.inv(m.k_vapor) + ratio * m.K_eq @ np.linalg.inv(beta_L @ m.k_liquid) @ beta_V
    area = (point.coefficients.area * point.c_vapor / point.V_in)[..., None, None]
    E = np.eye(inverse.shape[-1]) - np.asarray(expm(-area * np.linalg.inv(inverse)))
    return MatrixPoint(_moved(point.y_in, E, m.y_star), point.T_V_in, E, m.y_star, m.T_bubble)


def augmented_matrix(point: FrothPoint, properties: PropertyModel) -> MatrixPoint:
    """The linear form with the vapour's temperature as n-th state: conduction and the interface's energy balance kept.

    J = c_V [k_V](y - y* - [K_eq] d), J + N_t y_ref = c_L [k_L] d + N_t x, T_I = T_b + tau . d, sum lambda_i (J_i + N_t
    y_ref,i) + h_V (T_V - T_I) = h_L (T_I - T_L), solved for (J, N_t, d); dy/ds = -(area/V) J, dT_V/ds =
    -(area/(V cp)) h_V (T_V - T_I): one n x n exponential. Within 4.4 % of the largest change.
    """
    m = _linear(point, properties)
    n = point.x.shape[-1]
    r = n - 1
    c = point.coefficients
    batch = point.V_in.shape
    cV, cL = point.c_vapor[..., None, None], point.c_liquid[..., None, None]
    # Unknowns (J (r), N_t, d (r)); right-hand sides by (y (r), T_V, 1).
    A = np.zeros((*batch, 2 * r + 1, 2 * r + 1))
    B = np.zeros((*batch, 2 * r + 1, r + 2))
    unit = np.eye(r)
    A[..., :r, :r] = unit
    A[..., :r, r + 1:] = cV * m.k_vapor @ m.K_eq
    B[..., :r, :r] = cV * m.k_vapor
    B[..., :r, r + 1] = -np.einsum("...ij,...j->...i", cV * m.k_vapor, m.y_star[..., :r])
    A[..., r:2 * r, :r] = unit
    A[..., r:2 * r, r] = m.y_ref[..., :r] - point.x[..., :r]
    A[..., r:2 * r, r + 1:] = -cL * m.k_liquid
    latent = m.latent
    A[..., 2 * r, :r] = latent[..., :r] - latent[..., r:]
    A[..., 2 * r, r] = (latent * m.y_ref).sum(-1)
    A[..., 2 * r, r + 1:] = -(c.h_vapor + c.h_liquid)[..., None] * m.T_slope
    B[..., 2 * r, r] = -c.h_vapor
    B[..., 2 * r, r + 1] = c.h_vapor * m.T_bubble + c.h_liquid * (m.T_bubble - point.T_L)
    solved = np.linalg.solve(A, B)
    J, d = solved[..., :r, :], solved[..., r + 1:, :]
    cp = (vapor_heat_capacity(properties, point.T_V_in, point.P, m.y_ref) * m.y_ref).sum(-1)
    a = (point.coefficients.area / point.V_in)[..., None, None]
    T_I = (m.T_slope[..., None, :] @ d)[..., 0, :]
    T_I[..., r + 1] += m.T_bubble
    heat = -c.h_vapor[..., None] * T_I
    heat[..., r] += c.h_vapor
    warm = np.where(cp > 0, 1.0 / np.where(cp > 0, cp, 1.0), 0.0)[..., None]
    rate = np.concatenate((-a * J, -(a[..., 0] * warm * heat)[..., None, :]), -2)
    big = np.zeros((*batch, n + 1, n + 1))
    big[..., :n, :] = rate
    end = np.asarray(expm(big))
    u0 = np.concatenate((point.y_in[..., :r], point.T_V_in[..., None], np.ones((*batch, 1))), -1)
    u1 = np.einsum("...ij,...j->...i", end, u0)
    y = u1[..., :r]
    return MatrixPoint(np.concatenate((y, 1.0 - y.sum(-1, keepdims=True)), -1), u1[..., r], unit - end[..., :r, :r],
                       m.y_star, m.T_bubble)




def _linear(point: FrothPoint, properties: PropertyModel) -> _Linear:
    if not (properties.condensable & properties.volatile).all():
        raise InputError("properties: the matrix forms refer to a bubble point, which masked components do not have; "
                         "use exponential_midpoint")
    line = bubble_line(properties, point.P, point.x, point.T_L)
    T_b, y_star, tau = line.temperature, line.vapor, line.temperature_slope
    y_ref = (point.y_in + y_star) / 2.0
    latent = (properties.vapor_enthalpy(T_b, point.P, y_star) - properties.liquid_enthalpy(T_b, point.P, point.x))
    c = point.coefficients
    gamma = properties.thermodynamic_factor(T_b, point.P, point.x)
    k_vapor = np.asarray(np.linalg.inv(resistance_matrix(y_ref, c.kappa_vapor)), float)
    k_liquid = np.asarray(np.linalg.inv(resistance_matrix(point.x, c.kappa_liquid)) @ gamma, float)
    return _Linear(y_star, T_b, y_ref, k_vapor, k_liquid, line.equilibrium_matrix, tau[..., :-1] - tau[..., -1:],
                   latent)


def _bootstrap_matrix(z: Array, latent: Array) -> Array:
    r = z.shape[-1] - 1
    mean = (latent * z).sum(-1)[..., None, None]
    return np.eye(r) - z[..., :r, None] * (latent[..., None, :r] - latent[..., None, r:]) / mean


def _moved(y_in: Array, E: Array, y_star: Array) -> Array:
    r = E.shape[-1]
    change = np.einsum("...ij,...j->...i", E, (y_star - y_in)[..., :r])
    return y_in + np.concatenate((change, -change.sum(-1, keepdims=True)), -1)
