"""A column read from a parsed TOML table.

    [column]
    stages = 12                          # condenser and reboiler included
    pressure_Pa = 101325.0               # one number or one a stage; or pressure_top_Pa with pressure_drop_Pa a stage
    pressure_from_hardware = true        # pressure_top_Pa and the contactor's own pressure drop
    condenser = "total"                  # "total", "partial" or absent
    subcooling_K = 0.0                   # of a total condenser
    reboiler = true                      # a kettle; default false
    segment_height_m = 0.3               # packed bed: one number or one a stage; absent: trays
    heat_loss_W = 0.0                    # from each contact stage, one number or one a stage

    [[column.feed]]
    stage = 6
    flow_mol_s = 100.0                   # with composition = {water = 0.6, ethanol = 0.4}
    T_K = 350.0                          # flashed at T_K, or at vapor_fraction = 0.3
    phase = "liquid"                     # "liquid" or "vapor": no flash, T_K needed

    [[column.draw]]
    stage = 5
    phase = "liquid"                     # "liquid" or "vapor"
    flow_mol_s = 15.0

    [[column.duty]]
    stage = 3
    duty_W = -2.0e4                      # heat added to a contact stage

    [column.specifications]              # as many as condenser and reboiler leave degrees of freedom
    reflux_ratio = 2.5                   # or distillate_mol_s, bottoms_mol_s, boilup_ratio, reboiler_duty_W,
                                         # condenser_duty_W
    purity = {component = "ethanol", product = "top", fraction = 0.95, bounds = [0.5, 10.0]}
    recovery = {component = "ethanol", product = "top", fraction = 0.99}

`bounds` limit the search of the reflux ratio (or of the rate, when that ratio is given).
"""
from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

import numpy as np

from ..errors import InputError
from ..properties.protocol import Array
from ..toml_table import TomlTable
from .definition import (
    AnyFeed,
    Column,
    ContactorPressure,
    Feed,
    LiquidDraw,
    LiquidFeed,
    PartialCondenser,
    Reboiler,
    TotalCondenser,
    VaporDraw,
    VaporFeed,
)
from .specifications import (
    BoilupRatio,
    BottomsRate,
    ComponentRecovery,
    CondenserDuty,
    DistillateRate,
    Product,
    ProductPurity,
    ReboilerDuty,
    RefluxRatio,
    Specification,
)

SIMPLE: Mapping[str, Callable[[float], Specification]] = {
    "reflux_ratio": RefluxRatio, "distillate_mol_s": DistillateRate, "bottoms_mol_s": BottomsRate,
    "boilup_ratio": BoilupRatio, "reboiler_duty_W": ReboilerDuty, "condenser_duty_W": CondenserDuty}
PRODUCTS = {"top": Product.TOP, "bottom": Product.BOTTOM}


def column_from_mapping(mapping: Mapping[str, Any], names: Sequence[str], where: str = "column") -> Column:
    """A column from the table [column] of a parsed TOML file; the layout is in the module's docstring.

    names: of the components, in the order of the property model. where: the file, for messages.

    Raises
    ------
    InputError : names file, key and value; an unknown key is an error that tells the nearest known one.
    """
    return column_from_table(TomlTable(mapping, where), names)


def column_from_table(table: TomlTable, names: Sequence[str]) -> Column:
    """`column_from_mapping` of a table that is open for reading; finishes it."""
    stages = table.whole("stages")
    pressure = _pressure(table, stages)
    condenser = _condenser(table)
    reboiler = Reboiler() if table.flag("reboiler", False) else None
    height = _per_stage(table, "segment_height_m") if table.has("segment_height_m") else None
    loss = _per_stage(table, "heat_loss_W") if table.has("heat_loss_W") else np.zeros(())
    feeds = [_feed(t, names) for t in table.tables("feed")]
    draws = [_draw(t) for t in table.tables("draw")]
    duties: dict[int, float] = {}
    for t in table.tables("duty"):
        stage = t.whole("stage")
        duties[stage] = duties.get(stage, 0.0) + t.number("duty_W")
        t.finish()
    specifications = _specifications(table.table("specifications", required=False), names)
    table.finish()
    try:
        return Column(stages, feeds, pressure, condenser=condenser, reboiler=reboiler, specifications=specifications,
                      draws=draws, duties=duties, heat_loss=loss, segment_height=height)
    except InputError as error:
        raise InputError(f"{table.where}: {error}") from error


def _pressure(table: TomlTable, stages: int) -> Array | ContactorPressure:
    own = table.flag("pressure_from_hardware", False)
    if own:
        return ContactorPressure(table.number("pressure_top_Pa", above=0.0), table.number("pressure_drop_Pa", 0.0))
    if table.has("pressure_top_Pa"):
        top, drop = table.number("pressure_top_Pa", above=0.0), table.number("pressure_drop_Pa", 0.0)
        return np.asarray(top + drop * np.arange(stages))
    return _per_stage(table, "pressure_Pa")


def _condenser(table: TomlTable) -> TotalCondenser | PartialCondenser | None:
    if not table.has("condenser"):
        return None
    kind = table.choice("condenser", {"total": TotalCondenser, "partial": PartialCondenser})
    if kind is TotalCondenser:
        return TotalCondenser(table.number("subcooling_K", 0.0))
    return PartialCondenser()


def _per_stage(table: TomlTable, key: str) -> Array:
    value = table.take(key)
    numbers = value if isinstance(value, list) else [value]
    if not numbers or not all(isinstance(item, int | float) and not isinstance(item, bool) for item in numbers):
        raise table.fail(key, "expected a number or a list of numbers, one a stage")
    return np.asarray(value, float)


def _feed(table: TomlTable, names: Sequence[str]) -> AnyFeed:
    stage = table.whole("stage")
    flows = table.number("flow_mol_s", above=0.0) * table.composition("composition", names)
    feed: AnyFeed
    if table.has("phase"):
        make: type[LiquidFeed] | type[VaporFeed] = table.choice("phase", {"liquid": LiquidFeed, "vapor": VaporFeed})
        feed = make(stage, flows, table.number("T_K", above=0.0))
    elif table.has("T_K") == table.has("vapor_fraction"):
        raise InputError(f"{table.where}: give either T_K or vapor_fraction (or phase with T_K)")
    elif table.has("T_K"):
        feed = Feed(stage, flows, temperature=table.number("T_K", above=0.0))
    else:
        fraction = table.number("vapor_fraction", most=1.0)
        if fraction < 0:
            raise table.fail("vapor_fraction", "expected a number from 0 to 1")
        feed = Feed(stage, flows, vapor_fraction=fraction)
    table.finish()
    return feed


def _draw(table: TomlTable) -> LiquidDraw | VaporDraw:
    make: type[LiquidDraw] | type[VaporDraw] = table.choice("phase", {"liquid": LiquidDraw, "vapor": VaporDraw})
    draw = make(table.whole("stage"), table.number("flow_mol_s", above=0.0))
    table.finish()
    return draw


def _specifications(table: TomlTable, names: Sequence[str]) -> list[Specification]:
    found: list[Specification] = []
    for key, make in SIMPLE.items():
        if table.has(key):
            try:
                found.append(make(table.number(key)))
            except InputError as error:
                raise table.fail(key, str(error)) from error
        else:
            table.asked.add(key)
    for key, kind in (("purity", ProductPurity), ("recovery", ComponentRecovery)):
        if table.has(key):
            found.append(_searched(table.table(key), kind, names))
        else:
            table.asked.add(key)
    table.finish()
    return found


def _searched(table: TomlTable, kind: type[ProductPurity] | type[ComponentRecovery],
              names: Sequence[str]) -> Specification:
    component = table.choice("component", {name: i for i, name in enumerate(names)})
    product = table.choice("product", PRODUCTS, "top")
    bounds = None
    if table.has("bounds"):
        value = table.take("bounds")
        if not (isinstance(value, list) and len(value) == 2 and all(isinstance(item, int | float) for item in value)):
            raise table.fail("bounds", "expected [low, high]")
        bounds = (float(value[0]), float(value[1]))
    else:
        table.asked.add("bounds")
    try:
        result = kind(table.number("fraction"), component, product, bounds=bounds)
    except InputError as error:
        raise InputError(f"{table.where}: {error}") from error
    table.finish()
    return result
