"""Truncated Taylor arithmetic: a quantity with its first and second derivatives by temperature.

Activity models and equations of state are written once, in jets, and give the quantity itself, the enthalpy (first
derivative) and the heat capacity (second) from the same lines. Broadcasting and `@` are numpy's. Everything that is
not a jet counts as constant in temperature.
"""
from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np

from .protocol import Array


class Jet:
    """(f, df/dT, d2f/dT2) or a shorter start of it; two jets in one operation have the same length."""

    __slots__ = ("terms",)
    __array_ufunc__ = None  # arrays on the left hand side leave the operation to the jet

    def __init__(self, terms: Sequence[Array]) -> None:
        self.terms = tuple(terms)

    @property
    def value(self) -> Array:
        return self.terms[0]

    def linear(self, function: Callable[[Array], Array]) -> Jet:
        """`function` (linear, the same at every temperature) of each term."""
        return Jet([function(term) for term in self.terms])

    def __getitem__(self, index: Any) -> Jet:
        return self.linear(lambda term: term[index])

    def sum(self, axis: int) -> Jet:
        return self.linear(lambda term: term.sum(axis))

    def transpose(self) -> Jet:
        """The last two axes exchanged, copied: products of small matrices are twice as quick on whole rows."""
        return self.linear(lambda term: np.ascontiguousarray(np.swapaxes(term, -1, -2)))

    def __neg__(self) -> Jet:
        return self.linear(np.negative)

    def __add__(self, other: Any) -> Jet:
        if isinstance(other, Jet):
            return Jet([a + b for a, b in zip(self.terms, other.terms)])
        return Jet([self.terms[0] + other, *self.terms[1:]])

    __radd__ = __add__

    def __sub__(self, other: Any) -> Jet:
        return self.__add__(-other)

    def __rsub__(self, other: Any) -> Jet:
        return self.__neg__().__add__(other)

    def _product(self, other: Any, operation: Callable[[Any, Any], Array]) -> Jet:
        if not isinstance(other, Jet):
            return Jet([operation(term, other) for term in self.terms])
        a, b = self.terms, other.terms
        terms = [operation(a[0], b[0])]
        if len(a) > 1:
            terms.append(operation(a[1], b[0]) + operation(a[0], b[1]))
        if len(a) > 2:
            terms.append(operation(a[2], b[0]) + 2.0 * operation(a[1], b[1]) + operation(a[0], b[2]))
        return Jet(terms)

    def __mul__(self, other: Any) -> Jet:
        return self._product(other, np.multiply)

    __rmul__ = __mul__

    def __matmul__(self, other: Any) -> Jet:
        return self._product(other, np.matmul)

    def __rmatmul__(self, other: Any) -> Jet:
        return self.linear(lambda term: np.matmul(other, term))

    def reciprocal(self) -> Jet:
        return self._compose(*_inverses(self.terms[0], len(self.terms)))

    def __truediv__(self, other: Any) -> Jet:
        return self.__mul__(other.reciprocal() if isinstance(other, Jet) else 1.0 / other)

    def __rtruediv__(self, other: Any) -> Jet:
        return self.reciprocal().__mul__(other)

    def __pow__(self, exponent: float) -> Jet:
        return self._compose(*_powers(self.terms[0], exponent, len(self.terms)))

    def log(self, inverse: Jet | None = None) -> Jet:
        """Natural logarithm; `inverse` is the reciprocal of this jet, if it is at hand."""
        f = self.terms
        r = (self.reciprocal() if inverse is None else inverse).terms
        terms = [np.log(f[0])]
        if len(f) > 1:
            terms.append(f[1] * r[0])
        if len(f) > 2:
            terms.append(f[2] * r[0] + f[1] * r[1])
        return Jet(terms)

    def exp(self) -> Jet:
        value = np.exp(self.terms[0])
        return self._compose(value, value, value)

    def _compose(self, *outer: Array) -> Jet:
        """Chain rule: `outer` holds the function and its derivatives by its argument."""
        terms = [outer[0]]
        if len(self.terms) > 1:
            terms.append(outer[1] * self.terms[1])
        if len(self.terms) > 2:
            terms.append(outer[1] * self.terms[2] + outer[2] * self.terms[1] ** 2)
        return Jet(terms)


def _inverses(base: Array, count: int) -> list[Array]:
    """1/base and its derivatives, `count` terms: products, because a general power costs ten times as much."""
    terms = [1.0 / base]
    for k in range(1, count):
        terms.append(terms[-1] * terms[0] * -k if k > 1 else -terms[0] * terms[0])
    return terms


def _powers(base: Array, exponent: float, count: int) -> list[Array]:
    """base**exponent and its derivatives, `count` terms."""
    terms: list[Array] = []
    factor = 1.0
    for k in range(count):
        terms.append(factor * base ** (exponent - k))
        factor *= exponent - k
    return terms


def temperature(T: Array, order: int) -> Jet:
    """The identity: T, 1, 0, up to derivative `order`."""
    return Jet([T, np.ones_like(T), np.zeros_like(T)][:order + 1])
