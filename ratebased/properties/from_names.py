"""From component names to a property model: the one place where words stand for models."""
from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING, TypeVar

import numpy as np
from numpy.typing import ArrayLike

from ..errors import InputError
from .activity import ActivityModel, Ideal, Unifac
from .components import PropertyRecord, Role
from .diffusion import Fuller, LiquidDiffusivity, WilkeChang
from .henry import IN_WATER, HenryConstant, HenryLaw
from .thermo_data import ComponentData, default_range, pure_components, unifac_groups

if TYPE_CHECKING:
    from .thermo_properties import SurfaceTension, ThermoProperties

WATER = "7732-18-5"
ASSOCIATION_FACTORS = {WATER: 2.26, "67-56-1": 1.9, "64-17-5": 1.5}
"""Of the method of Wilke & Chang; 2.26 for water after Hayduk & Laudie (1974), the original has 2.6. Others: 1."""

HenryArgument = Sequence[str] | Mapping[str, Mapping[str, HenryConstant]]
Model = TypeVar("Model", bound="ThermoProperties")


def build(model: type[Model], names: Sequence[str], activity: str | ActivityModel = "unifac", *,
          T_range: tuple[float, float] | None = None, noncondensing: Sequence[str] = (),
          nonvolatile: Sequence[str] = (), henry: HenryArgument = (),
          parameters: Mapping[str, ArrayLike] | None = None, surface_tension: SurfaceTension | None = None) -> Model:
    """A `ThermoProperties` of components given by name or CAS number.

    Parameters
    ----------
    names : names or CAS numbers, as they are to appear in tables. "air" is dry air as one component, always
        non-condensing.
    activity : "ideal", "unifac", "unifac-modified", or a model of your own.
    T_range : (low, high) K of the column; the default spans the boiling points with 60 K on either side. Nothing can be
        evaluated outside it, and no liquid may reach its critical temperature in it.
    noncondensing : components that stay in the vapour.
    nonvolatile : components that stay in the liquid.
    henry : gases dissolved by Henry's law: a list of names for the constants in water of `henry.IN_WATER`, or
        {gas: {solvent: HenryConstant}}, every liquid of the mixture being a solvent.
    surface_tension : see `ThermoProperties`.

    Raises `InputError` for an unknown name, a property nobody has (naming component and property), a missing
    parameter; warns `PropertyWarning` where a method had to be replaced or stretched.
    """
    data = ComponentData(names)
    roles = _roles(data.names, noncondensing, nonvolatile, list(henry))
    liquids = [i for i, role in enumerate(roles) if role.has_liquid_data]
    if not liquids:
        raise InputError("names: no component is a liquid of its own")
    span = default_range(data, roles) if T_range is None else (float(T_range[0]), float(T_range[1]))
    law = _henry_law(data, roles, liquids, henry)
    mixing = activity if not isinstance(activity, str) else _activity(data, liquids, activity, parameters)
    components = pure_components(data, roles, span)
    factors = np.array([ASSOCIATION_FACTORS.get(cas, 1.0) for cas in components.cas])
    solvent = np.array([role.has_liquid_data for role in roles])
    liquid = LiquidDiffusivity(WilkeChang(components.molar_mass, components.boiling_volume, factors), solvent)
    return model(components, mixing, henry=law, surface_tension=surface_tension,
                 gas_diffusivity=Fuller(components.molar_mass, components.diffusion_volume),
                 liquid_diffusivity=liquid, records=_mixture_records(mixing, law, surface_tension is not None))


def _roles(names: Sequence[str], noncondensing: Sequence[str], nonvolatile: Sequence[str], dissolved: Sequence[str]
           ) -> list[Role]:
    roles = {name: Role.ORDINARY for name in names}
    for label, listed, role in (("noncondensing", noncondensing, Role.NONCONDENSING),
                                ("nonvolatile", nonvolatile, Role.NONVOLATILE), ("henry", dissolved, Role.DISSOLVED)):
        if isinstance(listed, str):
            raise InputError(f"{label}: expected a list of names, got {listed!r}")
        for name in listed:
            if name not in roles:
                raise InputError(f"{label}: {name!r} is none of the components {list(names)}")
            if roles[name] is not Role.ORDINARY:
                raise InputError(f"{label}: {name} has a role already ({roles[name].value})")
            roles[name] = role
    return [roles[name] for name in names]


def _henry_law(data: ComponentData, roles: Sequence[Role], liquids: Sequence[int], henry: HenryArgument
               ) -> HenryLaw | None:
    rows = []
    for i, role in enumerate(roles):
        if role is not Role.DISSOLVED:
            continue
        gas = data.names[i]
        given = henry[gas] if isinstance(henry, Mapping) else {}
        row = []
        for j in liquids:
            solvent = data.names[j]
            constant = given.get(solvent)
            if constant is None and data.cas[j] == WATER:
                constant = IN_WATER.get(data.cas[i])
            if constant is None:
                raise InputError(f"henry: no constant of {gas} in {solvent}; give one as "
                                 f"{{{gas!r}: {{{solvent!r}: HenryConstant(...)}}}}")
            row.append(constant)
        rows.append(row)
    return HenryLaw(rows) if rows else None


def _activity(data: ComponentData, liquids: Sequence[int], word: str, parameters: Mapping[str, ArrayLike] | None
              ) -> ActivityModel:
    def ideal() -> ActivityModel:
        return Ideal(len(liquids))

    def unifac() -> ActivityModel:
        return Unifac(*unifac_groups(data, liquids, modified=False),
                      label="UNIFAC, Fredenslund, Jones & Prausnitz (1975)")

    def modified() -> ActivityModel:
        return Unifac(*unifac_groups(data, liquids, modified=True), r_exponent=0.75,
                      label="modified UNIFAC, Weidlich & Gmehling (1987)")

    makers: dict[str, Callable[[], ActivityModel]] = {"ideal": ideal, "unifac": unifac, "unifac-modified": modified}
    if word not in makers:
        raise InputError(f"activity: expected one of {', '.join(makers)} or a model object, got {word!r}")
    if parameters is not None:
        raise InputError(f"parameters: {word} takes none")
    return makers[word]()


def _mixture_records(activity: ActivityModel, law: HenryLaw | None, own_tension: bool) -> list[PropertyRecord]:
    rows = [
        ("activity_coefficients", activity.describe(), ""),
        ("vapor_viscosity", "Wilke (1950)", ""),
        ("vapor_conductivity", "Wassiljewa with Mason & Saxena (1958)", ""),
        ("vapor_diffusivity", "Fuller, Schettler & Giddings (1966), volumes of 1969", ""),
        ("vapor_density", "ideal gas", ""),
        ("liquid_density", "volumes add up; a dissolved gas with its volume at the boiling point", ""),
        ("liquid_viscosity", "logarithms by mole fraction, Grunberg & Nissan (1949) without interaction",
         "low by up to a factor of two for cold aqueous alcohols; never an electrolyte rule"),
        ("liquid_conductivity", "power rule of Vredeveld", ""),
        ("surface_tension", "given by the user" if own_tension else "Winterfeld, Scriven & Davis (1978)",
         "" if own_tension else "far too high for aqueous organics"),
        ("liquid_diffusivity", "Wilke & Chang (1955), generalised Vignes after Kooijman & Taylor (1991)",
         "water as a solute: up to a factor of two"),
    ]
    records = [PropertyRecord("mixture", name, method, None, None, "this library", note=note)
               for name, method, note in rows]
    if law is not None:
        sources = sorted({constant.source for row in law.constants for constant in row})
        records.append(PropertyRecord("mixture", "henry_constants", "van 't Hoff, logarithms mixed by gas-free mole "
                                      "fraction", None, None, "; ".join(sources)))
    return records
