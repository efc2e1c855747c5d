"""The one place that imports the data library `thermo`, and only when a mixture is built.

It reads constants and functions of temperature, replaces what is known to be wrong or unsafe in them, and hands over
plain numbers, arrays and callables of T. See `OVERRIDES` for what is replaced and why.
"""
from __future__ import annotations

import math
import re
import warnings
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from correlations.errors import InputError as CorrelationInputError
from correlations.gas_diffusivity import diffusion_volume
from correlations.molar_volume import tyn_calus

from ..errors import InputError, PropertyWarning
from .bank import ScalarFunction, TemperatureBank
from .components import PropertyRecord, PureComponents, Role
from .protocol import Array
from .structure import counted_rings
from .transport import gas_mixture, interaction_coefficients

REFERENCE_TEMPERATURE = 298.15
EQUILIBRIUM = ("ln_vapor_pressure", "vaporization_enthalpy")
LIQUID_CAP = 0.98
EXTRAPOLATION_WARNING = 60.0
"""K: a method used further outside its own range than this is warned about; nearer, the summary tells."""

AIR = {"7727-37-9": 0.7812, "7782-44-7": 0.2096, "7440-37-1": 0.0092}
"""Dry air as nitrogen, oxygen and argon, mole fractions (common practice)."""

OVERRIDES = {
    "ln_vapor_pressure": "never used above the critical temperature",
    "gas_viscosity": "floor of 1e-5 Pa s outside the method's range removed",
    "vaporization_enthalpy": "liquid enthalpy is the ideal gas less this, never an integral of a liquid heat capacity "
                             "(one default there, of chloroform, is a third low)",
}
"""Defects of the source that are replaced for every component, by property; the summary repeats them."""


@dataclass(frozen=True)
class _Spec:
    """One temperature function: where it is read, how it is stored, which components need it."""

    name: str
    collection: str
    transform: Callable[[float], float]
    phase: str
    placeholder: float


_IDENTITY: Callable[[float], float] = float
_SPECS = (
    _Spec("ln_vapor_pressure", "VaporPressures", math.log, "equilibrium", 0.0),
    _Spec("vaporization_enthalpy", "EnthalpyVaporizations", _IDENTITY, "liquid", 0.0),
    _Spec("gas_enthalpy", "HeatCapacityGases", _IDENTITY, "any", 0.0),
    _Spec("liquid_volume", "VolumeLiquids", _IDENTITY, "liquid", math.nan),
    _Spec("ln_liquid_viscosity", "ViscosityLiquids", math.log, "liquid", math.log(1e-3)),
    _Spec("liquid_conductivity", "ThermalConductivityLiquids", _IDENTITY, "liquid", 0.1),
    _Spec("surface_tension", "SurfaceTensions", _IDENTITY, "liquid", 0.0),
    _Spec("gas_viscosity", "ViscosityGases", _IDENTITY, "vapor", 1e-5),
    _Spec("gas_conductivity", "ThermalConductivityGases", _IDENTITY, "vapor", 0.02),
)


def resolve(name: str) -> str:
    """CAS number of a component given by name or CAS number.

    A formula is refused (the look-up takes C2H5OH for dimethyl ether), and so is a name that stands for several
    isomers. Raises `InputError` naming the component.
    """
    from chemicals import search_chemical

    text = name.strip()
    if re.fullmatch(r"\d{2,7}-\d\d-\d", text):
        try:
            return str(search_chemical(text).CASs)
        except ValueError as error:
            raise InputError(f"names: no data for CAS number {text}") from error
    if text.lower() in ("xylene", "xylenes"):
        raise InputError("names: 'xylene' is three isomers; give o-xylene, m-xylene or p-xylene")
    try:
        found = search_chemical(text)
    except ValueError as error:
        raise InputError(f"names: no component called {name!r} is known; try its CAS number") from error
    known = {found.common_name, found.iupac_name, *(found.synonyms or ())}
    if text.lower() not in {str(entry).lower() for entry in known} or text == found.formula:
        raise InputError(f"names: {name!r} is no name of a component (formulas are ambiguous); give a name or a CAS "
                         "number")
    return str(found.CASs)


class ComponentData:
    """Constants and correlation objects of the components of one mixture, air included as a fixed mixture."""

    def __init__(self, names: Sequence[str]) -> None:
        from thermo import ChemicalConstantsPackage

        if isinstance(names, str) or not len(names) or not all(isinstance(name, str) for name in names):
            raise InputError(f"names: expected a list of component names, got {names!r}")
        self.names = tuple(names)
        self.cas = tuple("air" if name.strip().lower() == "air" else resolve(name) for name in names)
        duplicates = {cas for cas in self.cas if self.cas.count(cas) > 1}
        if duplicates:
            raise InputError(f"names: {', '.join(n for n, c in zip(self.names, self.cas) if c in duplicates)} are the "
                             "same component")
        wanted = list(dict.fromkeys([c for c in self.cas if c != "air"] + (list(AIR) if "air" in self.cas else [])))
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # a deprecated pandas argument inside the data library
            self.constants, self.functions = ChemicalConstantsPackage.from_IDs(wanted)
        self._index = {cas: i for i, cas in enumerate(wanted)}

    def index(self, component: int) -> int:
        """Position of a component in the arrays of the data library."""
        return self._index[self.cas[component]]

    def is_air(self, component: int) -> bool:
        return self.cas[component] == "air"

    def constant(self, attribute: str, component: int, *, required: bool = True) -> float:
        """A constant of the data library in its own unit; that of air is the mole-fraction mean (Kay's rule)."""
        values = getattr(self.constants, attribute)
        if self.is_air(component):
            return float(sum(z * values[self._index[cas]] for cas, z in AIR.items()))
        value = values[self.index(component)]
        if value is None:
            if required:
                raise InputError(f"{self.names[component]}: the data library has no {attribute.rstrip('s')}")
            return math.nan
        return float(value)

    def correlation(self, collection: str, component: int) -> Any:
        """The correlation object of a property of a component."""
        return getattr(self.functions, collection)[self.index(component)]

    def air_parts(self, collection: str) -> list[tuple[float, Any]]:
        return [(z, getattr(self.functions, collection)[self._index[cas]]) for cas, z in AIR.items()]


def default_range(data: ComponentData, roles: Sequence[Role]) -> tuple[float, float]:
    """From 0 C, or 60 K below the lowest boiling point, to 60 K above the highest, below every critical point."""
    boiling = [data.constant("Tbs", i) for i, role in enumerate(roles) if role is Role.ORDINARY]
    critical = [data.constant("Tcs", i) for i, role in enumerate(roles) if role.has_liquid_data]
    if not boiling:
        raise InputError("T_range: give it, no component is in both phases with a vapour pressure of its own")
    return min(min(boiling) - 60.0, 273.15), min(max(boiling) + 60.0, 0.98 * min(critical))


def pure_components(data: ComponentData, roles: Sequence[Role], T_range: tuple[float, float], *,
                    from_equation_of_state: bool = False) -> PureComponents:
    """Sample every function each component needs in its role into one bank over `T_range`.

    With an equation of state no vapour pressure or latent heat is read, and liquid properties of a component above 0.98
    of its critical temperature are held at their value there.
    Raises `InputError` naming component and property where the library has none, and where `T_range` passes the
    critical temperature of a component that has to exist as a liquid. Warns `PropertyWarning` where a method is
    replaced or used more than 60 K outside its own range.
    """
    low, high = T_range
    if not (np.isfinite([low, high]).all() and 0.0 < low < high):
        raise InputError(f"T_range = {T_range}: expected 0 < low < high, K")
    n = len(data.names)
    for i, role in enumerate(roles):
        if data.is_air(i) and role is not Role.NONCONDENSING:
            raise InputError("air has no vapour-liquid equilibrium of its own: list it in `noncondensing`, or give "
                             "nitrogen and oxygen with `henry`")
        if not from_equation_of_state and role.has_liquid_data and high >= data.constant("Tcs", i):
            raise InputError(f"T_range: {high:g} K is not below the critical temperature of {data.names[i]} "
                             f"({data.constant('Tcs', i):g} K); narrow the range, dissolve it by `henry`, list it in "
                             "`noncondensing`, or use an equation of state")
    volume_at_boiling = np.array([_boiling_volume(data, i) for i in range(n)])
    records: list[PropertyRecord] = _constant_records(data)
    functions: dict[str, list[ScalarFunction]] = {}
    pending: dict[tuple[str, int], PropertyRecord] = {}
    limits: set[float] = set()
    for spec in _SPECS:
        group: list[ScalarFunction] = []
        for i, role in enumerate(roles):
            if not _needed(spec, role) or from_equation_of_state and spec.name in EQUILIBRIUM:
                value = volume_at_boiling[i] if spec.name == "liquid_volume" else spec.placeholder
                group.append(_constant(value))
                continue
            if data.is_air(i):
                function, record = _air_function(data, spec)
            else:
                capped = from_equation_of_state and spec.phase == "liquid"
                cap = LIQUID_CAP * data.constant("Tcs", i) if capped else math.inf
                function, record = _function(data, spec, i, T_range, cap)
            group.append(function)
            pending[spec.name, i] = record
            limits.update(edge for edge in (record.T_low, record.T_high) if edge is not None and low < edge < high)
        functions[spec.name] = group
    bank = TemperatureBank(T_range, functions, sorted(limits))
    for (name, i), record in pending.items():
        records.append(PropertyRecord(record.component, record.property, record.method, record.T_low, record.T_high,
                                      record.source, float(bank.fit_error[name][i]), record.note))

    def constants(attribute: str, *, required: bool = True) -> Array:
        return np.array([data.constant(attribute, i, required=required) for i in range(n)])

    return PureComponents(
        data.names, data.cas, tuple(roles), constants("MWs") * 1e-3, constants("Tcs"), constants("Pcs"),
        constants("Vcs", required=False), constants("omegas", required=False), constants("Tbs", required=False),
        np.array([_diffusion_volume(data, i) for i in range(n)]), volume_at_boiling, bank,
        tuple(sorted(records, key=lambda record: data.names.index(record.component))))


def _constant(value: float) -> ScalarFunction:
    return lambda T: value


def _needed(spec: _Spec, role: Role) -> bool:
    if spec.phase == "any":
        return True
    if spec.phase == "equilibrium":
        return role is Role.ORDINARY
    if spec.phase == "liquid":
        return role.has_liquid_data
    return role is not Role.NONVOLATILE


def _function(data: ComponentData, spec: _Spec, component: int, T_range: tuple[float, float], cap: float
              ) -> tuple[ScalarFunction, PropertyRecord]:
    """The callable stored in the bank, and its record; another method where the default one fails in the range.

    Above `cap` the function is constant.
    """
    whole, T_range = T_range, (min(T_range[0], cap), min(T_range[1], cap))
    name, label = data.names[component], spec.name.replace("_", " ")
    correlation = data.correlation(spec.collection, component)
    if spec.name == "gas_viscosity":
        correlation._extrapolation_min = None
    if correlation.method is None:
        raise InputError(f"{name}: the data library has no {label}")
    notes = [OVERRIDES[spec.name]] if spec.name in OVERRIDES else []
    default = correlation.method
    if not _usable(correlation, T_range) or _distance(correlation, default, T_range) > EXTRAPOLATION_WARNING:
        notes.append(_replace_method(correlation, f"{name}: {label}", T_range))
    method = correlation.method
    T_low, T_high = correlation.T_limits.get(method, (None, None))
    distance = _distance(correlation, method, T_range)
    if distance > 0:
        notes.append(f"extrapolated by up to {distance:.3g} K")
    if distance > EXTRAPOLATION_WARNING:
        warnings.warn(f"{name}: {label} by {_label(method)} is used up to {distance:.3g} K outside its range "
                      f"{T_low:g} to {T_high:g} K", PropertyWarning, stacklevel=5)
    if cap < whole[1]:
        notes.append(f"held constant above {cap:.5g} K (0.98 Tc)")
        T_high = cap
    record = PropertyRecord(name, spec.name, _label(str(method)), T_low, T_high, _source(),
                            note="; ".join(note for note in notes if note))
    sampler = _sampler(correlation, spec)
    return (sampler if cap >= whole[1] else lambda T: sampler(min(T, cap))), record


def _replace_method(correlation: Any, what: str, T_range: tuple[float, float]) -> str:
    """Set the method that is positive all over the range and reaches furthest into it; a remark for the summary.

    Methods that reach equally far come in the data library's own order of preference. `InputError` where there is none.
    """
    default = correlation.method
    preferred = {method: place for place, method in enumerate(correlation.ranked_methods)}
    best: tuple[float, int, str] | None = None
    for method in sorted(correlation.all_methods):
        correlation.method = method
        if _usable(correlation, T_range):
            rank = (_distance(correlation, method, T_range), preferred.get(method, len(preferred)), method)
            best = rank if best is None else min(best, rank)
    if best is None:
        raise InputError(f"{what}: no method gives a positive value all over {T_range[0]:g} to {T_range[1]:g} K")
    correlation.method = best[2]
    if best[2] == default:
        return ""
    low, high = correlation.T_limits.get(default, T_range)
    return f"the default, {_label(default)}, holds only from {low:g} to {high:g} K"


def _label(method: str) -> str:
    """The method in the words of the data library, except for its fits, which it names after where they were made."""
    return "fit to a reference equation" if method.endswith("_FIT") else method


def _sampler(correlation: Any, spec: _Spec) -> ScalarFunction:
    if spec.name == "gas_enthalpy":
        return lambda T: float(correlation.T_dependent_property_integral(REFERENCE_TEMPERATURE, T))
    return lambda T: spec.transform(correlation.T_dependent_property(T))


def _usable(correlation: Any, T_range: tuple[float, float]) -> bool:
    """Whether the property is a positive number all over the range."""
    for T in np.linspace(*T_range, 25):
        value = correlation.T_dependent_property(float(T))
        if value is None or not np.isfinite(value) or value <= 0.0:
            return False
    return True


def _distance(correlation: Any, method: str, T_range: tuple[float, float]) -> float:
    low, high = correlation.T_limits.get(method, (T_range[0], T_range[1]))
    return float(max(low - T_range[0], T_range[1] - high, 0.0))


def _air_function(data: ComponentData, spec: _Spec) -> tuple[ScalarFunction, PropertyRecord]:
    """Air as nitrogen, oxygen and argon: ideal enthalpies add up, viscosity and conductivity by the mixing rules."""
    parts = data.air_parts(spec.collection)
    z = np.array([share for share, _ in parts])
    viscosities = [correlation for _, correlation in data.air_parts("ViscosityGases")]
    masses = np.array([data.constants.MWs[data._index[cas]] for cas in AIR]) * 1e-3

    def enthalpy(T: float) -> float:
        return float(sum(share * correlation.T_dependent_property_integral(REFERENCE_TEMPERATURE, T)
                         for share, correlation in parts))

    def mixed(T: float) -> float:
        phi = interaction_coefficients(np.array([v.T_dependent_property(T) for v in viscosities]), masses)
        values = np.array([correlation.T_dependent_property(T) for _, correlation in parts])
        return float(gas_mixture(z, values[None], phi)[0])

    record = PropertyRecord("air", spec.name, "mixture of nitrogen, oxygen and argon", None, None, _source(),
                            note="mole fractions 0.7812, 0.2096, 0.0092")
    return (enthalpy if spec.name == "gas_enthalpy" else mixed), record


def _boiling_volume(data: ComponentData, component: int) -> float:
    """Molar volume at the normal boiling point, m3/mol: of the liquid there, or after Tyn & Calus (1975).

    A substance that sublimes at 1 atm (carbon dioxide) has no liquid at its "boiling point".
    """
    if data.is_air(component):
        return 29.9e-6  # Le Bas
    boiling = data.constant("Tbs", component, required=False)
    melting = data.constant("Tms", component, required=False)
    if np.isfinite(boiling) and not boiling < melting:
        volume = data.correlation("VolumeLiquids", component).T_dependent_property(boiling)
        if volume is not None and volume > 0:
            return float(volume)
    return float(tyn_calus.silent(data.constant("Vcs", component)))


def boiling_surface_tension(data: ComponentData, boiling_temperature: Array) -> Array:
    """Surface tensions of the pure liquids at their normal boiling points, N/m, (n,).

    Raises `InputError` naming a component without one.
    """
    tensions = []
    for i, T in enumerate(boiling_temperature):
        tension = None if data.is_air(i) else data.correlation("SurfaceTensions", i).T_dependent_property(float(T))
        if tension is None or not tension > 0.0:
            if data.is_air(i):
                tension = 8.85e-3  # nitrogen at its boiling point
            else:
                raise InputError(f"{data.names[i]}: the data library has no surface tension at the boiling point")
        tensions.append(float(tension))
    return np.array(tensions)


def _diffusion_volume(data: ComponentData, component: int) -> float:
    """Diffusion volume for the method of Fuller et al., m3/mol."""
    if data.is_air(component):
        return diffusion_volume("air")
    atoms = data.constants.atomss[data.index(component)]
    smiles = data.constants.smiless[data.index(component)]
    if not atoms:
        raise InputError(f"{data.names[component]}: the data library has no formula, so no diffusion volume")
    try:
        return diffusion_volume({element: int(count) for element, count in atoms.items()},
                                aromatic_rings=counted_rings(smiles) if smiles else 0)
    except CorrelationInputError as error:
        raise InputError(f"{data.names[component]}: no diffusion volume ({error})") from error


def bank_record(bank: TemperatureBank) -> PropertyRecord:
    """How the temperature functions are kept."""
    segments = len(bank.edges) - 1
    return PropertyRecord("mixture", "temperature_functions", f"Chebyshev series of degree {bank.degree}, {segments} "
                          f"segment{'s' if segments > 1 else ''}", *bank.T_range, "this library",
                          note="a new series starts at every limit of a method, where it has a kink")


def _constant_records(data: ComponentData) -> list[PropertyRecord]:
    labels = {"MWs": "molar_mass", "Tcs": "critical_temperature", "Pcs": "critical_pressure",
              "Vcs": "critical_volume", "omegas": "acentric_factor", "Tbs": "boiling_temperature"}
    records = []
    for i, name in enumerate(data.names):
        identity = "nitrogen, oxygen and argon" if data.is_air(i) else f"CAS {data.cas[i]}"
        records.append(PropertyRecord(name, "identity", identity, None, None, _source(),
                                      note="by name or number; formulas are refused, some stand for another substance"))
        for attribute, label in labels.items():
            note = ""
            if attribute == "Tbs" and not data.is_air(i) and data.constant("Tbs", i, required=False) < data.constant(
                    "Tms", i, required=False):
                note = "sublimation point, not used as a boiling point"
            method = "Kay's rule" if data.is_air(i) else "constant"
            records.append(PropertyRecord(name, label, method, None, None, _source(), note=note))
        records.append(PropertyRecord(name, "diffusion_volume", "Fuller et al. (1969)", None, None, "correlations"))
        records.append(PropertyRecord(name, "boiling_volume", "liquid volume at the boiling point, else Tyn & Calus "
                                      "(1975)", None, None, _source()))
    return records


def _source() -> str:
    import thermo

    return f"thermo {thermo.__version__}"


def unifac_groups(data: ComponentData, components: Sequence[int], *, modified: bool
                  ) -> tuple[Array, Array, Array, Array, Array, Array]:
    """(counts, R, Q, a, b, c) of the original or the modified method for some components, as `Unifac` takes them.

    Raises `InputError` naming a component without groups, or a pair of main groups without parameters.
    """
    from thermo.unifac import DOUFIP2016, DOUFSG, UFIP, UFSG

    assigned = data.constants.UNIFAC_Dortmund_groups if modified else data.constants.UNIFAC_groups
    table: Mapping[int, Any] = DOUFSG if modified else UFSG
    parameters: Mapping[int, Mapping[int, Any]] = DOUFIP2016 if modified else UFIP
    method = "modified UNIFAC" if modified else "UNIFAC"
    groups: list[Mapping[int, int]] = []
    for i in components:
        own = {} if data.is_air(i) else assigned[data.index(i)]
        if not own:
            raise InputError(f"{data.names[i]}: no {method} groups; choose another activity model, or list it in "
                             "`henry` or `noncondensing`")
        groups.append({int(group): int(count) for group, count in own.items()})
    labels = sorted({group for own in groups for group in own})
    counts = np.array([[own.get(group, 0) for group in labels] for own in groups], float)
    abc = np.zeros((3, len(labels), len(labels)))
    for k, first in enumerate(labels):
        for m, second in enumerate(labels):
            one, two = table[first].main_group_id, table[second].main_group_id
            if one == two:
                continue
            try:
                abc[:, k, m] = parameters[one][two] if modified else (parameters[one][two], 0.0, 0.0)
            except KeyError as error:
                raise InputError(f"{method}: no parameters between the groups {table[first].group} and "
                                 f"{table[second].group} ({_holders(data, components, groups, first, second)})"
                                 ) from error
    return (counts, np.array([table[group].R for group in labels]), np.array([table[group].Q for group in labels]),
            abc[0], abc[1], abc[2])


def _holders(data: ComponentData, components: Sequence[int], groups: Sequence[Mapping[int, int]], first: int,
             second: int) -> str:
    one = next(data.names[i] for i, own in zip(components, groups) if first in own)
    two = next(data.names[i] for i, own in zip(components, groups) if second in own)
    return f"{one} and {two}"
