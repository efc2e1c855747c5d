"""The record a correlation carries: ranges, warnings, errors, signature."""
from __future__ import annotations

import inspect
import subprocess
import sys
import warnings

import numpy as np
import pandas as pd
import pytest

from correlations import (
    Confidence,
    InputError,
    OutOfRangeWarning,
    Range,
    Validity,
    catalogue,
    gas_diffusivity,
    mixing,
    packing,
    packing_area,
    packing_coefficients,
    packing_limits,
    packing_pressure_drop,
    packings,
    tray_limits,
    tray_transfer,
)
from correlations.record import REGISTRY, correlation
from correlations.rootfinding import bracketed_root
from correlations.validity import UNKNOWN

ONDA = dict(liquid_density=998.0, liquid_viscosity=1e-3, surface_tension=0.0728, specific_area=112.6,
            critical_surface_tension=0.075)
FULLER = dict(molar_mass_a=0.028, molar_mass_b=0.044, diffusion_volume_a=18.5e-6, diffusion_volume_b=26.9e-6)


def test_outside_tells_which_entries():
    outside = packing_area.onda.record.outside(liquid_velocity=[1e-6, 0.01, 0.08], **ONDA)
    assert set(outside) == {"liquid_reynolds", "liquid_froude", "liquid_weber"}
    np.testing.assert_array_equal(outside["liquid_reynolds"], [True, False, True])
    assert packing_area.onda.record.outside(liquid_velocity=0.01, **ONDA) == {}


def test_no_warning_from_outside_and_silent():
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        packing_area.onda.record.outside(liquid_velocity=1e-6, **ONDA)
        value = packing_area.onda.silent(liquid_velocity=1e-6, **ONDA)
    with pytest.warns(OutOfRangeWarning):
        assert packing_area.onda(liquid_velocity=1e-6, **ONDA) == value


def test_the_warning_names_variable_distance_and_line():
    text = (r"gas_diffusivity.fuller: temperature 150 below 200 by 50 and 1600 above 1500 by 100 "
            r"\(2 of 3 entries\)")
    with pytest.warns(OutOfRangeWarning, match=text) as caught:
        gas_diffusivity.fuller([150.0, 300.0, 1600.0], 1e5, **FULLER)
    assert caught[0].filename == __file__


@pytest.mark.parametrize("temperature, inside", [(200.0, True), (np.nextafter(200.0, 0), False), (1500.0, True),
                                                 (np.nextafter(1500.0, 2000), False)])
def test_both_edges_belong_to_the_range(temperature, inside):
    assert (gas_diffusivity.fuller.record.outside(temperature, 1e5, **FULLER) == {}) is inside


@pytest.mark.parametrize("record", [r for r in catalogue() if any(r.validity.ranges.values())], ids=lambda r: r.name)
def test_ranges_can_be_evaluated_and_left(record):
    """Each bound is on the stated variable: a value beyond it is outside, NaN too."""
    for name, interval in record.validity.ranges.items():
        assert name in record.variables or name in record.parameters
        for bound, beyond in ((interval.low, -1), (interval.high, 1)):
            if bound is not None:
                assert not interval.outside(np.array(bound))
                assert interval.outside(np.array(bound + beyond * 1e-9 * (abs(bound) + 1e-300)))
        assert interval.outside(np.array(np.nan))


def test_open_ranges():
    assert Range(None, 1.0).describe() == "up to 1"
    assert Range(2.0, None).describe() == "from 2"
    assert not Range(None, 1.0).outside(np.array(-np.inf))


def test_a_missing_figure_needs_its_word():
    with pytest.raises(ValueError, match="range_note"):
        Validity({}, 0.1, "fuller_1969", Confidence.MEMORY)
    with pytest.raises(ValueError, match="error_note"):
        Validity({"temperature": Range(1, 2)}, None, "fuller_1969", Confidence.MEMORY, error_note="small")
    with pytest.raises(ValueError, match="range_note"):
        Validity({"temperature": None}, 0.1, "fuller_1969", Confidence.MEMORY)


def test_a_record_must_fit_its_function():
    validity = Validity({"reynolds": Range(1, 2)}, None, "fuller_1969", Confidence.MEMORY, error_note=UNKNOWN)
    with pytest.raises(KeyError, match="reynolds"):
        correlation("x", "y", "-", validity)(lambda temperature: temperature)
    with pytest.raises(KeyError, match="glossary"):
        correlation("x", "y", "-", validity)(lambda warmth: warmth)
    orphan = Validity({}, None, "nobody_1900", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN)
    with pytest.raises(KeyError, match="bibliography"):
        correlation("x", "y", "-", orphan)


def test_name_and_signature_survive():
    function = packing_coefficients.onda_vapor
    assert function.__name__ == "onda_vapor"
    assert list(inspect.signature(function).parameters)[:2] == ["diffusivity", "vapor_velocity"]
    assert "superficial velocity of the vapour, m s-1" in function.__doc__
    assert "Onda, K., Takeuchi, H., Okumoto, Y." in function.__doc__


@pytest.mark.parametrize("function, arguments, keywords", [
    (packing_area.fair_bravo_sheet, (1.0,), {}), (packing_area.fair_bravo_sheet, (1.0, 0.5, 0.5), {}),
    (packing_area.fair_bravo_sheet, (1.0, 0.5), {"wetting": 1.0}),
    (packing_area.fair_bravo_sheet, (1.0, 0.5), {"specific_area": 1.0}),
    (packing_limits.morris_jackson, (100.0, 2e-5), {})], ids=["few", "many", "unknown", "twice", "keyword-only"])
def test_wrong_calls_are_type_errors(function, arguments, keywords):
    with pytest.raises(TypeError):
        function(*arguments, **keywords)
    with pytest.raises(TypeError):
        function.silent(*arguments, **keywords)


@pytest.mark.parametrize("value, match", [
    ([300.0, -1.0], r"temperature\[1\] = -1: expected a finite number above zero"),
    (np.inf, r"temperature = inf"), ("300", r"temperature: expected numbers, got '300'"),
    (300.0 + 1j, r"temperature: expected numbers"), ("warm", r"temperature: expected numbers, got 'warm'"),
    ([[300.0], [np.nan]], r"temperature\[1, 0\] = nan")])
def test_bad_input(value, match):
    with pytest.raises(InputError, match=match):
        gas_diffusivity.fuller(value, 1e5, **FULLER)


def test_containers_alike():
    """A number, a list, an array and a Series give the same figures."""
    one = gas_diffusivity.fuller(300.0, 1e5, **FULLER)
    for container in ([300.0, 300.0], np.array([300.0, 300.0]), pd.Series([300.0, 300.0], index=["a", "b"])):
        found = gas_diffusivity.fuller(container, 1e5, **FULLER)
        np.testing.assert_array_equal(found, [one, one])
        assert isinstance(found, np.ndarray)


def test_pairs_and_stages():
    """kappa of all pairs of all stages in one call: symmetric as the diffusivities, one stage as if alone."""
    random = np.random.default_rng(5)
    stages, n = 6, 4
    D = random.uniform(1e-6, 2e-5, (stages, n, n))
    D = D + np.swapaxes(D, -1, -2)
    u, rho, mu = random.uniform(0.5, 2, stages), random.uniform(1, 3, stages), random.uniform(8e-6, 2e-5, stages)

    def per_stage(a):
        return a[:, None, None]

    kappa = packing_coefficients.onda_vapor(D, per_stage(u), per_stage(rho), per_stage(mu), 190.0, 0.025)
    assert kappa.shape == D.shape
    np.testing.assert_array_equal(kappa, np.swapaxes(kappa, -1, -2))
    one = packing_coefficients.onda_vapor(D[3], u[3], rho[3], mu[3], 190.0, 0.025)
    np.testing.assert_allclose(kappa[3], one, rtol=1e-14)


def test_tray_limits_raise():
    """What would be a negative or meaningless result is an error, never a number."""
    with pytest.raises(InputError, match="flood_fraction"):
        tray_transfer.chan_fair_vapor(1e-5, 1.2, 0.03)
    with pytest.raises(InputError, match="flood_fraction"):
        tray_transfer.chan_fair_vapor.silent(1e-5, 0.0, 0.03)
    with pytest.raises(InputError, match="active_velocity"):
        tray_transfer.aiche_vapor_units(5.0, 3.0, 1e-5, 5e-6, 0.05, 0.005)
    with pytest.raises(InputError, match="clear_liquid_height"):
        tray_limits.hunt_entrainment(1.0, 0.02, 0.10, 0.05)
    with pytest.raises(InputError, match="vapor_density"):
        tray_limits.fair_flooding(0.1, 0.5, 0.02, 700.0, 600.0, 0.1)
    with pytest.raises(InputError, match="component 0"):
        gas_diffusivity.wilke_blanc([1.0, 0.0], np.full((2, 2), 1e-5))
    with pytest.raises(InputError, match=r"entrainment_ratio\[1\] = 0.9: expected an entrainment that leaves"):
        mixing.bennett_entrainment_correction(0.7, 0.6, 1.2, 0.5, [0.1, 0.9])
    with pytest.raises(InputError, match="stripping_factor = 40: expected a value that leaves"):
        mixing.bennett_tray_efficiency(0.9, 40.0, 10.0)
    with pytest.raises(InputError, match="molar_mass_a"):
        gas_diffusivity.wilke_lee(300.0, 1e5, 4e-5, 3e-5, 3e-10, 3e-10, 100.0, 100.0)


def test_no_result_that_is_not_finite():
    """Arguments far from any hardware: an error that names function and entry, never NaN or infinity."""
    with pytest.raises(InputError, match=r"mixing.lewis_plug_flow: the result\[1\] is not finite"):
        mixing.lewis_plug_flow(0.9, [1.0, 1e4])
    with pytest.raises(InputError, match="mixing.gerster: the result is not finite"):
        mixing.gerster.silent(0.9, 1e4, 1e5)
    with pytest.raises(InputError, match=r"vapor_velocity\[0\] = 1e-06: expected a turbulent flow"):
        packing_coefficients.delft_vapor(1e-5, [1e-6, 1.0], 1.2, 1.8e-5, 1e-6, 800.0, 5e-4, 250.0, 0.97, 0.0241, 0.0119,
                                         0.017, 0.785, 0.21)


def test_diffusion_volume_errors():
    for atoms, match in (({"Q": 1}, "no diffusion volume for Q"), ({"C": 0}, r"atoms\['C'\] = 0"), ({}, "at least one"),
                         ("steam", "steam")):
        with pytest.raises(InputError, match=match):
            gas_diffusivity.diffusion_volume(atoms)
    with pytest.raises(InputError, match="aromatic_rings"):
        gas_diffusivity.diffusion_volume({"C": 6, "H": 6}, aromatic_rings=-1)
    assert gas_diffusivity.diffusion_volume("air") == pytest.approx(19.7e-6)
    assert gas_diffusivity.diffusion_volume({"O": 1, "H": 2}) == pytest.approx(13.1e-6)  # the molecule before its atoms


class TestPackings:
    def test_every_field_has_source_and_confidence(self):
        assert len(packings()) >= 50
        for row in packings().values():
            assert {"specific_area", "void_fraction"} <= set(row.fields)
            for field in row.fields.values():
                assert field.value > 0 and isinstance(field.confidence, Confidence) and field.source

    def test_confidence_reaches_the_user(self):
        ring = packing("slotted ring, metal, 50 mm")
        assert ring.fields["specific_area"].confidence is Confidence.VERIFIED
        assert ring.fields["vapor_constant"].confidence.unverified
        assert ring.fields["vapor_constant"].confidence.value == "constants from memory, unverified"

    def test_arguments_for_a_function(self):
        ring = packing("slotted ring, metal, 50 mm")
        assert ring.arguments(packing_coefficients.onda_vapor) == {"specific_area": 112.6, "nominal_size": 0.05}

    def test_absent_names_and_fields(self):
        with pytest.raises(InputError, match="no packing 'gold ring'"):
            packing("gold ring")
        with pytest.raises(InputError, match="packing_factor: the table has no value"):
            packing("slotted ring, metal, 50 mm")["packing_factor"]

    def test_flooding_of_the_constants_is_plausible(self):
        """Flooding capacity of every row, air and water, L/V that of 0.005 m/s: 0.045 to 0.17 m/s (common practice)."""
        for row in packings().values():
            if "flooding_constant" in row.fields:
                flood = packing_limits.billet_schultes_flooding(
                    2.0, 1.19, 998.0, 1.82e-5, 1e-3, **{n: row[n] for n in ("specific_area", "void_fraction",
                                                                           "flooding_constant")})
                assert 0.045 < flood.vapor_velocity * (1.19 / 996.8) ** 0.5 < 0.17, row.name


def test_imports_numpy_and_scipy_only():
    """In a fresh interpreter: nothing from the layers above, no table or plot library."""
    code = ("import sys, correlations; "
            "print(sorted({m.split('.')[0] for m in sys.modules} & {'ratebased', 'pandas', 'thermo', 'matplotlib'}))")
    found = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert found.stdout.strip() == "[]"


def test_robbins_above_one_atmosphere():
    """The factor 10^(0.0187 rho_V), lb/ft3, acts on the gas load: t grows with its square."""
    state = dict(vapor_velocity=0.5, vapor_density=3.0, liquid_velocity=1e-9, liquid_density=700.0,
                 liquid_viscosity=3e-4, dry_packing_factor=100.0)
    low, high = (packing_pressure_drop.robbins(**state, pressure=p) for p in (101325.0, 2e5))
    assert high / low == pytest.approx(10 ** (2 * 0.0187 * 3.0 / 16.018463), rel=1e-3)


def test_roots():
    root = bracketed_root(lambda x: x ** 3 - np.array([1.0, 8.0, 1e-9]), np.zeros(3), np.full(3, 10.0))
    np.testing.assert_allclose(root, [1.0, 2.0, 1e-3], rtol=1e-12)
    with pytest.raises(ArithmeticError, match="enclose"):
        bracketed_root(lambda x: x + 1, np.zeros(1), np.ones(1))


def test_registry_is_the_catalogue():
    assert [r.name for r in catalogue()] == sorted(REGISTRY)
    assert all(REGISTRY[r.name].record is r for r in catalogue())
