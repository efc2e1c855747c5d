"""Checks at the boundary: every public function passes its arguments through here once, the kernels trust them."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .errors import InputError

Array = NDArray[np.float64]

SUM_TOLERANCE = 1e-9
"""Mole fractions whose sum is off by no more than this are renormalised; anything worse is an error."""


def real_array(name: str, value: ArrayLike) -> Array:
    """`value` as a float array; words and complex numbers are refused, not read or cut."""
    try:
        array = np.asarray(value)
        if array.dtype.kind in "USc":
            raise TypeError
        return np.asarray(array, dtype=float)
    except (TypeError, ValueError) as error:
        raise InputError(f"{name}: expected numbers, got {value!r}") from error


def finite_array(name: str, value: ArrayLike) -> Array:
    """`value` as a float array without NaN or infinity."""
    array = real_array(name, value)
    if not np.isfinite(array).all():
        where = tuple(int(i) for i in np.argwhere(~np.isfinite(array))[0])
        raise InputError(f"{name}{list(where) if where else ''} = {array[where]}: expected a finite number")
    return array


def positive_array(name: str, value: ArrayLike) -> Array:
    """`value` as a finite array, every entry above zero."""
    array = finite_array(name, value)
    if not (array > 0).all():
        where = tuple(int(i) for i in np.argwhere(~(array > 0))[0])
        raise InputError(f"{name}{list(where) if where else ''} = {array[where]}: expected a number above zero")
    return array


def positive_scalar(name: str, value: float) -> float:
    """`value` as a float above zero."""
    array = positive_array(name, value)
    if array.ndim:
        raise InputError(f"{name}: expected one number, got an array of shape {array.shape}")
    return float(array)


def finite_scalar(name: str, value: float) -> float:
    """`value` as a finite float; words are no numbers."""
    if isinstance(value, str | bytes | bool):
        raise InputError(f"{name} = {value!r}: expected a number")
    array = finite_array(name, value)
    if array.ndim:
        raise InputError(f"{name}: expected one number, got an array of shape {array.shape}")
    return float(array)


def whole_number(name: str, value: int) -> int:
    """`value` as an int; a fraction is an error, never cut."""
    number = finite_scalar(name, value)
    if number != round(number):
        raise InputError(f"{name} = {value}: expected a whole number")
    return int(number)


def truth_values(name: str, value: ArrayLike) -> NDArray[np.bool_]:
    """`value` as booleans; words, which are all true to Python, are refused."""
    return np.asarray(real_array(name, value), dtype=bool)


def mole_fractions(name: str, value: ArrayLike, n: int | None = None) -> Array:
    """`value` as mole fractions (..., n): none negative, sums one to 1e-9 (then renormalised)."""
    x = finite_array(name, value)
    if x.ndim < 1 or (n is not None and x.shape[-1] != n):
        raise InputError(f"{name}: expected {n or 'some'} components on the last axis, got shape {x.shape}")
    if (x < 0).any():
        where = tuple(int(i) for i in np.argwhere(x < 0)[0])
        raise InputError(f"{name}{list(where)} = {x[where]}: a mole fraction cannot be negative")
    total = x.sum(-1, keepdims=True)
    off = np.abs(total[..., 0] - 1.0) > SUM_TOLERANCE
    if off.any():
        where = tuple(int(i) for i in np.argwhere(off)[0])
        raise InputError(f"{name}{list(where) if where else ''}: mole fractions sum to {total[..., 0][where]:.10g}, "
                         "expected 1")
    return np.asarray(x / total)


def component_array(name: str, value: ArrayLike, n: int, *, one_for_all: bool = False) -> Array:
    """`value` as a finite array (..., n); with `one_for_all` a single number stands for all components."""
    array = finite_array(name, value)
    if one_for_all and array.ndim == 0:
        return np.full(n, float(array))
    if array.shape[-1:] != (n,):
        raise InputError(f"{name}: expected {n} components on the last axis, got shape {array.shape}")
    return array


def component_index(name: str, component: int, n: int | None = None) -> int:
    """`component` as the index of one of n components, counted from the end where negative."""
    if isinstance(component, bool) or not isinstance(component, (int, np.integer)):
        raise InputError(f"{name} = {component!r}: expected the index of one component")
    if n is not None and not -n <= component < n:
        raise InputError(f"{name} = {component}: expected an index of one of {n} components")
    return int(component)


def batch_shape(**shapes: tuple[int, ...]) -> tuple[int, ...]:
    """The common batch shape of arguments with the batch shapes given."""
    try:
        return np.broadcast_shapes(*shapes.values())
    except ValueError as error:
        given = ", ".join(f"{name} {shape}" for name, shape in shapes.items() if shape)
        raise InputError(f"batch shapes do not broadcast: {given}") from error


def component_vector(name: str, value: ArrayLike, n: int, *, positive: bool = False) -> Array:
    """`value` as (n,), one number standing for all components."""
    array = positive_array(name, value) if positive else finite_array(name, value)
    if array.shape not in ((), (n,)):
        raise InputError(f"{name}: expected {n} entries, one for each component, got shape {array.shape}")
    return np.broadcast_to(array, (n,)).copy()


def pair_matrix(name: str, value: ArrayLike, n: int) -> Array:
    """`value` as pair quantities (..., n, n): positive and symmetric off the diagonal (which is ignored and set to 1).

    One number stands for all pairs.
    """
    array = real_array(name, value)
    if array.ndim == 0:
        array = np.full((n, n), float(array))
    if array.shape[-2:] != (n, n):
        raise InputError(f"{name}: expected shape (..., {n}, {n}), got {array.shape}")
    array = np.where(np.eye(n, dtype=bool), 1.0, array)
    array = positive_array(name, array)
    mirrored = np.swapaxes(array, -1, -2)
    off = np.abs(array - mirrored) > 1e-9 * np.abs(array)
    if off.any():
        where = tuple(int(i) for i in np.argwhere(off)[0])
        raise InputError(f"{name}{list(where)} = {array[where]} differs from its mirror entry {mirrored[where]}: "
                         "pair quantities are symmetric")
    return array
