"""A printed number and the call that should give it."""
from __future__ import annotations

import warnings
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from correlations import OutOfRangeWarning


@dataclass(frozen=True)
class Row:
    """`printed`: the number in SI units; `rtol`: from the digits printed, or for the reason that `where` gives.

    `measured`: the printed number is a measurement, the tolerance what the correlation claims or the text reports.
    """

    function: Callable[..., Any]
    arguments: Mapping[str, Any]
    printed: float
    rtol: float
    where: str
    measured: bool = False

    def __str__(self) -> str:
        return f"{self.function.record.name} {self.printed:.4g}"

    def check(self) -> None:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", OutOfRangeWarning)
            value = self.function(**self.arguments)
        np.testing.assert_allclose(value, self.printed, rtol=self.rtol, err_msg=self.where)
