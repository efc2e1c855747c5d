"""The report of a column predicted three ways: how far apart the predictions are, and the table that closes the gap."""
from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import numpy as np

from ..column import Comparison, Profile
from ..column.compare import FED_BACK, NEGLIGIBLE, ONE_EFFICIENCY, RATE_BASED, feed_back_error
from ..efficiency.table import CAUTION
from ..equipment import Section as HardwareSection
from .blocks import Block, Bullets, Cell, Mark, Paragraph, Report, Section, Table, figures, fractions, words
from .common import correlations_section, inputs_section, pictures

FRACTION = ".4f"
SMALL = 0.01
"""Largest figure of a row of fractions below which four decimals would hide it."""
SHORT = {ONE_EFFICIENCY: "one E", FED_BACK: "fed back", RATE_BASED: "rate-based"}


def column_report(comparison: Comparison, *, title: str, hardware: Sequence[HardwareSection],
                  files: Sequence[Path]) -> Report:
    """The comparison first, then profiles, efficiencies, hydraulics, and what they rest on."""
    rate = comparison.profiles[RATE_BASED]
    sections = (_comparison(comparison), _profiles(comparison), _efficiencies(comparison), _contact(rate),
                _solution(comparison), correlations_section(hardware), inputs_section(hardware, files))
    lead = (f"One column of {rate.stages} stages predicted three ways: equilibrium stages with one efficiency, "
            "equilibrium stages with the component efficiencies below, and mass-transfer rates.")
    return Report(title, lead, sections, CAUTION)


def products_table(comparison: Comparison) -> Table:
    """End products, duties and stages needed: one row a figure, one column a model."""
    frame = comparison.to_frame().set_index("model")
    names = comparison.profiles[RATE_BASED].names
    counted = bool(comparison.stages_needed)
    rows = []
    for column in frame.columns:
        if column == "contact_stages_needed" and not counted:
            continue
        label, form, scale = _figure_words(str(column), names)
        values = [None if value is None else float(value) * scale for value in frame[column]]
        if form == FRACTION and 0 < max(value or 0.0 for value in values) < SMALL:
            form = ".3e"
        cells = figures(values, form)
        if column == "contact_stages_needed":
            cells = tuple(cell if cell.text else Cell("not reached", Mark.BLANK) for cell in cells)
        rows.append((*words(label), *cells))
    name, product, purity = comparison.purity
    caption = f"One efficiency: {comparison.efficiency:.3f} ({comparison.efficiency_source})."
    if counted:
        caption += f" Contact stages needed for a mole fraction of {purity:.4g} {name} in the {product} product."
    return Table(("", *(SHORT[model] for model in frame.index)), tuple(rows), caption)


def _figure_words(column: str, names: Sequence[str]) -> tuple[str, str, float]:
    if column == "contact_stages_needed":
        return "contact stages needed", ".0f", 1.0
    if column.endswith("_duty_W"):
        return f"{column.removesuffix('_duty_W')} duty / kW", ".1f", 1e-3
    product, kind, name = column.split("_", 2)
    if kind == "recovery":
        return f"{name}, share of the feed in the {product} product", FRACTION, 1.0
    return f"{name} in the {product} product, mole fraction", FRACTION, 1.0


def _comparison(comparison: Comparison) -> Section:
    rate, one = comparison.profiles[RATE_BASED], comparison.profiles[ONE_EFFICIENCY]
    drawn = pictures([("profile_figure", "Temperatures and compositions by stage: equilibrium stages with one "
                                         "efficiency beside mass-transfer rates.", (one, rate))])
    return Section("comparison", "How far apart the predictions are", (
        products_table(comparison), Bullets(tuple(
            text[:1].upper() + text[1:] for text in comparison.differences)), *drawn))


def _profiles(comparison: Comparison) -> Section:
    rate = comparison.profiles[RATE_BASED]
    same = feed_back_error(comparison.profiles[FED_BACK], rate) < NEGLIGIBLE
    models = [(SHORT[model], profile) for model, profile in comparison.profiles.items()
              if not (same and model == FED_BACK)]
    remark = " The column fed with component efficiencies is the same as the rate-based one." if same else ""
    rows = [(Cell(str(j + 1)), *words(rate.kinds[j]), *figures([p.T_L[j] for _, p in models], ".2f"),
             *figures([rate.T_V[j] if rate.V[j] > 0 else None], ".2f"),
             *figures([rate.L[j], rate.V[j]], ".4g")) for j in range(rate.stages)]
    blocks: list[Block] = [Table(
        ("stage", "kind", *(f"T {word} / K" for word, _ in models), "T vapour, rate-based / K", "L / mol/s",
         "V / mol/s"), tuple(rows), "Temperatures of the liquid leaving each stage; flows are the rate-based ones.")]
    head = ("stage", *(f"x {name}, {word}" for name in rate.names for word, _ in models))
    rows_x = [(Cell(str(j + 1)), *fractions([p.x[j, i] for i in range(len(rate.names)) for _, p in models]))
              for j in range(rate.stages)]
    blocks.append(Table(head, tuple(rows_x), "Mole fractions in the liquid leaving each stage." + remark))
    if len(rate.names) == 3:
        blocks += pictures([("triangle_figure", "Path of the stages through the triangle of compositions.", (rate,))])
    return Section("profiles", "Profiles", tuple(blocks))


def _efficiencies(comparison: Comparison) -> Section:
    table = comparison.table
    shown = np.flatnonzero(table.ordinary)
    rows = []
    for j in range(table.stage.size):
        cells = []
        for i in shown:
            value = float(table.murphree[j, i])
            if table.flagged[j, i]:
                cells.append(Cell(f"[{table.y_out[j, i] - table.y_in[j, i]:+.1e}]", Mark.BLANK))
            else:
                mark = Mark.NEGATIVE if value < 0 else Mark.ABOVE if value > 1 else Mark.PLAIN
                cells.append(Cell(f"{value:.3f}", mark))
        rows.append((Cell(str(table.stage[j])), *cells, *figures([table.vaporization[j, i] for i in shown], ".4f"),
                     Cell(f"{table.superheat[j]:+.3f}")))
    names = [table.names[i] for i in shown]
    return Section("efficiencies", "Component efficiencies", (Table(
        ("stage", *(f"E {name}" for name in names), *(f"eta {name}" for name in names), "superheat / K"), tuple(rows),
        f"Back-calculated from the rate-based column. E: Murphree vapour efficiency, y* at the {table.basis.value} of "
        "the leaving liquid; [..]: y_out - y_in where the driving force is too small. eta with the superheat "
        "reproduces the rate-based column with equilibrium stages; efficiencies.csv has all digits."),))


def _contact(rate: Profile) -> Section:
    record = rate.record()
    limits = [(name, value) for name, value in record.hydraulics.items()]
    rows = []
    for k, stage in enumerate(record.stage):
        cells = [Cell(f"{value[k]:.3g}", Mark.LIMIT if name in ("flooding", "weeping", "downcomer") and value[k] > 1
                      else Mark.PLAIN) if np.isfinite(value[k]) else Cell("", Mark.BLANK) for name, value in limits]
        rows.append((Cell(str(stage)), Cell(f"{record.T_I[k]:.2f}"), Cell(f"{record.area[k]:.3g}"),
                     *figures([1e3 * value for value in record.N[k]], "+.4g"), *cells))
    notes = [f"{note}: stages {', '.join(str(s) for s in stages)}." for note, stages in record.notes.items()
             if len(stages)]
    blocks: list[Block] = [Bullets(tuple(notes))] if notes else []
    blocks.append(Table(
        ("stage", "T interface / K", "area / m2", *(f"N {name} / mmol/(m2 s)" for name in rate.names),
         *(name.replace("_", " ") for name, _ in limits)), tuple(rows),
        f"Fluxes from vapour to liquid, on the {record.basis}. Flooding, weeping, downcomer as fractions: above one "
        "the stage floods, weeps or backs up. Pressure drop in Pa."))
    blocks += pictures([("entropy_figure", "Entropy produced on each stage, by cause.",
                         (rate.entropy_production(),))])
    return Section("contact", "Fluxes, limits and losses", tuple(blocks))


def _solution(comparison: Comparison) -> Section:
    rows = []
    for model, profile in comparison.profiles.items():
        r = profile.report
        rows.append((*words(SHORT[model], r.path), Cell(str(r.iterations)), Cell(f"{r.component_closure:.0e}"),
                     Cell(f"{r.energy_closure:.0e}"), Cell(f"{r.smallest_gamma_eigenvalue:.3f}")))
    blocks: list[Block] = [Table(("model", "path", "iterations", "component balance", "energy balance",
                                  "smallest eigenvalue of [Gamma]"), tuple(rows),
                                 "Balances as fractions of the feed. An eigenvalue at or below zero would mean a "
                                 "liquid that splits in two.")]
    smallest = min(p.report.smallest_gamma_eigenvalue for p in comparison.profiles.values())
    if smallest <= 0:
        blocks.append(Paragraph("The liquid would split in two phases on at least one stage: a single liquid was "
                                "assumed, so these figures do not hold there.", strong=True))
    return Section("solution", "How it was solved", tuple(blocks))
