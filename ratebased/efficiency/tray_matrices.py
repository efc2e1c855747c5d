"""From the point to the tray by matrices: constant [E] and [S], liquid and vapour mixed in the published ways.

[E]: point efficiency, y_out - y_in = [E](y* - y_in), (..., m, m), m = n - 1. [S] = (V/L)[K_eq], stripping matrix. A
scalar efficiency is the case m = 1. Sources: Toor, AIChE J. 10 (1964) 448 and Krishna, Martinez, Sreedhar & Standart,
Trans. IChemE 55 (1977) 178 for the matrices; Lewis, Ind. Eng. Chem. 28 (1936) 399 for the three cases; Gerster et al.
(1958) for pools and dispersion; Colburn, Ind. Eng. Chem. 28 (1936) 526 for entrainment.
"""
from __future__ import annotations

from enum import Enum

import numpy as np

from ..arguments import finite_array
from ..errors import InputError
from ..properties.protocol import Array
from ..stage.mixing import LiquidMixing, PlugFlow, mixed_tray
from ..stage.point import phi_action


class VaporPath(Enum):
    """How the vapour that leaves one tray enters the next, the liquid in plug flow on every tray (Lewis 1936)."""

    MIXED = 1
    """Case 1: mixed between the trays."""
    SAME_DIRECTION = 2
    """Case 2: not mixed, the liquid flows the same way on every tray."""
    ALTERNATING = 3
    """Case 3: not mixed, the liquid flows the other way on the next tray."""


def tray_efficiency(E: Array, S: Array, mixing: LiquidMixing) -> Array:
    """[E_MV] = [E] f([S][E]) for a way of mixing the liquid, vapour mixed between trays, (..., m, m).

    Pools f(z) = ((1 + z/p)^p - 1)/z, plug flow (e^z - 1)/z, eddy diffusion Gerster's; one pool gives [E] itself.
    """
    E, S = _pair(E, S)
    m = E.shape[-1]
    columns = [mixed_tray(mixing, E[..., :, j], -E @ S)[0] for j in range(m)]
    return np.stack(columns, -1)


def lewis_efficiency(E: Array, S: Array, path: VaporPath, *, trays: int = 41, points: int = 24) -> Array:
    """[E_MV] of a tray inside a long stack with the liquid in plug flow, (m, m).

    Case 1 is in closed form, (exp([E][S]) - 1)[S]^-1; cases 2 and 3 have none for unequal eigenvectors: a stack of
    `trays` trays is solved by collocation at `points` Chebyshev points along the path and [E_MV] read off the middle
    one. Efficiencies refer to the mean vapours and to the leaving liquid.
    """
    E, S = _pair(E, S)
    if E.ndim != 2:
        raise InputError(f"E: expected one matrix, got shape {E.shape}")
    m = E.shape[0]
    if path is VaporPath.MIXED:
        return tray_efficiency(E, S, PlugFlow())
    D, weights = _chebyshev(points)
    eye, P = np.eye(m), points
    flip = np.eye(P)[::-1] if path is VaporPath.ALTERNATING else np.eye(P)
    # Unknowns: u_k(w) = y*(x) on tray k, k = 0 the top; the liquid enters at w = 0. Vapour into tray k: the one leaving
    # tray k+1 at the same place. y_k = (1 - E) y_(k+1) + E u_k; du_k/dw = -S (y_k - y_(k+1)) = -S E (u_k - y_(k+1)).
    size = trays * P * m
    A = np.zeros((size, size))
    vapor = _vapor_maps(E, flip, trays, P, m)
    bottom = np.zeros((size, m))
    entering = np.zeros((trays, P * m, m))
    for k in range(trays - 1, -1, -1):
        rows = slice(k * P * m, (k + 1) * P * m)
        A[rows, rows] += np.kron(D, eye) + np.kron(np.eye(P), S @ E)
        below, constant = vapor[k + 1]
        A[rows] -= np.kron(np.eye(P), S @ E) @ below
        bottom[rows] += np.kron(np.eye(P), S @ E) @ constant
        entering[k] = constant
        first = slice(k * P * m, k * P * m + m)
        A[first] = 0.0
        bottom[first] = 0.0
        A[first, first] = eye
        if k:
            A[first, k * P * m - m:k * P * m] = -eye
    u = np.linalg.solve(A, bottom)
    k = trays // 2
    average = np.kron(weights[None, :], eye)
    y_in = average @ (vapor[k + 1][0] @ u + vapor[k + 1][1])
    y_out = average @ (vapor[k][0] @ u + vapor[k][1])
    leaving = u[(k + 1) * P * m - m:(k + 1) * P * m]
    return np.asarray(np.linalg.solve((leaving - y_in).T, (y_out - y_in).T).T)


def entrained(E_MV: Array, entrainment: float) -> Array:
    """Murphree matrix lowered by entrainment, (..., m, m): [E_MV]([I] + psi/(1 - psi)[E_MV])^-1.

    entrainment: psi, liquid entrained over liquid entrained and flowing down, 0 to below 1. Liquid mixed on the tray.
    """
    if not 0 <= entrainment < 1:
        raise InputError(f"entrainment = {entrainment}: expected 0 to below 1")
    E_MV = _square("E_MV", E_MV)
    return np.asarray(E_MV @ np.linalg.inv(np.eye(E_MV.shape[-1]) + entrainment / (1 - entrainment) * E_MV))


def weeping(E: Array, S: Array, fraction: float, *, pools: int | None = None) -> Array:
    """Murphree matrix of a tray that weeps, (..., m, m), on the liquid that leaves it by both ways.

    fraction: share of the entering liquid that weeps, evenly over the path, 0 to below 1. pools: mixed pools in series,
    None for plug flow. The liquid that is left thins out along the path, so [S] (of the entering flow) grows: with
    z = [S][E], drive y* - y_in at the place s over that at the outlet, plug flow: ((1 - f s)/(1 - f))^(z/f); pools:
    drive_(k-1) = (1 + z/(p (1 - f (k-1)/p))) drive_k. [E_w] = [E] mean ((1 - f) + f mean)^-1, `mean` over the path.
    One pool gives [E]. (Derived here from the balances.)
    """
    if not 0 <= fraction < 1:
        raise InputError(f"fraction = {fraction}: expected 0 to below 1")
    if pools is not None and (pools < 1 or pools != int(pools)):
        raise InputError(f"pools = {pools}: expected a whole number of one or more")
    E, S = _pair(E, S)
    Z = S @ E
    mean = _mean_drive_plug(Z, fraction) if pools is None else _mean_drive_pools(Z, fraction, int(pools))
    return np.asarray(E @ mean @ np.linalg.inv((1.0 - fraction) * np.eye(Z.shape[-1]) + fraction * mean))


def _mean_drive_plug(Z: Array, fraction: float) -> Array:
    """Mean of ((1 - f s)/(1 - f))^(Z/f) over s: (1 - f) a (e^W - 1)/W, W = a (Z + f), a = -ln(1 - f)/f, one at f = 0.

    Without a pole at Z = -f and without eigenvectors, which a defective matrix has too few of.
    """
    a = -np.log1p(-fraction) / fraction if fraction > 0 else 1.0
    eye = np.broadcast_to(np.eye(Z.shape[-1]), Z.shape)
    return (1.0 - fraction) * a * phi_action(a * (Z + fraction * eye), eye)


def _mean_drive_pools(Z: Array, fraction: float, pools: int) -> Array:
    eye = np.eye(Z.shape[-1])
    drive, total = np.broadcast_to(eye, Z.shape), np.zeros_like(Z)
    for k in range(pools, 0, -1):
        total = total + drive / pools
        drive = (eye + Z / (pools * (1.0 - fraction * (k - 1) / pools))) @ drive
    return total


def overall_efficiency(E_MV: Array, stripping_factor: Array) -> Array:
    """Equilibrium stages over actual trays of a section with straight lines: ln(1 + E (S - 1))/ln S, E at S = 1 (...).

    Source: Lewis, Ind. Eng. Chem. 28 (1936) 399. Raises `InputError` where 1 + E (S - 1) or S is not positive.
    """
    E, S = np.broadcast_arrays(finite_array("E_MV", E_MV), finite_array("stripping_factor", stripping_factor))
    inside = 1.0 + E * (S - 1.0)
    if (inside <= 0).any() or (S <= 0).any():
        where = tuple(int(i) for i in np.argwhere((inside <= 0) | (S <= 0))[0])
        raise InputError(f"E_MV{list(where)} = {E[where]}, stripping_factor = {S[where]}: 1 + E (S - 1) is not "
                         "positive")
    near = S == 1.0
    return np.where(near, E, np.log1p(E * (S - 1.0)) / np.where(near, 1.0, np.log1p(S - 1.0)))


def _square(name: str, value: Array) -> Array:
    array = finite_array(name, value)
    if array.ndim < 2 or array.shape[-1] != array.shape[-2]:
        raise InputError(f"{name}: expected square matrices (..., m, m), got shape {array.shape}")
    return array


def _pair(E: Array, S: Array) -> tuple[Array, Array]:
    E, S = _square("E", E), _square("S", S)
    if E.shape[-1] != S.shape[-1]:
        raise InputError(f"S: expected matrices of size {E.shape[-1]}, got shape {S.shape}")
    return np.broadcast_arrays(E, S)[0], np.broadcast_arrays(E, S)[1]


def _vapor_maps(E: Array, flip: Array, trays: int, P: int, m: int) -> list[tuple[Array, Array]]:
    """Vapour leaving tray k as (matrix on the unknowns, matrix on the vapour below the stack), k = 0..trays.

    Seen in the coordinate of the tray it enters next, so `flip` turns it where the liquid alternates.
    """
    size = trays * P * m
    turn = np.kron(flip, np.eye(m))
    maps: list[tuple[Array, Array]] = [(np.zeros((0, 0)), np.zeros((0, 0)))] * (trays + 1)
    maps[trays] = (np.zeros((P * m, size)), np.asarray(np.kron(np.ones((P, 1)), np.eye(m)), float))
    pass_through, pick = np.kron(np.eye(P), np.eye(m) - E), np.kron(np.eye(P), E)
    for k in range(trays - 1, -1, -1):
        below, constant = maps[k + 1]
        own = np.zeros((P * m, size))
        own[:, k * P * m:(k + 1) * P * m] = pick
        maps[k] = (np.asarray(turn @ (pass_through @ below + own), float),
                   np.asarray(turn @ (pass_through @ constant), float))
    return maps


def _chebyshev(points: int) -> tuple[Array, Array]:
    """Differentiation matrix and Clenshaw-Curtis weights of the Chebyshev points on 0..1."""
    k = np.arange(points)
    x = np.cos(np.pi * k / (points - 1))
    c = np.where((k == 0) | (k == points - 1), 2.0, 1.0) * (-1.0) ** k
    dx = x[:, None] - x[None, :]
    D = np.outer(c, 1.0 / c) / (dx + np.eye(points))
    D -= np.diag(D.sum(1))
    order = np.arange(points)
    moments = np.where(order % 2 == 0, 2.0 / (1.0 - np.where(order % 2 == 0, order, 0) ** 2.0), 0.0)
    weights = np.linalg.solve(np.cos(np.outer(order, np.arccos(x))), moments)
    return -2.0 * D, weights / 2.0
