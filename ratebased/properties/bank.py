"""Functions of temperature for every component at once, as Chebyshev series.

A correlation library evaluates one function at one temperature in about a microsecond; a column asks for fifty of them
on forty stages at every iteration. The functions are sampled once over the temperature range of the column, and one
matrix product gives all of them, with their derivatives, for all stages (Trefethen, Approximation Theory and
Approximation Practice, 2013, ch. 3 and 8: a smooth function converges geometrically in the degree). Where a
correlation hands over to another, at one end of its own range, the bank starts a new series, so that a kink does not
spoil the convergence.
"""
from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import ArrayLike, NDArray

from ..errors import InputError, PropertyRangeError
from .protocol import Array

ScalarFunction = Callable[[float], float]

DEGREES = (16, 20, 26, 36, 48)
FIT_TOLERANCE = 1e-11
NOISE = 4e-15
SHORTEST_SEGMENT = 1e-3
"""K: limits closer together than this are one limit."""


@dataclass(frozen=True)
class Basis:
    """A bank at given temperatures, ready for any view of it.

    table (m, columns): every function and its first derivative at the flattened temperatures. polynomials (m, degree +
    1) and segment (m,) or None: what the table was made from. shape: of the temperatures.
    """

    table: Array
    polynomials: Array
    segment: NDArray[np.intp] | None
    shape: tuple[int, ...]


@dataclass(frozen=True)
class BankView:
    """Some functions of a bank, some with derivatives.

    Columns of the table of a basis for functions and first derivatives; coefficients (degree + 1, segments x n) for a
    higher derivative, which is seldom asked for.
    """

    parts: tuple[slice | Array, ...]
    segments: int

    def __call__(self, basis: Basis) -> list[Array]:
        """The functions asked for, in that order, each (..., n), at the temperatures of a basis."""
        columns = [basis.table[:, part] if isinstance(part, slice) else _product(
            basis.polynomials, basis.segment, part, self.segments)
                   for part in self.parts]
        if len(basis.shape) == 1:
            return columns
        return [column.reshape(*basis.shape, column.shape[-1]) for column in columns]


def _product(polynomials: Array, segment: NDArray[np.intp] | None, coefficients: Array, segments: int) -> Array:
    """Series with coefficients (degree + 1, segments x columns), each row with those of its segment, (m, columns)."""
    values: Array = polynomials @ coefficients
    if segment is None:
        return values
    return values.reshape(len(values), segments, values.shape[-1] // segments)[np.arange(len(values)), segment]


def _series(T: Array, low: ArrayLike, high: ArrayLike, degree: int) -> Array:
    """Chebyshev polynomials 0 to degree of T scaled to (low, high), (m, degree + 1)."""
    low, high = np.asarray(low), np.asarray(high)
    scaled = np.minimum(np.maximum((2.0 * T - (high + low)) / (high - low), -1.0), 1.0)
    values: Array = np.cos(np.arccos(scaled)[:, None] * np.arange(degree + 1))
    return values


class TemperatureBank:
    """Chebyshev series of functions of temperature, n components each.

    Parameters
    ----------
    T_range : (low, high), K.
    functions : name -> n scalar functions of T in K.
    limits : temperatures inside the range where some function has a kink; a new series starts there.

    `fit_error[name]` (n,) is the largest error found between the nodes, relative to the largest value of the
    function. The degree is the smallest of `DEGREES` that brings every function below 1e-11; a function that no
    degree brings there does not raise the degree of the others.
    """

    def __init__(self, T_range: tuple[float, float], functions: Mapping[str, Sequence[ScalarFunction]],
                 limits: Sequence[float] = ()) -> None:
        low, high = float(T_range[0]), float(T_range[1])
        if not (np.isfinite([low, high]).all() and 0.0 < low < high):
            raise InputError(f"T_range = {T_range}: expected 0 < low < high, K")
        self.T_range = (low, high)
        edges = [low]
        for limit in sorted(limits):
            if limit - edges[-1] > SHORTEST_SEGMENT and high - limit > SHORTEST_SEGMENT:
                edges.append(float(limit))
        self.edges = np.array([*edges, high])
        self._slices: dict[str, slice] = {}
        flat: list[ScalarFunction] = []
        for name, group in functions.items():
            self._slices[name] = slice(len(flat), len(flat) + len(group))
            flat.extend(group)
        fits = [_fit(flat, a, b) for a, b in zip(self.edges[:-1], self.edges[1:])]
        scale = np.max([fit[2] for fit in fits], axis=0)
        error = np.max([fit[1] for fit in fits], axis=0) / np.where(scale > 0, scale, 1.0)
        self.fit_error = {name: error[where] for name, where in self._slices.items()}
        self.degree = max(len(fit[0]) for fit in fits) - 1
        self._coefficients = [np.pad(fit[0], ((0, self.degree + 1 - len(fit[0])), (0, 0))) for fit in fits]
        self._table = np.concatenate([block for pair in zip(self._coefficients, self._derivative(1)) for block in pair],
                                     axis=1)

    def check(self, T: Array) -> None:
        """`PropertyRangeError` for a temperature outside the range of the bank."""
        low, high = self.T_range
        if T.size and not (low <= T.min() and T.max() <= high):
            where = tuple(int(i) for i in np.argwhere(~((T >= low) & (T <= high)))[0])
            raise PropertyRangeError(f"T{list(where) if where else ''} = {T[where]:.8g} K is outside the range "
                                     f"{low:g} to {high:g} K the properties were built for")

    def basis(self, T: Array) -> Basis:
        """Temperatures T (...) in K made ready for the views of this bank.

        Raises `PropertyRangeError` for a temperature outside the range of the bank.
        """
        T = np.asarray(T, float)
        self.check(T)
        low, high = self.T_range
        flat = T.reshape(-1)
        segments = len(self.edges) - 1
        segment: NDArray[np.intp] | None = None
        if segments == 1:
            polynomials = _series(flat, low, high, self.degree)
        else:
            segment = np.clip(np.searchsorted(self.edges, flat, side="right") - 1, 0, segments - 1)
            polynomials = _series(flat, self.edges[segment], self.edges[segment + 1], self.degree)
        return Basis(_product(polynomials, segment, self._table, segments), polynomials, segment, T.shape)

    def view(self, *wanted: tuple[str, int]) -> BankView:
        """An evaluator of (name, order of the temperature derivative) pairs, for a `basis` of this bank."""
        parts: list[slice | Array] = []
        for name, order in wanted:
            where = self._slices[name]
            if order < 2:
                offset = order * self._coefficients[0].shape[1]
                parts.append(slice(where.start + offset, where.stop + offset))
            else:
                parts.append(np.concatenate([c[:, where] for c in self._derivative(order)], axis=1))
        return BankView(tuple(parts), len(self.edges) - 1)

    def _derivative(self, order: int) -> list[Array]:
        """Coefficients of a temperature derivative of every function, by segment."""
        return [np.pad(chebyshev.chebder(c, m=order, scl=2.0 / (b - a), axis=0), ((0, order), (0, 0)))
                for c, a, b in zip(self._coefficients, self.edges[:-1], self.edges[1:])]


def _sample(functions: Sequence[ScalarFunction], T: Array) -> Array:
    return np.array([[function(float(t)) for function in functions] for t in T])


def _fit(functions: Sequence[ScalarFunction], low: float, high: float) -> tuple[Array, Array, Array]:
    """Coefficients (degree + 1, K), largest error at points between the nodes (K,), largest value (K,)."""
    check = low + (high - low) * np.concatenate([[1e-4], np.linspace(0.013, 0.987, 13), [1.0 - 1e-4]])
    truth = _sample(functions, check)
    scale = np.abs(truth).max(0)
    best: tuple[Array, Array] | None = None
    pending = np.ones(len(functions), bool)
    for degree in DEGREES:
        nodes = chebyshev.chebpts1(degree + 1)
        values = _sample(functions, 0.5 * (high - low) * nodes + 0.5 * (high + low))
        coefficients = chebyshev.chebvander(nodes, degree).T @ values * (2.0 / (degree + 1))
        coefficients[0] *= 0.5
        # Rounding noise in the high coefficients grows with the square of the degree in every derivative: drop it.
        coefficients[np.abs(coefficients) < NOISE * np.abs(coefficients).max(0)] = 0.0
        error = np.abs(_series(check, low, high, degree) @ coefficients - truth).max(0)
        done = error <= FIT_TOLERANCE * scale
        if best is None:
            best, pending = (coefficients, error), ~done
        else:
            better = done | (error < 0.5 * best[1])
            padded = np.zeros_like(coefficients)
            padded[:len(best[0])] = best[0]
            best = (np.where(pending & better, coefficients, padded), np.where(pending & better, error, best[1]))
            # A function that gains little from more nodes has a kink or noise; more degrees will not help.
            pending &= ~done & better
        if not pending.any():
            break
    assert best is not None
    return best[0], best[1], scale
