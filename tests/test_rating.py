"""The efficiency table over a profile: what is fixed, what closes, what does not depend on the order of components."""
from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from ratebased import (
    ConstantVolatility,
    FixedCoefficients,
    InputError,
    ProfileDraw,
    ProfileFeed,
    RatingOptions,
    Section,
    StageProfile,
    efficiency_table,
    integral,
)
from ratebased.efficiency import (
    Uncertainty,
    compare_methods,
    equilibrium_vapor,
    rate_rows,
    sample_rows,
    small_driving_force,
    spread,
)
from ratebased.efficiency.rating import bulk_states, entering_streams
from ratebased.properties import bubble_point
from ratebased.stage import Pools, WellMixed

NAMES = ["light", "middle", "heavy"]
KAPPA_V = np.array([[1.0, 0.012, 0.03], [0.012, 1.0, 0.02], [0.03, 0.02, 1.0]])
KAPPA_L = np.array([[1.0, 1.2e-4, 3e-4], [1.2e-4, 1.0, 2e-4], [3e-4, 2e-4, 1.0]])


def model(order: list[int] | None = None) -> ConstantVolatility:
    order = [0, 1, 2] if order is None else order
    alpha, latent = np.array([2.8, 1.2, 0.5]), np.array([3.1e4, 3.3e4, 3.6e4])
    return ConstantVolatility([NAMES[i] for i in order], alpha[order], latent[order], a=22.6, b=4000.0,
                              vapor_heat_capacity=80.0, liquid_heat_capacity=130.0, reference_temperature=350.0)


def contactor(order: list[int] | None = None) -> FixedCoefficients:
    order = [0, 1, 2] if order is None else order
    return FixedCoefficients(KAPPA_V[np.ix_(order, order)], KAPPA_L[np.ix_(order, order)], 30.0, h_vapor=50.0,
                             h_liquid=1500.0)


def frame() -> pd.DataFrame:
    """Equilibrium stages at total reflux: the vapour entering a stage is the liquid leaving it."""
    m = model()
    x = np.array([0.15, 0.35, 0.5])
    rows = []
    for _ in range(5):
        T, y = bubble_point(m, 101325.0, x)
        rows.append((float(T), x, y))
        x = y
    rows.reverse()
    table = pd.DataFrame({"stage": np.arange(1, 6), "T_K": [r[0] for r in rows], "P_Pa": 101325.0, "L_mol_s": 10.0,
                          "V_mol_s": 10.0, "kind": ["tray"] * 4 + ["reboiler"]})
    for i, name in enumerate(NAMES):
        table[f"x_{name}"], table[f"y_{name}"] = [r[1][i] for r in rows], [r[2][i] for r in rows]
    return table


def feeds() -> tuple[ProfileFeed, ...]:
    table = frame()
    top = table[[f"y_{name}" for name in NAMES]].to_numpy()[0]
    return (ProfileFeed(1, "liquid", 10.0, top, float(table["T_K"][0])),)


def test_what_is_fixed_and_what_closes() -> None:
    rows = efficiency_table(frame(), contactor(), model(), feeds=feeds(), options=RatingOptions(point=integral)).rows
    assert rows.number.tolist() == [1, 2, 3, 4]
    assert np.allclose(rows.x, frame()[[f"x_{n}" for n in NAMES]].to_numpy()[:4])
    assert np.allclose(rows.y_in, rows.x, atol=1e-12)
    for closure in (rows.component_closure, rows.energy_closure, rows.interface_residual, rows.energy_residual):
        assert closure.max() < 1e-9
    independent = (rows.murphree * (rows.y_star - rows.y_in)).sum(-1)
    assert np.abs(independent).max() < 1e-12
    K = model().k_value(rows.T_L, rows.P, rows.x, rows.y_out)
    assert np.allclose(rows.vaporization * K * rows.x, rows.y_out, rtol=1e-13)


def test_order_of_components_gives_the_same_table() -> None:
    order = [2, 0, 1]
    one = rate_rows(StageProfile.from_frame(frame(), NAMES, feeds=feeds()), contactor(), model())
    swapped = tuple(ProfileFeed(f.stage, f.phase, f.flow, f.composition[order], f.temperature) for f in feeds())
    profile = StageProfile.from_frame(frame(), [NAMES[i] for i in order], feeds=swapped)
    two = rate_rows(profile, contactor(order), model(order))
    assert np.abs(one.murphree[:, order] - two.murphree).max() < 1e-8
    assert np.abs(one.flux[:, order] - two.flux).max() < 1e-9 * np.abs(one.flux).max()


def test_rows_do_not_depend_on_their_neighbours_in_the_batch() -> None:
    table = frame()
    whole = efficiency_table(table, contactor(), model(), feeds=feeds()).rows
    part = StageProfile.from_frame(table.iloc[1:].reset_index(drop=True), NAMES, feeds=[ProfileFeed(
        2, "liquid", 10.0, table[[f"x_{n}" for n in NAMES]].to_numpy()[0], float(table["T_K"][0]))])
    assert np.allclose(rate_rows(part, contactor(), model()).murphree, whole.murphree[1:], rtol=1e-9)


def test_sections_give_each_stage_its_contactor() -> None:
    sections = [Section(1, 2, contactor()), Section(3, 4, FixedCoefficients(
        KAPPA_V, KAPPA_L, 3.0, h_vapor=50.0, h_liquid=1500.0))]
    rows = efficiency_table(frame(), sections, model(), feeds=feeds()).rows
    assert rows.area.tolist() == [30.0, 30.0, 3.0, 3.0]
    assert rows.murphree[3].max() < rows.murphree[1].min()
    with pytest.raises(InputError, match="hardware, stage 4: no section"):
        efficiency_table(frame(), sections[:1] + [Section(3, 3, contactor())], model(), feeds=feeds())
    with pytest.raises(InputError, match="hardware, stage 2: more than one"):
        efficiency_table(frame(), [*sections, Section(2, 2, contactor())], model(), feeds=feeds())


def test_a_missing_feed_is_named() -> None:
    with pytest.raises(InputError, match="balance of .* round stage 1 is open"):
        efficiency_table(frame(), contactor(), model())
    with pytest.raises(InputError, match="no liquid enters stage 1: list its feed"):
        efficiency_table(StageProfile.from_frame(frame(), NAMES, balance_tolerance=20.0), contactor(), model())


def test_components_must_match() -> None:
    with pytest.raises(InputError, match="components"):
        rate_rows(StageProfile.from_frame(frame(), NAMES, feeds=feeds()), contactor(), model([1, 0, 2]))


def test_mixing_raises_the_efficiency_and_is_reported() -> None:
    """A binary-like tray: more pools, more Murphree efficiency (Lewis 1936, case 1 is the limit)."""
    plain = RatingOptions(mixing=WellMixed())
    mixed = efficiency_table(frame(), contactor(), model(), feeds=feeds(), options=plain).rows
    pools = efficiency_table(frame(), contactor(), model(), feeds=feeds(),
                             options=RatingOptions(mixing=Pools(np.full(4, 3.0)))).rows
    assert (pools.murphree[:, 0] > mixed.murphree[:, 0]).all()
    assert pools.pools.tolist() == [3.0] * 4


def test_small_driving_forces_are_flagged_not_printed() -> None:
    """A limit above every driving force: no figure for E in the frame, the change in brackets in print."""
    options = RatingOptions(driving_force_limit=2.0)
    table = efficiency_table(frame(), contactor(), model(), feeds=feeds(), options=options)
    assert table.rows.flagged.all()
    columns = table.to_frame()
    assert columns[[f"E_{name}" for name in NAMES]].isna().all().all()
    assert np.allclose(columns["dy_light"], table.rows.y_out[:, 0] - table.rows.y_in[:, 0])
    row = next(line for line in str(table).splitlines() if line.split()[:1] == ["1"])
    assert row.count("[") == 3 and "driving force too small" in row
    y_in, star = np.array([0.2, 0.3, 0.0]), np.array([0.2019, 0.35, 0.0])
    assert small_driving_force(y_in, star).tolist() == [True, False, True]


def absent(order: list[int]) -> tuple[pd.DataFrame, list[str], ConstantVolatility, FixedCoefficients, ProfileFeed]:
    """The same column with a fourth component that is not there, components in some order."""
    names = [[*NAMES, "absent"][i] for i in order]
    table = frame()
    table["x_absent"] = table["y_absent"] = 0.0
    alpha, latent = np.array([2.8, 1.2, 0.5, 0.9]), np.array([3.1e4, 3.3e4, 3.6e4, 3.2e4])
    m = ConstantVolatility(names, alpha[order], latent[order], a=22.6, b=4000.0, vapor_heat_capacity=80.0,
                           liquid_heat_capacity=130.0, reference_temperature=350.0)
    kappa_v, kappa_l = np.full((4, 4), 0.015), np.full((4, 4), 1.5e-4)
    kappa_v[:3, :3], kappa_l[:3, :3] = KAPPA_V, KAPPA_L
    hardware = FixedCoefficients(kappa_v[np.ix_(order, order)], kappa_l[np.ix_(order, order)], 30.0, h_vapor=50.0,
                                 h_liquid=1500.0)
    f = feeds()[0]
    feed = ProfileFeed(1, "liquid", f.flow, np.append(f.composition, 0.0)[order], f.temperature)
    return table, names, m, hardware, feed


@pytest.mark.parametrize("order", [[0, 1, 2, 3], [3, 0, 1, 2], [0, 3, 1, 2]])
def test_an_absent_component_changes_nothing(order: list[int]) -> None:
    options = RatingOptions(mixing=Pools(np.array(5.0)))
    plain = efficiency_table(frame(), contactor(), model(), feeds=feeds(), options=options).rows
    table, names, m, hardware, feed = absent(order)
    rows = efficiency_table(table, hardware, m, feeds=(feed,), options=options).rows
    for i, name in enumerate(NAMES):
        assert np.allclose(rows.murphree[:, names.index(name)], plain.murphree[:, i], rtol=1e-8)
    k = names.index("absent")
    assert rows.flagged[:, k].all() and (rows.y_out[:, k] == 0).all() and not rows.notes


def test_side_draws_and_side_feeds_reach_the_stage() -> None:
    """The vapour on a stage includes what is drawn from it; a liquid feed changes the entering temperature."""
    table = frame()
    x = table[[f"x_{n}" for n in NAMES]].to_numpy()
    cold = ProfileFeed(3, "liquid", 5.0, x[1], 300.0)
    profile = StageProfile.from_frame(table, NAMES, feeds=[*feeds(), cold], draws=[ProfileDraw(2, "vapor", 4.0)],
                                      balance_tolerance=10.0 - 1e-9)
    rows, entering = entering_streams(profile, model())
    H = (15.0 * entering.x[2] * model().liquid_enthalpy(entering.T_L[2:3], profile.P[2:3], entering.x[2:3])[0]).sum()
    parts = ((10.0, profile.x[1], profile.T_L[1]), (5.0, x[1], 300.0))
    expected = sum((flow * z * model().liquid_enthalpy(np.full(1, T), np.full(1, 1e5), z[None])[0]).sum()
                   for flow, z, T in parts)
    assert H == pytest.approx(expected, rel=1e-9)
    bulk = bulk_states(profile, rows, entering, np.zeros(4, bool))
    assert bulk.V[1] == pytest.approx((10.0 + 14.0) / 2)


def test_local_coefficients_are_sampled_too() -> None:
    """Coefficients re-evaluated up the froth carry their uncertainty."""
    profile = StageProfile.from_frame(frame(), NAMES, feeds=feeds())
    spread = Uncertainty(vapor=0.3, liquid=0.3, vapor_diffusivity=0.0, liquid_diffusivity=0.0, k_value=0.0, samples=16)
    widths = []
    for local in (False, True):
        u = sample_rows(profile, contactor(), model(), spread, RatingOptions(local_coefficients=local))
        widths.append(u.change.p95 - u.change.p05)
    assert np.allclose(widths[0], widths[1], rtol=0.05)  # the vapour's density is now the local one


def test_methods_side_by_side() -> None:
    profile = StageProfile.from_frame(frame(), NAMES, feeds=feeds())
    hardware = {"one": contactor(), "two": FixedCoefficients(KAPPA_V, KAPPA_L, 15.0, h_vapor=50.0, h_liquid=1500.0),
                "none": [Section(1, 2, contactor())]}
    table = compare_methods(profile, hardware, model())
    assert table.loc[table["method"] == "none", "failed"].str.contains("no section").all()
    wide = spread(table)
    assert len(wide) == 12 and (wide["difference"] >= 0).all() and (wide["one"] > wide["two"]).mean() > 0.9
    with pytest.raises(InputError, match="figure = 'speed'"):
        spread(table, "speed")


def test_basis_of_y_star_with_a_gas_that_does_not_condense() -> None:
    m = ConstantVolatility(["gas", "a", "b"], [1.0, 3.0, 0.5], 3e4, a=22.6, b=4000.0, condensable=[False, True, True])
    x, y_in = np.array([[0.0, 0.4, 0.6]]), np.array([[0.7, 0.1, 0.2]])
    star = equilibrium_vapor(m, np.full(1, 1e5), x, np.full(1, 310.0), y_in)
    K = m.k_value(np.full(1, 310.0), np.full(1, 1e5), x, y_in)
    assert star.basis == "liquid temperature"
    assert np.allclose(star.composition[0, 1:], (K * x)[0, 1:])
    assert star.composition.sum() == pytest.approx(1.0)


def test_absorber_segments_against_the_number_of_transfer_units() -> None:
    """A dilute absorber with straight lines: N_OV from Colburn's integral over the bed is K_OV a Z/V.

    Colburn, Trans. AIChE 35 (1939) 211; 1/K_OV = 1/(c_V kappa_V) + m/(c_L kappa_L). Rows are exact ends of a bed
    of eight equal segments.
    """
    m = ConstantVolatility(["gas", "solute", "water"], [1.0, 2.0, 0.01], 0.0, a=np.log(1e5) + 4000.0 / 300.0, b=4000.0,
                           condensable=[False, True, True], volatile=[True, True, False], vapor_molar_density=40.0,
                           liquid_molar_density=5.5e4, reference_temperature=300.0)
    V, L, slope, kappa_v, kappa_l, segments = 10.0, 30.0, 2.0, 0.02, 1e-4, 8
    area = 12.0
    K_OV = 1.0 / (1.0 / (40.0 * kappa_v) + slope / (5.5e4 * kappa_l))
    N = K_OV * area / V
    S = slope * V / L
    q = np.exp(-N * (1 - S))
    y = np.empty(segments + 1)
    y[segments] = 1e-6
    # y(z) - m x(z) falls by q a segment, V dy = L dx, x = 0 at the top
    drive = y[segments] * (1 - S) / (1 - S * q**segments) * q ** np.arange(segments, -1, -1)[::-1]
    top = drive[segments]
    y = (drive[::-1] - S * top) / (1 - S)
    x = (y - y[0]) * V / L
    table = pd.DataFrame({"stage": np.arange(1, segments + 1), "T_K": 300.0, "P_Pa": 1e5, "L_mol_s": L, "V_mol_s": V,
                          "height_m": 0.5, "y_gas": 1 - y[:-1], "y_solute": y[:-1], "y_water": 0.0, "x_gas": 0.0,
                          "x_solute": x[1:], "x_water": 1 - x[1:]})
    streams = (ProfileFeed(1, "liquid", L, np.array([0.0, 0.0, 1.0]), 300.0),
               ProfileFeed(segments, "vapor", V, np.array([1 - y[-1], y[-1], 0.0]), 300.0))
    hardware = FixedCoefficients(kappa_v, kappa_l, area, h_vapor=50.0, h_liquid=1500.0)
    rows = efficiency_table(table, hardware, m, feeds=streams).rows
    assert rows.packed is not None
    assert np.allclose(rows.packed.N_OV[:, 1], N, rtol=0.02)
    assert rows.packed.N_OV[:, 1].sum() == pytest.approx(segments * N, rel=0.01)
    HETP = 0.5 / N * np.log(S) / (S - 1)
    assert np.allclose(rows.packed.HETP[:, 1], HETP, rtol=0.02)
