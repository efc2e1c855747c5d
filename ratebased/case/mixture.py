"""[mixture] of a case file: components, how they deviate from ideal mixtures, gases that do not dissolve.

    components = ["acetone", "ethanol", "water"]
    model = "activity"                   # "activity", "equation of state" or "constant volatility"
    T_range_K = [280.0, 400.0]           # optional: default 40 K on either side of a profile; without one, from 60 K
                                         # below the lowest to 60 K above the highest boiling point

Of the model "activity" (liquid by activity coefficients):

    activity = "unifac-modified"         # "ideal", "unifac", "unifac-modified", "nrtl", "wilson", "uniquac"
    parameters = {...}                   # of "nrtl", "wilson", "uniquac": matrices over the components that are liquids
    noncondensing = ["air"]              # optional: stay in the vapour
    nonvolatile = []                     # optional: stay in the liquid
    henry = ["carbon dioxide"]           # optional: gases dissolved by Henry's law, constants in water; or a table
                                         # {gas = {solvent = {reference = ..., slope = ...}}}
    vapor = "ideal"                      # "ideal", "virial", "peng-robinson", "soave"
    poynting = false
    diffusivity = "wilke-chang"          # dilute, in the liquid: "wilke-chang" or "hayduk-minhas"

Of the model "equation of state" (both phases by one cubic equation): equation = "peng-robinson" or "soave",
diffusivity.

Of the model "constant volatility" (teaching and quick studies): volatility, latent_heat_J_mol, a, b_K; optional
molar_mass_kg_mol, vapor_heat_capacity_J_mol_K, liquid_heat_capacity_J_mol_K, vapor_diffusivity_m2_s,
liquid_diffusivity_m2_s, reference_temperature_K. Numbers for components as {water = 1.0, ethanol = 2.0}, for pairs as
{"water / ethanol" = 1.2e-5}, or one number for all.
"""
from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from ..errors import InputError
from ..properties import ConstantVolatility, CubicProperties, ThermoProperties
from ..properties.protocol import PropertyModel
from ..toml_table import TomlTable

MARGIN = 40.0
"""K on either side of the profile's temperatures that the property range spans."""

ACTIVITY = {word: word for word in ("ideal", "unifac", "unifac-modified", "nrtl", "wilson", "uniquac")}
VAPOR = {word: word for word in ("ideal", "virial", "peng-robinson", "soave")}
EQUATION = {word: word for word in ("peng-robinson", "soave")}
DIFFUSIVITY = {word: word for word in ("wilke-chang", "hayduk-minhas")}


def component_names(table: TomlTable) -> list[str]:
    """The components of [mixture]. Raises `InputError`."""
    names = table.texts("components")
    if not names:
        raise table.fail("components", "expected at least one name")
    twice = sorted({name for name in names if names.count(name) > 1})
    if twice:
        raise table.fail("components", f"{twice[0]!r} appears more than once")
    return names


def properties_from(table: TomlTable, temperatures: Sequence[float]) -> PropertyModel:
    """The property model of a case whose streams have these temperatures, K. Raises `InputError`."""
    make = table.choice("model", MODELS, "activity")
    names = component_names(table)
    span = (min(temperatures) - MARGIN, max(temperatures) + MARGIN) if temperatures else None
    if table.has("T_range_K"):
        span = table.span("T_range_K")
    else:
        table.asked.add("T_range_K")
    model: PropertyModel = make(table, names, span)
    return model


def _activity(table: TomlTable, names: list[str], span: tuple[float, float] | None) -> PropertyModel:
    word = table.choice("activity", ACTIVITY, "unifac-modified")
    parameters = table.take("parameters", None)
    if parameters is not None and not isinstance(parameters, dict):
        raise table.fail("parameters", "expected a table of matrices")
    henry = table.take("henry", [])
    if not isinstance(henry, dict):
        henry = table.texts("henry", [])
    elif not all(isinstance(row, dict) and all(isinstance(c, dict) for c in row.values()) for row in henry.values()):
        raise table.fail("henry", "expected {gas = {solvent = {reference = ..., slope = ...}}}")
    noncondensing, nonvolatile = table.texts("noncondensing", []), table.texts("nonvolatile", [])
    vapor, poynting = table.choice("vapor", VAPOR, "ideal"), table.flag("poynting", False)
    diffusivity = table.choice("diffusivity", DIFFUSIVITY, "wilke-chang")
    table.finish()
    return _named(table, lambda: ThermoProperties.from_names(
        names, word, T_range=span, henry=henry, parameters=parameters, vapor=vapor, poynting=poynting,
        diffusivity=diffusivity, noncondensing=noncondensing, nonvolatile=nonvolatile))


def _equation_of_state(table: TomlTable, names: list[str], span: tuple[float, float] | None) -> PropertyModel:
    equation = table.choice("equation", EQUATION, "peng-robinson")
    diffusivity = table.choice("diffusivity", DIFFUSIVITY, "wilke-chang")
    table.finish()
    if span is None:
        raise InputError(f"{table.where}: key T_range_K is missing: the range of temperatures, [low, high] in K")
    return _named(table, lambda: CubicProperties.from_names(names, equation, T_range=span, diffusivity=diffusivity))


def _constant(table: TomlTable, names: list[str], span: tuple[float, float] | None) -> PropertyModel:
    volatility, latent = table.by_component("volatility", names), table.by_component("latent_heat_J_mol", names)
    mass = table.by_component("molar_mass_kg_mol", names, 0.05)
    vapor_capacity = table.by_component("vapor_heat_capacity_J_mol_K", names, 0.0)
    liquid_capacity = table.by_component("liquid_heat_capacity_J_mol_K", names, 0.0)
    in_vapor = table.by_pair("vapor_diffusivity_m2_s", names, 1e-5)
    in_liquid = table.by_pair("liquid_diffusivity_m2_s", names, 3e-9)
    a, b = table.number("a", above=0.0, most=60.0), table.number("b_K", above=0.0, most=2e4)
    reference = table.number("reference_temperature_K", 298.15, above=0.0)
    masks = []
    for key in ("noncondensing", "nonvolatile"):
        listed = table.texts(key, [])
        for name in listed:
            if name not in names:
                raise table.fail(key, f"{name!r} is none of the components")
        masks.append(np.array([name not in listed for name in names]))
    table.finish()
    return _named(table, lambda: ConstantVolatility(
        names, volatility, latent, a=a, b=b, vapor_heat_capacity=vapor_capacity, liquid_heat_capacity=liquid_capacity,
        reference_temperature=reference, condensable=masks[0], volatile=masks[1], molar_mass=mass,
        vapor_diffusivity=in_vapor, liquid_diffusivity=in_liquid))


def _named(table: TomlTable, make: Callable[[], PropertyModel]) -> PropertyModel:
    """What is made, its errors opening with the table they come from."""
    try:
        return make()
    except InputError as error:
        raise type(error)(f"{table.where}: {error}") from error
    except ValueError as error:
        raise InputError(f"{table.where}: {error}") from error


MODELS: dict[str, Callable[[TomlTable, list[str], tuple[float, float] | None], PropertyModel]] = {
    "activity": _activity, "equation of state": _equation_of_state, "constant volatility": _constant}
