"""Truncated Taylor arithmetic: a quantity with its first and second derivatives by temperature.

Activity models and equations of state are written once, in jets, and give the quantity itself, the enthalpy (first
derivative) and the heat capacity (second) from the same lines. Broadcasting and `@` are numpy's. Everything that is
not a jet counts as constant in temperature.
"""
from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from .protocol import Array


class Jet:
    """(f, df/dT, d2f/dT2) or a shorter start of it, stacked on the first axis of `terms`.

    Two jets in one operation have the same length and the same number of axes, because the first one is taken; a plain
    array may have fewer, as in any broadcast.
    """

    __slots__ = ("terms",)
    __array_ufunc__ = None  # arrays on the left hand side leave the operation to the jet

    def __init__(self, terms: Any) -> None:
        self.terms: Array = np.asarray(terms)

    @property
    def value(self) -> Array:
        value: Array = self.terms[0]
        return value

    def linear(self, function: Callable[[Array], Array]) -> Jet:
        """`function` (linear, the same at every temperature, of the last axes) of all terms."""
        return Jet(function(self.terms))

    def __getitem__(self, index: Any) -> Jet:
        """Indexing of the last axes: `index` starts with an ellipsis."""
        return Jet(self.terms[index])

    def sum(self, axis: int) -> Jet:
        """Sum over one of the last axes, counted from the end."""
        return Jet(self.terms.sum(axis))

    def transpose(self) -> Jet:
        """The last two axes exchanged, copied: products of small matrices are twice as quick on whole rows."""
        return Jet(np.ascontiguousarray(np.swapaxes(self.terms, -1, -2)))

    def __neg__(self) -> Jet:
        return Jet(-self.terms)

    def __add__(self, other: Any) -> Jet:
        if isinstance(other, Jet):
            return Jet(self.terms + other.terms)
        value = self.terms[0] + other
        terms = np.empty((len(self.terms), *value.shape))
        terms[0] = value
        terms[1:] = self.terms[1:]
        return Jet(terms)

    __radd__ = __add__

    def __sub__(self, other: Any) -> Jet:
        return self.__add__(-other)

    def __rsub__(self, other: Any) -> Jet:
        return self.__neg__().__add__(other)

    def _product(self, other: Any, operation: Callable[[Any, Any], Array]) -> Jet:
        if not isinstance(other, Jet):
            return Jet(operation(self.terms, other))
        a, b = self.terms, other.terms
        terms = operation(a, b[0])
        if len(a) == 2:
            terms[1] += operation(a[0], b[1])
        elif len(a) == 3:
            cross = operation(a[:2], b[1])
            terms[1] += cross[0]
            terms[2] += 2.0 * cross[1] + operation(a[0], b[2])
        return Jet(terms)

    def __mul__(self, other: Any) -> Jet:
        return self._product(other, np.multiply)

    __rmul__ = __mul__

    def __matmul__(self, other: Any) -> Jet:
        return self._product(other, np.matmul)

    def __rmatmul__(self, other: Any) -> Jet:
        return Jet(np.matmul(other, self.terms))

    def reciprocal(self) -> Jet:
        inverse = 1.0 / self.terms[0]
        # products, because a general power costs ten times as much
        square = inverse * inverse if len(self.terms) > 1 else inverse
        return self._compose(inverse, -square, 2.0 * inverse * square if len(self.terms) > 2 else square)

    def __truediv__(self, other: Any) -> Jet:
        return self.__mul__(other.reciprocal() if isinstance(other, Jet) else 1.0 / other)

    def __rtruediv__(self, other: Any) -> Jet:
        return self.reciprocal().__mul__(other)

    def __pow__(self, exponent: float) -> Jet:
        base = self.terms[0]
        return self._compose(base ** exponent, exponent * base ** (exponent - 1.0),
                             exponent * (exponent - 1.0) * base ** (exponent - 2.0))

    def log(self, inverse: Jet | None = None) -> Jet:
        """Natural logarithm; `inverse` is the reciprocal of this jet, if it is at hand."""
        f = self.terms
        r = (self.reciprocal() if inverse is None else inverse).terms
        terms = np.empty_like(f)
        terms[0] = np.log(f[0])
        if len(f) > 1:
            np.multiply(f[1:], r[0], out=terms[1:])
        if len(f) > 2:
            terms[2] += f[1] * r[1]
        return Jet(terms)

    def exp(self) -> Jet:
        value = np.exp(self.terms[0])
        return self._compose(value, value, value)

    def _compose(self, value: Array, first: Array, second: Array) -> Jet:
        """Chain rule with a function of this jet and its derivatives by its argument."""
        f = self.terms
        terms = np.empty_like(f)
        terms[0] = value
        if len(f) > 1:
            np.multiply(f[1:], first, out=terms[1:])
        if len(f) > 2:
            terms[2] += second * (f[1] * f[1])
        return Jet(terms)


def temperature(T: Array, order: int) -> Jet:
    """The identity: T, 1, 0, up to derivative `order`."""
    terms = np.zeros((order + 1, *np.shape(T)))
    terms[0] = T
    terms[1:2] = 1.0
    return Jet(terms)


def common_state(T: Array, P: Array, z: Array) -> tuple[Array, Array, Array]:
    """T (...), P (...) and z (..., n) as float arrays of one batch shape."""
    T, P, z = np.asarray(T, float), np.asarray(P, float), np.asarray(z, float)
    if T.shape == P.shape == z.shape[:-1]:
        return T, P, z
    batch = np.broadcast_shapes(T.shape, P.shape, z.shape[:-1])
    return np.broadcast_to(T, batch), np.broadcast_to(P, batch), np.broadcast_to(z, (*batch, z.shape[-1]))


def common_batch(T: Array, x: Array) -> tuple[Array, Array]:
    """T (...) and x (..., n) as float arrays of one batch shape, so that jets of either have equally many axes."""
    T, x = np.asarray(T, float), np.asarray(x, float)
    if T.shape == x.shape[:-1]:
        return T, x
    batch = np.broadcast_shapes(T.shape, x.shape[:-1])
    return np.broadcast_to(T, batch), np.broadcast_to(x, (*batch, x.shape[-1]))
