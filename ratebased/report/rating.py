"""The report of a rated profile: efficiencies, why the odd ones are odd, how far to trust them."""
from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import numpy as np

from ..efficiency import EfficiencyTable
from ..efficiency.table import CAUTION
from ..efficiency.uncertainty import WORDS
from ..equipment import Section as HardwareSection
from ..explanation import FluxExplanation
from .blocks import Block, Bullets, Cell, Mark, Paragraph, Report, Section, Table, figures, words
from .common import correlations_section, inputs_section, pictures

CLOSED = 1e-6
"""Residual above which a row is pointed out."""
ROUNDING = 1e-9
"""Part of a flux, of the largest flux, below which it is rounding."""


def rating_report(table: EfficiencyTable, *, title: str, hardware: Sequence[HardwareSection],
                  files: Sequence[Path]) -> Report:
    """Everything a reader of the efficiency table needs, in the order they need it."""
    sections = [_summary(table), _efficiencies(table)]
    if table.rows.packed is not None:
        sections.append(_heights(table))
    sections += [_explained(table), *_uncertainty(table), _validity(table), correlations_section(hardware),
                 inputs_section(hardware, files)]
    lead = (f"Component efficiencies of {table.rows.number.size} contact stages, from the stage profile and the "
            "hardware.")
    return Report(title, lead, tuple(sections), CAUTION)


def _summary(table: EfficiencyTable) -> Section:
    r = table.rows
    sound = r.ordinary & ~r.flagged
    items = []
    if sound.any():
        for label, best in (("Lowest", np.where(sound, r.murphree, np.inf).argmin()),
                            ("Highest", np.where(sound, r.murphree, -np.inf).argmax())):
            j, i = np.unravel_index(int(best), sound.shape)
            items.append(f"{label} efficiency that means something: {r.murphree[j, i]:.3f}, {r.names[i]} on stage "
                         f"{r.number[j]}.")
    ordinary = int(np.broadcast_to(r.ordinary, r.flagged.shape).sum())
    small = int((r.flagged & r.ordinary).sum())
    if small:
        items.append(f"{small} of {ordinary} figures are left out because the driving force is too small; the change "
                     "of the vapour stands in their place.")
    flooding = r.hydraulics.flooding
    if flooding is not None and np.isfinite(flooding).any():
        top = int(np.nanargmax(flooding))
        items.append(f"Approach to flooding at most {flooding[top]:.2f} (stage {r.number[top]}).")
    items.append(f"The vapour computed is at most {table.distance.max():.2g} mole fraction from the profile's own.")
    flagged = sum(bool(text) for text in table.flags())
    items.append(f"{flagged} of {r.number.size} stages carry a remark.")
    return Section("glance", "At a glance", (Bullets(tuple(items)),
                                             *pictures([("efficiency_figure", "Component efficiencies by stage.",
                                                         (table,))])))


def _efficiencies(table: EfficiencyTable) -> Section:
    r = table.rows
    shown = np.flatnonzero(r.ordinary)
    names = [r.names[i] for i in shown]
    rows, flows = [], []
    flags = table.flags()
    for j in range(r.number.size):
        start = (Cell(str(r.number[j])), Cell(f"{r.T_L[j]:.2f}"), Cell(f"{r.P[j] / 1e3:.2f}"))
        rows.append((*start, *(_efficiency(table, j, int(i)) for i in shown), *words(flags[j])))
        flows.append((Cell(str(r.number[j])), Cell(f"{r.T_V[j] - r.T_L[j]:+.2f}"),
                      *figures([r.vaporization[j, i] for i in shown], ".4f"),
                      *figures([1e3 * r.flux[j, i] for i in shown], "+.4g")))
    main = Table(("stage", "T / K", "P / kPa", *(f"E {name}" for name in names), "remarks"), tuple(rows),
                 table.legend())
    back = Table(("stage", "superheat / K", *(f"eta {name}" for name in names),
                  *(f"N {name} / mmol/(m2 s)" for name in names)), tuple(flows),
                 "To take a stage into an equilibrium-stage column, give it the vaporisation efficiencies eta together "
                 "with the superheat; table.csv has them with all digits.")
    return Section("table", "Efficiency table", (main, back))


def _efficiency(table: EfficiencyTable, j: int, i: int) -> Cell:
    r = table.rows
    if r.flagged[j, i]:
        return Cell(f"[{r.y_out[j, i] - r.y_in[j, i]:+.1e}]", Mark.BLANK)
    value = float(r.murphree[j, i])
    mark = Mark.NEGATIVE if value < 0 else Mark.ABOVE if value > 1 else Mark.PLAIN
    return Cell(f"{value:.3f}", mark)


def _heights(table: EfficiencyTable) -> Section:
    r, packed = table.rows, table.rows.packed
    assert packed is not None
    shown = np.flatnonzero(r.ordinary)
    names = [r.names[i] for i in shown]
    rows = []
    for m, j in enumerate(packed.position):
        hetp = [None if packed.undefined[m, i] else packed.HETP[m, i] for i in shown]
        rows.append((Cell(str(r.number[j])), Cell(f"{packed.height[m]:.3g}"), *figures(hetp, ".3f"),
                     *figures([packed.H_OV[m, i] for i in shown], ".3f"),
                     *figures([packed.N_OV[m, i] for i in shown], ".3f")))
    return Section("heights", "Heights of the packing", (
        *pictures([("hetp_figure", "HETP of each component by segment.", (table,))]), Table(
        ("segment", "height / m", *(f"HETP {name} / m" for name in names), *(f"H_OV {name} / m" for name in names),
         *(f"N_OV {name}" for name in names)), tuple(rows),
        "HETP: height equivalent to a theoretical plate, empty where a component has none; H_OV, N_OV: overall height "
        "of a transfer unit and number of them, vapour side."),))


def _explained(table: EfficiencyTable) -> Section:
    odd = table.remarkable()
    if not odd:
        return Section("odd", "Odd rows explained", (Paragraph("No efficiency is negative or above one."),))
    blocks: list[Block] = [
        Paragraph("A negative efficiency is no error: the component moves against its own driving force because the "
                  "others drag it along (reverse diffusion), or it moves without one (osmotic diffusion)."),
        Bullets(tuple(odd))]
    r = table.rows
    sound = r.ordinary & ~r.flagged
    score = np.where(sound, np.where(r.murphree < 0, 10.0 - r.murphree, r.murphree), -np.inf)
    j, i = np.unravel_index(int(np.argmax(score)), score.shape)
    stage = int(r.number[j])
    explanation = table.explain(stage)
    blocks.append(flux_parts(explanation, f"Stage {stage}: the parts of every flux through the controlling film, "
                                          "mmol/(m2 s), positive from vapour to liquid."))
    blocks += pictures([("flux_split_figure", f"Parts of the flux of {r.names[i]} on stage {stage}.",
                         (explanation, r.names[i]))])
    return Section("odd", "Odd rows explained", tuple(blocks))


def flux_parts(explanation: FluxExplanation, caption: str) -> Table:
    """The parts of the fluxes in the film that controls, one row a component."""
    film = explanation.controlling
    s = film.split
    rows = []
    nil = ROUNDING * float(np.abs(s.total).max())
    for i, name in enumerate(explanation.names):
        parts = [s.own[i], s.nonideality[i], *s.pull[i], s.bulk_flow[i], s.high_flux[i], s.total[i]]
        cells = figures([1e3 * value if abs(value) > nil else 0.0 for value in parts], "+.4g")
        own = 2 + i
        rows.append((*words(name, film.regime[i]), *cells[:own], Cell("", Mark.BLANK), *cells[own + 1:]))
    return Table(("component", f"diffusion ({film.phase} film)", "own gradient", "non-ideality",
                  *(f"pull of {name}" for name in explanation.names), "bulk flow", "high flux", "flux"), tuple(rows),
                 caption)


def _uncertainty(table: EfficiencyTable) -> list[Section]:
    u, r = table.uncertainty, table.rows
    if u is None:
        return [Section("uncertainty", "Uncertainty", (Paragraph(
            "No intervals were asked for. A table [uncertainty] in the case file adds them, from the published scatter "
            "of the correlations."),))]
    rows = []
    for j in range(r.number.size):
        for i in np.flatnonzero(r.ordinary):
            pole = bool(u.pole[j, i])
            interval = u.change if pole else u.murphree
            quantiles = figures([interval.p05[j, i], interval.p50[j, i], interval.p95[j, i]], ".3g")
            share = f"{u.dominating(j, int(i))} ({100 * u.shares[j, i].max():.0f} %)"
            rows.append((Cell(str(r.number[j])), *words(r.names[i], "y_out - y_in" if pole else "E"), *quantiles,
                         Cell(f"{u.negative[j, i]:.2f}"), *words(share)))
    assumed = " and of ".join(WORDS.get(name, name) for name in u.assumed)
    notes = [Paragraph(f"The scatter of {assumed} is not published and was assumed.")] if assumed else []
    return [Section("uncertainty", "Uncertainty", (
        Table(("stage", "component", "figure", "5 %", "50 %", "95 %", "probability of E < 0", "dominated by"),
              tuple(rows), "Quantiles over the scatter of correlations, diffusivities and K-values. Where the driving "
              "force changes sign within the scatter, an interval of E means nothing and that of the change of the "
              "vapour stands in its place."), *notes))]


def _validity(table: EfficiencyTable) -> Section:
    r, h = table.rows, table.rows.hydraulics
    limits = [(word, getattr(h, word)) for word in ("flooding", "weeping", "downcomer") if getattr(h, word) is not None]
    rows = []
    for j in range(r.number.size):
        cells = [Cell("", Mark.BLANK) if not np.isfinite(value[j]) else
                 Cell(f"{value[j]:.2f}", Mark.LIMIT if value[j] > 1 else Mark.PLAIN) for _, value in limits]
        residual = max(r.interface_residual[j], r.energy_residual[j], r.component_closure[j], r.energy_closure[j])
        rows.append((Cell(str(r.number[j])), *cells, Cell(f"{table.distance[j]:.2g}"),
                     Cell(f"{residual:.0e}", Mark.LIMIT if residual > CLOSED else Mark.PLAIN)))
    head = ("stage", *(word for word, _ in limits), "distance of y", "largest residual")
    notes = [f"{note}: stages {', '.join(str(r.number[j]) for j in np.flatnonzero(where))}."
             for note, where in r.notes.items() if np.any(where)]
    blocks: list[Block] = [Table(head, tuple(rows), (
        "Limits as fractions: above one the stage floods, weeps or backs up. Distance of y: largest difference between "
        "the vapour computed and the profile's own. Largest residual: of interface, energy and component balances."))]
    if notes:
        blocks.insert(0, Bullets(tuple(notes)))
    if any(np.isfinite(value).any() for _, value in limits):
        blocks += pictures([("operating_figure", "Operating point of every stage against its limits.", (table,))])
    return Section("validity", "Limits, ranges and closures", tuple(blocks))
