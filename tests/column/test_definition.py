"""A column checked when it is made: degrees of freedom, places, rates, ends."""
from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from ratebased.column import (
    BoilupRatio,
    BottomsRate,
    Column,
    ComponentRecovery,
    CondenserDuty,
    DistillateRate,
    Feed,
    LiquidDraw,
    LiquidFeed,
    PartialCondenser,
    Product,
    ProductPurity,
    Reboiler,
    ReboilerDuty,
    RefluxRatio,
    TotalCondenser,
    VaporFeed,
)
from ratebased.column.specifications import Searched
from ratebased.errors import InputError, PlausibilityWarning

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
    ([BoilupRatio(2.0), ReboilerDuty(1e6)], "both speak of the reboiler and leave the top open"),
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
    ({"condenser": "total"}, r"condenser = 'total': expected TotalCondenser\(\) or PartialCondenser\(\)"),
    ({"condenser": TotalCondenser}, "condenser = <class"),
    ({"reboiler": False}, r"reboiler = False: expected Reboiler\(\) or None"),
    ({"stages": 8.9}, "stages = 8.9: expected a whole number"),
    ({"feeds": [(4, [50.0, 50.0])]}, r"feeds\[0\] = \(4, .*expected Feed or LiquidFeed or VaporFeed"),
    ({"draws": [FEED]}, r"draws\[0\] = LiquidFeed"),
    ({"specifications": RefluxRatio(2.0)}, "specifications = RefluxRatio.*expected a list"),
    ({"specifications": [RefluxRatio(2.0), Searched(0.5)]}, "Searched.* is not a specification"),
    ({"specifications": [RefluxRatio(2.0), ProductPurity(0.5, 2)]}, "ProductPurity.component = 2: .*0 to 1"),
    ({"duties": {3.5: 1e4}}, "stage of a duty = 3.5"),
    ({"duties": {3: float("nan")}}, r"duties\[3\] = nan"),
    ({"duties": [1e4]}, "duties = .*expected a mapping"),
    ({"draws": [LiquidDraw(3, 65.0)]}, "nothing of the feed"),
    ({"draws": [LiquidDraw(3, 120.0)]}, "120 mol/s in all"),
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
    (lambda: LiquidDraw(3, -5.0), "rate of a draw = -5.0"),
    (lambda: LiquidDraw(3.5, 5.0), "stage of a draw = 3.5"),
    (lambda: LiquidFeed(5.7, [1.0, 1.0], 300.0), "stage of a feed = 5.7: expected a whole number"),  # type: ignore
    (lambda: Feed(3, [1.0, 2.0], vapor_fraction="a"), "vapor_fraction = 'a'"),  # type: ignore[arg-type]
    (lambda: RefluxRatio("2"), "RefluxRatio = '2': expected a number"),  # type: ignore[arg-type]
    (lambda: RefluxRatio(None), "RefluxRatio"),  # type: ignore[arg-type]
    (lambda: TotalCondenser("a"), "subcooling = 'a'"),  # type: ignore[arg-type]
    (lambda: ProductPurity(0.5, 0, bounds=(1.0, 2.0, 3.0)), "two positive numbers"),  # type: ignore[arg-type]
    (lambda: ProductPurity(0.5, "light"), "ProductPurity.component = 'light'"),  # type: ignore[arg-type]
    (lambda: ProductPurity(0.5, -1), "ProductPurity.component = -1"),
    (lambda: ComponentRecovery(0.5, 0, "side"), "expected Product.TOP or Product.BOTTOM"),  # type: ignore[arg-type]
])
def test_parts(build: Any, words: str) -> None:
    with pytest.raises(InputError, match=words):
        build()


def test_changed_column_is_checked_again() -> None:
    column = make(condenser=PartialCondenser())
    with pytest.raises(InputError, match="missing"):
        column.with_(specifications=[RefluxRatio(1.0)])


def test_words_for_products_are_the_products() -> None:
    """"top" is no other product than Product.TOP."""
    assert ProductPurity(0.8, 0, "top") == ProductPurity(0.8, 0, Product.TOP)  # type: ignore[arg-type]


def test_liquid_draws_that_seem_to_run_a_section_dry_warn() -> None:
    with pytest.warns(PlausibilityWarning, match="down to stage 2 take 30 mol/s, reflux and feeds above bring 4 mol/s"):
        make(specifications=[RefluxRatio(0.2), DistillateRate(20.0)], draws=[LiquidDraw(2, 30.0)])


def test_other_number_of_stages() -> None:
    """One loss and one pressure for all stages go along; a profile of one a stage cannot."""
    column = make(heat_loss=5.0).with_(stages=11)
    assert column.heat_loss.shape == column.pressures.shape == (11,) and (column.heat_loss == 5.0).all()
    with pytest.raises(InputError, match="pressure: expected one number or 11"):
        make(pressure=np.linspace(1e5, 1.1e5, 8)).with_(stages=11)


def test_columns_keep_their_own_numbers() -> None:
    """A feed does not follow the caller's array, and columns can be compared."""
    flows = np.array([50.0, 50.0])
    feed = LiquidFeed(4, flows, 350.0)
    flows[0] = -1.0
    assert feed.flows[0] == 50.0
    column = make()
    assert column == column and column != make()
