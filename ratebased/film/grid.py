"""Points, interpolation and differentiation of polynomials across a film (barycentric, Berrut and Trefethen 2004)."""
from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Grid:
    """Chebyshev points (both faces in), Gauss points and weights on 0..1; values and slopes at Gauss from Chebyshev."""

    points: Array
    nodes: Array
    weights: Array
    value: Array
    slope: Array


@cache
def grid(degree: int) -> Grid:
    """The grid of a polynomial degree."""
    points = chebyshev_points(degree)
    nodes, weights = np.polynomial.legendre.leggauss(degree)
    nodes, weights = 0.5 * (nodes + 1.0), 0.5 * weights
    value = interpolation(points, nodes)
    # derivative at the Gauss points through the derivative at the points themselves
    barycentric = _weights(degree)
    gap = points[:, None] - points[None, :] + np.eye(degree + 1)
    matrix = barycentric[None, :] / barycentric[:, None] / gap
    np.fill_diagonal(matrix, 0.0)
    np.fill_diagonal(matrix, -matrix.sum(-1))
    return Grid(points, nodes, weights, value, value @ matrix)


def chebyshev_points(degree: int) -> Array:
    """degree + 1 points on 0..1, the faces included."""
    points: Array = 0.5 - 0.5 * np.cos(np.pi * np.arange(degree + 1) / degree)
    return points


def _weights(degree: int) -> Array:
    weights = np.where(np.arange(degree + 1) % 2, -1.0, 1.0)
    weights[[0, -1]] *= 0.5
    return weights


@cache
def double_exponential(count: int = 121) -> tuple[Array, Array]:
    """Points and weights on 0..1 that crowd at both ends, for integrands steep there (Takahasi and Mori 1974)."""
    t = np.linspace(-3.4, 3.4, count)
    u = 0.5 * np.pi * np.sinh(t)
    points = 1.0 / (1.0 + np.exp(-2.0 * u))
    weights = 0.25 * np.pi * np.cosh(t) / np.cosh(u) ** 2 * (t[1] - t[0])
    return points, weights


def interpolation(points: Array, eta: Array) -> Array:
    """Matrix (len(eta), len(points)) from values at Chebyshev points to values at eta, barycentric."""
    gap = eta[:, None] - points[None, :]
    hit = gap == 0
    terms = _weights(len(points) - 1) / np.where(hit, 1.0, gap)
    matrix = terms / terms.sum(-1, keepdims=True)
    return np.where(hit.any(-1, keepdims=True), hit.astype(float), matrix)
