"""The case file of `ratebased flux`: one film, or one interface between two bulks.

One film, by a table [film]; positive from face_0 to face_delta:

    title = "..."
    [film]
    components = ["hydrogen", "nitrogen", "carbon dioxide"]
    face_0 = {...}, face_delta = {...}       # mole fractions at the faces
    diffusivity_m2_s = {"hydrogen / nitrogen" = 8.3e-5, ...}   # of pairs, or one number; with thickness_m
    kappa_m_s = ...                          # in place of both: pair mass-transfer coefficients
    molar_density_mol_m3 = 40.0
    method = "exact"                         # see METHODS below
    closure = "equimolar"                    # "stagnant" with component, "flux ratio" with component and share,
                                             # "latent heat" with latent_J_mol, "total flux" with total_mol_m2_s

One interface, by a table [interface]; positive from vapour to liquid:

    [mixture]                                # see `mixture.properties_from`
    [interface]
    P_Pa = 101325.0
    method = "exact"
    [interface.vapor]                        # and [interface.liquid]
    T_K = 350.0
    composition = {...}
    kappa_m_s = ...                          # of pairs, or one number
    heat_transfer_W_m2_K = 60.0
    molar_density_mol_m3 = ...               # optional: the mixture's own

With a table [[hardware]] (see `hardware.hardware_from`) the coefficients are the contactor's: in place of kappa and
heat transfer each phase has flow_mol_s; a packed bed needs height_m in [interface].
"""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from ..bootstrap import Bootstrap, Equimolar, FluxRatio, LatentHeat, Stagnant, TotalFlux
from ..equipment import Section, contact_state
from ..errors import InputError
from ..film import (
    FilmFlux,
    effective,
    explicit_burghardt_krupiczka,
    explicit_krishna,
    explicit_taylor_smith,
    krishna_standart,
    linearized,
)
from ..interface import Bulk, InterfaceFlux, interface_flux
from ..properties.protocol import Array, PropertyModel
from ..toml_table import TomlTable
from .hardware import hardware_from
from .mixture import component_names, properties_from

METHODS: dict[str, Callable[..., FilmFlux]] = {
    "exact": krishna_standart, "linearized": linearized, "effective": effective, "Krishna": explicit_krishna,
    "Burghardt-Krupiczka": explicit_burghardt_krupiczka, "Taylor-Smith": explicit_taylor_smith}


@dataclass(frozen=True)
class FilmCase:
    """One film. face_0, face_delta: mole fractions, (n,); kappa m/s, (n, n); c_t mol/m3."""

    title: str
    names: tuple[str, ...]
    face_0: Array
    face_delta: Array
    kappa: Array
    c_t: float
    bootstrap: Bootstrap
    method: str
    files: tuple[Path, ...]

    def solve(self) -> FilmFlux:
        """The fluxes; errors as for the film method."""
        return METHODS[self.method](self.face_0, self.face_delta, self.kappa, self.c_t, self.bootstrap)


@dataclass(frozen=True)
class InterfaceCase:
    """One interface between two bulks at P, Pa. hardware: the section the coefficients come from, or none."""

    title: str
    properties: PropertyModel
    vapor: Bulk
    liquid: Bulk
    P: float
    method: str
    hardware: tuple[Section, ...]
    files: tuple[Path, ...]

    def solve(self) -> InterfaceFlux:
        """The fluxes and the state of the interface; errors as for `interface_flux`."""
        return interface_flux(self.vapor, self.liquid, self.properties, self.P, film=METHODS[self.method],
                              estimate=True)


def read_flux_case(path: Path) -> FilmCase | InterfaceCase:
    """The case in a TOML file. Raises `InputError`."""
    top = TomlTable.load(path)
    if top.has("film") == top.has("interface"):
        raise InputError(f"{path}: expected one of the tables [film] and [interface]")
    title = top.text("title", path.stem)
    case = _film(top, title, path) if top.has("film") else _interface(top, title, path)
    top.finish()
    return case


def _film(top: TomlTable, title: str, path: Path) -> FilmCase:
    table = top.table("film")
    names = component_names(table)
    faces = [table.composition(key, names) for key in ("face_0", "face_delta")]
    if table.has("kappa_m_s"):
        kappa = table.by_pair("kappa_m_s", names)
    else:
        kappa = table.by_pair("diffusivity_m2_s", names) / table.number("thickness_m", above=0.0)
    density = table.number("molar_density_mol_m3", above=0.0)
    method = table.choice("method", {word: word for word in METHODS}, "exact")
    closure: Bootstrap = table.choice("closure", CLOSURES)(table, names)
    table.finish()
    return FilmCase(title, tuple(names), faces[0], faces[1], kappa, density, closure, method, (path,))


def _component(table: TomlTable, names: list[str]) -> int:
    index: int = table.choice("component", {name: i for i, name in enumerate(names)})
    return index


CLOSURES: dict[str, Callable[[TomlTable, list[str]], Bootstrap]] = {
    "equimolar": lambda table, names: Equimolar(),
    "stagnant": lambda table, names: Stagnant(_component(table, names)),
    "flux ratio": lambda table, names: FluxRatio(_component(table, names), table.number("share")),
    "latent heat": lambda table, names: LatentHeat(table.by_component("latent_J_mol", names)),
    "total flux": lambda table, names: TotalFlux(table.number("total_mol_m2_s"))}


def _interface(top: TomlTable, title: str, path: Path) -> InterfaceCase:
    mixture, table = top.table("mixture"), top.table("interface")
    names = component_names(mixture)
    P = table.number("P_Pa", above=200.0)
    method = table.choice("method", {word: word for word in METHODS}, "exact")
    sections = hardware_from(top.tables("hardware"), (1, 1), names, str(path)) if top.has("hardware") else ()
    if len(sections) > 1:
        raise InputError(f"{path}: one interface has one table [[hardware]], {len(sections)} given")
    phases = [table.table(key) for key in ("vapor", "liquid")]
    states = [(phase.number("T_K", above=100.0), phase.composition("composition", names)) for phase in phases]
    given = [_coefficients(phase, names, bool(sections)) for phase in phases]
    height = table.number("height_m", 1.0, above=0.0)
    for read in (*phases, table):
        read.finish()
    properties = properties_from(mixture, [T for T, _ in states])
    densities = [value.pop("molar_density", None) for value in given]
    (T_V, y), (T_L, x) = states
    own = (properties.vapor_transport(np.asarray(T_V), np.asarray(P), y).molar_density,
           properties.liquid_transport(np.asarray(T_L), np.asarray(P), x).molar_density)
    if sections:
        flows = [value.pop("flow") for value in given]
        k = sections[0].contactor.transfer(contact_state(properties, flows[0], flows[1], T_V, T_L, P, y, x, height))
        given = [{"kappa": k.kappa_vapor, "heat_transfer": k.h_vapor},
                 {"kappa": k.kappa_liquid, "heat_transfer": k.h_liquid}]
    bulks = [Bulk(z, np.asarray(T), molar_density=np.asarray(own[i] if densities[i] is None else densities[i]),
                  **given[i]) for i, (T, z) in enumerate(states)]
    return InterfaceCase(title, properties, bulks[0], bulks[1], P, method, sections, (path,))


def _coefficients(table: TomlTable, names: list[str], from_hardware: bool) -> dict[str, Any]:
    if from_hardware:
        return {"flow": table.number("flow_mol_s", above=0.0)}
    found: dict[str, Any] = {"kappa": table.by_pair("kappa_m_s", names),
                             "heat_transfer": np.asarray(table.number("heat_transfer_W_m2_K", above=0.0))}
    density = table.optional_number("molar_density_mol_m3", above=0.0)
    return found | ({} if density is None else {"molar_density": density})
