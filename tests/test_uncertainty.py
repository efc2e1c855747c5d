"""Intervals and shares: no spread without uncertainty, one input at a time, repeatable, against separate runs."""
from __future__ import annotations

import numpy as np
import pytest
from test_rating import KAPPA_L, KAPPA_V, NAMES, contactor, feeds, frame, model

from ratebased import FixedCoefficients, InputError, StageProfile, efficiency_table
from ratebased.efficiency import Uncertainty, rate_rows, sample_rows

NOTHING = dict(vapor=0.0, liquid=0.0, area=0.0, vapor_diffusivity=0.0, liquid_diffusivity=0.0, k_value=0.0)


def profile() -> StageProfile:
    return StageProfile.from_frame(frame(), NAMES, feeds=feeds())


def test_no_uncertainty_no_spread() -> None:
    u = sample_rows(profile(), contactor(), model(), Uncertainty(**NOTHING, samples=16))
    plain = rate_rows(profile(), contactor(), model())
    for quantile in (u.murphree.p05, u.murphree.p50, u.murphree.p95):
        assert np.allclose(quantile, plain.murphree, rtol=1e-8)


def test_one_input_has_all_the_variance_and_the_right_spread() -> None:
    u = sample_rows(profile(), contactor(), model(), Uncertainty(**{**NOTHING, "vapor": 0.1}, samples=64))
    share = u.shares[..., u.inputs.index("vapor")]
    assert (share > 0.95).all() and (u.explained > 0.95).all()
    # the change with the coefficient, by two separate runs one standard deviation apart
    up, down = (rate_rows(profile(), FixedCoefficients(KAPPA_V * f, KAPPA_L, 30.0, h_vapor=50.0 * f, h_liquid=1500.0),
                          model()).murphree for f in (1.1, 1 / 1.1))
    width = (u.murphree.p95 - u.murphree.p05) / (2 * 1.645)
    assert np.allclose(width, np.abs(up - down) / 2, rtol=0.12)


def test_k_values_move_y_star_and_the_interface_together() -> None:
    """Only one K uncertain: the spread of the change against two runs of a model with that volatility."""
    u = sample_rows(profile(), contactor(), model(), Uncertainty(**{**NOTHING, "k_value": 0.02}, samples=256))
    assert {name for name in u.inputs if name.startswith("K ")} == {f"K {name}" for name in NAMES}
    width = (u.change.p95 - u.change.p05) / (2 * 1.645)
    variance = np.zeros_like(width)
    for i in range(3):
        ends = []
        for factor in (1.02, 1 / 1.02):
            m = model()
            m.volatility = m.volatility * np.where(np.arange(3) == i, factor, 1.0)
            ends.append(rate_rows(profile(), contactor(), m).y_out)
        variance += ((ends[0] - ends[1]) / 2) ** 2
    assert np.allclose(width, np.sqrt(variance), rtol=0.15)


def test_same_seed_same_figures() -> None:
    one, two, other = (sample_rows(profile(), contactor(), model(), Uncertainty(samples=16, seed=seed))
                       for seed in (3, 3, 4))
    assert np.array_equal(one.murphree.p05, two.murphree.p05)
    assert not np.array_equal(one.murphree.p05, other.murphree.p05)
    assert one.assumed == ("liquid", "vapor")


def test_columns_of_the_table() -> None:
    table = efficiency_table(profile(), contactor(), model(), uncertainty=Uncertainty(samples=16))
    columns = table.to_frame().columns
    for name in NAMES:
        assert {f"E_p05_{name}", f"E_p95_{name}", f"dy_p50_{name}", f"P_negative_{name}",
                f"dominating_{name}"} <= set(columns)
    assert "dominated by" in table.sentence(1, "light")


def test_bad_arguments() -> None:
    with pytest.raises(InputError, match="samples = 100: expected a power of two"):
        Uncertainty(samples=100)
    with pytest.raises(InputError, match="vapor = -0.1"):
        Uncertainty(vapor=-0.1)
