"""Sweeps over every correlation of the catalogue: units, broadcasting, finiteness, domains."""
from __future__ import annotations

import re
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from typical_arguments import INTERVALS, NESTED, plain, sample

from correlations import InputError, NoPhysicalRootError, catalogue
from correlations.glossary import GLOSSARY
from correlations.record import REGISTRY

PLAIN = [r.name for r in catalogue() if plain(r)]
CONSISTENT = [r.name for r in catalogue() if plain(r) and not r.dimensional]

BASE = {"kg": (1, 0, 0, 0, 0), "m": (0, 1, 0, 0, 0), "s": (0, 0, 1, 0, 0), "K": (0, 0, 0, 1, 0), "mol": (0, 0, 0, 0, 1),
        "N": (1, 1, -2, 0, 0), "Pa": (1, -1, -2, 0, 0), "J": (1, 2, -2, 0, 0), "W": (1, 2, -3, 0, 0),
        "C": (0, 0, 0, 0, 0), "rad": (0, 0, 0, 0, 0)}


def dimension(unit: str) -> np.ndarray:
    """Exponents of kg, m, s, K, mol."""
    total = np.zeros(5)
    if unit != "-":
        for part in unit.split():
            symbol, exponent = re.fullmatch(r"([A-Za-z]+?)(-?[\d.]+)?", part).groups()
            total += np.array(BASE[symbol]) * float(Fraction(exponent or "1"))
    return total


def parts(value) -> tuple[np.ndarray, ...]:
    return tuple(value) if isinstance(value, tuple) else (value,)


def test_typical_values_cover_the_glossary():
    numeric = {name for name, quantity in GLOSSARY.items() if quantity.domain is not None}
    used = {name for record in catalogue() for name in record.parameters}
    assert set(INTERVALS) | NESTED >= used
    assert numeric <= used, "an argument in the glossary that no correlation takes"
    for quantity in GLOSSARY.values():
        if quantity.domain is not None:
            dimension(quantity.unit)


@pytest.mark.parametrize("name", CONSISTENT)
@settings(max_examples=5, deadline=None, derandomize=True)
@given(seed=st.integers(0, 10 ** 6), length=st.floats(1.0, 4.0), mass=st.floats(0.1, 10.0), kelvin=st.floats(0.1, 10.0),
       mole=st.floats(0.1, 10.0))
def test_units(name, seed, length, mass, kelvin, mole):
    """A change of units that leaves g its value changes the result by its own unit and no group at all.

    With the time unit the root of the length unit, g = 9.80665 holds in the new units too.
    """
    function = REGISTRY[name]
    arguments = sample(function.record, np.random.default_rng(seed))
    scale = np.array([mass, length, np.sqrt(length), kelvin, mole])

    def change(unit):
        return np.prod(scale ** dimension(unit))

    other = {n: value * change(GLOSSARY[n].unit) for n, value in arguments.items()}
    units = function.record.unit.split("; ")
    try:
        original = parts(function.silent(**arguments))
    except NoPhysicalRootError:
        assume(False)  # a bed drawn beyond its flooding point
    for before, after, unit in zip(original, parts(function.silent(**other)), units):
        assert_allclose(after, before * change(unit), rtol=1e-9)
    for group, value in function.record.range_variables(**arguments).items():
        if group not in function.record.parameters and group != "liquid_load_m_h":
            assert_allclose(function.record.range_variables(**other)[group], value, rtol=1e-9)


@pytest.mark.parametrize("name", PLAIN)
def test_finite_and_broadcast(name):
    """A grid of stages and pairs in one call is the same numbers as one call an entry."""
    function = REGISTRY[name]
    random = np.random.default_rng(7)
    rows, columns = sample(function.record, random, (3, 1)), sample(function.record, random, (1, 4))
    mixed = {n: (rows if i % 2 else columns)[n] for i, n in enumerate(rows)}
    whole = parts(function.silent(**mixed))
    shape = np.broadcast_shapes(*(v.shape for v in mixed.values()))
    for index in np.ndindex(shape):
        single = {n: np.broadcast_to(v, shape)[index] for n, v in mixed.items()}
        for field, value in zip(whole, parts(function.silent(**single))):
            assert np.isfinite(value)
            assert_allclose(np.broadcast_to(field, shape)[index], value, rtol=1e-12)


@pytest.mark.parametrize("name", PLAIN)
def test_bad_input_is_named(name):
    """NaN in any argument is an error that names argument and entry."""
    function = REGISTRY[name]
    arguments = sample(function.record, np.random.default_rng(1), (3,))
    for argument in arguments:
        if GLOSSARY[argument].domain is None:
            continue
        spoiled = dict(arguments, **{argument: np.where([False, True, False], np.nan, arguments[argument])})
        with pytest.raises(InputError, match=rf"{argument}\[1\] = nan"):
            function.silent(**spoiled)
