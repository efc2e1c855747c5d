"""Against `fluids` (Bell), a general-purpose library, where it covers the same, and its documented examples."""
from __future__ import annotations

import fluids
import numpy as np
import pytest

from correlations import packing_limits, packing_pressure_drop

FRICTION = dict(laminar_friction=32.0, transition_friction=7.0, turbulent_friction=1.0)
BED = dict(specific_area=260.0, void_fraction=0.68)
GAS = dict(vapor_density=5.0, vapor_viscosity=5e-5)
THEIRS = dict(rhog=5.0, mug=5e-5, voidage=0.68, specific_area=260.0, C1=32.0, C2=7.0, C3=1.0)


@pytest.mark.parametrize("u", [0.02, 0.1, 0.4, 0.6])
def test_stichlmair(u):
    dry = packing_pressure_drop.stichlmair_dry(u, **GAS, **BED, **FRICTION)
    assert dry == pytest.approx(fluids.Stichlmair_dry(Vg=u, **THEIRS), rel=1e-12)
    wet = packing_pressure_drop.stichlmair(u, **GAS, liquid_velocity=0.005, liquid_density=1200.0, **BED, **FRICTION)
    theirs = fluids.Stichlmair_wet(Vg=u, Vl=0.005, rhol=1200.0, **THEIRS)
    assert wet.pressure_gradient == pytest.approx(theirs, rel=1e-5)


@pytest.mark.parametrize("u_L", [0.001, 0.005, 0.015])
def test_stichlmair_flooding(u_L):
    """Their flood point solves the same criterion with the constant 186 and g = 9.80665."""
    ours = packing_limits.stichlmair_flooding_at_liquid_velocity(u_L, **GAS, liquid_density=1200.0, **BED, **FRICTION)
    assert ours.vapor_velocity == pytest.approx(fluids.Stichlmair_flood(Vl=u_L, rhol=1200.0, **THEIRS), rel=1e-5)


@pytest.mark.parametrize("factor", [24.0, 60.0, 150.0])
def test_robbins(factor):
    """Their factor is in 1/ft; the branch above 200 1/ft, from memory here, is not theirs."""
    dP = packing_pressure_drop.robbins(2.03 / 1.1853, 1.1853, 12.2 / 1000, 1000.0, 1e-3, factor / 0.3048)
    theirs = fluids.Robbins(G=2.03, L=12.2, rhol=1000.0, rhog=1.1853, mul=1e-3, H=1.0, Fpd=factor)
    assert dP == pytest.approx(theirs, rel=1e-3)  # unit factors rounded in the two forms


def test_documented_examples():
    """Printed in their documentation: 539.8768 Pa/m wet, flooding at 0.6394324 m/s, 619.6624 Pa per 2 m by Robbins."""
    state = dict(liquid_density=1200.0, **GAS, **BED, **FRICTION)
    wet = packing_pressure_drop.stichlmair(0.4, liquid_velocity=0.005, **state)
    flood = packing_limits.stichlmair_flooding_at_liquid_velocity(0.005, **state)
    robbins = packing_pressure_drop.robbins(2.03 / 1.1853, 1.1853, 12.2 / 1000, 1000.0, 1e-3, 24 / 0.3048)
    found = [wet.pressure_gradient, flood.vapor_velocity, 2 * robbins]
    np.testing.assert_allclose(found, [539.8768, 0.6394324, 619.6624], rtol=2e-5)


COVERS = {"packing_pressure_drop.stichlmair_dry": "test_stichlmair",
          "packing_pressure_drop.stichlmair": "test_stichlmair",
          "packing_limits.stichlmair_flooding_at_liquid_velocity": "test_stichlmair_flooding",
          "packing_pressure_drop.robbins": "test_robbins"}
