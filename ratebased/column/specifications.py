"""Specifications of a column and the count of its degrees of freedom.

Five of them are rows of the column's equations. Three are met by an outer bounded search (`Searched`): a purity is not
a monotone function of the reflux in a column of fixed contact area, so it has no place in a Newton system.
"""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from enum import Enum

from ..arguments import finite_scalar, whole_number
from ..errors import InputError


class Product(Enum):
    """An end product of a column."""

    TOP = "top"
    BOTTOM = "bottom"


@dataclass(frozen=True)
class _Positive:
    value: float

    @property
    def name(self) -> str:
        return type(self).__name__

    def __post_init__(self) -> None:
        object.__setattr__(self, "value", finite_scalar(self.name, self.value))
        if self.value <= 0:
            raise InputError(f"{self.name} = {self.value}: expected a positive number")


@dataclass(frozen=True)
class RefluxRatio(_Positive):
    """Reflux over distillate, mol/mol."""


@dataclass(frozen=True)
class DistillateRate(_Positive):
    """Distillate, liquid of a total or vapour of a partial condenser, mol/s."""


@dataclass(frozen=True)
class BottomsRate(_Positive):
    """Liquid from the reboiler, mol/s."""


@dataclass(frozen=True)
class BoilupRatio(_Positive):
    """Vapour from the reboiler over bottoms, mol/mol."""


@dataclass(frozen=True)
class ReboilerDuty(_Positive):
    """Heat added in the reboiler, W."""


@dataclass(frozen=True)
class Searched:
    """Base of the specifications met by an outer search of the reflux ratio (or of the rate, when that ratio is given).

    bounds: of the quantity searched; None takes 0.1 to 40 for a ratio, 2 to 98 % of the feed for a rate.
    """

    value: float
    bounds: tuple[float, float] | None = field(default=None, kw_only=True)

    @property
    def name(self) -> str:
        return type(self).__name__

    def _check_bounds(self) -> None:
        if self.bounds is None:
            return
        words = f"{self.name}.bounds = {self.bounds!r}: expected two positive numbers, the lower first"
        if isinstance(self.bounds, str) or not isinstance(self.bounds, Sequence) or len(self.bounds) != 2:
            raise InputError(words)
        low, high = (finite_scalar(f"{self.name}.bounds", bound) for bound in self.bounds)
        if not 0 < low < high:
            raise InputError(words)
        object.__setattr__(self, "bounds", (low, high))


@dataclass(frozen=True)
class CondenserDuty(Searched):
    """Heat added in the condenser, W: negative."""

    def __post_init__(self) -> None:
        object.__setattr__(self, "value", finite_scalar(self.name, self.value))
        if self.value >= 0:
            raise InputError(f"CondenserDuty = {self.value}: heat added to the column, expected a negative number")
        self._check_bounds()


@dataclass(frozen=True)
class _OfProduct(Searched):
    component: int
    product: Product = Product.TOP

    def __post_init__(self) -> None:
        value = finite_scalar(self.name, self.value)
        if not 0 < value < 1:
            raise InputError(f"{self.name} = {value}: expected a number between 0 and 1")
        component = whole_number(f"{self.name}.component", self.component)
        if component < 0:
            raise InputError(f"{self.name}.component = {component}: expected the index of a component")
        try:
            product = Product(self.product)
        except ValueError as error:
            raise InputError(f"{self.name}.product = {self.product!r}: expected Product.TOP or Product.BOTTOM"
                             ) from error
        for name, item in (("value", value), ("component", component), ("product", product)):
            object.__setattr__(self, name, item)
        self._check_bounds()


@dataclass(frozen=True)
class ProductPurity(_OfProduct):
    """Mole fraction of a component in an end product. component: its index. product: a `Product`, or its value."""


@dataclass(frozen=True)
class ComponentRecovery(_OfProduct):
    """Share of a component's feed that leaves in an end product. component: its index. product: a `Product`, or its
    value.
    """


Specification = RefluxRatio | DistillateRate | BottomsRate | BoilupRatio | ReboilerDuty | Searched


SPECIFICATIONS = (RefluxRatio, DistillateRate, BottomsRate, BoilupRatio, ReboilerDuty, CondenserDuty, ProductPurity,
                  ComponentRecovery)


def check_specifications(given: Sequence[Specification], condenser: bool, reboiler: bool, n: int) -> None:
    """Raise an `InputError` that names every missing and every surplus specification; n: number of components."""
    for s in given:
        if not isinstance(s, SPECIFICATIONS):
            raise InputError(f"specifications: {s!r} is not a specification")
        if isinstance(s, ProductPurity | ComponentRecovery) and s.component >= n:
            raise InputError(f"{s.name}.component = {s.component}: expected an index from 0 to {n - 1}")
    names = [s.name for s in given]
    for name in set(names):
        if names.count(name) > 1:
            raise InputError(f"specifications: {name} is given {names.count(name)} times")
    searched = [s.name for s in given if isinstance(s, Searched)]
    if len(searched) > 1:
        raise InputError(f"specifications: {' and '.join(searched)} would both need a search; give one of them")
    need = int(condenser) + int(reboiler)
    ends = {(True, True): "condenser and reboiler", (True, False): "a condenser", (False, True): "a reboiler",
            (False, False): "neither condenser nor reboiler"}[condenser, reboiler]
    allowed: tuple[type, ...] = (Searched,) if need else ()
    if condenser:
        allowed += (RefluxRatio, DistillateRate)
    if reboiler:
        allowed += (BottomsRate, BoilupRatio, ReboilerDuty)
    for s in given:
        if not isinstance(s, allowed) or (isinstance(s, CondenserDuty) and not condenser):
            raise InputError(f"specifications: {s.name} is surplus, the column has {ends}")
    if condenser and reboiler and {"DistillateRate", "BottomsRate"} <= set(names):
        raise InputError("specifications: DistillateRate and BottomsRate say the same thing through the overall "
                         "balance; replace one of them")
    if condenser and reboiler and {"BoilupRatio", "ReboilerDuty"} <= set(names):
        raise InputError("specifications: BoilupRatio and ReboilerDuty both speak of the reboiler and leave the top "
                         "open; replace one of them by RefluxRatio, DistillateRate or BottomsRate")
    freedom = f"{ends} {'leaves 1 degree' if need == 1 else f'leave {need} degrees'} of freedom"
    if len(given) < need:
        options = [t.__name__ for t in allowed[1:]] + [t.__name__ for t in (ProductPurity, ComponentRecovery)]
        options += ["CondenserDuty"] if condenser else []
        missing = ", ".join(o for o in options if o not in names)
        raise InputError(f"specifications: {freedom}, {len(given)} given "
                         f"({', '.join(names) or 'none'}); missing {need - len(given)} of: {missing}")
    if len(given) > need:
        raise InputError(f"specifications: {freedom}, {len(given)} "
                         f"given: {', '.join(names[need:])} surplus")
