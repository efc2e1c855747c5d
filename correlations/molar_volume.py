# mypy: disable-error-code="no-any-return"
"""Molar volumes of liquids at their normal boiling point."""
from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

from .errors import InputError
from .record import Values, correlation
from .validity import UNKNOWN, Array, Confidence, Validity

CM3 = 1e-6

LE_BAS_INCREMENTS: Mapping[str, float] = MappingProxyType({
    "C": 14.8, "H": 3.7, "O": 7.4, "O methyl ester or ether": 9.1, "O ethyl ester or ether": 9.9,
    "O higher ester or ether": 11.0, "O acid": 12.0, "O joined to S, P or N": 8.3, "N double bond": 15.6,
    "N primary amine": 10.5, "N secondary amine": 12.0, "F": 8.7, "Cl": 24.6, "Br": 27.0, "I": 37.0, "S": 25.6,
    "ring of 3": -6.0, "ring of 4": -8.5, "ring of 5": -11.5, "ring of 6": -15.0, "naphthalene": -30.0,
    "anthracene": -47.5})
"""cm3/mol. C, H, O, Cl, Br and I were seen in print, the rest is from memory."""
LE_BAS_MOLECULES: Mapping[str, float] = MappingProxyType({
    "H2": 14.3, "O2": 25.6, "N2": 31.2, "air": 29.9, "CO": 30.7, "CO2": 34.0, "SO2": 44.8, "NH3": 25.8, "H2O": 18.9,
    "H2S": 32.9, "NO": 23.6, "N2O": 36.4, "COS": 51.5, "Cl2": 48.4, "Br2": 53.2, "I2": 71.5})
"""cm3/mol. NO, N2O, COS, Cl2, Br2 and I2 are from memory."""
SCHROEDER_INCREMENTS: Mapping[str, float] = MappingProxyType({
    "C": 7.0, "H": 7.0, "O": 7.0, "N": 7.0, "double bond": 7.0, "triple bond": 14.0, "F": 10.5, "Cl": 24.5, "Br": 31.5,
    "I": 38.5, "S": 21.0, "ring": -7.0})
"""cm3/mol."""


@correlation("molar volume at the normal boiling point", "liquids", "m3 mol-1", Validity(
    {}, 0.03, "tyn_calus_1975_volume", Confidence.VERIFIED, range_note=UNKNOWN, error_note="about, from memory"),
    dimensional=True)
def tyn_calus(critical_volume: Values) -> Array:
    """Molar volume at the normal boiling point from the critical volume by Tyn and Calus [m3/mol].

    V_b = 0.285 V_c^1.048 in cm3/mol.
    """
    return 0.285 * CM3 * (critical_volume / CM3) ** 1.048


def _sum(increments: Mapping[str, int], table: Mapping[str, float]) -> float:
    for name, count in increments.items():
        if name not in table:
            raise InputError(f"increments[{name!r}]: expected one of {sorted(table)}")
        if count != int(count) or count < 1:
            raise InputError(f"increments[{name!r}] = {count}: expected a whole number above zero")
    total = sum(table[name] * count for name, count in increments.items())
    if not total > 0:
        raise InputError(f"increments: the volumes of {dict(increments)} sum to {total:g} cm3/mol, expected above zero")
    return total * CM3


@correlation("molar volume at the normal boiling point", "liquids", "m3 mol-1", Validity(
    {}, None, "le_bas_1915", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def le_bas(increments: Mapping[str, int]) -> float:
    """Molar volume at the normal boiling point from Le Bas' increments [m3/mol].

    Counts of the keys of `LE_BAS_INCREMENTS`, rings included, as {"C": 7, "H": 8, "ring of 6": 1}; or one molecule of
    `LE_BAS_MOLECULES`, as {"CO2": 1}.
    """
    if len(increments) == 1:
        name, count = next(iter(increments.items()))
        if name in LE_BAS_MOLECULES and count == 1:
            return LE_BAS_MOLECULES[name] * CM3
    return _sum(increments, LE_BAS_INCREMENTS)


@correlation("molar volume at the normal boiling point", "liquids", "m3 mol-1", Validity(
    {}, None, "schroeder", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def schroeder(increments: Mapping[str, int]) -> float:
    """Molar volume at the normal boiling point from Schroeder's increments [m3/mol].

    Counts of the keys of `SCHROEDER_INCREMENTS`: atoms, double and triple bonds, rings.
    """
    return _sum(increments, SCHROEDER_INCREMENTS)
