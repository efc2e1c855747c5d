"""Trays and packings: against worked examples through the objects, limits, ranges, refused dimensions."""
from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from ratebased import ConstantVolatility, InputError
from ratebased.equipment import (
    AIChEBubbleCap,
    AIChESieve,
    BilletConstants,
    BilletSchultes,
    BravoFair,
    BravoRochaFair,
    BubbleCapTray,
    ChanFair,
    ChenChuang,
    Contactor,
    ContactState,
    FixedCoefficients,
    Onda,
    RandomPacking,
    RochaBravoFair,
    SieveTray,
    StructuredPacking,
    TsaiArea,
    ValveTray,
    Zuiderweg,
    contact_state,
)
from ratebased.properties.protocol import LiquidTransport, VaporTransport


def state(V: float, L: float, *, rho_V: float, rho_L: float, mu_V: float, mu_L: float, sigma: float, D_V: float,
          D_L: float, M_V: float, M_L: float, P: float = 101325.0, height: float | None = None) -> ContactState:
    """One stage of a binary with the bulk properties given; flows mol/s."""
    def one(value: float) -> np.ndarray:
        return np.full(1, value)

    pair = np.ones((1, 2, 2))
    vapor = VaporTransport(one(rho_V / M_V), one(rho_V), one(mu_V), one(60.0), one(0.02), D_V * pair)
    liquid = LiquidTransport(one(rho_L / M_L), one(rho_L), one(mu_L), one(150.0), one(0.15), D_L * pair, one(sigma))
    return ContactState(one(V), one(L), one(M_V), one(M_L), one(P), vapor, liquid,
                        None if height is None else one(height))


def test_onda_worked_example() -> None:
    """Sinnott, Chemical Engineering Design, vol. 6, example 11.14 (from memory): SO2, air, water, 38 mm saddles.

    Printed a_w/a = 0.71, k_L = 2.5e-4 m/s, k_G = 5.0e-4 kmol/(m2 s bar), which rounds the figures below.
    """
    bed = RandomPacking(diameter=np.sqrt(4 / np.pi), specific_area=194.0, void_fraction=0.71, nominal_size=0.038,
                        critical_surface_tension=0.061)
    s = state(0.79 / 0.029, 17.6 / 0.018, rho_V=1.21, rho_L=1000.0, mu_V=1.8e-5, mu_L=1e-3, sigma=0.070, D_V=1.45e-5,
              D_L=1.7e-9, M_V=0.029, M_L=0.018, height=1.0)
    c = bed.transfer(s)
    assert c.area[0] / 194.0 == pytest.approx(0.71157, rel=1e-4)
    assert c.kappa_liquid[0, 0, 1] == pytest.approx(2.5354e-4, rel=1e-3)
    assert c.kappa_vapor[0, 0, 1] / (0.08314 * 293.0) * 1.0 == pytest.approx(4.9856e-4, rel=2e-3)


def test_sieve_tray_worked_example() -> None:
    """Benitez, Principles and Modern Applications of Mass Transfer Operations, 2nd ed., examples 4.6 to 4.8.

    Printed: diameter 0.99 m for 80 % of flooding, weir 0.719 m, active 0.615 m2, K_s 0.082, relative froth density
    0.274, clear liquid 17.3 mm. Tolerances: the printed rounding (the book's holes leave 10.1 % of the active area).
    """
    tray = SieveTray(diameter=0.989, spacing=0.5, weir_height=0.05, hole_diameter=0.005, hole_area_fraction=0.1008,
                     downcomer_fraction=0.1, deck_thickness=0.002, foaming_factor=0.9)
    s = state(1.145 * 1.923 / 0.04404, 8.15e-4 * 986 / 0.01863, rho_V=1.923, rho_L=986.0, mu_V=1.45e-5, mu_L=6.31e-4,
              sigma=0.070, D_V=8.5e-6, D_L=1.91e-9, M_V=0.04404, M_L=0.01863)
    assert tray.weir_length == pytest.approx(0.719, rel=2e-3)
    assert tray.active_area == pytest.approx(0.615, rel=2e-3)
    h = tray.hydraulics(s)
    assert h.flooding is not None and h.clear_liquid is not None and h.pressure_drop is not None
    assert h.flooding[0] == pytest.approx(0.80, rel=2e-3)
    assert h.clear_liquid[0] == pytest.approx(0.0173, rel=6e-3)
    assert h.weeping is not None and h.weeping[0] < 1
    # printed total 816 Pa has a dry head with a further factor 1 - (A_h/A_a)^2 = 0.99, not part of the orifice formula
    assert h.pressure_drop[0] == pytest.approx(815.8, rel=0.01)


def hydrocarbon(n_stages: int = 1, **changes: float) -> ContactState:
    values = dict(rho_V=3.0, rho_L=660.0, mu_V=8.5e-6, mu_L=2.6e-4, sigma=0.0145, D_V=4.5e-6, D_L=4.0e-9, M_V=0.07,
                  M_L=0.07, height=0.5) | changes
    return state(60.0, 60.0, **values)


TRAYS = [SieveTray(1.5, 0.61, 0.05, 0.0127, 0.10, method=method) for method in (
    AIChESieve(), ChanFair(), ChenChuang(), Zuiderweg())] + [
    BubbleCapTray(1.5, 0.61, 0.05, 0.0127, 0.10), ValveTray(1.5, 0.61, 0.05, 0.04, 0.12, closed_loss=0.2, open_loss=0.1,
                                                           valve_thickness=0.0015)]
BILLET = BilletConstants(liquid=1.192, vapor=0.410, holdup=0.784, friction=0.763, flooding=1.580, loading=2.725)
BEDS = [RandomPacking(1.5, 112.6, 0.951, 0.05, 0.075, billet=BILLET, method=method) for method in (
    Onda(), BravoFair(3.0), BilletSchultes())] + [
    StructuredPacking.of("corrugated sheet, metal, 250 m2/m3, 45 degrees", 1.5, method=method) for method in (
        RochaBravoFair(), TsaiArea(), BravoRochaFair())]


@pytest.mark.parametrize("contactor", TRAYS + BEDS, ids=lambda c: f"{type(c).__name__}-{type(c.method).__name__}")
def test_every_contactor_gives_sound_figures(contactor: Contactor) -> None:
    s = hydrocarbon()
    c = contactor.transfer(s)
    for value in (c.kappa_vapor, c.kappa_liquid, c.h_vapor, c.h_liquid, c.area):
        assert np.isfinite(value).all() and (value > 0).all()
    assert np.allclose(c.kappa_vapor, np.swapaxes(c.kappa_vapor, -1, -2))
    assert 1e-3 < c.kappa_vapor[0, 0, 1] * c.area[0] / (contactor.cross_section * 1.0) < 50
    h = contactor.hydraulics(s)
    assert h.flooding is None or 0.05 < h.flooding[0] < 2
    assert contactor.correlations["vapor"].record.validity.source


@pytest.mark.parametrize("contactor", TRAYS[:3] + BEDS[:1], ids=lambda c: type(c.method).__name__)
def test_coefficients_follow_the_diffusivity_by_pairs(contactor: Contactor) -> None:
    """kappa ~ D^(1/2) on these trays, D^(2/3) in Onda's vapour: pair by pair."""
    one, two = contactor.transfer(hydrocarbon()), contactor.transfer(hydrocarbon(D_V=4 * 4.5e-6))
    power = np.log(two.kappa_vapor[0, 0, 1] / one.kappa_vapor[0, 0, 1]) / np.log(4.0)
    assert power == pytest.approx(getattr(contactor.method, "vapor_exponent", 2 / 3), abs=1e-9)


def test_leaving_a_range_is_noted_not_warned() -> None:
    tray = SieveTray(1.5, 0.61, 0.05, 0.0127, 0.04)
    notes = tray.transfer(hydrocarbon()).notes
    assert any("hole_area_fraction outside its published range" in note for note in notes)


def test_refused_dimensions() -> None:
    good = dict(diameter=1.5, spacing=0.6, weir_height=0.05, hole_diameter=0.012, hole_area_fraction=0.1)
    for change, message in (({"diameter": -1.0}, "diameter"), ({"weir_height": 0.7}, "weir_height = 0.7"),
                            ({"hole_area_fraction": 0.5}, "hole_area_fraction = 0.5"),
                            ({"downcomer_fraction": 0.6}, "downcomer_fraction = 0.6"),
                            ({"spacing": float("nan")}, "spacing"), ({"apron_clearance": -0.03}, "apron_clearance"),
                            ({"hole_pitch": -1.0}, "hole_pitch")):
        with pytest.raises(InputError, match=message):
            SieveTray(**{**good, **change})
    with pytest.raises(InputError, match="void_fraction = 1.2"):
        RandomPacking(1.0, 100.0, 1.2)
    with pytest.raises(InputError, match="billet: the constant vapor"):
        RandomPacking(1.0, 112.6, 0.951, 0.05, billet=BilletConstants(liquid=1.0, holdup=0.784),
                      method=BilletSchultes()).transfer(hydrocarbon())
    with pytest.raises(InputError, match="closed_loss"):
        ValveTray(**good)
    with pytest.raises(InputError, match="height of its segments"):
        RandomPacking(1.0, 112.6, 0.951, 0.05).transfer(hydrocarbon(height=None))
    with pytest.raises(InputError, match="differs from its mirror"):
        FixedCoefficients([[1.0, 2.0], [3.0, 1.0]], 1e-4, 1.0, h_vapor=1.0, h_liquid=1.0)


def test_contact_state_of_a_model() -> None:
    m = ConstantVolatility(["a", "b"], [2.0, 1.0], 3e4, a=22.6, b=4000.0, molar_mass=[0.04, 0.06])
    s = contact_state(m, [1.0], [2.0], [350.0], [349.0], [1e5], [[0.5, 0.5]], [[0.25, 0.75]])
    assert s.vapor_mass_flow[0] == pytest.approx(0.05)
    assert s.liquid_mass_flow[0] == pytest.approx(2 * 0.055)
    assert s.vapor_volume_flow[0] == pytest.approx(8.314462618 * 350 / 1e5)
    assert AIChEBubbleCap().correlations["liquid"] is not AIChESieve().correlations["liquid"]


def test_area_of_tsai_needs_no_surface_factor() -> None:
    sheet = StructuredPacking.of("corrugated sheet, metal, 250 m2/m3, 45 degrees", 1.5, method=TsaiArea())
    s = hydrocarbon()
    bare = replace(sheet, surface_factor=None).transfer(s)
    assert np.array_equal(bare.area, sheet.transfer(s).area)
    assert not any("rocha_bravo_fair_sheet" in note for note in bare.notes)
    with pytest.raises(InputError, match="surface_factor"):
        replace(sheet, surface_factor=None, method=RochaBravoFair()).transfer(s)
