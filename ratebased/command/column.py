"""`ratebased column`: a column predicted three ways, side by side."""
from __future__ import annotations

import json
import textwrap
from argparse import Namespace
from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

from ..files import SIGNIFICANT, checksum, write_whole
from .terminal import progress, written

if TYPE_CHECKING:
    from ..case import ColumnCase
    from ..column import Comparison


def run(options: Namespace) -> None:
    """Predict and compare."""
    from ..case import read_column_case
    from ..report import column_report, require_jinja, to_markdown, write_report

    if options.report:
        require_jinja()
    with progress("reading case, building properties"):
        case = read_column_case(options.case)
    with progress(f"solving {case.column.stages} stages three ways"):
        comparison = case.compare(count_stages=False if options.quick else None)
    folder = options.out or options.case.parent / "results"
    report = column_report(comparison, title=case.title, hardware=case.hardware, files=case.files)
    frames = {"comparison.csv": comparison.to_frame(), "profiles.csv": comparison.profile_frame(),
              "efficiencies.csv": comparison.table.to_frame()}
    texts = {name: frame.to_csv(index=False, float_format=f"%{SIGNIFICANT}", lineterminator="\n")
             for name, frame in frames.items()}
    texts["column.md"] = to_markdown(report)
    texts["column.json"] = json.dumps(record(case, comparison), indent=1, ensure_ascii=False, allow_nan=False) + "\n"
    for name, text in texts.items():
        write_whole(folder / name, text)
    files = [folder / name for name in texts]
    if options.report:
        with progress("writing the report"):
            files += write_report(report, folder)
    shown = {"csv": "profiles.csv", "markdown": "column.md", "json": "column.json"}
    print(texts[shown[options.format]] if options.format in shown else as_text(case, comparison),
          end="" if options.format in shown else "\n")
    written(files)


def as_text(case: ColumnCase, comparison: Comparison) -> str:
    """The comparison for a terminal."""
    from ..efficiency.table import CAUTION
    from ..report.column import products_table
    from ..report.terminal import table_text

    table = comparison.table
    efficiencies = table.to_frame()[["stage", *(f"E_{n}" for n in table.names), *(f"eta_{n}" for n in table.names),
                                     "superheat_K"]]
    shown = efficiencies.to_string(index=False, na_rep="", float_format=lambda value: f"{value:.4f}")
    lines = [case.title, "", table_text(products_table(comparison)), ""]
    for sentence in comparison.differences:
        lines += textwrap.wrap(sentence, 110, subsequent_indent="  ", break_on_hyphens=False)
    lines += ["", "Component efficiencies (E empty where the driving force is too small; eta with the superheat "
              "reproduces the rates):", "", shown, "", *textwrap.wrap(CAUTION, 110)]
    return "\n".join(lines)


def record(case: ColumnCase, comparison: Comparison) -> dict[str, Any]:
    """Everything as one JSON value."""
    from dataclasses import asdict

    from ..efficiency.package import correlation_rows, plain
    from ..efficiency.table import CAUTION
    from ..report.common import versions

    def rows(frame: Any) -> list[dict[str, Any]]:
        return [{key: plain(value) for key, value in row.items()} for row in frame.to_dict("records")]

    def solved(report: Mapping[str, Any]) -> dict[str, Any]:
        return {key: plain(value) for key, value in report.items()}

    name, product, purity = comparison.purity
    return {
        "title": case.title, "caution": CAUTION, "versions": versions(), "inputs_sha256": checksum(case.files),
        "components": list(case.properties.names), "one_efficiency": plain(comparison.efficiency),
        "one_efficiency_source": comparison.efficiency_source,
        "counted_for": {"component": name, "product": product, "purity": plain(purity)},
        "models": rows(comparison.to_frame()), "differences": list(comparison.differences),
        "solution": {model: solved(asdict(p.report)) for model, p in comparison.profiles.items()},
        "profiles": {model: rows(p.to_frame()) for model, p in comparison.profiles.items()},
        "efficiency_basis": comparison.table.basis.value, "efficiencies": rows(comparison.table.to_frame()),
        "correlations": correlation_rows(case.hardware)}
