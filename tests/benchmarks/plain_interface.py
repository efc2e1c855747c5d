"""What one would write without this library: one interface at a time, `fsolve` on the equations with `expm` films.

Two scripts for the timed comparisons, in the variables of the property model of constant volatility.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.linalg import expm
from scipy.optimize import fsolve


@dataclass(frozen=True)
class PlainInterface:
    """The numbers of one interface: everything a function of two lists and a few floats would take."""

    y: np.ndarray
    x: np.ndarray
    T_V: float
    T_L: float
    K_V: np.ndarray
    K_L: np.ndarray
    h_V: float
    h_L: float
    P: float
    alpha: np.ndarray
    a: float
    b: float
    latent: np.ndarray
    cp_V: np.ndarray
    cp_L: np.ndarray
    T_ref: float

    def film(self, N, K):
        A = -N[:, None] * K
        A[np.diag_indices(len(N))] = K @ N
        return A

    def start(self):
        return self.b / (self.a + np.log(self.alpha @ self.x / self.P))

    def energy(self, N, T):
        a_V, a_L = N @ self.cp_V / self.h_V, N @ self.cp_L / self.h_L
        q_V = self.h_V * (a_V / -np.expm1(-a_V) if a_V else 1.0) * (self.T_V - T)
        q_L = self.h_L * (a_L / np.expm1(a_L) if a_L else 1.0) * (T - self.T_L)
        return (q_V + N @ (self.latent + (self.cp_V - self.cp_L) * (T - self.T_ref)) - q_L) / (self.h_V + self.h_L)

    def scale(self):
        return len(self.y) * (len(self.y) - 1) / self.K_V.sum()


def solve_full(p: PlainInterface):
    """All 3n + 1 unknowns (N, y_I, x_I, T_I); N and whether `fsolve` claims success."""
    n, unit = len(p.y), p.scale()

    def rows(u):
        N, y_I, x_I, T = u[:n] * unit, u[n:2 * n], u[2 * n:3 * n], 300.0 * u[3 * n]
        K = p.alpha * np.exp(p.a - p.b / T) / p.P
        return np.concatenate((expm(p.film(N, p.K_V)) @ p.y - y_I, expm(p.film(N, p.K_L)) @ x_I - p.x,
                               (y_I - K * x_I) / np.maximum(1.0, K), [p.energy(N, T) / 300.0]))

    start = np.concatenate((np.zeros(n), p.y, p.x, [p.start() / 300.0]))
    u, _, flag, _ = fsolve(rows, start, xtol=1e-10, full_output=True)
    return u[:n] * unit, flag == 1


def solve_lean(p: PlainInterface):
    """The n + 1 unknowns (N, T_I), both films shot from the bulks; otherwise the same."""
    n, unit = len(p.y), p.scale()
    diagonal = np.diag_indices(n)

    def rows(u):
        N, T = u[:n] * unit, 300.0 * u[n]
        A_V, A_L = -N[:, None] * p.K_V, N[:, None] * p.K_L
        A_V[diagonal], A_L[diagonal] = p.K_V @ N, -(p.K_L @ N)
        K = p.alpha * np.exp(p.a - p.b / T) / p.P
        return np.append((expm(A_V) @ p.y - K * (expm(A_L) @ p.x)) / np.maximum(1.0, K), p.energy(N, T) / 300.0)

    u, _, flag, _ = fsolve(rows, np.append(np.zeros(n), p.start() / 300.0), xtol=1e-10, full_output=True)
    return u[:n] * unit, flag == 1
