"""The report of one film or one interface."""
from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import numpy as np

from ..efficiency.table import CAUTION
from ..equipment import Section as HardwareSection
from ..explanation import explain_flux
from ..film import FilmFlux
from ..interface import InterfaceFlux
from .blocks import Block, Bullets, Paragraph, Report, Section, Table, figures, fractions, words
from .common import correlations_section, inputs_section, pictures
from .rating import flux_parts


def film_table(names: Sequence[str], flux: FilmFlux) -> Table:
    """Faces, fluxes and regime of one film, one row a component."""
    rows = tuple((*words(name), *fractions([flux.x0[i], flux.xd[i]]),
                  *figures([1e3 * flux.N[i], 1e3 * flux.J[i]], "+.5g"), *words(str(flux.regime[i])))
                 for i, name in enumerate(names))
    return Table(("component", "face 0", "face delta", "N / mmol/(m2 s)", "J at face 0 / mmol/(m2 s)", "diffusion"),
                 rows, "N: flux; J: diffusion flux against the molar-average velocity. Positive from face 0 to face "
                       "delta.")


def film_report(names: Sequence[str], flux: FilmFlux, *, title: str, files: Sequence[Path], method: str) -> Report:
    """Fluxes through one film."""
    blocks = (film_table(names, flux), Bullets((
        f"Total flux {1e3 * float(flux.N_t):+.5g} mmol/(m2 s).",
        f"Entropy production {float(flux.entropy_production):.4g} W/(m2 K).", f"Film method: {method}.")))
    return Report(title, f"Fluxes of {len(names)} components through one film.",
                  (Section("fluxes", "Fluxes", blocks), inputs_section((), files)), CAUTION)


def interface_table(answer: InterfaceFlux) -> Table:
    """Bulk and interface compositions and fluxes, one row a component."""
    y, x = (np.broadcast_to(z, answer.N.shape) for z in (answer.films.y, answer.films.x))
    rows = tuple((*words(name), *fractions([y[i], answer.y_I[i], answer.x_I[i], x[i]]),
                  *figures([1e3 * answer.N[i]], "+.5g")) for i, name in enumerate(answer.names))
    return Table(("component", "y bulk", "y interface", "x interface", "x bulk", "N / mmol/(m2 s)"), rows,
                 "N positive from vapour to liquid.")


def interface_remarks(answer: InterfaceFlux) -> list[str]:
    """Temperature, heat, and one sentence a component."""
    explanation = explain_flux(answer)
    return [f"Interface at {float(answer.T_I):.3f} K.",
            f"Energy flux {float(answer.energy_flux):+.5g} W/m2 from vapour to liquid; heat conducted into the "
            f"interface from the vapour {float(answer.q_vapor_interface):+.4g} W/m2, into the liquid "
            f"{float(answer.q_liquid_interface):+.4g} W/m2.",
            *(text[:1].upper() + text[1:] for name, moves in zip(answer.names, answer.N) if moves
              for text in (explanation.sentence(name),))]


def interface_report(answer: InterfaceFlux, *, title: str, files: Sequence[Path], method: str,
                     hardware: Sequence[HardwareSection]) -> Report:
    """Fluxes through one interface, and what makes them."""
    explanation = explain_flux(answer)
    blocks: list[Block] = [interface_table(answer), Bullets(tuple(interface_remarks(answer)))]
    blocks.append(flux_parts(explanation, "The parts of every flux through the controlling film, mmol/(m2 s)."))
    strongest = answer.names[int(np.argmax(np.abs(explanation.controlling.split.pull).sum(-1)))]
    blocks += pictures([("flux_split_figure", f"Parts of the flux of {strongest}.", (explanation, strongest))])
    blocks.append(Paragraph(f"Film method: {method}; equilibrium at the interface to "
                            f"{float(answer.equilibrium_residual):.0e}, energy balance to "
                            f"{float(answer.energy_residual):.0e}."))
    sections = [Section("fluxes", "Fluxes", tuple(blocks))]
    if hardware:
        sections.append(correlations_section(hardware))
    return Report(title, f"Fluxes of {len(answer.names)} components through one interface.",
                  (*sections, inputs_section(hardware, files)), CAUTION)
