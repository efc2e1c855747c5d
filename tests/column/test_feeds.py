"""Feeds flashed at the pressure of their stage, against `thermo`'s flash and closed forms."""
from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from ratebased.column import flash
from ratebased.errors import InputError
from ratebased.properties import ConstantVolatility, ThermoProperties, bubble_point, dew_point

BINARY = ConstantVolatility(["a", "b"], [2.5, 1.0], 30e3, a=22.5, b=4000.0)


def test_rachford_rice_of_a_binary() -> None:
    """x = (1 - K2)/(K1 - K2) in a two-phase binary, whatever the feed."""
    T, even = 350.0, np.array([0.5, 0.5])
    pressure = float(BINARY.k_value(np.asarray(T), np.asarray(1.0), even, even).mean() * 0.9)
    K = BINARY.k_value(np.asarray(T), np.asarray(pressure), even, even)
    result = flash(BINARY, [4.0, 6.0], pressure, temperature=T)
    x = result.liquid / result.liquid.sum()
    assert x[0] == pytest.approx((1 - K[1]) / (K[0] - K[1]), rel=1e-12)
    np.testing.assert_allclose(result.vapor + result.liquid, [4.0, 6.0])


def test_vapor_fraction_runs_from_bubble_to_dew_point() -> None:
    z = np.array([0.4, 0.6])
    bubble, dew = float(bubble_point(BINARY, 1e5, z)[0]), float(dew_point(BINARY, 1e5, z)[0])
    assert flash(BINARY, z, 1e5, vapor_fraction=0.0).temperature == pytest.approx(bubble)
    assert flash(BINARY, z, 1e5, vapor_fraction=1.0).temperature == pytest.approx(dew)
    middle = flash(BINARY, z, 1e5, vapor_fraction=0.37)
    assert middle.vapor_fraction == pytest.approx(0.37, abs=1e-10) and bubble < middle.temperature < dew


def test_single_phase_feeds() -> None:
    assert flash(BINARY, [1.0, 1.0], 1e5, temperature=300.0).vapor.sum() == 0.0
    assert flash(BINARY, [1.0, 1.0], 1e5, temperature=420.0).liquid.sum() == 0.0


def test_masked_components_keep_their_phase() -> None:
    model = ConstantVolatility(["gas", "a", "oil"], [1.0, 2.0, 1.0], 30e3, a=22.5, b=4000.0,
                               condensable=[False, True, True], volatile=[True, True, False])
    result = flash(model, [1.0, 1.0, 1.0], 1e5, temperature=340.0)
    assert result.vapor[0] == 1.0 and result.liquid[2] == 1.0
    x, y = result.liquid / result.liquid.sum(), result.vapor / result.vapor.sum()
    K = model.k_value(np.asarray(340.0), np.asarray(1e5), x, y)
    assert y[1] == pytest.approx(K[1] * x[1], rel=1e-10)
    with pytest.raises(InputError, match="give the temperature"):
        flash(model, [1.0, 1.0, 1.0], 1e5, vapor_fraction=0.1)
    half = flash(model, [1.0, 1.0, 1.0], 1e5, vapor_fraction=0.5)
    assert half.vapor_fraction == pytest.approx(0.5, abs=1e-9)


def test_against_thermo() -> None:
    """Ideal solution, ideal gas: flash of benzene, toluene and ethylbenzene by `thermo`'s own flash."""
    from thermo import ChemicalConstantsPackage, FlashVL, GibbsExcessLiquid, IdealGas, IdealSolution
    names = ["benzene", "toluene", "ethylbenzene"]
    z, P, T = [0.4, 0.35, 0.25], 120000.0, 378.0
    constants, correlations = ChemicalConstantsPackage.from_IDs(names)
    liquid = GibbsExcessLiquid(VaporPressures=correlations.VaporPressures, VolumeLiquids=correlations.VolumeLiquids,
                               HeatCapacityGases=correlations.HeatCapacityGases,
                               EnthalpyVaporizations=correlations.EnthalpyVaporizations,
                               GibbsExcessModel=IdealSolution(T=T, xs=z), T=T, P=P, zs=z)
    gas = IdealGas(HeatCapacityGases=correlations.HeatCapacityGases, T=T, P=P, zs=z)
    listed = FlashVL(constants, correlations, liquid=liquid, gas=gas).flash(T=T, P=P, zs=z)
    model = ThermoProperties.from_names(names, "ideal", T_range=(300.0, 480.0))
    found = flash(model, z, P, temperature=T)
    assert found.vapor_fraction == pytest.approx(listed.VF, abs=1e-6)
    np.testing.assert_allclose(found.vapor / found.vapor.sum(), listed.gas.zs, atol=1e-6)


def test_dew_point_of_a_gas_and_boiling_point_of_a_solution() -> None:
    """A gas with vapours at its dew point, with an absent oil beside it; an oil's solution at its boiling point."""
    model = ConstantVolatility(["gas", "a", "b", "oil"], [1.0, 2.0, 0.5, 1.0], 30e3, a=22.5, b=4000.0,
                               condensable=[False, True, True, True], volatile=[True, True, True, False])
    z, P = np.array([0.5, 0.3, 0.2, 0.0]), 1e5
    dew = flash(model, z, P, vapor_fraction=1.0)
    K = model.k_value(np.asarray(dew.temperature), np.asarray(P), z, z)
    assert (z[1:3] / K[1:3]).sum() == pytest.approx(1.0, rel=1e-9) and dew.liquid.sum() == pytest.approx(0.0, abs=1e-12)
    x = np.array([0.0, 0.4, 0.3, 0.3])
    boiling = flash(model, x, P, vapor_fraction=0.0)
    K = model.k_value(np.asarray(boiling.temperature), np.asarray(P), x, x)
    assert (K * x)[1:3].sum() == pytest.approx(1.0, rel=1e-9) and boiling.vapor.sum() == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize("flows, words", [
    ([-1.0, 2.0], r"flows\[0\] = -1.0"), ([0.0, 0.0], "flows: all zero"), ([1.0], "flows: 1 components, .* has 2")])
def test_flows(flows: list[float], words: str) -> None:
    with pytest.raises(InputError, match=words):
        flash(BINARY, flows, 1e5, temperature=350.0)


@pytest.mark.parametrize("arguments, words", [
    ({"vapor_fraction": float("nan")}, "vapor_fraction"), ({"vapor_fraction": 2.0}, "expected a number from 0 to 1"),
    ({}, "either temperature or vapor_fraction"), ({"temperature": -3.0}, "temperature"),
    ({"temperature": 300.0, "vapor_fraction": 0.5}, "either")])
def test_arguments(arguments: dict[str, Any], words: str) -> None:
    with pytest.raises(InputError, match=words):
        flash(BINARY, [1.0, 1.0], 1e5, **arguments)
