"""Columns from parsed TOML tables."""
from __future__ import annotations

import textwrap
import tomllib

import numpy as np
import pytest

from ratebased.column import (
    ComponentRecovery,
    ContactorPressure,
    DistillateRate,
    Feed,
    LiquidDraw,
    PartialCondenser,
    Product,
    ProductPurity,
    RefluxRatio,
    TotalCondenser,
    VaporFeed,
    column_from_mapping,
    from_table,
)
from ratebased.errors import InputError

NAMES = ["ethanol", "water"]
CASE = """
stages = 12
pressure_Pa = 101325.0
condenser = "total"
subcooling_K = 5.0
reboiler = true
heat_loss_W = 200.0

[[feed]]
stage = 6
flow_mol_s = 100.0
composition = {ethanol = 0.3, water = 0.7}
vapor_fraction = 0.2

[[feed]]
stage = 8
flow_mol_s = 10.0
composition = {water = 1.0}
phase = "vapor"
T_K = 380.0

[[draw]]
stage = 4
phase = "liquid"
flow_mol_s = 3.0

[[duty]]
stage = 5
duty_W = -2.0e4

[specifications]
reflux_ratio = 2.5
distillate_mol_s = 30.0
"""


def read(text: str) -> object:
    return column_from_mapping(tomllib.loads(text), NAMES, "case.toml [column]")


def test_every_key() -> None:
    column = column_from_mapping(tomllib.loads(CASE), NAMES)
    assert column.stages == 12 and column.condenser == TotalCondenser(5.0) and column.reboiler is not None
    first, second = column.feeds
    assert isinstance(first, Feed) and first.vapor_fraction == 0.2 and isinstance(second, VaporFeed)
    np.testing.assert_allclose(first.flows, [30.0, 70.0])
    assert column.draws == (LiquidDraw(4, 3.0),) and column.duties == {5: -2e4}
    assert column.specifications == (RefluxRatio(2.5), DistillateRate(30.0))
    assert column.stage_duties.sum() == pytest.approx(-2e4 - 10 * 200.0)


def test_pressures_and_searches() -> None:
    text = CASE.replace("pressure_Pa = 101325.0", "pressure_top_Pa = 1.0e5\npressure_drop_Pa = 500.0")
    text = text.replace("reflux_ratio = 2.5", 'purity = {component = "ethanol", fraction = 0.8, bounds = [0.5, 9]}')
    column = column_from_mapping(tomllib.loads(text.replace('"total"\nsubcooling_K = 5.0', '"partial"')), NAMES)
    assert isinstance(column.condenser, PartialCondenser)
    np.testing.assert_allclose(np.diff(column.pressures), 500.0)
    assert column.search == ProductPurity(0.8, 0, Product.TOP, bounds=(0.5, 9.0))
    text = CASE.replace("pressure_Pa = 101325.0", "pressure_from_hardware = true\npressure_top_Pa = 1.0e5").replace(
        "reflux_ratio = 2.5", 'recovery = {component = "water", product = "bottom", fraction = 0.9}')
    column = column_from_mapping(tomllib.loads(text), NAMES)
    assert column.pressure == ContactorPressure(1e5) and column.search == ComponentRecovery(0.9, 1, Product.BOTTOM)


@pytest.mark.parametrize("old, new, words", [
    ("subcooling_K", "subcoling_K", "unknown key 'subcoling_K'; did you mean 'subcooling_K'"),
    ("reflux_ratio", "reflux", "unknown key 'reflux'; did you mean 'reflux_ratio'"),
    ("stages = 12\n", "", "key stages is missing"),
    ('"total"', '"dry"', "condenser = 'dry': expected one of 'total', 'partial'"),
    ("vapor_fraction = 0.2", "vapor_fraction = 0.2\nT_K = 350.0", "give either T_K or vapor_fraction"),
    ("vapor_fraction = 0.2", "vapor_fraction = -0.2", "vapor_fraction = -0.2"),
    ("ethanol = 0.3", "methanol = 0.3", "unknown key 'methanol'"),
    ("stage = 4", "stage = 40", "case.toml .column.: draws.0..stage = 40"),
    ("reflux_ratio = 2.5", "reflux_ratio = -2.5", "reflux_ratio = -2.5"),
    ("distillate_mol_s = 30.0", "", "missing 1 of"),
    ("pressure_Pa = 101325.0", 'pressure_Pa = "low"', "pressure_Pa = 'low'"),
    ("reflux_ratio = 2.5", 'purity = {component = "ethanl", fraction = 0.8}', "did you mean 'ethanol'"),
])
def test_errors_name_file_and_key(old: str, new: str, words: str) -> None:
    with pytest.raises(InputError, match=words):
        read(CASE.replace(old, new))


def test_the_layout_in_the_docstring_is_a_table() -> None:
    text = from_table.__doc__
    assert text is not None
    layout = tomllib.loads(textwrap.dedent(text[text.index("    [column]"):text.index("`bounds` limit")]))["column"]
    assert layout["draw"] == [{"stage": 5, "phase": "liquid", "flow_mol_s": 15.0}]
    assert layout["duty"] == [{"stage": 3, "duty_W": -2.0e4}]
