"""A table of a report as plain text."""
from __future__ import annotations

import textwrap

from .blocks import Table
from .render import SIGNS

WIDTH = 110


def table_text(table: Table) -> str:
    """Columns set by the longest cell, figures to the right, the caption below."""
    texts = [list(table.head)] + [[SIGNS[cell.mark] + cell.text for cell in row] for row in table.rows]
    right = [all(row[k].figure for row in table.rows) for k in range(len(table.head))]
    width = [max(len(row[k]) for row in texts) for k in range(len(table.head))]
    lines = ["  ".join(cell.rjust(w) if r else cell.ljust(w) for cell, w, r in zip(row, width, right)).rstrip()
             for row in texts]
    lines.insert(1, "-" * max(len(line) for line in lines))
    return "\n".join([*lines, *(["", *textwrap.wrap(table.caption, WIDTH)] if table.caption else [])])
