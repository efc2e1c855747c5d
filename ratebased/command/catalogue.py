"""`ratebased catalogue`: the records of the correlations."""
from __future__ import annotations

import json
import textwrap
from argparse import Namespace
from collections.abc import Sequence

from correlations import catalogue
from correlations.bibliography import REFERENCES

from ..errors import InputError
from ..files import write_whole
from .terminal import written

KEYS = ("correlation", "predicts", "hardware", "unit", "range", "scatter", "constants", "source")


def rows(words: Sequence[str]) -> list[dict[str, str]]:
    """The records that hold every word, as texts. Raises `InputError` where none does."""
    found = []
    for record in catalogue():
        validity = record.validity
        row = dict(zip(KEYS, (record.name, record.predicts, record.hardware, record.unit, validity.describe_range(),
                              validity.describe_error(), validity.confidence.value, REFERENCES[validity.source])))
        whole = " ".join(row.values()).lower()
        if all(word.lower() in whole for word in words):
            found.append(row)
    if not found:
        raise InputError(f"catalogue: no correlation has {' and '.join(repr(word) for word in words)} in its record")
    return found


def as_text(found: Sequence[dict[str, str]]) -> str:
    """One paragraph a correlation when few are shown, else one line."""
    if len(found) > 12:
        width = max(len(row["correlation"]) for row in found)
        return "\n".join(f"{row['correlation']:<{width}}  {row['predicts']}; {row['hardware']}" for row in found)
    lines: list[str] = []
    for row in found:
        lines += [row["correlation"], *(line for key in KEYS[1:] for line in textwrap.wrap(
            f"{key}: {row[key]}", 108, initial_indent="  ", subsequent_indent="    ")), ""]
    return "\n".join(lines[:-1])


def run(options: Namespace) -> None:
    """List the records."""
    import pandas as pd

    from ..report.blocks import Table, words
    from ..report.render import markdown_table

    found = rows(options.words)
    table = Table(KEYS, tuple(words(*(row[key] for key in KEYS)) for row in found))
    texts = {"csv": pd.DataFrame(found).to_csv(index=False, lineterminator="\n"),
             "markdown": "\n".join(markdown_table(table)) + "\n",
             "json": json.dumps(found, indent=1, ensure_ascii=False) + "\n"}
    print(texts.get(options.format, as_text(found) + "\n"), end="")
    if options.out is not None:
        names = {"csv": "catalogue.csv", "markdown": "catalogue.md", "json": "catalogue.json"}
        for key, name in names.items():
            write_whole(options.out / name, texts[key])
        written([options.out / name for name in names.values()])
