"""Equilibrium columns: specifications, ends, draws, duties, masked components, closures."""
from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from columns import absorber, absorber_mixture, distillation, ternary

from ratebased.column import (
    BoilupRatio,
    BottomsRate,
    Column,
    ComponentRecovery,
    CondenserDuty,
    DistillateRate,
    Feed,
    LiquidDraw,
    LiquidFeed,
    PartialCondenser,
    Product,
    ProductPurity,
    Profile,
    Reboiler,
    ReboilerDuty,
    RefluxRatio,
    TotalCondenser,
    VaporDraw,
    VaporFeed,
    solve_equilibrium,
)
from ratebased.column.search import with_search
from ratebased.efficiency_set import EfficiencyBasis, EfficiencyKind, EfficiencySet, uniform_murphree
from ratebased.errors import ConvergenceError, InputError, NoSolutionError, PlausibilityWarning
from ratebased.properties import bubble_point


def closed(profile: Profile) -> None:
    """Each component to 1e-12 of its own feed, energy to 1e-10 of feed times latent heat."""
    assert profile.report.component_closure < 1e-12
    assert profile.report.energy_closure < 1e-10


BASE = solve_equilibrium(distillation(), ternary())


@pytest.mark.parametrize("pair", [
    (RefluxRatio(2.5), BottomsRate(60.0)), ("R", "S"), ("D", "S"), ("B", "S"), ("R", "Q"), ("D", "Q"), ("B", "Q")])
def test_every_pair_of_specifications_finds_the_same_column(pair: tuple[Any, Any]) -> None:
    """The figures of one column, read off its solution, are specifications of the same column."""
    bottoms = BASE.products["bottom"].flows.sum()
    value = {"R": RefluxRatio(2.5), "D": DistillateRate(40.0), "B": BottomsRate(float(bottoms)),
             "S": BoilupRatio(float(BASE.V[-1] / bottoms)), "Q": ReboilerDuty(BASE.duties["reboiler"])}
    specifications = [value.get(s, s) if isinstance(s, str) else s for s in pair]
    found = solve_equilibrium(distillation().with_(specifications=specifications), ternary())
    np.testing.assert_allclose(found.x, BASE.x, atol=1e-10)
    closed(found)


@pytest.mark.parametrize("specification", [
    CondenserDuty(BASE.duties["condenser"]), ProductPurity(BASE.purity(0), 0),
    ComponentRecovery(BASE.recovery("heavy", "bottom"), 2, Product.BOTTOM)])
def test_searched_specifications(specification: Any) -> None:
    column = distillation().with_(specifications=[DistillateRate(40.0), specification])
    found = solve_equilibrium(column, ternary())
    assert found.L[0] / 40.0 == pytest.approx(2.5, rel=1e-6)


def test_search_in_the_distillate_rate() -> None:
    column = distillation().with_(specifications=[RefluxRatio(2.5), ProductPurity(0.75, 0)])
    found = solve_equilibrium(column, ternary())
    assert found.purity("light") == pytest.approx(0.75, abs=1e-8)
    assert found.L[0] / found.products["top"].flows.sum() == pytest.approx(2.5, rel=1e-9)


def test_unreachable_purity_tells_the_best() -> None:
    column = distillation().with_(specifications=[DistillateRate(40.0), ProductPurity(0.9999, 0, bounds=(0.5, 20.0))])
    with pytest.raises(NoSolutionError, match="not reached with RefluxRatio from 0.5 to 20: the best is"):
        solve_equilibrium(column, ternary())


def test_draws_duties_and_losses() -> None:
    column = distillation(16).with_(draws=[LiquidDraw(4, 6.0), VaporDraw(12, 4.0)], duties={5: -5e4, 13: 8e4},
                                    heat_loss=500.0)
    profile = solve_equilibrium(column, ternary())
    closed(profile)
    assert profile.products["liquid_draw_4"].flows.sum() == pytest.approx(6.0)
    np.testing.assert_allclose(profile.products["liquid_draw_4"].composition, profile.x[3])
    np.testing.assert_allclose(profile.products["vapor_draw_12"].composition, profile.y[11])
    assert profile.duty.sum() == pytest.approx(3e4 - 14 * 500.0)
    assert profile.duty[0] == profile.duty[-1] == 0.0


def test_partial_condenser_is_one_more_stage() -> None:
    profile = solve_equilibrium(distillation().with_(condenser=PartialCondenser()), ternary())
    closed(profile)
    T, y = bubble_point(ternary(), profile.P[0], profile.x[0])
    np.testing.assert_allclose(profile.products["top"].composition, y, atol=1e-10)
    assert profile.T_V[0] == pytest.approx(float(T))


def test_subcooled_reflux_condenses_vapor_below() -> None:
    """The reflux leaves 20 K below its bubble point; what condenses on stage 2 is its heat deficit over the latent "
      "heat."""
    cold = solve_equilibrium(distillation().with_(condenser=TotalCondenser(20.0)), ternary())
    closed(cold)
    assert cold.products["top"].temperature == pytest.approx(cold.T_V[0] - 20.0)
    assert cold.L[0] == pytest.approx(100.0)
    model = ternary()
    lack = cold.L[0] * (cold.x[0] @ (model.liquid_enthalpy(cold.T_V[0], cold.P[0], cold.x[0])
                                     - model.liquid_enthalpy(cold.T_L[0], cold.P[0], cold.x[0])))
    extra = (cold.L[1] - cold.L[0]) - (BASE.L[1] - BASE.L[0])
    assert extra * 28e3 == pytest.approx(lack, rel=0.15)


def test_reboiled_absorber_and_stripper() -> None:
    feeds = [LiquidFeed(1, [30.0, 40.0, 30.0], 340.0)]
    for specification in (BoilupRatio(0.8), BottomsRate(50.0), ReboilerDuty(1.5e6)):
        closed(solve_equilibrium(Column(8, feeds, 101325.0, reboiler=Reboiler(), specifications=[specification]),
                                 ternary()))
    rectifier = Column(8, [VaporFeed(8, [40.0, 30.0, 30.0], 370.0)], 101325.0, condenser=TotalCondenser(),
                       specifications=[RefluxRatio(1.5)])
    closed(solve_equilibrium(rectifier, ternary()))


def test_masked_components_stay_in_their_phase() -> None:
    profile = solve_equilibrium(absorber(), absorber_mixture())
    closed(profile)
    assert (profile.x[:, 0] == 0.0).all() and (profile.y[:, 3] == 0.0).all()
    assert profile.products["top"].flows[0] == pytest.approx(85.0, rel=1e-14)
    np.testing.assert_allclose((profile.y * 101325.0)[:, 1],
                               profile.x[:, 1] * 1.2 * np.exp(17.0 - 2600.0 / profile.T_L), rtol=1e-10)


def test_gas_in_a_distillation_leaves_by_the_partial_condenser() -> None:
    model = absorber_mixture()
    column = Column(8, [Feed(5, [2.0, 40.0, 40.0, 10.0], temperature=330.0)], 2e5, condenser=PartialCondenser(),
                    reboiler=Reboiler(), specifications=[RefluxRatio(2.0), DistillateRate(40.0)])
    profile = solve_equilibrium(column, model)
    closed(profile)
    assert profile.products["top"].flows[0] == pytest.approx(2.0, rel=1e-12)
    with pytest.raises(InputError, match="air never condenses"):
        solve_equilibrium(column.with_(condenser=TotalCondenser()), model)


def test_order_of_components_does_not_matter() -> None:
    order = [2, 0, 1]
    base = distillation()
    model = ternary()
    turned = type(model)([model.names[i] for i in order], model.volatility[order], model.latent_heat[order], a=22.5,
                         b=4000.0,
                         vapor_heat_capacity=model.vapor_cp[order], liquid_heat_capacity=model.liquid_cp[order],
                         reference_temperature=350.0)
    feeds = [type(f)(f.stage, f.flows[order], f.temperature) for f in base.feeds]
    profile = solve_equilibrium(base.with_(feeds=feeds), turned)
    np.testing.assert_allclose(profile.x, BASE.x[:, order], atol=1e-13)


def test_efficiency_of_one_is_the_equilibrium_column() -> None:
    np.testing.assert_allclose(solve_equilibrium(distillation(), ternary(), 1.0).x, BASE.x, atol=1e-12)


def test_start_from_a_profile() -> None:
    profile = solve_equilibrium(distillation(), ternary(), start=BASE)
    assert profile.report.iterations == 1 and profile.report.path == "from the profile given"
    with pytest.raises(InputError, match="start: a profile of 12 stages"):
        solve_equilibrium(distillation(14), ternary(), start=BASE)


def test_dry_specifications_warn_and_name_the_section() -> None:
    """A vapour feed larger than the vapour of the top leaves the section below it without any."""
    column = Column(10, [VaporFeed(5, [40.0, 40.0, 40.0], 380.0)], 101325.0, condenser=TotalCondenser(),
                    reboiler=Reboiler(), specifications=[RefluxRatio(0.5), DistillateRate(40.0)])
    with pytest.warns(PlausibilityWarning, match="without vapour or liquid"), \
            pytest.raises(ConvergenceError, match=r"Tried: .*Worst: stage .*larger reflux ratio"):
        solve_equilibrium(column, ternary())


def test_very_large_reflux_warns() -> None:
    with pytest.warns(PlausibilityWarning, match="RefluxRatio = 1e"):
        solve_equilibrium(distillation(R=1e6), ternary())


@pytest.mark.parametrize("arguments, words", [
    ({"values": np.full((12, 3), np.nan)}, r"values\[0, 0\] = nan"),
    ({"values": np.ones((12, 3)), "dependent": np.full(12, -1)}, r"dependent\[0\] = -1"),
    ({"values": np.ones((12, 3)), "dependent": np.full(12, 3)}, r"dependent\[0\] = 3"),
    ({"values": np.ones(3)}, "expected .stages, components."),
    ({"values": np.ones((12, 3)), "dependent": np.full(12, 2), "vapor_offset": [1.0]}, "vapor_offset: expected"),
    ({"values": np.ones((12, 3)), "basis": EfficiencyBasis.LIQUID_TEMPERATURE, "liquid_offset": 1.0}, "liquid_offset"),
])
def test_efficiency_set_is_checked(arguments: dict[str, Any], words: str) -> None:
    with pytest.raises(InputError, match=words):
        EfficiencySet(EfficiencyKind.MURPHREE_VAPOR, **arguments)


def test_vaporization_efficiencies_are_positive() -> None:
    with pytest.raises(InputError, match="a vaporisation efficiency is positive"):
        EfficiencySet(EfficiencyKind.VAPORIZATION, -np.ones((12, 3)))


def test_wrong_number_of_stages_in_a_set() -> None:
    with pytest.raises(InputError, match=r"efficiency.values: expected shape \(12, 3\)"):
        solve_equilibrium(distillation(), ternary(), EfficiencySet(EfficiencyKind.VAPORIZATION, np.ones((9, 3))))


def test_progress_is_reported() -> None:
    seen: list[tuple[int, float]] = []
    solve_equilibrium(distillation(), ternary(), progress=lambda i, r: seen.append((i, r)))
    assert [i for i, _ in seen] == list(range(1, len(seen) + 1)) and seen[-1][1] < 1e-9


def test_a_gas_that_condenses_needs_another_start() -> None:
    """A vapour below its dew point on top of a cold liquid: the sum-rates start has no vapour left, boiling liquids
    do.
    """
    column = Column(10, [LiquidFeed(1, [1.0, 10.0, 60.0], 330.0), VaporFeed(10, [60.0, 25.0, 5.0], 340.0)], 2.5e5)
    profile = solve_equilibrium(column, ternary())
    closed(profile)
    assert profile.V[0] > 1.0


def test_the_path_is_told() -> None:
    """Only a set with values far from one is approached by way of tame ones."""
    assert solve_equilibrium(distillation(), ternary(), 0.7).report.path == "direct"
    odd = solve_equilibrium(distillation(), ternary(), 1.6)
    assert odd.report.path == "from the column with odd efficiencies replaced"


@pytest.mark.parametrize("arguments, words", [
    ({"kind": "Murphree vapour"}, "kind = 'Murphree vapour': expected EfficiencyKind"),
    ({"basis": "bubble point"}, "basis = 'bubble point': expected EfficiencyBasis"),
    ({"dependent": np.full(12, 1.7)}, r"dependent\[0\] = 1.7"),
    ({"values": "abc"}, "values: expected numbers"),
])
def test_efficiency_set_takes_no_words(arguments: dict[str, Any], words: str) -> None:
    """A kind given as a word was taken for vaporisation efficiencies."""
    with pytest.raises(InputError, match=words):
        EfficiencySet(**{"kind": EfficiencyKind.MURPHREE_VAPOR, "values": np.ones((12, 3)),
                         "dependent": np.full(12, 2), **arguments})


def test_efficiency_is_one_number_or_a_set() -> None:
    with pytest.raises(InputError, match="efficiency: expected one number, got an array"):
        solve_equilibrium(distillation(), ternary(), np.full(12, 0.7))  # type: ignore[arg-type]


def test_a_cooler_feeds_a_draw_above_the_reflux() -> None:
    """16 mol/s are drawn where the reflux brings 15: a cooler above condenses the rest."""
    with pytest.warns(PlausibilityWarning, match="unless liquid condenses above"):
        column = Column(14, [LiquidFeed(8, [35.0, 35.0, 30.0], 345.0)], 101325.0, condenser=TotalCondenser(),
                        reboiler=Reboiler(), specifications=[DistillateRate(30.0), RefluxRatio(0.5)],
                        draws=[LiquidDraw(4, 16.0)], duties={3: -1.0e6})
    profile = solve_equilibrium(column, ternary())
    closed(profile)
    assert profile.L[3] > 0.0


@pytest.mark.parametrize("R, bounds", [(0.5, (0.5, 20.0)), (20.0, (0.5, 20.0)), (40.0, None)])
def test_a_target_at_a_bound_of_the_search(R: float, bounds: tuple[float, float] | None) -> None:
    target = solve_equilibrium(distillation(R=R), ternary()).purity(0)
    column = distillation().with_(specifications=[DistillateRate(40.0), ProductPurity(target, 0, bounds=bounds)])
    assert solve_equilibrium(column, ternary()).L[0] / 40.0 == pytest.approx(R, rel=1e-6)


def test_a_jump_across_the_target_is_no_solution() -> None:
    def jumping(trial: Column, last: Profile | None) -> Profile:
        R = next(s.value for s in trial.specifications if isinstance(s, RefluxRatio))
        top = replace(BASE.products["top"], flows=40.0 * np.array([0.7, 0.2, 0.1] if R < 3.3 else [0.9, 0.05, 0.05]))
        return replace(BASE, products={**BASE.products, "top": top})

    column = distillation().with_(specifications=[DistillateRate(40.0), ProductPurity(0.8, 0)])
    with pytest.raises(NoSolutionError, match="the column jumps across it at RefluxRatio = 3.3"):
        with_search(column, jumping)


def test_a_search_uses_progress_and_start() -> None:
    column = distillation().with_(specifications=[DistillateRate(40.0), ProductPurity(0.8, 0)])
    seen: list[int] = []
    solve_equilibrium(column, ternary(), progress=lambda i, r: seen.append(i))
    assert len(seen) > 20
    with pytest.raises(InputError, match="start: a profile of 20 stages"):
        solve_equilibrium(column, ternary(), start=solve_equilibrium(distillation(20), ternary()))


def test_trials_that_cannot_be_made_are_passed_over() -> None:
    """Distillates above 70 mol/s leave nothing for the bottoms beside a draw: the search goes on without them."""
    column = distillation().with_(draws=[LiquidDraw(4, 30.0)], specifications=[
        RefluxRatio(2.5), ProductPurity(0.9, 1, bounds=(20.0, 90.0))])
    with pytest.raises(NoSolutionError, match=r"the best is .* trial columns were not solved"):
        solve_equilibrium(column, ternary())
    column = column.with_(specifications=[RefluxRatio(2.5), ProductPurity(0.9, 1, bounds=(75.0, 90.0))])
    with pytest.raises(InputError, match="nothing of the feed"):
        solve_equilibrium(column, ternary())


def test_one_efficiency_lets_the_most_abundant_component_follow() -> None:
    """Whichever component follows has the same efficiency; a trace as the last one must not be it."""
    y = np.array([[0.7, 0.3, 1e-20], [0.2, 0.7, 0.1]])
    at_bubble = uniform_murphree(0.7, y, EfficiencyBasis.BUBBLE_POINT, [True, True])
    assert list(at_bubble.dependent) == [0, 1] and (at_bubble.values == 0.7).all()
    own = uniform_murphree(0.7, y, EfficiencyBasis.LIQUID_TEMPERATURE, [True, True])
    assert list(own.dependent) == [-1, -1]
    free = solve_equilibrium(distillation(), ternary(), 0.7).efficiency().exact_murphree
    np.testing.assert_allclose(free, 0.7, rtol=1e-9)
