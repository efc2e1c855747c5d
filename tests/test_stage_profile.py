"""Profiles that are read, and profiles that are refused with file, row, column and value."""
from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from ratebased import InputError, ProfileDraw, ProfileFeed, StageProfile
from ratebased.errors import PlausibilityWarning

NAMES = ("acetone", "ethanol", "water")


def frame(**changes: object) -> pd.DataFrame:
    """Three stages in balance: the same liquid and vapour everywhere, equal flows."""
    x, y = [0.2, 0.3, 0.5], [0.4, 0.35, 0.25]
    data: dict[str, object] = {"stage": [1, 2, 3], "T_K": [340.0, 341.0, 342.0], "P_Pa": [1e5] * 3,
                               "L_mol_s": [10.0] * 3, "V_mol_s": [12.0] * 3}
    for i, name in enumerate(NAMES):
        data[f"x_{name}"], data[f"y_{name}"] = [x[i]] * 3, [y[i]] * 3
    data |= changes
    return pd.DataFrame(data)


FEEDS = (ProfileFeed(1, "liquid", 10.0, np.array([0.2, 0.3, 0.5]), 340.0),
         ProfileFeed(3, "vapor", 12.0, np.array([0.4, 0.35, 0.25]), 343.0))


def read(table: pd.DataFrame, **options: object) -> StageProfile:
    return StageProfile.from_frame(table, NAMES, feeds=options.pop("feeds", FEEDS), source="p.csv", **options)


def test_a_balanced_profile_is_read() -> None:
    profile = read(frame())
    assert profile.contact.all()
    assert np.abs(profile.component_balance()).max() < 1e-12
    assert (profile.T_V == profile.T_L).all()


def test_draws_enter_the_balance() -> None:
    table = frame(L_mol_s=[10.0, 8.0, 8.0])
    profile = read(table, draws=[ProfileDraw(2, "liquid", 2.0)])
    assert np.abs(profile.component_balance()).max() < 1e-12


BAD = [
    (frame(stage=[1, 3, 4]), r"p\.csv, row 2, column stage: 3: stages must be consecutive, expected 2"),
    (frame(stage=[1, 2.5, 3]), r"row 2, column stage: 2.5: expected a whole number"),
    (frame(T_K=[67.0, 68.0, 69.0]), r"row 1, column T_K: 67.*degrees Celsius"),
    (frame(T_K=[340.0, np.nan, 342.0]), r"row 2, column T_K: nan: expected a finite number"),
    (frame(P_Pa=[101.3] * 3), r"row 1, column P_Pa: 101.3.*kPa"),
    (frame(L_mol_s=[10.0, 0.0, 10.0]), r"row 2, column L_mol_s: 0.*above zero"),
    (frame(V_mol_s=[12.0, "twelve", 12.0]), r"row 2, column V_mol_s: twelve: expected a finite number"),
    (frame(x_water=[0.5, -0.5, 0.5]), r"row 2, column x_water: -0.5.*between 0 and 1"),
    (frame(y_water=[0.25, 0.25, 0.35]), r"row 3, column y_.*sum 1.1.*must sum to one within"),
    (frame(kind=["tray", "plate", "tray"]), r"row 2, column kind: plate: expected one of tray, segment"),
    (frame().drop(columns="x_ethanol"), r"column x_ethanol is missing"),
    (frame(x_methanol=[0.0] * 3), r"column x_methanol names a component that is not in the mixture"),
    (frame(L_mol_s=[10.0, 13.0, 10.0]), r"row \d, column x_\w+.*balance of \w+ round stage \d is open"),
    (frame(kind=["condenser", "reboiler", "reboiler"]), r"no contact stage"),
    (frame(height_m=[0.5, -1.0, 0.5]), r"row 2, column height_m: -1.*above zero"),
    (frame().iloc[:0], r"no rows"),
]


@pytest.mark.parametrize(("table", "message"), BAD, ids=range(len(BAD)))
def test_bad_profiles_are_refused(table: pd.DataFrame, message: str) -> None:
    with pytest.raises(InputError, match=message):
        read(table)


def test_bad_streams_are_refused() -> None:
    with pytest.raises(InputError, match="feed: stage 9 is not in p.csv, which has stages 1 to 3"):
        read(frame(), feeds=[ProfileFeed(9, "liquid", 1.0, np.ones(3) / 3, 340.0)])
    with pytest.raises(InputError, match="phase = 'steam', expected 'vapor' or 'liquid'"):
        read(frame(), feeds=[*FEEDS, ProfileFeed(2, "steam", 1.0, np.ones(3) / 3, 340.0)])
    with pytest.raises(InputError, match="flow = -1.0, expected a number above zero"):
        read(frame(), draws=[ProfileDraw(2, "liquid", -1.0)])


@pytest.mark.parametrize(("change", "message"), [
    ({"composition": np.array([np.nan, 0.5, 0.5])}, r"feed to stage 3: composition\[0\] = nan"),
    ({"composition": np.array([0.5, 0.5])}, "expected 3 components"),
    ({"composition": np.array([0.5, 0.4, 0.3])}, "sum to 1.2"),
    ({"temperature": 68.0}, "feed to stage 3: temperature = 68.0"), ({"flow": np.inf}, "flow = inf")])
def test_bad_feeds_are_refused(change: dict[str, object], message: str) -> None:
    fields = {"stage": 3, "phase": "vapor", "flow": 12.0, "composition": np.array([0.4, 0.35, 0.25]),
              "temperature": 343.0} | change
    with pytest.raises(InputError, match=message):
        read(frame(), feeds=[FEEDS[0], ProfileFeed(**fields)])


def test_a_list_will_do_for_a_composition() -> None:
    assert read(frame(), feeds=[FEEDS[0], ProfileFeed(3, "vapor", 12.0, [0.4, 0.35, 0.25], 343.0)]).contact.all()


def test_heights_are_asked_of_segments_only() -> None:
    profile = read(frame(kind=["tray", "segment", "tray"], height_m=[np.nan, 0.5, np.nan]))
    assert profile.height is not None and profile.height.tolist() == [0.0, 0.5, 0.0]


def test_a_total_condenser_may_stand_still() -> None:
    """No flow at all through a row that is no contact stage: nothing to divide by, nothing said."""
    table = pd.concat([frame().iloc[[0]], frame()], ignore_index=True)
    table["stage"], table["kind"] = [1, 2, 3, 4], ["condenser", "tray", "tray", "tray"]
    table.loc[0, ["L_mol_s", "V_mol_s"]] = [10.0, 0.0]
    feeds = [ProfileFeed(4, "vapor", 12.0, np.array([0.4, 0.35, 0.25]), 343.0)]
    assert read(table, feeds=feeds).kind[0] == "condenser"


def test_a_sum_off_by_rounding_warns_and_is_renormalised() -> None:
    table = frame(x_water=[0.50005, 0.5, 0.5])
    with pytest.warns(PlausibilityWarning, match="renormalised"):
        profile = read(table)
    assert np.abs(profile.x.sum(-1) - 1).max() < 1e-15


def test_a_small_open_balance_warns() -> None:
    with pytest.warns(PlausibilityWarning, match="is open by"):
        read(frame(L_mol_s=[10.0, 10.1, 10.0]))
