"""Sinnott, Coulson and Richardson's Chemical Engineering, vol. 6, 3rd ed. (1999): from memory."""
from __future__ import annotations

import pytest
from correlation_rows import Row

from correlations import packing_area, packing_coefficients, tray_hydraulics, tray_limits

# Example 11.14: sulphur dioxide from air into water, 38 mm ceramic saddles, 293 K
LIQUID = dict(liquid_velocity=17.6 / 1000, liquid_density=1000.0, liquid_viscosity=1e-3, specific_area=194.0)
GAS = dict(vapor_velocity=0.79 / 1.21, vapor_density=1.21, vapor_viscosity=1.8e-5, specific_area=194.0)
BAR_PER_CONCENTRATION = 0.08314 * 293
"""bar m3/kmol: turns kmol/(m2 s bar) into m/s."""

ROWS = [
    Row(packing_area.onda, dict(surface_tension=0.070, critical_surface_tension=0.061, **LIQUID), 0.71 * 194, 7e-3,
        "Example 11.14: a_w/a 0.71"),
    Row(packing_coefficients.onda_liquid, dict(diffusivity=1.7e-9, wetted_area=138.0, nominal_size=0.038, **LIQUID),
        2.5e-4, 2e-2, "Example 11.14: two digits"),
    Row(packing_coefficients.onda_vapor, dict(diffusivity=1.45e-5, nominal_size=0.038, **GAS),
        5.0e-4 * BAR_PER_CONCENTRATION, 1e-2, "Example 11.14: two digits"),
    Row(tray_limits.fair_flooding,
        dict(flow_parameter=0.137361, tray_spacing=0.5, surface_tension=0.057, vapor_density=0.72, liquid_density=954.0,
             hole_area_fraction=0.10), 3.38, 5e-2,
        "Example 11.11, bottom: capacity read from the chart as 0.075; the fitted line gives 0.0724 there"),
    Row(tray_limits.sinnott_weep_point, dict(vapor_density=0.72, hole_diameter=0.005, sinnott_constant=30.6), 14.0,
        3.6e-2, "Example 11.11: printed without decimals"),
    Row(tray_hydraulics.downcomer_underflow_head, dict(liquid_flow=4.06 / 954, apron_area=0.024), 5.2e-3, 1e-2,
        "Example 11.11: two digits"),
]


@pytest.mark.parametrize("row", ROWS, ids=str)
def test_printed(row):
    row.check()
