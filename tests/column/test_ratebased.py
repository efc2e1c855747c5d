"""Rate-based columns: limits, feed-back, masked components, hardware, refinement."""
from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pytest
from columns import absorber, absorber_mixture, absorber_trays, distillation, ternary, trays

from ratebased.column import (
    Averaged,
    Column,
    ContactorPressure,
    Feed,
    LiquidFeed,
    Mixed,
    Plug,
    ProductPurity,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    VaporFeed,
    feed_back_error,
    refine_grid,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.column.resize import resized_layout, stage_map
from ratebased.column.specifications import DistillateRate
from ratebased.efficiency_set import EfficiencyBasis
from ratebased.equipment import ContactState, FixedCoefficients, Hydraulics, Section, TransferCoefficients
from ratebased.errors import ApproximationWarning, InputError, NoSolutionError
from ratebased.properties import ConstantVolatility

BASE = solve_ratebased(distillation(), ternary(), trays())


def test_closure() -> None:
    assert BASE.report.component_closure < 1e-12
    assert BASE.report.energy_closure < 1e-10
    assert BASE.report.path == "direct"
    np.testing.assert_allclose(BASE.contact.stage, np.arange(2, 12))


def test_the_difference_from_equilibrium_falls_with_the_area() -> None:
    """C/area: from area x 1e3 to x 1e4 by 9.9 to 10.1."""
    equilibrium = solve_equilibrium(distillation(), ternary())
    gap = [np.abs(solve_ratebased(distillation(), ternary(), trays(), area_factor=f).x - equilibrium.x).max()
           for f in (1e3, 1e4)]
    assert 9.9 < gap[0] / gap[1] < 10.1


def test_small_area_changes_the_vapor_in_proportion() -> None:
    rise = []
    for factor in (1e-3, 1e-4):
        profile = solve_ratebased(distillation(), ternary(sensible=False), trays(), area_factor=factor)
        rise.append(np.abs(profile.contact.N * profile.contact.area[:, None]).max())
    assert rise[0] / rise[1] == pytest.approx(10.0, rel=0.05)


def test_equal_latent_heats_give_constant_overflow() -> None:
    """Without being told: V constant on each side of the feeds, the fluxes of each tray sum to zero."""
    model = ternary(sensible=False, latent=(32e3, 32e3, 32e3))
    profile = solve_ratebased(distillation(), model, trays())
    np.testing.assert_allclose(profile.V[1:6], 140.0, rtol=1e-12)
    assert np.abs(profile.contact.N.sum(-1)).max() < 1e-13


def test_equal_pairs_without_liquid_resistance() -> None:
    """E = N/(1 + N) for every component, N the transfer units of a mixed tray."""
    model = ternary(sensible=False, latent=(32e3, 32e3, 32e3))
    area, kappa, V = 60.0, 0.03, 140.0
    column = Column(10, [LiquidFeed(5, [35.0, 35.0, 30.0], 350.0)], 101325.0, condenser=TotalCondenser(),
                    reboiler=Reboiler(), specifications=[RefluxRatio(3.0), DistillateRate(35.0)])
    profile = solve_ratebased(column, model, FixedCoefficients(kappa, 1e4, area, h_vapor=80.0, h_liquid=1500.0))
    N = area * 35.0 * kappa / V
    np.testing.assert_allclose(profile.efficiency(limit=1e-3).exact_murphree, N / (1 + N), rtol=1e-6)


def test_plug_flow_of_the_vapor() -> None:
    """Equal pairs, no liquid resistance: E = 1 - exp(-N) when the vapour rises in plug flow."""
    model = ternary(sensible=False, latent=(32e3, 32e3, 32e3))
    column = distillation().with_(feeds=[LiquidFeed(6, [35.0, 35.0, 30.0], 350.0)])
    contactor = FixedCoefficients(0.03, 1e4, 150.0, h_vapor=80.0, h_liquid=1500.0)
    profile = solve_ratebased(column, model, contactor, vapor=Plug(), liquid=Mixed())
    N = 150.0 * 35.0 * 0.03 / 140.0
    np.testing.assert_allclose(profile.efficiency(limit=1e-3).exact_murphree, 1 - np.exp(-N), rtol=1e-6)
    assert profile.contact.pattern == "vapour plug flow, liquid mixed"


@pytest.mark.parametrize("name", ["distillation", "absorber"])
def test_efficiencies_fed_back_reproduce_the_profile(name: str) -> None:
    """Vaporisation with superheat, and Murphree with both offsets: to 1e-8 in x, from a cold start."""
    column, model, contactor = ((distillation(), ternary(), trays()) if name == "distillation"
                                else (absorber(), absorber_mixture(), absorber_trays()))
    rate = solve_ratebased(column, model, contactor)
    table = rate.efficiency()
    for efficiency in (table.vaporization_set(), table.murphree_set()):
        fed = solve_equilibrium(column, model, efficiency)
        assert feed_back_error(fed, rate) < 1e-8
        np.testing.assert_allclose(fed.T_L, rate.T_L, atol=1e-7)
        np.testing.assert_allclose(fed.T_V, rate.T_V, atol=1e-7)


def test_murphree_alone_is_exact_without_sensible_heat_only() -> None:
    def alone(sensible: bool) -> float:
        model = ternary(sensible=sensible)
        rate = solve_ratebased(distillation(), model, trays())
        full = rate.efficiency().murphree_set()
        plain = type(full)(full.kind, full.values, full.dependent, basis=full.basis, given=full.given)
        return feed_back_error(solve_equilibrium(distillation(), model, plain), rate)

    assert alone(False) < 1e-9
    assert 1e-5 < alone(True) < 3e-2


def test_written_table_fed_back() -> None:
    """Four decimals: vaporisation efficiencies to 2e-4 in x (2.5e-5 in the median of many columns)."""
    error = feed_back_error(
        solve_equilibrium(distillation(), ternary(), BASE.efficiency().vaporization_set().rounded(4)), BASE)
    assert 1e-9 < error < 2e-4


def test_flags_and_identity_of_murphree() -> None:
    table = BASE.efficiency(limit=0.05)
    driving = table.y_star - table.y_in
    assert (table.flagged == (np.abs(driving) < 0.05 * np.maximum(table.y_star, table.y_in))).all()
    assert np.isnan(table.murphree[table.flagged]).all() and table.flagged.any()
    np.testing.assert_allclose((table.exact_murphree * driving).sum(-1), 0.0, atol=1e-13)
    assert (table.dependent == table.y_out.argmax(-1)).all()
    own = BASE.efficiency(at_liquid_temperature=True)
    assert own.basis is EfficiencyBasis.LIQUID_TEMPERATURE and (own.murphree_set().dependent == -1).all()
    frame = table.to_frame()
    assert list(frame.columns[:3]) == ["stage", "basis", "dependent"] and len(frame) == 10


def test_masked_components_do_not_pass_the_interface() -> None:
    profile = solve_ratebased(absorber(), absorber_mixture(), absorber_trays())
    record = profile.record()
    assert (record.N[:, [0, 3]] == 0.0).all() and (record.x_I[:, 0] == 0.0).all() and (record.y_I[:, 3] == 0.0).all()
    assert (profile.x[:, 0] == 0.0).all() and (profile.y[:, 3] == 0.0).all()
    assert profile.report.component_closure < 1e-12
    table = profile.efficiency()
    assert table.basis is EfficiencyBasis.LIQUID_TEMPERATURE
    np.testing.assert_allclose(table.y_star.sum(-1), 1.0, rtol=1e-13)
    assert table.flagged[:, [0, 3]].all()


def test_order_of_components_does_not_matter() -> None:
    order = [2, 0, 1]
    base, model = distillation(), ternary()
    turned = ConstantVolatility([model.names[i] for i in order], model.volatility[order], model.latent_heat[order],
                                a=22.5,
                                b=4000.0, vapor_heat_capacity=model.vapor_cp[order],
                                liquid_heat_capacity=model.liquid_cp[order], reference_temperature=350.0,
                                vapor_molar_density=35.0, liquid_molar_density=9e3)
    hardware = trays()
    swapped = FixedCoefficients(hardware.kappa_vapor[np.ix_(order, order)], hardware.kappa_liquid[np.ix_(order, order)],
                                150.0, h_vapor=80.0, h_liquid=1500.0)
    feeds = [type(f)(f.stage, f.flows[order], f.temperature) for f in base.feeds]
    profile = solve_ratebased(base.with_(feeds=feeds), turned, swapped)
    np.testing.assert_allclose(profile.x, BASE.x[:, order], atol=1e-10)


def test_contactors_by_section() -> None:
    """Two sections of the same trays are the column of one; better trays below sharpen it."""
    same = solve_ratebased(distillation(), ternary(), {(2, 6): trays(), (7, 11): trays()})
    np.testing.assert_allclose(same.x, BASE.x, atol=1e-13)
    better = solve_ratebased(distillation(), ternary(), [Section(2, 6, trays()), Section(7, 11, trays(600.0))])
    assert better.purity(2, "bottom") > BASE.purity(2, "bottom") + 0.002
    assert (better.contact.area == np.repeat([150.0, 600.0], 5)).all()
    with pytest.raises(InputError, match="stage 7"):
        solve_ratebased(distillation(), ternary(), {(2, 6): trays()})


def test_rate_based_purity_is_not_monotone_in_the_reflux() -> None:
    """The area is fixed, transfer units fall as the vapour grows: the purity has a maximum, which the error tells."""
    purity = [solve_ratebased(distillation(R=R), ternary(), trays()).purity(0) for R in (0.8, 3.0, 40.0)]
    assert purity[1] > purity[0] and purity[1] > purity[2]
    column = distillation().with_(specifications=[DistillateRate(40.0), ProductPurity(0.95, 0, bounds=(0.5, 40.0))])
    with pytest.raises(NoSolutionError, match="the best is"):
        solve_ratebased(column, ternary(), trays())


@dataclass(frozen=True)
class FlowDependent:
    """A tray whose vapour coefficients grow with V^0.8 and which costs 600 Pa at the base traffic."""

    reference: float = 140.0

    def transfer(self, state: ContactState) -> TransferCoefficients:
        fixed = trays().transfer(state)
        ratio = (state.V / self.reference) ** 0.8
        return TransferCoefficients(fixed.kappa_vapor * ratio[:, None, None], fixed.kappa_liquid, fixed.h_vapor * ratio,
                                    fixed.h_liquid, fixed.area, "active area", {"traffic low": state.V < 100.0})

    def hydraulics(self, state: ContactState) -> Hydraulics:
        return Hydraulics(flooding=state.V / 250.0, pressure_drop=600.0 * (state.V / self.reference) ** 2)


def test_flow_dependent_coefficients_and_pressure_drop() -> None:
    column = distillation().with_(pressure=ContactorPressure(101325.0, estimate=500.0))
    profile = solve_ratebased(column, ternary(), FlowDependent())
    drop = profile.contact.hydraulics["pressure_drop"]
    np.testing.assert_allclose(drop, 600.0 * ((profile.V + profile.vapor_draw)[1:-1] / 140.0) ** 2, rtol=1e-10)
    np.testing.assert_allclose(np.diff(profile.P)[1:-1], 0.5 * (drop[1:] + drop[:-1]), rtol=1e-4)
    assert profile.P[-1] - profile.P[0] == pytest.approx(drop.sum(), rel=1e-6)
    assert profile.report.component_closure < 1e-12
    assert (profile.contact.notes["traffic low"] == profile.contact.stage[profile.V[1:-1] < 100.0]).all()
    with pytest.raises(InputError, match="no pressure-drop method"):
        solve_ratebased(column, ternary(), trays())


def test_grid_of_a_packed_absorber_with_air() -> None:
    column = absorber(8, packed=True)
    study = refine_grid(column, absorber_mixture(), absorber_trays(6.0), grids=4, area_follows_height=False)
    assert list(study.segments) == [8, 16, 32, 64]
    assert study.order[-1] == pytest.approx(2.0, abs=0.05)
    assert study.error < 1e-5
    assert len(study.to_frame()) == 4
    mixed = refine_grid(column, absorber_mixture(), absorber_trays(6.0), grids=4, area_follows_height=False,
                        vapor=Mixed(),
                        liquid=Mixed())
    assert mixed.order[-1] == pytest.approx(1.0, abs=0.1)
    with pytest.raises(InputError, match="trays cannot be cut"):
        refine_grid(absorber(8), absorber_mixture(), absorber_trays())
    with pytest.raises(InputError, match="needs three"):
        refine_grid(column, absorber_mixture(), absorber_trays(6.0), grids=2)


def test_refined_grid_keeps_feeds_draws_and_duties() -> None:
    from ratebased.column import LiquidDraw, VaporDraw
    from ratebased.column.resize import halved_segments
    column = distillation().with_(segment_height=0.4, draws=[LiquidDraw(4, 2.0), VaporDraw(4, 1.0)], duties={5: 1e4},
                                  heat_loss=100.0)
    fine = halved_segments(column, ternary())
    assert fine.stages == 22 and fine.stage_duties.sum() == pytest.approx(column.stage_duties.sum())
    assert [(type(d).__name__, d.stage) for d in fine.draws] == [("LiquidDraw", 7), ("VaporDraw", 6)]
    assert [(type(f).__name__, f.stage) for f in fine.feeds] == [("LiquidFeed", 10), ("VaporFeed", 15)]
    assert fine.segment_height[1:-1].sum() == pytest.approx(column.segment_height[1:-1].sum())


def test_long_segments_are_named() -> None:
    column = absorber(2, packed=True)
    with pytest.warns(ApproximationWarning, match="transfer units in one segment"):
        solve_ratebased(column, absorber_mixture(), absorber_trays(200.0))


def test_hetp_of_a_binary_bed_at_constant_slope() -> None:
    """Dilute solute in a bed: HETP/H_OG = ln S/(S - 1), S the stripping factor (Lewis 1936; Treybal, ch. 8, memory)."""
    T, P, m, V, L = 300.0, 101325.0, 0.5, 100.0, 70.0
    model = ConstantVolatility(["gas", "solute", "oil"], [1.0, m * P / np.exp(22.0 - 2600.0 / T), 1.0], [0.0, 1.0, 0.0],
                               a=22.0, b=2600.0, vapor_heat_capacity=30.0, liquid_heat_capacity=30.0,
                               reference_temperature=T, condensable=[False, True, True], volatile=[True, True, False],
                               vapor_molar_density=40.0, liquid_molar_density=1e4)
    segments, height, N_OG = 30, 3.0, 3.0
    area = N_OG * V / (40.0 * 0.02)
    column = Column(segments, [LiquidFeed(1, [0.0, 0.0, L], T),
                               VaporFeed(segments, [V * (1 - 1e-6), V * 1e-6, 0.0], T)], P,
                    segment_height=height / segments)
    bed = FixedCoefficients(0.02, 1e2, area / segments, h_vapor=100.0, h_liquid=1000.0)
    table = solve_ratebased(column, model, bed).hetp()
    S = m * V / L
    np.testing.assert_allclose(table.stripping[:, 1], S, rtol=1e-4)
    assert table.mean()[1] == pytest.approx(height / N_OG * np.log(S) / (S - 1.0), rel=1e-3)
    assert table.flagged[:, [0, 2]].all()
    with pytest.raises(InputError, match="no segment height"):
        BASE.hetp()


@pytest.mark.parametrize("contactor, words", [
    (object(), "contactor = <object .*expected"), ([trays()], r"contactor\[0\] = .*expected a Section"),
    ({(1, 1): trays()}, "stage 2"), ({(2, 11): "tray"}, "contactor: 'tray' has no methods transfer and hydraulics")])
def test_what_is_no_contactor(contactor: Any, words: str) -> None:
    with pytest.raises(InputError, match=words):
        solve_ratebased(distillation(), ternary(), contactor)


@pytest.mark.parametrize("pattern", ["plug", Mixed])
def test_what_is_no_flow_pattern(pattern: Any) -> None:
    with pytest.raises(InputError, match="vapor = .*expected a flow pattern"):
        solve_ratebased(distillation(), ternary(), trays(), vapor=pattern)


def test_a_start_at_another_pressure_keeps_the_columns_own() -> None:
    column = distillation().with_(pressure=3e5)
    cold, warm = (solve_ratebased(column, ternary(), trays(), start=start) for start in (None, BASE))
    assert (warm.P == 3e5).all() and warm.report.path == "from the profile given"
    np.testing.assert_allclose(warm.x, cold.x, atol=1e-10)


def test_a_start_of_other_components_is_refused() -> None:
    model = ternary()
    other = ConstantVolatility(["p", "q", "r"], model.volatility, model.latent_heat, a=22.5, b=4000.0)
    with pytest.raises(InputError, match="start: a profile of p, q, r, the mixture is light, middle, heavy"):
        solve_ratebased(distillation(), model, trays(), start=solve_equilibrium(distillation(), other))


@pytest.mark.parametrize("pattern, area, stages", [(Plug(), 150.0, 12), (Averaged(), 150.0, 12), (None, 400.0, 8)],
                         ids=["plug", "averaged", "bed of long segments"])
@pytest.mark.filterwarnings("ignore::ratebased.errors.ApproximationWarning")
def test_the_answer_does_not_depend_on_the_start(pattern: Any, area: float, stages: int) -> None:
    """The shares of the entering states belong to the solution, not to where the iteration came from."""
    height = 1.0 if pattern is None else None
    column = distillation(stages).with_(segment_height=height)
    far = solve_ratebased(distillation(stages, R=8.0).with_(segment_height=height), ternary(), trays(area))
    cold, warm = (solve_ratebased(column, ternary(), trays(area), vapor=pattern, liquid=pattern, start=start)
                  for start in (None, far))
    assert warm.report.path == "from the profile given"
    np.testing.assert_allclose(warm.x, cold.x, atol=1e-10)
    np.testing.assert_allclose(warm.T_L, cold.T_L, atol=1e-8)


def test_pressures_do_not_depend_on_the_start() -> None:
    column = distillation().with_(pressure=ContactorPressure(101325.0, estimate=500.0))
    cold = solve_ratebased(column, ternary(), FlowDependent())
    far = solve_ratebased(column.with_(pressure=ContactorPressure(2e5)), ternary(), FlowDependent())
    warm = solve_ratebased(column, ternary(), FlowDependent(), start=far)
    np.testing.assert_allclose(warm.P, cold.P, rtol=1e-10)
    np.testing.assert_allclose(warm.x, cold.x, atol=1e-10)


def test_purity_with_the_vapor_in_plug_flow() -> None:
    """Targets that lie on a column of the search's own grid, or within rounding of it."""
    reflux = float(np.exp(np.linspace(np.log(0.5), np.log(20.0), 13))[3])
    purity = solve_ratebased(distillation(R=reflux), ternary(), trays(), vapor=Plug(), liquid=Mixed()).purity(0)
    for target in (purity, purity + 1e-7):
        column = distillation().with_(specifications=[DistillateRate(40.0), ProductPurity(target, 0,
                                                                                          bounds=(0.5, 20.0))])
        found = solve_ratebased(column, ternary(), trays(), vapor=Plug(), liquid=Mixed())
        assert found.purity(0) == pytest.approx(target, rel=1e-9)
        assert found.L[0] / 40.0 == pytest.approx(reflux, rel=1e-4)


def test_doubts_about_the_column_found_by_a_search_are_told() -> None:
    """Warnings of the trials are dropped, those of the answer come through."""
    bed = distillation(6).with_(segment_height=1.0)
    with pytest.warns(ApproximationWarning) as once:
        purity = solve_ratebased(bed, ternary(), trays(2000.0)).purity(0)
    searched = bed.with_(specifications=[DistillateRate(40.0), ProductPurity(purity, 0)])
    with pytest.warns(ApproximationWarning, match="transfer units in one segment") as told:
        solve_ratebased(searched, ternary(), trays(2000.0))
    assert len(told) == len(once) <= 2          # one a phase


def test_an_area_that_does_not_follow_the_height_is_refused() -> None:
    """Fixed coefficients hold an area of a segment: halved segments would double the bed."""
    with pytest.raises(InputError, match=r"area of the bed goes from 24 to 48 m2 when its 8 segments are halved"):
        refine_grid(absorber(8, packed=True), absorber_mixture(), absorber_trays(3.0))


@dataclass(frozen=True)
class Bed:
    """A packing: area and pressure drop follow the height of the segment."""

    drop: float = 1e4

    def transfer(self, state: ContactState) -> TransferCoefficients:
        fixed = trays(60.0).transfer(state)
        return TransferCoefficients(fixed.kappa_vapor, fixed.kappa_liquid, fixed.h_vapor, fixed.h_liquid,
                                    100.0 * state.height, "interfacial area", {})

    def hydraulics(self, state: ContactState) -> Hydraulics:
        return Hydraulics(flooding=state.V / 250.0, pressure_drop=self.drop * state.height)


def test_order_of_a_bed_with_its_own_pressure_drop() -> None:
    """The feed is flashed at the pressure found, on every grid the same; else its phases jump from the first grid to
    the second.
    """
    column = Column(10, [Feed(5, [35.0, 35.0, 30.0], temperature=344.0)], ContactorPressure(101325.0),
                    condenser=TotalCondenser(), reboiler=Reboiler(),
                    specifications=[RefluxRatio(2.5), DistillateRate(40.0)], segment_height=0.3)
    study = refine_grid(column, ternary(), Bed(), grids=4)
    vapor = np.array([p.feeds.vapor.sum() for p in study.profiles])
    np.testing.assert_allclose(vapor, vapor[0], rtol=1e-9)
    assert 1.0 < vapor[0] < 99.0
    assert study.order[-1] == pytest.approx(2.0, abs=0.3)


@pytest.mark.filterwarnings("ignore::ratebased.errors.ApproximationWarning")
def test_richardson_takes_the_order_of_the_flow_patterns() -> None:
    """One phase mixed: first order, though the last ratio of differences of these coarse grids looks like 2.3."""
    column = absorber(4, packed=True)
    for vapor, liquid, p in ((None, None, 2), (Plug(), None, 2), (Mixed(), None, 1), (None, Mixed(), 1)):
        study = refine_grid(column, absorber_mixture(), absorber_trays(60.0), grids=3, area_follows_height=False,
                            vapor=vapor, liquid=liquid)
        step = study.products[-1] - study.products[-2]
        np.testing.assert_allclose(study.extrapolated - study.products[-1], step / (2 ** p - 1), atol=1e-9)


def test_sections_keep_every_stage_when_the_column_is_resized() -> None:
    """No stage between two sections is left out, more stages or fewer."""
    column = distillation()
    sections = [Section(2, 4, trays()), Section(5, 6, trays(200.0)), Section(7, 11, trays(300.0))]
    for n in (1, 2, 3, 7, 9, 10, 13, 30):
        new = resized_layout(sections, stage_map(column, n))
        assert isinstance(new, list)
        covered = [j for s in new for j in range(s.first, s.last + 1)]
        assert covered == list(range(2, n + 2)), n


def test_limited_shares_are_named() -> None:
    """A long segment of one phase alone, of liquid compositions and of temperatures."""
    bed = distillation(8).with_(segment_height=1.0)
    with pytest.warns(ApproximationWarning, match="share of the entering liquid is limited"):
        profile = solve_ratebased(bed, ternary(), trays(600.0), vapor=Plug(), liquid=Averaged())
    assert "entering share at most 1/N" in profile.record().pattern
    kappa = absorber_trays().kappa_vapor
    hot = FixedCoefficients(kappa, 5e-3 * kappa, 5.0, h_vapor=60.0, h_liquid=3e4)
    with pytest.warns(ApproximationWarning, match="entering liquid's temperature is limited"):
        solve_ratebased(absorber(2, packed=True), absorber_mixture(), hot)
