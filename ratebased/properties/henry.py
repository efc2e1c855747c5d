"""Henry's law: gases dissolved in liquids they do not form themselves.

p_i = H_i x_i with H_i in Pa. Constants are kept for a gas in each pure solvent, in the form the temperature dependence
of the heat of solution gives (van 't Hoff).
"""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ..arguments import positive_scalar
from ..errors import InputError
from .jet import Jet, temperature
from .protocol import Array

REFERENCE_TEMPERATURE = 298.15
WATER_MOLAR_DENSITY = 55344.6
"""mol/m3 at 298.15 K."""


@dataclass(frozen=True)
class HenryConstant:
    """ln H(T) = ln(reference) - slope (1/T - 1/298.15 K) + c ln(T/298.15 K) + d (T - 298.15 K).

    reference : H at 298.15 K, Pa (partial pressure over mole fraction). slope : K; R times it is the heat evolved when
    a mole of gas dissolves at 298.15 K, if c and d are zero. c (-), d (1/K) : curvature, where data allow.
    """

    reference: float
    slope: float
    c: float = 0.0
    d: float = 0.0
    source: str = "given by the user"

    def __post_init__(self) -> None:
        positive_scalar("reference", self.reference)
        for name in ("slope", "c", "d"):
            if not np.isfinite(getattr(self, name)):
                raise InputError(f"{name} = {getattr(self, name)}: expected a finite number")


def from_solubility(solubility: float, slope: float, source: str) -> HenryConstant:
    """A constant from the solubility in water at 298.15 K, mol/(m3 Pa), and d ln(solubility)/d(1/T), K."""
    return HenryConstant(WATER_MOLAR_DENSITY / positive_scalar("solubility", solubility), slope, source=source)


_SANDER = "Sander, Atmos. Chem. Phys. 15 (2015) 4399, from memory"
IN_WATER = {
    "1333-74-0": from_solubility(7.8e-6, 500.0, _SANDER),
    "7727-37-9": from_solubility(6.4e-6, 1300.0, _SANDER),
    "7782-44-7": from_solubility(1.3e-5, 1500.0, _SANDER),
    "7440-37-1": from_solubility(1.4e-5, 1500.0, _SANDER),
    "630-08-0": from_solubility(9.7e-6, 1300.0, _SANDER),
    "124-38-9": from_solubility(3.3e-4, 2400.0, _SANDER),
    "74-82-8": from_solubility(1.4e-5, 1600.0, _SANDER),
    "10024-97-2": from_solubility(2.4e-4, 2600.0, _SANDER),
    "7783-06-4": from_solubility(1.0e-3, 2100.0, _SANDER),
    "7446-09-5": from_solubility(1.3e-2, 2900.0, _SANDER),
    "7664-41-7": from_solubility(5.9e-1, 4200.0, _SANDER),
}
"""Physical solubility in water of common gases, by CAS number; no ionisation. Good to 5 to 10 % near 298 K."""


class HenryLaw:
    """Constants of m gases in k solvents: `constants[i][j]` of gas i in solvent j."""

    def __init__(self, constants: Sequence[Sequence[HenryConstant]]) -> None:
        widths = {len(row) for row in constants}
        if len(widths) != 1 or 0 in widths:
            raise InputError("constants: expected one row a gas, one constant a solvent in each")

        def matrix(name: str) -> Array:
            return np.array([[getattr(constant, name) for constant in row] for row in constants], float)

        self.constants = tuple(tuple(row) for row in constants)
        self._slope, self._c, self._d = matrix("slope"), matrix("c"), matrix("d")
        self._offset = (np.log(matrix("reference")) + self._slope / REFERENCE_TEMPERATURE
                        - self._c * np.log(REFERENCE_TEMPERATURE) - self._d * REFERENCE_TEMPERATURE)

    def ln_constants(self, T: Array, order: int = 0) -> Jet:
        """ln H_ij, H in Pa, with temperature derivatives, (..., m, k)."""
        jet = temperature(np.asarray(T, float)[..., None, None], order)
        result: Jet = jet.reciprocal() * -self._slope + self._offset
        if self._c.any():
            result = result + jet.log() * self._c
        if self._d.any():
            result = result + jet * self._d
        return result
