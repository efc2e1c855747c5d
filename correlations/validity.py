"""How far a correlation can be trusted, as data: ranges, published scatter, source, confidence in the constants."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from enum import Enum
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

NOT_PUBLISHED = "not published"
UNKNOWN = "unknown to us"
EXACT = "exact for its model"
WORDS = (NOT_PUBLISHED, UNKNOWN, EXACT)
"""What stands in place of a range or a scatter that is None."""


class Confidence(Enum):
    """Where the formula and its constants come from."""

    VERIFIED = "seen in print"
    CROSS_CHECKED = "not seen in full; two independent forms agree"
    MEMORY = "constants from memory, unverified"
    DOUBTFUL = "constants from memory, unverified; competing forms circulate"

    @property
    def unverified(self) -> bool:
        """True where a user must be told that nobody has seen the constants in print."""
        return self in (Confidence.MEMORY, Confidence.DOUBTFUL)


class Range(NamedTuple):
    """Closed interval; None leaves that side open."""

    low: float | None
    high: float | None

    def outside(self, value: Array) -> Mask:
        """Entries outside; NaN counts as outside."""
        inside = np.ones(np.shape(value), bool)
        if self.low is not None:
            inside &= value >= self.low
        if self.high is not None:
            inside &= value <= self.high
        return ~inside

    def describe(self) -> str:
        """The interval in words."""
        if self.low is None:
            return f"up to {self.high:g}"
        if self.high is None:
            return f"from {self.low:g}"
        return f"{self.low:g} to {self.high:g}"


@dataclass(frozen=True)
class Validity:
    """Range and scatter of a correlation.

    ranges : variable -> `Range`, or None where the variable limits the correlation but its bounds are missing.
        Variables are argument names or dimensionless groups; the record of the correlation knows how to compute them.
    mean_error : mean relative deviation from the data as a fraction, or None; where only a band is published, the wider
        end of it (`error_note` says so).
    source : key into the bibliography.
    confidence : in formula and constants.
    range_note, error_note : a remark on either; where the figure is None, one of `WORDS` opens the remark.
    range_confidence : in the ranges, where it differs from that in the formula.

    A range or scatter that is None without one of `WORDS` is refused, so no record can leave the question open.
    """

    ranges: Mapping[str, Range | None]
    mean_error: float | None
    source: str
    confidence: Confidence
    range_note: str = ""
    error_note: str = ""
    range_confidence: Confidence | None = None

    def __post_init__(self) -> None:
        missing = not self.ranges or any(r is None for r in self.ranges.values())
        if missing and not self.range_note.startswith(WORDS):
            raise ValueError(f"range_note must open with one of {WORDS} where a range is missing")
        if self.mean_error is None and not self.error_note.startswith(WORDS):
            raise ValueError(f"error_note must open with one of {WORDS} where mean_error is None")

    def describe_range(self) -> str:
        """All ranges and the remark in one line."""
        parts = [f"{name} {r.describe()}" for name, r in self.ranges.items() if r is not None]
        return "; ".join([*parts, self.range_note] if self.range_note else parts)

    def describe_error(self) -> str:
        """Scatter and remark in one line."""
        if self.mean_error is None:
            return self.error_note
        figure = f"{100 * self.mean_error:g} %"
        return f"{figure} ({self.error_note})" if self.error_note else figure
