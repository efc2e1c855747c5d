"""Profiles: tables, files without loss, entropy, comparison."""
from __future__ import annotations

import json
from dataclasses import dataclass, fields, replace
from pathlib import Path
from typing import Any, cast

import numpy as np
import pandas as pd
import pytest
from columns import absorber, absorber_mixture, absorber_trays, distillation, ternary, trays

from ratebased.column import (
    Averaged,
    Column,
    DistillateRate,
    LiquidDraw,
    LiquidFeed,
    Plug,
    ProductPurity,
    Profile,
    VaporDraw,
    VaporFeed,
    compare,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.column.compare import FED_BACK, ONE_EFFICIENCY, RATE_BASED, key_components, stages_for_purity
from ratebased.efficiency_set import EfficiencySet
from ratebased.errors import InputError
from ratebased.properties import ConstantVolatility
from ratebased.properties.protocol import GAS_CONSTANT

RATE = solve_ratebased(distillation(), ternary(), trays())


def equal(a: object, b: object) -> bool:
    """Exactly equal, arrays and records of arrays included."""
    if isinstance(a, np.ndarray):
        return isinstance(b, np.ndarray) and np.array_equal(a, b)
    if hasattr(a, "__dataclass_fields__"):
        return all(equal(getattr(a, f.name), getattr(b, f.name)) for f in fields(a) if f.name != "properties")
    if isinstance(a, tuple):
        return isinstance(b, tuple) and len(a) == len(b) and all(equal(i, j) for i, j in zip(a, b))
    if isinstance(a, dict):
        return isinstance(b, dict) and a.keys() == b.keys() and all(equal(a[k], b[k]) for k in a)
    return bool(a == b)


@pytest.mark.parametrize("profile", [
    RATE, solve_equilibrium(distillation(14).with_(draws=[LiquidDraw(4, 5.0), VaporDraw(9, 3.0)]), ternary()),
    solve_ratebased(absorber(6, packed=True), absorber_mixture(), absorber_trays(6.0))], ids=["rate", "draws", "bed"])
def test_saved_and_loaded_without_loss(profile: Profile, tmp_path: Path) -> None:
    table, record = profile.save(tmp_path / "column")
    assert table.name == "column.csv" and record.name == "column.json"
    loaded = Profile.load(tmp_path / "column")
    assert equal(profile, loaded) and equal(profile, Profile.load(record))
    frame = pd.read_csv(table, float_precision="round_trip")
    pd.testing.assert_frame_equal(frame, profile.to_frame(), check_exact=True, check_dtype=False)
    if profile.contact is not None:
        model = profile.properties
        assert model is not None
        assert np.array_equal(loaded.efficiency(properties=model).vaporization, profile.efficiency().vaporization)
        with pytest.raises(InputError, match="a loaded profile holds no property model"):
            loaded.efficiency()


def test_load_refuses_other_files(tmp_path: Path) -> None:
    (tmp_path / "other.json").write_text("{}")
    with pytest.raises(InputError, match="not a column profile"):
        Profile.load(tmp_path / "other")
    with pytest.raises(InputError, match="nope.json: cannot be read"):
        Profile.load(tmp_path / "nope")
    _, record = RATE.save(tmp_path / "broken")
    whole = json.loads(record.read_text())
    for change, words in (({"report": None}, "a field is not what"), ({"x": "abc"}, "a field is not what")):
        record.write_text(json.dumps(whole | change))
        with pytest.raises(InputError, match=words):
            Profile.load(record)
    del whole["products"]
    record.write_text(json.dumps(whole))
    with pytest.raises(InputError, match="the field 'products' is missing"):
        Profile.load(record)
    record.write_text("{")
    with pytest.raises(InputError, match="cannot be read"):
        Profile.load(record)


def test_frame() -> None:
    frame = RATE.to_frame()
    assert list(frame.columns[:7]) == ["stage", "kind", "T_K", "T_vapor_K", "P_Pa", "L_mol_s", "V_mol_s"]
    assert {"x_light", "y_heavy", "T_interface_K", "flux_middle", "area_m2"} <= set(frame.columns)
    assert frame["V_mol_s"][0] == 0.0 and frame["L_mol_s"][0] == pytest.approx(100.0)
    assert frame["T_interface_K"].isna().tolist() == [True] + [False] * 10 + [True]


def test_other_models_are_refused() -> None:
    with pytest.raises(InputError, match="a model of air"):
        RATE.efficiency(properties=absorber_mixture())
    with pytest.raises(InputError, match="solve it rate-based"):
        solve_equilibrium(distillation(), ternary()).entropy_production()
    with pytest.raises(InputError, match="component 'water'"):
        RATE.purity("water")
    for component in (7, -1):
        with pytest.raises(InputError, match="component = .*0 to 2"):
            RATE.purity(component)
    with pytest.raises(InputError, match="product 'side': the column has top, bottom"):
        RATE.recovery(0, "side")
    for limit in (-1.0, float("nan")):
        with pytest.raises(InputError, match="limit"):
            RATE.efficiency(limit=limit)


def test_a_pole_of_murphree_is_no_number_to_feed_back() -> None:
    table = RATE.efficiency()
    i = (int(table.dependent[2]) + 1) % 3
    y_in = table.y_in.copy()
    y_in[2, i] = table.y_star[2, i]
    with pytest.raises(InputError, match=rf"stage 4: the Murphree efficiency of {RATE.names[i]} has a pole"):
        replace(table, y_in=y_in).murphree_set()


def one_gibbs_energy() -> ConstantVolatility:
    """K and enthalpies of one Gibbs energy: latent heat R b for all, cp_V = cp_L."""
    b = 4000.0
    return ConstantVolatility(["light", "middle", "heavy"], [4.0, 2.0, 1.0], GAS_CONSTANT * b, a=22.5, b=b,
                              vapor_heat_capacity=[75.0, 95.0, 115.0], liquid_heat_capacity=[75.0, 95.0, 115.0],
                              reference_temperature=350.0, vapor_molar_density=35.0, liquid_molar_density=9e3)


@pytest.mark.filterwarnings("ignore:.*share of the entering:ratebased.errors.ApproximationWarning")
@pytest.mark.parametrize("pattern", [None, Averaged(), Plug()], ids=["mixed", "averaged", "plug"])
def test_entropy_balance_closes(pattern: Averaged | Plug | None) -> None:
    """Against entropies written down by hand: s_L = cp ln(T/T_ref) - R ln x, s_V = s_L of the same x + R ln(K P x/(y
    P)).
    """
    model = one_gibbs_energy()
    column = distillation().with_(duties={4: 3e4})
    profile = solve_ratebased(column, model, trays(60.0), vapor=pattern, liquid=pattern)
    production = profile.entropy_production()
    cp, T_ref = model.liquid_cp, model.reference_temperature

    def liquid(flows: np.ndarray, T: float) -> float:
        return float(flows @ (cp * np.log(T / T_ref) - GAS_CONSTANT * np.log(flows / flows.sum())))

    def vapor(flows: np.ndarray, T: float, P: float) -> float:
        jump = GAS_CONSTANT * (np.log(model.volatility) + model.a - np.log(P))
        return float(flows @ (cp * np.log(T / T_ref) - GAS_CONSTANT * np.log(flows / flows.sum()) + jump))

    for k, j in enumerate(profile.contact_index):
        P = profile.P[j]
        v, l = profile.V[:, None] * profile.y, profile.L[:, None] * profile.x
        out = vapor(v[j], profile.T_V[j], P) + liquid(l[j], profile.T_L[j])
        into = vapor(v[j + 1], profile.T_V[j + 1], P) + liquid(l[j - 1], profile.T_L[j - 1])
        for feed, T, phase in ((profile.feeds.vapor[j], profile.feeds.vapor_temperature[j], True),
                               (profile.feeds.liquid[j], profile.feeds.liquid_temperature[j], False)):
            if feed.any():
                into += vapor(feed, T, P) if phase else liquid(feed, T)
        expected = out - into - profile.duty[j] / profile.contact.T_L_bulk[k]
        turnover = abs(out) + abs(into)
        assert abs(production.total[k] - expected) < 1e-12 * turnover
    parts = ["vapor_diffusion", "liquid_diffusion", "vapor_conduction", "liquid_conduction"]
    for part in parts + (["vapor_mixing", "liquid_mixing"] if pattern is None else []):
        assert (getattr(production, part) > -1e-12).all(), part
    assert np.abs(production.inconsistency).max() < 1e-9 * production.total.max()
    assert production.closure.max() < 1e-12
    assert len(production.to_frame()) == 10


def test_entropy_of_one_gibbs_energy() -> None:
    """All that is produced has a cause: nothing left over, no cause below zero; fluxes that are not those of the flows
    break the balance.
    """
    profile = solve_ratebased(distillation(), one_gibbs_energy(), trays(60.0))
    production = profile.entropy_production()
    turnover = 1e-12 * np.abs(profile.V[:, None] * profile.y)[profile.contact_index].sum(1) * 100.0     # 100 J/(mol K)
    assert (np.abs(production.inconsistency) < turnover).all()
    for part in ("vapor_diffusion", "liquid_diffusion", "vapor_conduction", "liquid_conduction", "vapor_mixing",
                 "liquid_mixing"):
        assert (getattr(production, part) >= -turnover).all(), part
    record = profile.record()
    assert production.closure.max() < 1e-12
    for changed in ({"N": 1.01 * record.N}, {"energy_flux": 1.01 * record.energy_flux}):
        wrong = replace(profile, contact=replace(record, **changed)).entropy_production()
        assert wrong.closure.max() > 1e-7, changed
    assert replace(profile, V=1.01 * profile.V).entropy_production().closure.max() > 1e-7


def test_inconsistent_properties_show() -> None:
    """Latent heats that are not R b: the films do not add up, and the term says so."""
    production = RATE.entropy_production()
    assert np.abs(production.inconsistency).max() > 1e-4 * production.total.max()
    assert production.closure.max() < 1e-12


def test_comparison() -> None:
    result = compare(distillation(), ternary(), trays())
    assert list(result.profiles) == [ONE_EFFICIENCY, FED_BACK, RATE_BASED]
    assert np.abs(result.profiles[FED_BACK].x - result.profiles[RATE_BASED].x).max() < 1e-8
    assert 0.3 < result.efficiency < 0.9 and result.efficiency_source.startswith("O'Connell")
    assert result.stages_needed[RATE_BASED] == result.stages_needed[FED_BACK] == 10
    assert any(s.startswith(FED_BACK) and "the same column" in s for s in result.differences)
    assert any("mole fraction" in s and "on stage" in s for s in result.differences)
    frame = result.to_frame()
    assert list(frame["model"]) == [ONE_EFFICIENCY, FED_BACK, RATE_BASED] and "condenser_duty_W" in frame
    assert len(result.profile_frame()) == 12
    given = compare(distillation(), ternary(), trays(), efficiency=0.6, count_stages=False)
    assert given.efficiency == 0.6 and given.efficiency_source == "given" and given.stages_needed == {}


def test_comparison_of_an_absorber_and_of_a_bed() -> None:
    result = compare(absorber(), absorber_mixture(), absorber_trays())
    assert "absorbers" in result.efficiency_source and result.purity[0] == "first"
    bed = compare(absorber(packed=True), absorber_mixture(), absorber_trays(6.0), count_stages=False)
    assert bed.efficiency_source.startswith("median of the segments")


def test_stages_for_a_purity() -> None:
    """More equilibrium stages, purer: the count is the first that reaches it."""
    def solve(n: int) -> Profile:
        return solve_equilibrium(distillation(n + 2), ternary())

    known = solve(10)
    target = solve(7).purity(0)
    assert stages_for_purity(solve, known, 0, "top", target) == 7
    assert stages_for_purity(solve, known, 0, "top", 0.99999) is None


def test_rounded_set_keeps_its_shape() -> None:
    efficiency = RATE.efficiency().murphree_set().rounded(3, 2)
    assert isinstance(efficiency, EfficiencySet)
    np.testing.assert_allclose(efficiency.values * 1e3, np.round(efficiency.values * 1e3), atol=1e-6)


def test_fewest_stages_that_reach_a_purity() -> None:
    """Few stages of a long column are enough; the count does not stop at an eighth of them."""
    def solve(n: int) -> Profile:
        return solve_equilibrium(distillation(n + 2), ternary())

    assert stages_for_purity(solve, solve(40), 0, "top", solve(3).purity(0)) == 3
    assert stages_for_purity(solve, solve(4), 0, "top", solve(9).purity(0)) == 9


@dataclass(frozen=True)
class _Known:
    """As much of a profile as the count asks for: a purity that need not rise with the stages."""

    stages: int
    purities: dict[int, float]
    contact_index: np.ndarray
    feeds: object
    duties: dict[str, float]

    def purity(self, component: int, product: str) -> float:
        return self.purities[self.stages]


def test_stage_count_of_a_purity_with_a_maximum() -> None:
    """The column's own purity is reached by the column itself, and a lower one with fewer stages is found too."""
    purities = {n: 0.9 - 0.01 * (n - 6) ** 2 for n in range(1, 40)}

    def column(n: int) -> Profile:
        return cast(Profile, _Known(n, purities, np.arange(n), RATE.feeds, RATE.duties))

    assert stages_for_purity(column, column(6), 0, "top", 0.9) == 6
    assert stages_for_purity(column, column(9), 0, "top", 0.9) == 6
    assert stages_for_purity(column, column(8), 0, "top", 0.86) == 4
    assert stages_for_purity(column, column(4), 0, "top", 0.88) == 5
    assert stages_for_purity(column, column(8), 0, "top", 0.95) is None


def test_comparison_of_a_column_with_sections() -> None:
    """Stage counts move the sections with the column."""
    result = compare(distillation(), ternary(), {(2, 6): trays(), (7, 11): trays(200.0)})
    assert result.stages_needed[RATE_BASED] == 10 and result.stages_needed[FED_BACK] == 10


def test_comparison_of_a_column_searched_for_a_purity() -> None:
    """Every number of stages meets the purity: no counts."""
    column = distillation().with_(specifications=[DistillateRate(40.0), ProductPurity(0.8, 0)])
    result = compare(column, ternary(), trays(400.0))
    assert result.stages_needed == {}
    for profile in result.profiles.values():
        assert profile.purity(0) == pytest.approx(0.8, rel=1e-8)


def test_comparison_of_one_stage() -> None:
    result = compare(absorber(1), absorber_mixture(), absorber_trays())
    assert result.stages_needed[RATE_BASED] == 1


def test_key_of_a_steam_stripper_is_what_is_stripped() -> None:
    """Much steam condenses, but it is the solute of which most changes phase."""
    model = ConstantVolatility(["solute", "water"], [40.0, 1.0], [35e3, 41e3], a=24.5, b=4850.0,
                               vapor_heat_capacity=[90.0, 34.0], liquid_heat_capacity=[150.0, 75.0],
                               reference_temperature=350.0, vapor_molar_density=35.0, liquid_molar_density=4e4)
    column = Column(8, [LiquidFeed(1, [1.0, 99.0], 350.0), VaporFeed(8, [0.0, 20.0], 375.0)], 101325.0)
    profile = solve_equilibrium(column, model)
    condensed = 20.0 - profile.products["top"].flows[1]
    assert condensed > 1.0 > profile.products["top"].flows[0] > 0.9
    assert key_components(profile) == (0, 0)


@pytest.mark.parametrize("arguments, words", [
    ({"product": "side"}, "product = 'side'"), ({"purity": 2.0}, "purity = 2.0: expected a number between 0 and 1"),
    ({"efficiency": float("nan")}, "efficiency")])
def test_what_cannot_be_compared(arguments: dict[str, Any], words: str) -> None:
    with pytest.raises(InputError, match=words):
        compare(distillation(), ternary(), trays(), **arguments)
