"""Regression values: whole textbook examples worked apart from the library (inputs in print, results ours).

The scripts took g = 9.8 m/s2 and rounded gas constants; tolerances follow from that.
"""
from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from correlations import (
    mixing,
    packing_holdup,
    packing_limits,
    packing_pressure_drop,
    tray_hydraulics,
    tray_limits,
)

G_RATIO = 2e-3


@pytest.mark.parametrize("a, C_h, h, hydraulic", [(112.6, 0.784, 0.0662397, 0.789953),
                                                  (92.3, 0.876, 0.0637265, 0.909368)])
def test_holdup_of_50_mm_rings(a, C_h, h, hydraulic):
    """Benitez, Example 4.2: slotted and grid rings of metal, 0.01 m/s of a liquid of 3e-6 m2/s."""
    state = (0.01, 1000.0, 3e-3, a, C_h)
    assert_allclose(packing_holdup.billet_schultes(*state), h, rtol=G_RATIO)
    assert_allclose(packing_holdup.billet_schultes_hydraulic_area(*state) / a, hydraulic, rtol=G_RATIO)


@pytest.mark.parametrize("ring", [
    dict(F_p=179.0, a=190.0, eps=0.68, C_h=0.577, C_P=1.329, D=0.428069, flood=1.326113, dry=439.098, h=0.0277615,
         wet=504.825),
    dict(F_p=42.0, a=202.9, eps=0.961, C_h=0.799, C_P=0.689, D=0.297929, flood=2.737678, dry=348.792, h=0.0566541,
         wet=443.371)], ids=["ceramic", "metal"])
def test_ammonia_absorber(ring):
    """Benitez, Example 4.3: 25 mm rings at 70 % of flooding."""
    gas, liquid = 0.157778, 1500 / 3600
    rho_V, rho_L, mu_L = 1.181001, 1000.0, 1e-3
    X_inlet = 0.0916802
    flood = packing_limits.generalized_flooding(X_inlet / (rho_V / rho_L) ** 0.5, rho_V, rho_L, mu_L,
                                                ring["F_p"] / 0.3048)
    assert_allclose(flood, ring["flood"], rtol=1e-3)
    area = np.pi / 4 * ring["D"] ** 2
    assert_allclose(gas / rho_V / area, 0.7 * ring["flood"], rtol=1e-4)
    u_L = liquid / rho_L / area
    dry = packing_pressure_drop.billet_schultes_dry(0.7 * ring["flood"], rho_V, 1.84e-5, ring["a"], ring["eps"],
                                                    ring["C_P"], ring["D"])
    assert_allclose(dry, ring["dry"], rtol=1e-4)
    h = packing_holdup.billet_schultes(u_L, rho_L, mu_L, ring["a"], ring["C_h"])
    assert_allclose(h, ring["h"], rtol=2e-2)  # liquid with the ammonia taken up, 1 % more
    wet = packing_pressure_drop.billet_schultes_wet_1993(dry, ring["h"], 1.01 * u_L, rho_L, mu_L, ring["a"],
                                                         ring["eps"])
    assert_allclose(wet, ring["wet"], rtol=2e-3)


def test_lewis_case_1():
    """Lewis (1936), mixed vapour and liquid in plug flow: E_MV for point efficiencies 0.5, 0.7, 0.9."""
    E = np.array([0.5, 0.7, 0.9])[:, None]
    lam = np.array([0.5, 0.8, 1.2, 1.5, 2.0])
    table = [[0.568051, 0.614781, 0.685099, 0.744667, 0.859141], [0.838135, 0.938341, 1.096972, 1.238434, 1.527600],
             [1.136624, 1.318042, 1.620566, 1.904950, 2.524824]]
    assert_allclose(mixing.lewis_plug_flow(E, lam), table, rtol=1e-6)


def test_sieve_tray_of_benitez():
    """Benitez, Examples 4.6 to 4.8: flooding, dry coefficient, K_s, froth density, heights, entrainment."""
    tray = dict(vapor_density=1.923, liquid_density=986.0)
    u = tray_limits.fair_flooding(0.016, 0.5, 0.070, hole_area_fraction=0.1007778, foaming_factor=0.9, **tray)
    assert_allclose(u, 2.069770, rtol=1e-4)
    assert_allclose(tray_hydraulics.leibson_orifice_coefficient(2.5, 1.0), 0.755766, rtol=1e-6)
    u_a = 0.0823011 / (1.923 / (986.0 - 1.923)) ** 0.5
    phi = tray_hydraulics.bennett_froth_density(u_a, **tray)
    assert_allclose(phi, 0.274394, rtol=1e-5)
    h = tray_hydraulics.bennett_clear_liquid(0.05, 8.15e-4 / 0.718675, u_a, **tray)
    assert_allclose(h, 0.017264, rtol=5e-3)
    assert_allclose(tray_hydraulics.bubble_residual_head(986.0, 0.070, 0.005), 8.69313e-3, rtol=1e-3)
    # from here on the script took the book's rounded K_s 0.082, froth density 0.274 and liquid height 0.0173
    u_a = 0.082 / (1.923 / (986.0 - 1.923)) ** 0.5
    two_phase = tray_hydraulics.bennett_two_phase_height(0.0173, 0.274, 0.005, u_a, hole_area_fraction=0.101, **tray)
    assert_allclose(two_phase, 0.390375, rtol=7e-4)
    assert_allclose(tray_limits.bennett_entrainment(two_phase, 0.5, 0.0173, 0.005, **tray), 0.0493145, rtol=1e-3)
