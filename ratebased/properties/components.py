"""The pure components of a mixture: constants, functions of temperature, and where each of them comes from."""
from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum
from typing import TYPE_CHECKING

from .bank import TemperatureBank
from .protocol import Array

if TYPE_CHECKING:
    import pandas as pd


class Role(Enum):
    """How a component takes part in the mixture."""

    ORDINARY = "in both phases"
    DISSOLVED = "dissolved gas (Henry's law)"
    NONCONDENSING = "vapour only (non-condensing)"
    NONVOLATILE = "liquid only (non-volatile)"

    @property
    def has_liquid_data(self) -> bool:
        """Whether the component counts in the mixing rules of the liquid and in its activity model."""
        return self in (Role.ORDINARY, Role.NONVOLATILE)


@dataclass(frozen=True)
class PropertyRecord:
    """One row of the summary: which method gives a property of a component, over which range, from where.

    T_low, T_high: the range of the method in K, None for a constant. fit_error: largest relative deviation of the
    series of the bank from the method, None for a constant.
    """

    component: str
    property: str
    method: str
    T_low: float | None
    T_high: float | None
    source: str
    fit_error: float | None = None
    note: str = ""


@dataclass(frozen=True)
class PureComponents:
    """Constants (n,) and temperature functions of n components.

    molar_mass kg/mol, critical_temperature and boiling_temperature K, critical_pressure Pa, critical_volume m3/mol,
    acentric_factor, diffusion_volume (of Fuller et al.'s method, in its own unit cm3/mol), boiling_volume m3/mol at the
    normal boiling point. Bank, each for n components: ln_vapor_pressure (Pa), vaporization_enthalpy J/mol, gas_enthalpy
    J/mol above the ideal gas at 298.15 K, liquid_volume m3/mol, ln_liquid_viscosity (Pa s), gas_viscosity Pa s,
    liquid_conductivity and gas_conductivity W/(m K), surface_tension N/m. A function a component has no use for in its
    role is a placeholder that no mixing rule reads.
    """

    names: tuple[str, ...]
    cas: tuple[str, ...]
    roles: tuple[Role, ...]
    molar_mass: Array
    critical_temperature: Array
    critical_pressure: Array
    critical_volume: Array
    acentric_factor: Array
    boiling_temperature: Array
    diffusion_volume: Array
    boiling_volume: Array
    bank: TemperatureBank
    records: tuple[PropertyRecord, ...] = field(default=())

    @property
    def T_range(self) -> tuple[float, float]:
        return self.bank.T_range


def records_frame(records: tuple[PropertyRecord, ...]) -> pd.DataFrame:
    """The records as a table: component, property, method, T_low_K, T_high_K, source, fit_error, note."""
    import pandas as pd

    rows = [(r.component, r.property, r.method, r.T_low, r.T_high, r.source, r.fit_error, r.note) for r in records]
    return pd.DataFrame(rows, columns=["component", "property", "method", "T_low_K", "T_high_K", "source",
                                       "fit_error", "note"])
