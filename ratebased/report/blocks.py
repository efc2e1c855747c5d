"""What a report is made of: titled sections of text, lists, tables and pictures, before any format is chosen."""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import Enum


class Mark(Enum):
    """How a cell of a table stands out: by a sign as well as by its colour, so that it survives a printer."""

    PLAIN = ""
    NEGATIVE = "negative"
    ABOVE = "above"
    BLANK = "blank"
    LIMIT = "limit"


@dataclass(frozen=True)
class Cell:
    """One cell: its text, how it stands out, whether it is a figure (set to the right)."""

    text: str
    mark: Mark = Mark.PLAIN
    figure: bool = True


@dataclass(frozen=True)
class Paragraph:
    """Running text. strong: set apart, as a warning is."""

    text: str
    strong: bool = False


@dataclass(frozen=True)
class Bullets:
    """A list."""

    items: tuple[str, ...]


@dataclass(frozen=True)
class Table:
    """head: column titles; rows: cells in their order; caption: what the figures mean, or nothing."""

    head: tuple[str, ...]
    rows: tuple[tuple[Cell, ...], ...]
    caption: str = ""

    def __post_init__(self) -> None:
        for row in self.rows:
            if len(row) != len(self.head):
                raise ValueError(f"a row of {len(row)} cells under a head of {len(self.head)}")


@dataclass(frozen=True)
class Picture:
    """A figure: its drawing as SVG and, in words, what it shows."""

    svg: str
    shows: str


Block = Paragraph | Bullets | Table | Picture


@dataclass(frozen=True)
class Section:
    """A titled part of a report. key: its anchor."""

    key: str
    title: str
    blocks: tuple[Block, ...]


@dataclass(frozen=True)
class Report:
    """A whole report. lead: what it is about, under the title."""

    title: str
    lead: str
    sections: tuple[Section, ...]
    caution: str


def words(*texts: str) -> tuple[Cell, ...]:
    """Cells of plain words, set to the left."""
    return tuple(Cell(text, figure=False) for text in texts)


def figures(values: Sequence[float | None], form: str) -> tuple[Cell, ...]:
    """Cells of numbers in one format; empty for None and for what is not finite."""
    cells = []
    for value in values:
        known = value is not None and abs(value) < float("inf")
        cells.append(Cell("0" if value == 0 else format(value, form)) if known else Cell("", Mark.BLANK))
    return tuple(cells)


TRACE = 1e-4
"""Fraction below which four decimals would hide the figure."""


def fractions(values: Sequence[float]) -> tuple[Cell, ...]:
    """Cells of mole fractions: four decimals, traces with their power of ten."""
    return tuple(cell for value in values for cell in figures([value], ".4f" if value >= TRACE else ".1e"))
