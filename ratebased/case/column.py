"""The case file of `ratebased column`: mixture, column, hardware, what to compare.

    title = "..."
    [mixture]      see `mixture.properties_from`
    [column]       see `ratebased.column.from_table`
    [[hardware]]   see `hardware.hardware_from`
    [compare]      optional: efficiency (the one Murphree efficiency; default O'Connell's), component, product ("top",
                   "bottom") and purity that the counts of stages are for, count_stages (default true: about twenty
                   more solutions)
"""
from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from ..column import Column, Comparison, compare
from ..column.from_table import column_from_table
from ..equipment import Section
from ..errors import InputError
from ..properties.protocol import PropertyModel
from ..stage_profile import LOWEST_PRESSURE, LOWEST_TEMPERATURE
from ..toml_table import TomlTable
from .hardware import hardware_from
from .mixture import component_names, properties_from

LARGEST = 1000
"""Stages of a column read from a file: more is far more likely a slip of the pen."""


@dataclass(frozen=True)
class ColumnCase:
    """Everything `column.compare` needs, read from one file. files: those read, for the record of the inputs."""

    title: str
    properties: PropertyModel
    column: Column
    hardware: tuple[Section, ...]
    efficiency: float | None
    component: str | None
    product: str
    purity: float | None
    count_stages: bool
    files: tuple[Path, ...]

    def compare(self, *, count_stages: bool | None = None) -> Comparison:
        """The three predictions of the column; errors as for `column.compare`."""
        return compare(self.column, self.properties, self.hardware, efficiency=self.efficiency,
                       component=self.component, product=self.product, purity=self.purity,
                       count_stages=self.count_stages if count_stages is None else count_stages)


def read_column_case(path: Path) -> ColumnCase:
    """The case in a TOML file. Raises `InputError`."""
    return column_case(TomlTable.load(path), path)


def column_case(top: TomlTable, path: Path) -> ColumnCase:
    """The case in an open table, as read from (or meant for) `path`; finishes it."""
    title = top.text("title", path.stem)
    mixture = top.table("mixture")
    names = component_names(mixture)
    table = top.table("column")
    stages = table.whole("stages")
    if not 1 <= stages <= LARGEST:
        raise table.fail("stages", f"expected 1 to {LARGEST} stages, condenser and reboiler included")
    column = column_from_table(table, names)
    _check_units(column, table)
    hardware = hardware_from(top.tables("hardware"), (1, stages), names, str(path))
    options = top.table("compare", required=False)
    efficiency = options.optional_number("efficiency", above=0.0)
    component = options.choice("component", {name: name for name in names}) if options.has("component") else None
    product = options.choice("product", {"top": "top", "bottom": "bottom"}, "top")
    purity = options.optional_number("purity", above=0.0, most=1.0)
    count = options.flag("count_stages", True)
    options.asked.add("component")
    options.finish()
    top.finish()
    properties = properties_from(mixture, [])
    return ColumnCase(title, properties, column, hardware, efficiency, component, product, purity, count, (path,))


def _check_units(column: Column, table: TomlTable) -> None:
    """Refuse what is far more likely in another unit, as a profile does."""
    lowest = float(column.pressures.min())
    if lowest < LOWEST_PRESSURE:
        raise InputError(f"{table.where}: pressure {lowest:g} Pa is below {LOWEST_PRESSURE:g}: is it in bar or kPa? "
                         "Pressures are in Pa")
    for k, feed in enumerate(column.feeds, 1):
        if feed.temperature is not None and feed.temperature < LOWEST_TEMPERATURE:
            raise InputError(f"{table.where} [[feed]] {k}: T_K = {feed.temperature:g} is below {LOWEST_TEMPERATURE:g}: "
                             "is it in degrees Celsius? Temperatures are in K")
