"""How results show themselves: a table in a notebook, a compact one in a terminal."""
from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import pandas as pd

ROWS, COLUMNS, DIGITS = 24, 9, 5
NOTEBOOK_ROWS = 60


class Shown:
    """A result with a `to_frame` that prints as its table, shortened to fit, and draws itself in a notebook."""

    def to_frame(self) -> pd.DataFrame:
        """The result as a table."""
        raise NotImplementedError

    def __str__(self) -> str:
        import pandas as pd

        with pd.option_context("display.expand_frame_repr", False, "display.max_rows", ROWS, "display.max_columns",
                               COLUMNS, "display.precision", DIGITS):
            return f"{type(self).__name__}\n{self.to_frame()}"

    def _repr_html_(self) -> str:
        html: str = self.to_frame().to_html(max_rows=NOTEBOOK_ROWS, na_rep="", border=0,
                                            float_format=lambda value: f"{value:.{DIGITS}g}")
        return html
