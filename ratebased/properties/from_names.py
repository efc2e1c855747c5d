"""From component names to a property model: the one place where words stand for models."""
from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING, Any, TypeVar

import numpy as np
from numpy.typing import ArrayLike

from ..arguments import finite_array
from ..errors import InputError
from .activity import ActivityModel, Ideal, Nrtl, Unifac, Uniquac, Wilson
from .components import PropertyRecord, PureComponents, Role
from .cubic import PENG_ROBINSON, SOAVE, CubicEquation, CubicForm, CubicVapor
from .diffusion import DiluteDiffusivity, Fuller, HaydukMinhas, LiquidDiffusivity, WilkeChang
from .henry import IN_WATER, HenryConstant, HenryLaw
from .thermo_data import (
    ComponentData,
    bank_record,
    boiling_surface_tension,
    default_range,
    pure_components,
    unifac_groups,
)
from .vapor import VaporModel, VirialVapor

if TYPE_CHECKING:
    from .cubic_properties import CubicProperties
    from .mixture import SurfaceTension
    from .thermo_properties import ThermoProperties

WATER = "7732-18-5"
ASSOCIATION_FACTORS = {WATER: 2.26, "67-56-1": 1.9, "64-17-5": 1.5}
"""Of the method of Wilke & Chang; 2.26 for water after Hayduk & Laudie (1974), the original has 2.6. Others: 1."""
EQUATIONS = {"peng-robinson": PENG_ROBINSON, "soave": SOAVE}
_ACIDS = 42
"""Group COOH of the original UNIFAC table: organic acids diffuse as dimers in most solvents."""

HenryArgument = Sequence[str] | Mapping[str, Mapping[str, HenryConstant | Mapping[str, float]]]
Model = TypeVar("Model", bound="ThermoProperties")
CubicModel = TypeVar("CubicModel", bound="CubicProperties")


def build(model: type[Model], names: Sequence[str], activity: str | ActivityModel = "unifac", *,
          T_range: tuple[float, float] | None = None, noncondensing: Sequence[str] = (),
          nonvolatile: Sequence[str] = (), henry: HenryArgument = (),
          parameters: Mapping[str, ArrayLike] | None = None, vapor: str | VaporModel = "ideal", poynting: bool = False,
          diffusivity: str = "wilke-chang", k_ij: ArrayLike | None = None, surface_tension: SurfaceTension | None = None
          ) -> Model:
    """A `ThermoProperties` of components given by name or CAS number.

    Parameters
    ----------
    names : names or CAS numbers, as they are to appear in tables. "air" is dry air as one component, always
        non-condensing.
    activity : "ideal", "unifac", "unifac-modified", "nrtl", "wilson", "uniquac", or a model of your own.
    T_range : (low, high) K of the column; the default spans the boiling points with 60 K on either side, and 0 C.
        Nothing can be evaluated outside it, and no liquid may reach its critical temperature in it.
    noncondensing : components that stay in the vapour.
    nonvolatile : components that stay in the liquid.
    henry : gases dissolved by Henry's law: a list of names for the constants in water of `henry.IN_WATER`, or
        {gas: {solvent: HenryConstant}}, every liquid of the mixture being a solvent (or, in place of the object, a
        mapping of its arguments).
    parameters : those of "nrtl", "wilson", "uniquac": keyword arguments of `Nrtl`, `Wilson`, `Uniquac` (matrices over
        the components that are liquids of their own, in the order of `names`).
    vapor : "ideal", "virial", "peng-robinson", "soave", or a model of your own; k_ij its interaction parameters.
    poynting : whether the fugacity of the liquids depends on pressure.
    diffusivity : dilute diffusivities in the liquid, "wilke-chang" or "hayduk-minhas".
    surface_tension : see `ThermoProperties`.

    Raises `InputError` for an unknown name, a property nobody has (naming component and property), a missing
    parameter; warns `PropertyWarning` where a method had to be replaced or stretched.
    """
    if isinstance(henry, str):
        raise InputError(f"henry: expected a list of names, got {henry!r}")
    if parameters is not None and not isinstance(activity, str):
        raise InputError("parameters: an activity model given as an object has its own")
    if k_ij is not None and (not isinstance(vapor, str) or vapor == "ideal"):
        raise InputError("k_ij: an ideal vapour has none, and a vapour model given as an object has its own")
    for label, value, method in (("activity", activity, "ln_gamma"), ("vapor", vapor, "ln_phi")):
        if not isinstance(value, str) and not hasattr(value, method):
            raise InputError(f"{label}: expected a word or a model, got {value!r}")
    data = ComponentData(names)
    roles = _roles(data.names, noncondensing, nonvolatile, list(henry))
    liquids = [i for i, role in enumerate(roles) if role.has_liquid_data]
    if not liquids:
        raise InputError("names: no component is a liquid of its own")
    span = default_range(data, roles) if T_range is None else _span(T_range)
    law = _henry_law(data, roles, liquids, henry)
    mixing = activity if not isinstance(activity, str) else _activity(data, liquids, activity, parameters)
    components = pure_components(data, roles, span)
    gas = vapor if not isinstance(vapor, str) else _vapor(components, vapor, 0.0 if k_ij is None else k_ij)
    liquid = liquid_diffusivity(data, components, diffusivity)
    records = [bank_record(components.bank),
               *_mixture_records(mixing, gas, law, poynting, diffusivity, surface_tension is not None)]
    return model(components, mixing, henry=law, vapor=gas, poynting=poynting, surface_tension=surface_tension,
                 gas_diffusivity=Fuller(components.molar_mass, components.diffusion_volume),
                 liquid_diffusivity=liquid, records=records)


def build_cubic(model: type[CubicModel], names: Sequence[str], equation: str | CubicForm, *,
                T_range: tuple[float, float], k_ij: ArrayLike, diffusivity: str,
                surface_tension: SurfaceTension | None) -> CubicModel:
    """A `CubicProperties` of components given by name or CAS number; see `CubicProperties.from_names`."""
    data = ComponentData(names)
    components = pure_components(data, [Role.ORDINARY] * len(names), _span(T_range),
                                 from_equation_of_state=True)
    form: CubicForm = chosen("equation", equation, EQUATIONS) if isinstance(equation, str) else equation
    cubic = CubicEquation(form, components.critical_temperature, components.critical_pressure,
                          components.acentric_factor, k_ij)
    records = [bank_record(components.bank),
               PropertyRecord("mixture", "fugacity_enthalpy_density", form.source, None, None, "this library",
                              note="liquid volume shifted"),
               *transport_records(diffusivity, surface_tension is not None)]
    return model(components, cubic, gas_diffusivity=Fuller(components.molar_mass, components.diffusion_volume),
                 liquid_diffusivity=liquid_diffusivity(data, components, diffusivity),
                 surface_tension=surface_tension, records=records)


def chosen(label: str, word: str, options: Mapping[str, Any]) -> Any:
    """The option a word stands for; an `InputError` lists them all."""
    if word not in options:
        raise InputError(f"{label}: expected one of {', '.join(options)} or an object, got {word!r}")
    return options[word]


def liquid_diffusivity(data: ComponentData, components: PureComponents, word: str) -> LiquidDiffusivity:
    """Pair diffusivities of the liquid with the dilute method a word stands for."""
    water = np.array([cas == WATER for cas in components.cas])

    def by_wilke_chang() -> DiluteDiffusivity:
        factors = np.array([ASSOCIATION_FACTORS.get(cas, 1.0) for cas in components.cas])
        return WilkeChang(components.molar_mass, components.boiling_volume, factors)

    def by_hayduk_minhas() -> DiluteDiffusivity:
        dimer = np.array([not data.is_air(i) and _ACIDS in (data.constants.UNIFAC_groups[data.index(i)] or {})
                          for i in range(len(components.names))])
        tension = boiling_surface_tension(data, components.boiling_temperature)
        return HaydukMinhas(components.boiling_volume * np.where(dimer, 2.0, 1.0), components.boiling_volume, tension,
                            water)

    dilute = chosen("diffusivity", word, {"wilke-chang": by_wilke_chang, "hayduk-minhas": by_hayduk_minhas})()
    return LiquidDiffusivity(dilute, np.array([role.has_liquid_data for role in components.roles]))


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


def _span(T_range: tuple[float, float]) -> tuple[float, float]:
    """(low, high) of a temperature range, K."""
    span = finite_array("T_range", T_range)
    if span.shape != (2,):
        raise InputError(f"T_range = {T_range!r}: expected (low, high), K")
    return float(span[0]), float(span[1])


def _henry_law(data: ComponentData, roles: Sequence[Role], liquids: Sequence[int], henry: HenryArgument
               ) -> HenryLaw | None:
    rows = []
    for i, role in enumerate(roles):
        if role is not Role.DISSOLVED:
            continue
        gas = data.names[i]
        given = henry[gas] if isinstance(henry, Mapping) else {}
        if not isinstance(given, Mapping):
            raise InputError(f"henry[{gas!r}] = {given!r}: expected {{solvent: HenryConstant}}")
        for solvent in given:
            if solvent not in [data.names[j] for j in liquids]:
                raise InputError(f"henry[{gas!r}]: {solvent!r} is no liquid of this mixture")
        row = []
        for j in liquids:
            solvent = data.names[j]
            constant = given.get(solvent)
            if isinstance(constant, Mapping):
                constant = _henry_constant(f"henry[{gas!r}][{solvent!r}]", constant)
            if constant is None and data.cas[j] == WATER:
                constant = IN_WATER.get(data.cas[i])
            if constant is None:
                raise InputError(f"henry: no constant of {gas} in {solvent}; give one as "
                                 f"{{{gas!r}: {{{solvent!r}: HenryConstant(...)}}}}")
            if not isinstance(constant, HenryConstant):
                raise InputError(f"henry[{gas!r}][{solvent!r}] = {constant!r}: expected a HenryConstant")
            row.append(constant)
        rows.append(row)
    return HenryLaw(rows) if rows else None


def _henry_constant(label: str, numbers: Mapping[str, float]) -> HenryConstant:
    """A constant written as a table of numbers, as it stands in a case file."""
    try:
        return HenryConstant(**numbers)  # type: ignore[arg-type]
    except TypeError as error:
        raise InputError(f"{label}: expected reference and slope, perhaps c, d and source ({error})") from error


def _activity(data: ComponentData, liquids: Sequence[int], word: str, parameters: Mapping[str, ArrayLike] | None
              ) -> ActivityModel:
    n = len(liquids)

    def given(maker: Callable[..., ActivityModel], *args: int) -> ActivityModel:
        if parameters is None:
            raise InputError(f"parameters: {word} needs its binary parameters")
        try:
            return maker(*args, **parameters)
        except TypeError as error:
            raise InputError(f"parameters: {sorted(parameters)} are not those of {word} ({error})") from error

    def group_method(modified: bool, label: str) -> ActivityModel:
        if parameters is not None:
            raise InputError(f"parameters: {word} takes none")
        return Unifac(*unifac_groups(data, liquids, modified=modified), r_exponent=0.75 if modified else 1.0,
                      label=label)

    def ideal() -> ActivityModel:
        if parameters is not None:
            raise InputError("parameters: an ideal mixture takes none")
        return Ideal(n)

    makers: dict[str, Callable[[], ActivityModel]] = {
        "ideal": ideal,
        "unifac": lambda: group_method(False, "UNIFAC, Fredenslund, Jones & Prausnitz (1975)"),
        "unifac-modified": lambda: group_method(True, "modified UNIFAC, Weidlich & Gmehling (1987)"),
        "nrtl": lambda: given(Nrtl, n),
        "wilson": lambda: given(Wilson, n),
        "uniquac": lambda: given(Uniquac),
    }
    made: ActivityModel = chosen("activity", word, makers)()
    return made


def _vapor(components: PureComponents, word: str, k_ij: ArrayLike) -> VaporModel | None:
    def cubic(form: CubicForm) -> VaporModel:
        return CubicVapor(CubicEquation(form, components.critical_temperature, components.critical_pressure,
                                        components.acentric_factor, k_ij))

    makers: dict[str, Callable[[], VaporModel | None]] = {
        "ideal": lambda: None, "virial": lambda: VirialVapor(components, k_ij),
        "peng-robinson": lambda: cubic(PENG_ROBINSON), "soave": lambda: cubic(SOAVE)}
    made: VaporModel | None = chosen("vapor", word, makers)()
    return made


def transport_records(diffusivity: str, own_tension: bool) -> list[PropertyRecord]:
    """The mixing rules of both phases, for the summary."""
    dilute = {"wilke-chang": "Wilke & Chang (1955)", "hayduk-minhas": "Hayduk & Minhas (1982)"}[diffusivity]
    rows = [
        ("vapor_viscosity", "Wilke (1950)", "a gas at low pressure"),
        ("vapor_conductivity", "Wassiljewa with Mason & Saxena (1958)", "a gas at low pressure"),
        ("vapor_diffusivity", "Fuller, Schettler & Giddings (1966), volumes of 1969",
         "no Lennard-Jones constants (one default set is fitted to liquids) and no dipole moments (some are low)"),
        ("liquid_viscosity", "logarithms by mole fraction, Grunberg & Nissan (1949) without interaction",
         "low by up to a factor of two for cold aqueous alcohols; never an electrolyte rule"),
        ("liquid_conductivity", "power rule of Vredeveld", "dissolved gases left out"),
        ("surface_tension", "given by the user" if own_tension else "Winterfeld, Scriven & Davis (1978)",
         "" if own_tension else "far too high for aqueous organics; dissolved gases left out"),
        ("liquid_diffusivity", f"{dilute}, generalised Vignes after Kooijman & Taylor (1991)",
         "water as a solute: up to a factor of two"),
    ]
    return [PropertyRecord("mixture", name, method, None, None, "this library", note=note)
            for name, method, note in rows]


def _mixture_records(activity: ActivityModel, vapor: VaporModel | None, law: HenryLaw | None, poynting: bool,
                     diffusivity: str, own_tension: bool) -> list[PropertyRecord]:
    def row(name: str, method: str, note: str = "", source: str = "this library") -> PropertyRecord:
        return PropertyRecord("mixture", name, method, None, None, source, note=note)

    groups = "a component without groups is refused, not taken for one of no size"
    records = [row("activity_coefficients", activity.describe(), groups if isinstance(activity, Unifac) else ""),
               row("vapor_fugacity_and_density", "ideal gas" if vapor is None else vapor.describe()),
               row("liquid_fugacity", "vapour pressure" + ("" if vapor is None else " and its fugacity coefficient")
                   + (", Poynting's correction" if poynting else "")),
               row("liquid_density", "volumes add up", "a dissolved gas with its volume at the boiling point")]
    if law is not None:
        sources = sorted({constant.source for line in law.constants for constant in line})
        records.append(row("henry_constants", "van 't Hoff, logarithms mixed by gas-free mole fraction",
                           source="; ".join(sources)))
    return [*records, *transport_records(diffusivity, own_tension)]
