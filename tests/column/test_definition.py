"""A column checked when it is made: degrees of freedom, places, rates, ends."""
from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from ratebased.column import (
    BoilupRatio,
    BottomsRate,
    Column,
    CondenserDuty,
    DistillateRate,
    Feed,
    LiquidDraw,
    LiquidFeed,
    PartialCondenser,
    ProductPurity,
    Reboiler,
    ReboilerDuty,
    RefluxRatio,
    TotalCondenser,
    VaporFeed,
)
from ratebased.errors import InputError

FEED = LiquidFeed(4, [50.0, 50.0], 350.0)
BOTH: dict[str, Any] = {"condenser": TotalCondenser(), "reboiler": Reboiler()}
SPECS = [RefluxRatio(2.0), DistillateRate(40.0)]


def make(**changes: Any) -> Column:
    arguments: dict[str, Any] = {"stages": 8, "feeds": [FEED], "pressure": 1e5,
                                 "specifications": SPECS} | BOTH | changes
    return Column(**arguments)


def test_kinds_and_pressures() -> None:
    column = make(pressure=np.linspace(1e5, 1.1e5, 8))
    assert column.kinds == ("condenser", *["tray"] * 6, "reboiler")
    assert column.contact.sum() == 6
    np.testing.assert_allclose(column.pressures, np.linspace(1e5, 1.1e5, 8))


@pytest.mark.parametrize("specifications, words", [
    ([], "2 degrees of freedom, 0 given"),
    ([RefluxRatio(2.0)], "missing 1 of: DistillateRate, BottomsRate, BoilupRatio, ReboilerDuty"),
    ([*SPECS, BoilupRatio(1.0)], "BoilupRatio surplus"),
    ([DistillateRate(40.0), BottomsRate(60.0)], "same thing through the overall balance"),
    ([RefluxRatio(2.0), RefluxRatio(3.0)], "RefluxRatio is given 2 times"),
    ([ProductPurity(0.9, 0), CondenserDuty(-1e6)], "would both need a search"),
])
def test_degrees_of_freedom(specifications: list[Any], words: str) -> None:
    with pytest.raises(InputError, match=words):
        make(specifications=specifications)


@pytest.mark.parametrize("ends, specifications, words", [
    ({"condenser": None, "reboiler": None}, [RefluxRatio(2.0)], "RefluxRatio is surplus, the column has neither"),
    ({"condenser": None}, [DistillateRate(20.0)], "DistillateRate is surplus, the column has a reboiler"),
    ({"reboiler": None}, [ReboilerDuty(1e6)], "ReboilerDuty is surplus, the column has a condenser"),
    ({"condenser": None}, [CondenserDuty(-1e6)], "CondenserDuty is surplus"),
    ({"condenser": None}, [], "1 degree of freedom, 0 given"),
])
def test_specification_of_a_missing_end(ends: dict[str, Any], specifications: list[Any], words: str) -> None:
    feeds = [LiquidFeed(1, [50.0, 50.0], 350.0), VaporFeed(8, [50.0, 50.0], 360.0)]
    with pytest.raises(InputError, match=words):
        make(**ends, specifications=specifications, feeds=feeds)


@pytest.mark.parametrize("changes, words", [
    ({"feeds": [LiquidFeed(9, [1.0, 1.0], 350.0)]}, r"feeds\[0\].stage = 9: the column has stages 1 to 8"),
    ({"feeds": [FEED, LiquidFeed(3, [1.0], 350.0)]}, r"feeds\[1\].flows: 1 components"),
    ({"feeds": [LiquidFeed(4, [0.0, 50.0], 350.0)]}, "component 0 is in no feed"),
    ({"feeds": []}, "feeds: a column needs at least one"),
    ({"draws": [LiquidDraw(1, 5.0)]}, "side draws are taken from contact stages"),
    ({"draws": [LiquidDraw(3, -5.0)]}, r"draws\[0\].rate = -5.0"),
    ({"draws": [LiquidDraw(3, 65.0)]}, "nothing of the feed"),
    ({"draws": [LiquidDraw(3, 120.0)]}, "120 mol/s in all"),
    ({"specifications": [RefluxRatio(0.2), DistillateRate(20.0)], "draws": [LiquidDraw(2, 30.0)]}, "must run dry"),
    ({"duties": {8: 1e5}}, "duty of condenser or reboiler is a specification"),
    ({"pressure": [1e5, 1e5]}, "pressure: expected one number or 8"),
    ({"pressure": -1e5}, "expected a number above zero"),
    ({"stages": 2}, "no contact stage is left"),
    ({"condenser": None, "specifications": [BoilupRatio(1.0)]}, "top section must run dry"),
    ({"reboiler": None, "specifications": [RefluxRatio(1.0)]}, "bottom section gets no vapour"),
])
def test_places_and_rates(changes: dict[str, Any], words: str) -> None:
    with pytest.raises(InputError, match=words):
        make(**changes)


@pytest.mark.parametrize("build, words", [
    (lambda: Feed(3, [1.0, 2.0]), "either temperature or vapor_fraction"),
    (lambda: Feed(3, [1.0, 2.0], temperature=300.0, vapor_fraction=0.5), "either temperature or vapor_fraction"),
    (lambda: Feed(3, [1.0, -2.0], temperature=300.0), r"\[1\] = -2.0: a flow cannot be negative"),
    (lambda: Feed(3, [1.0, 2.0], vapor_fraction=1.2), "vapor_fraction = 1.2"),
    (lambda: LiquidFeed(3, [0.0, 0.0], 300.0), "all zero"),
    (lambda: RefluxRatio(-1.0), "RefluxRatio = -1.0"),
    (lambda: CondenserDuty(1e6), "expected a negative number"),
    (lambda: ProductPurity(1.5, 0), "between 0 and 1"),
    (lambda: ProductPurity(0.5, 0, bounds=(3.0, 1.0)), "the lower first"),
    (lambda: TotalCondenser(-3.0), "subcooling"),
])
def test_parts(build: Any, words: str) -> None:
    with pytest.raises(InputError, match=words):
        build()


def test_changed_column_is_checked_again() -> None:
    column = make(condenser=PartialCondenser())
    with pytest.raises(InputError, match="missing"):
        column.with_(specifications=[RefluxRatio(1.0)])
