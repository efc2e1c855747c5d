"""The record every public correlation carries, and the decorator that attaches it.

The decorator turns the arguments into float arrays, checks them against the domains of the glossary, calls the
formula and warns where the call lies outside the published range. The function keeps its name and signature and gains

- `function.record`: what it predicts, for what, and its `Validity`;
- `function.record.outside(...)`: variable -> boolean array, without a warning, for the same arguments as a call;
- `function.silent(...)`: the value without the range check, for layers that read `outside` themselves.
"""
from __future__ import annotations

import functools
import inspect
import warnings
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from types import CodeType
from typing import Any, ParamSpec, Protocol, TypeVar, cast

import numpy as np

from .bibliography import REFERENCES
from .errors import InputError, OutOfRangeWarning
from .glossary import GLOSSARY, Domain
from .validity import Array, Mask, Validity

P = ParamSpec("P")
R = TypeVar("R")

Values = Any
"""A number or an array of numbers: what the arguments of a correlation accept; the formula itself sees arrays."""


@dataclass(frozen=True)
class Record:
    """What is known about one correlation.

    name : module and function, `packing_area.onda`.
    predicts : the quantity, in words.
    hardware : what it applies to.
    unit : of the result ('-' for dimensionless; several joined by ';' for a result of several fields).
    validity : range, scatter, source, confidence.
    dimensional : True where the constants hold in SI only, so that a change of units needs other constants.
    """

    name: str
    predicts: str
    hardware: str
    unit: str
    validity: Validity
    dimensional: bool
    parameters: tuple[str, ...] = field(repr=False)
    defaults: Mapping[str, Any] = field(repr=False)
    variables: Mapping[str, Callable[..., Array]] = field(repr=False)
    needs: Mapping[str, tuple[str, ...]] = field(repr=False)

    def bind(self, args: tuple[Any, ...], kwargs: Mapping[str, Any]) -> dict[str, Any]:
        """Arguments by name, numbers turned into checked float arrays."""
        bound = {**self.defaults, **dict(zip(self.parameters, args)), **kwargs}
        for name, value in bound.items():
            quantity = GLOSSARY.get(name)
            if quantity is not None and quantity.domain is not None and value is not None:
                bound[name] = checked(name, value, quantity.domain, quantity.diagonal_ignored)
        return bound

    def range_variables(self, *args: Any, **kwargs: Any) -> dict[str, Array]:
        """The variables of the range, evaluated for the arguments of a call."""
        bound = self.bind(args, kwargs)
        return {name: self._variable(name, bound) for name in self.validity.ranges}

    def _variable(self, name: str, bound: Mapping[str, Any]) -> Array:
        if name in self.variables:
            return self.variables[name](*(bound[need] for need in self.needs[name]))
        return cast(Array, bound[name])

    def outside(self, *args: Any, **kwargs: Any) -> dict[str, Mask]:
        """Variable -> boolean array, true where a call with these arguments is outside the range; only offenders."""
        return {name: mask for name, (mask, _) in self._outside(self.bind(args, kwargs)).items()}

    def _outside(self, bound: Mapping[str, Any]) -> dict[str, tuple[Mask, Array]]:
        found: dict[str, tuple[Mask, Array]] = {}
        for name, interval in self.validity.ranges.items():
            if interval is not None:
                value = self._variable(name, bound)
                mask = interval.outside(value)
                if mask.any():
                    found[name] = (mask, value)
        return found

    def warn_outside(self, bound: Mapping[str, Any], stacklevel: int) -> None:
        """One `OutOfRangeWarning` for each variable outside its range."""
        for name, (mask, value) in self._outside(bound).items():
            interval = self.validity.ranges[name]
            assert interval is not None
            low, high = float(value[mask].min()), float(value[mask].max())
            worst = []
            if interval.low is not None and low < interval.low:
                worst.append(f"{low:.4g} below {interval.low:g} by {interval.low - low:.3g}")
            if interval.high is not None and high > interval.high:
                worst.append(f"{high:.4g} above {interval.high:g} by {high - interval.high:.3g}")
            warnings.warn(f"{self.name}: {name} {' and '.join(worst) or 'not a number'} "
                          f"({int(mask.sum())} of {mask.size} entries)", OutOfRangeWarning, stacklevel=stacklevel + 1)


class Correlation(Protocol[P, R]):
    """A function that carries its record."""

    record: Record
    silent: Callable[P, R]
    __name__: str

    def __call__(self, *args: P.args, **kwargs: P.kwargs) -> R: ...


REGISTRY: dict[str, Correlation[..., Any]] = {}
"""Every public correlation by `module.function`, filled as the modules are imported."""


def checked(name: str, value: Any, domain: Domain, diagonal_ignored: bool = False) -> Array:
    """`value` as a float array inside `domain`; an `InputError` names the first entry that is not."""
    try:
        array = np.asarray(value)
        if array.dtype.kind in "USc":                         # words and complex numbers are refused, not read or cut
            raise TypeError
        array = np.asarray(array, dtype=float)
    except (TypeError, ValueError) as error:
        raise InputError(f"{name}: expected numbers, got {value!r}") from error
    if diagonal_ignored:
        if array.ndim < 2 or array.shape[-1] != array.shape[-2]:
            raise InputError(f"{name}: expected a square matrix of pairs on the last two axes, got shape {array.shape}")
        array = np.where(np.eye(array.shape[-1], dtype=bool), 1.0, array)
    require(name, array, domain.contains(array), domain.words)
    return array


def require(name: str, value: Array, holds: Mask, words: str) -> None:
    """Raise an `InputError` for the first entry of `value` where `holds` is false."""
    if not np.all(holds):
        where = tuple(int(i) for i in np.argwhere(~np.asarray(holds))[0])
        shown = np.broadcast_to(value, np.shape(holds))[where]
        raise InputError(f"{name}{list(where) if where else ''} = {shown:.6g}: expected {words}", where)


def require_finite(name: str, result: Any) -> None:
    """Raise an `InputError` where arguments far from any hardware overflow a formula: no NaN or infinity comes out."""
    for part in result if isinstance(result, tuple) else (result,):
        if not np.isfinite(part).all():
            where = tuple(int(i) for i in np.argwhere(~np.isfinite(part))[0])
            raise InputError(f"{name}: the result{list(where) if where else ''} is not finite, the arguments lie too "
                             "far from any it was made for")


def correlation(predicts: str, hardware: str, unit: str, validity: Validity, *, dimensional: bool = False,
                variables: Mapping[str, Callable[..., Array]] | None = None
                ) -> Callable[[Callable[P, R]], Correlation[P, R]]:
    """Make a formula a public correlation with a record.

    variables : name -> function of some of the arguments (by name), for the range variables that are not arguments.
    """
    if validity.source not in REFERENCES:
        raise KeyError(f"{validity.source} is not in the bibliography")
    computed = dict(variables or {})
    needs = {name: _arguments(function)[0] for name, function in computed.items()}

    def attach(formula: Callable[P, R]) -> Correlation[P, R]:
        parameters, positional, defaults = _arguments(formula)
        for name in parameters:
            if name not in GLOSSARY:
                raise KeyError(f"{formula.__name__}: argument {name} is not in the glossary")
        for name in validity.ranges:
            if name not in computed and name not in parameters:
                raise KeyError(f"{formula.__name__}: nothing computes the range variable {name}")
        module = formula.__module__.rsplit(".", 1)[-1]
        record = Record(f"{module}.{formula.__name__}", predicts, hardware, unit, validity, dimensional, parameters,
                        defaults, computed, needs)
        required = tuple(name for name in parameters if name not in defaults)

        def bind(args: tuple[Any, ...], kwargs: Mapping[str, Any]) -> dict[str, Any]:
            if (len(args) > positional or not kwargs.keys() <= set(parameters[len(args):])
                    or any(name not in kwargs for name in required[len(args):])):
                inspect.signature(formula).bind(*args, **kwargs)  # raises the usual TypeError
            return record.bind(args, kwargs)

        def evaluate(bound: Mapping[str, Any]) -> R:
            with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
                result = cast(Callable[..., R], formula)(**bound)
            require_finite(record.name, result)
            return result

        @functools.wraps(formula)
        def checked_call(*args: P.args, **kwargs: P.kwargs) -> R:
            bound = bind(args, kwargs)
            record.warn_outside(bound, 2)
            return evaluate(bound)

        @functools.wraps(formula)
        def silent(*args: P.args, **kwargs: P.kwargs) -> R:
            return evaluate(bind(args, kwargs))

        checked_call.__doc__ = silent.__doc__ = described(formula.__doc__ or "", record)
        result = cast(Correlation[P, R], checked_call)
        result.record = record
        result.silent = silent
        REGISTRY[record.name] = result
        return result

    return attach


def _arguments(function: Callable[..., Any]) -> tuple[tuple[str, ...], int, dict[str, Any]]:
    """Names of the arguments, how many of them are positional, and the defaults.

    Read from the code object: `inspect.signature` over the whole catalogue would double the time of an import.
    """
    code: CodeType = function.__code__
    names = code.co_varnames[:code.co_argcount + code.co_kwonlyargcount]
    values = function.__defaults__ or ()  # type: ignore[attr-defined]
    defaults = dict(zip(names[code.co_argcount - len(values):code.co_argcount], values))
    defaults.update(function.__kwdefaults__ or {})  # type: ignore[attr-defined]
    return names, code.co_argcount, defaults


def described(text: str, record: Record) -> str:
    """The docstring, completed from glossary and record: arguments, errors, range, scatter, source."""
    lines = [inspect.cleandoc(text), "", "Parameters", "----------"]
    for name in record.parameters:
        quantity = GLOSSARY[name]
        lines.append(f"{name} : {quantity.meaning}, {quantity.unit}")
    validity = record.validity
    lines += ["", f"Result: {record.unit}. All arguments broadcast; SI units in and out.",
              "Raises `InputError` where an argument leaves its domain or no finite result follows; warns",
              "`OutOfRangeWarning` outside the range.",
              f"Range: {validity.describe_range()}.",
              f"Scatter: {validity.describe_error()}.",
              f"Confidence: {validity.confidence.value}.",
              f"Source: {REFERENCES[validity.source]}"]
    return "\n".join(lines)
