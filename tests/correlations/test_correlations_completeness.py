"""Every public correlation has a check against print (tests/published) or a stated exception with its substitutes."""
from __future__ import annotations

import importlib
import re
import sys
from pathlib import Path

import pytest

import correlations
from correlations.bibliography import REFERENCES
from correlations.packings import critical_surface_tensions, packings
from correlations.validity import WORDS

TESTS = Path(__file__).parent.parent
PUBLISHED = sorted((TESTS / "published").glob("test_correlations_*.py"))

DEFINITION = "a definition or a closed form of its model, nothing to measure; checked against a separate evaluation"
NO_NUMBER = "no worked number at hand; a limit and a second form stand in"
UNVERIFIED = "constants from memory, no worked number at hand (the record says unverified); a limit and a second " \
             "form or a neighbouring method stand in"

LIMITS = sorted((TESTS / "correlations").glob("test_correlations_limits_*.py"))

EXCEPTIONS: dict[str, tuple[str, tuple[str, ...]]] = {
    "mixing.gerster": (DEFINITION, ("test_axial_dispersion",)),
    "mixing.lewis_plug_flow": (DEFINITION, ("test_pools_marched",)),
    "mixing.overall_vapor_units": (DEFINITION, ("test_films_in_series",)),
    "mixing.peclet_number": (DEFINITION, ("test_axial_dispersion",)),
    "mixing.point_efficiency": (DEFINITION, ("test_films_in_series",)),
    "mixing.pools_from_peclet": (DEFINITION, ("test_axial_dispersion",)),
    "mixing.pools_in_series": (DEFINITION, ("test_pools_marched",)),
    "packing_area.bravo_rocha_fair_gauze": (DEFINITION, ("test_gauze",)),
    "packing_limits.capacity_parameter": (DEFINITION, ("test_capacity_parameter",)),
    "tray_hydraulics.downcomer_backup": (DEFINITION, ("test_tray_definitions",)),
    "tray_hydraulics.downcomer_froth_height": (DEFINITION, ("test_tray_definitions",)),
    "tray_hydraulics.downcomer_residence_time": (DEFINITION, ("test_tray_definitions",)),
    "tray_hydraulics.froth_height": (DEFINITION, ("test_tray_definitions",)),
    "tray_hydraulics.liquid_residence_time": (DEFINITION, ("test_tray_definitions",)),
    "tray_hydraulics.tray_pressure_drop": (DEFINITION, ("test_tray_definitions",)),
    "tray_hydraulics.vapor_residence_time": (DEFINITION, ("test_tray_definitions",)),
    "tray_transfer.zuiderweg_emulsion_number": (DEFINITION, ("test_zuiderweg_regimes",)),
    "gas_diffusivity.wilke_lee_parameters": (NO_NUMBER, (
        "test_lennard_jones_estimates_against_fitted_sets", "test_lennard_jones_estimate_of_the_treybal_example")),
    "heat_transfer.chilton_colburn": (NO_NUMBER, (
        "test_lewis_number_one", "test_heat_by_substituting_the_thermal_diffusivity")),
    "heat_transfer.penetration": (NO_NUMBER, (
        "test_lewis_number_one", "test_heat_by_substituting_the_thermal_diffusivity")),
    "liquid_diffusivity.hayduk_minhas_paraffin": (NO_NUMBER, (
        "test_paraffins_against_wilke_chang", "test_paraffin_formula_in_logarithms")),
    "liquid_diffusivity.wilke_chang_mixture": (NO_NUMBER, ("test_mixed_solvent_of_one", "test_mixed_solvent_in_si")),
    "mixing.bennett_eddy_diffusivity": (NO_NUMBER, ("test_bennett_mixing_and_entrainment", "test_mixing_limits")),
    "mixing.bennett_entrainment_correction": (NO_NUMBER, ("test_bennett_mixing_and_entrainment", "test_mixing_limits")),
    "mixing.bennett_tray_efficiency": (NO_NUMBER, ("test_bennett_mixing_and_entrainment", "test_mixing_limits")),
    "mixing.colburn_entrainment": (NO_NUMBER, ("test_mixing_limits", "test_colburn_as_resistances")),
    "mixture_diffusivity.caldwell_babb": (NO_NUMBER, (
        "test_ends_of_the_composition", "test_binary_forms_among_each_other")),
    "mixture_diffusivity.darken": (NO_NUMBER, ("test_ends_of_the_composition", "test_binary_forms_among_each_other")),
    "mixture_diffusivity.generalized_vignes": (NO_NUMBER, (
        "test_closures_reduce_to_the_binary", "test_closures_as_limits_of_the_general_form")),
    "mixture_diffusivity.kooijman_taylor": (NO_NUMBER, (
        "test_closures_reduce_to_the_binary", "test_closures_as_limits_of_the_general_form")),
    "mixture_diffusivity.leffler_cullinan": (NO_NUMBER, (
        "test_ends_of_the_composition", "test_binary_forms_among_each_other")),
    "mixture_diffusivity.wesselingh_krishna": (NO_NUMBER, (
        "test_closures_reduce_to_the_binary", "test_closures_as_limits_of_the_general_form")),
    "overall.oconnell": (NO_NUMBER, ("test_viscous_liquids_are_slower", "test_fits_of_the_distillation_curve")),
    "overall.oconnell_lockett": (NO_NUMBER, ("test_viscous_liquids_are_slower", "test_fits_of_the_distillation_curve")),
    "packing_area.billet_schultes": (NO_NUMBER, ("test_area_at_loading_and_flooding", "test_area_typed_out")),
    "packing_area.henriques_de_brito": (NO_NUMBER, (
        "test_area_of_sheet_beside_its_neighbours", "test_henriques_de_brito_typed_out")),
    "packing_area.rocha_bravo_fair_holdup_factor": (NO_NUMBER, (
        "test_partial_wetting_factor", "test_partial_wetting_typed_out")),
    "packing_area.tsai": (NO_NUMBER, (
        "test_area_of_sheet_beside_its_neighbours", "test_area_of_sheet_in_weber_and_froude")),
    "packing_coefficients.bravo_rocha_fair_liquid": (NO_NUMBER, (
        "test_powers_of_the_diffusivity", "test_film_velocity_of_bravo")),
    "packing_coefficients.bravo_rocha_fair_vapor": (NO_NUMBER, (
        "test_powers_of_the_diffusivity", "test_film_velocity_of_bravo")),
    "packing_coefficients.rocha_bravo_fair_liquid": (NO_NUMBER, (
        "test_powers_of_the_diffusivity", "test_rocha_typed_out")),
    "packing_coefficients.rocha_bravo_fair_vapor": (NO_NUMBER, (
        "test_powers_of_the_diffusivity", "test_rocha_typed_out")),
    "packing_coefficients.shulman_liquid": (NO_NUMBER, (
        "test_shulman_liquid_powers", "test_shulman_liquid_beside_onda")),
    "packing_holdup.stichlmair_above_loading": (NO_NUMBER, (
        "test_stichlmair_holdup_beside_billet", "test_stichlmair_holdup_solved")),
    "packing_holdup.stichlmair_preloading": (NO_NUMBER, (
        "test_stichlmair_holdup_beside_billet", "test_stichlmair_holdup_solved")),
    "packing_limits.billet_schultes_flooding": (NO_NUMBER, ("test_branches_meet", "test_film_under_shear")),
    "packing_limits.billet_schultes_loading": (NO_NUMBER, ("test_branches_meet", "test_film_under_shear")),
    "packing_limits.stichlmair_flooding": (NO_NUMBER, (
        "test_stichlmair_flooding_at_fixed_ratio", "test_stichlmair_turns_vertical")),
    "packing_pressure_drop.billet_schultes_wet_1999": (NO_NUMBER, (
        "test_wet_forms_of_billet_and_schultes", "test_wet_form_without_load")),
    "packing_pressure_drop.rocha_bravo_fair": (NO_NUMBER, (
        "test_pressure_drop_of_sheet", "test_pressure_drop_of_sheet_typed_out")),
    "packing_pressure_drop.rocha_bravo_fair_dry": (NO_NUMBER, (
        "test_pressure_drop_of_sheet", "test_pressure_drop_of_sheet_typed_out")),
    "tray_hydraulics.hofhuis_zuiderweg_clear_liquid": (NO_NUMBER, (
        "test_liquid_heights_beside_each_other", "test_hofhuis_typed_out")),
    "tray_hydraulics.leibson_orifice_coefficient": (NO_NUMBER, (
        "test_orifice_coefficient_of_thin_plates", "test_orifice_coefficients")),
    "tray_limits.lygeros_magoulas_flooding": (NO_NUMBER, (
        "test_lygeros_magoulas_limits", "test_two_fits_of_fairs_chart")),
    "overall.oconnell_absorber": (UNVERIFIED, ("test_viscous_liquids_are_slower", "test_absorber_in_us_units")),
    "packing_area.billet_schultes_marangoni_factor": (UNVERIFIED, (
        "test_marangoni_factor", "test_marangoni_factor_where_the_area_vanishes")),
    "packing_area.fair_bravo_sheet": (UNVERIFIED, ("test_sheet_area_by_load", "test_sheet_area_joins")),
    "packing_area.rocha_bravo_fair_gauze": (UNVERIFIED, ("test_gauze", "test_gauze_typed_out")),
    "packing_area.rocha_bravo_fair_sheet": (UNVERIFIED, (
        "test_partial_wetting_factor", "test_partial_wetting_typed_out")),
    "packing_area.wang": (UNVERIFIED, (
        "test_area_of_sheet_in_weber_and_froude", "test_area_of_sheet_beside_its_neighbours")),
    "packing_coefficients.delft_liquid": (UNVERIFIED, (
        "test_powers_of_the_diffusivity", "test_structured_coefficients_beside_each_other")),
    "packing_coefficients.delft_vapor": (UNVERIFIED, (
        "test_powers_of_the_diffusivity", "test_structured_coefficients_beside_each_other")),
    "packing_holdup.billet_schultes_above_loading": (UNVERIFIED, (
        "test_holdup_between_loading_and_flooding", "test_holdup_typed_out")),
    "packing_holdup.billet_schultes_flood_holdup": (UNVERIFIED, (
        "test_holdup_between_loading_and_flooding", "test_holdup_typed_out")),
    "packing_holdup.delft": (UNVERIFIED, ("test_holdup_of_a_vertical_channel", "test_delft_slope_of_the_liquid")),
    "packing_holdup.engel_static": (UNVERIFIED, ("test_static_holdup", "test_static_holdup_typed_out")),
    "packing_limits.kister_gill_revised": (UNVERIFIED, ("test_kister_gill_in_inches", "test_kister_gill_of_open_beds")),
    "packing_limits.morris_jackson": (UNVERIFIED, ("test_minimum_wetting_rules", "test_minimum_wetting_typed_out")),
    "packing_limits.schmidt": (UNVERIFIED, ("test_minimum_wetting_rules", "test_minimum_wetting_typed_out")),
    "packing_pressure_drop.bravo_rocha_fair": (UNVERIFIED, (
        "test_pressure_drop_of_sheet", "test_pressure_drop_of_sheet_typed_out")),
    "tray_hydraulics.bennett_residual_head": (UNVERIFIED, ("test_residual_heads", "test_residual_head_typed_out")),
    "tray_hydraulics.colwell_clear_liquid": (UNVERIFIED, (
        "test_colwell_without_vapor", "test_liquid_heights_beside_each_other")),
    "tray_hydraulics.thickness_orifice_coefficient": (UNVERIFIED, (
        "test_orifice_coefficient_of_thin_plates", "test_orifice_coefficients")),
    "tray_hydraulics.valve_dry_head": (UNVERIFIED, ("test_valves", "test_valves_switch")),
    "tray_limits.zuiderweg_weep_point": (UNVERIFIED, (
        "test_zuiderweg_weeping", "test_zuiderweg_weeping_beside_froude")),
    "tray_transfer.chen_chuang_liquid_units": (UNVERIFIED, (
        "test_chen_chuang_beside_aiche", "test_chen_chuang_ratio_of_the_films")),
    "tray_transfer.chen_chuang_vapor_units": (UNVERIFIED, (
        "test_chen_chuang_beside_aiche", "test_chen_chuang_ratio_of_the_films")),
    "tray_transfer.zuiderweg_emulsion_area": (UNVERIFIED, ("test_zuiderweg_regimes", "test_zuiderweg_areas_typed_out")),
    "tray_transfer.zuiderweg_liquid": (UNVERIFIED, (
        "test_zuiderweg_coefficients", "test_zuiderweg_units_beside_aiche")),
    "tray_transfer.zuiderweg_liquid_by_viscosity": (UNVERIFIED, (
        "test_zuiderweg_coefficients", "test_zuiderweg_units_beside_aiche")),
    "tray_transfer.zuiderweg_spray_area": (UNVERIFIED, ("test_zuiderweg_regimes", "test_zuiderweg_areas_typed_out")),
    "tray_transfer.zuiderweg_vapor": (UNVERIFIED, ("test_zuiderweg_coefficients", "test_zuiderweg_units_beside_aiche")),
}
"""Correlation -> reason and the tests that stand in, all of them in `test_correlations_limits_*.py`."""


def covered() -> dict[str, set[str]]:
    """Correlation -> published test files that check it."""
    sys.path.insert(0, str(TESTS / "published"))
    try:
        found: dict[str, set[str]] = {}
        for path in PUBLISHED:
            module = importlib.import_module(path.stem)
            for row in getattr(module, "ROWS", ()):
                found.setdefault(row.function.record.name, set()).add(path.name)
            for name, test in getattr(module, "COVERS", {}).items():
                assert re.search(rf"def {test}\(", path.read_text()), f"{path.name} has no {test}"
                found.setdefault(name, set()).add(path.name)
        return found
    finally:
        sys.path.remove(str(TESTS / "published"))


def test_every_correlation_is_checked_or_excepted():
    names = {record.name for record in correlations.catalogue()}
    found = covered()
    assert set(found) <= names, "a check for a correlation that does not exist"
    assert set(EXCEPTIONS) <= names, "an exception for a correlation that does not exist"
    assert not names - set(found) - set(EXCEPTIONS), "neither check nor exception"
    assert not set(EXCEPTIONS) & set(found), "an exception that is no longer needed"


def test_exceptions_have_their_substitutes():
    text = "\n".join(path.read_text() for path in LIMITS)
    for name, (reason, tests) in EXCEPTIONS.items():
        assert reason and len(tests) >= (1 if reason == DEFINITION else 2), f"{name}: a limit and a second form"
        for test in tests:
            body = re.search(rf"def {test}\(.*?(?=\n(?:@|def |class )|\Z)", text, re.S)
            assert body, f"{name}: no limit test {test}"
            assert name.split(".")[1] in body.group(), f"{name} is not called in {test}"


@pytest.mark.parametrize("record", correlations.catalogue(), ids=lambda r: r.name)
def test_record_is_complete(record):
    validity = record.validity
    assert record.predicts and record.hardware and record.unit
    assert validity.source in REFERENCES
    assert (validity.ranges and all(validity.ranges.values())) or validity.range_note.startswith(WORDS)
    assert validity.mean_error is not None or validity.error_note.startswith(WORDS)
    assert validity.describe_range() and validity.describe_error()


def test_every_public_function_is_registered():
    """A module-level function with a public name and broadcasting arguments belongs to the catalogue."""
    registered = {record.name for record in correlations.catalogue()}
    plain_functions = {"gas_diffusivity.diffusion_volume", "packing_coefficients.bravo_equivalent_diameter",
                       "packing_coefficients.bravo_film_velocity", "packing_coefficients.delft_film",
                       "packing_pressure_drop.stichlmair_friction"}
    for module_name in {name.split(".")[0] for name in registered}:
        module = importlib.import_module(f"correlations.{module_name}")
        for name, value in vars(module).items():
            if callable(value) and not name.startswith("_") and getattr(value, "__module__", "") == module.__name__ \
                    and not isinstance(value, type):
                full = f"{module_name}.{name}"
                assert full in registered or full in plain_functions, full


def test_bibliography_is_used():
    """No orphan keys: each is the source of a correlation, of a field of the packings, or of a check."""
    used = {record.validity.source for record in correlations.catalogue()}
    used |= {field.source for row in packings().values() for field in row.fields.values()}
    used |= {field.source for field in critical_surface_tensions().values()}
    assert not set(REFERENCES) - used


def test_fields_of_the_packings_are_arguments():
    known = {name for record in correlations.catalogue() for name in record.parameters}
    for row in packings().values():
        assert set(row.fields) <= known
        assert {field.source for field in row.fields.values()} <= set(REFERENCES)
