"""The same table under several correlation sets, side by side."""
from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np

from ..equipment import Hardware
from ..errors import ConvergenceError, InputError, NoPhysicalRootError
from ..properties.protocol import PropertyModel
from ..stage_profile import StageProfile
from .rating import RatingOptions, rate_rows

if TYPE_CHECKING:
    import pandas as pd


def compare_methods(profile: StageProfile, hardware: Mapping[str, Hardware], properties: PropertyModel,
                    options: RatingOptions | None = None) -> pd.DataFrame:
    """One row a stage, method and component: E (empty where flagged), eta, flux, HETP, and `failed` with the reason.

    hardware: label -> contactor or sections, the same column with other correlations. A set that does not apply to
    these stages (an `InputError` of a correlation, no solution) gives one row with the reason and stops no other.
    """
    import pandas as pd

    tables = []
    for label, contactor in hardware.items():
        try:
            r = rate_rows(profile, contactor, properties, options)
        except (InputError, ConvergenceError, NoPhysicalRootError) as error:
            tables.append(pd.DataFrame({"method": [label], "failed": [str(error)]}))
            continue
        R, n = r.murphree.shape
        HETP = np.full((R, n), np.nan)
        if r.packed is not None:
            HETP[r.packed.position] = np.where(r.packed.undefined, np.nan, r.packed.HETP)
        flooding = np.full(R, np.nan) if r.hydraulics.flooding is None else r.hydraulics.flooding
        tables.append(pd.DataFrame({
            "stage": np.repeat(r.number, n), "method": label, "component": list(r.names) * R,
            "E": np.where(r.flagged, np.nan, r.murphree).ravel(), "eta": r.vaporization.ravel(),
            "N_mol_m2_s": r.flux.ravel(), "HETP_m": HETP.ravel(), "flooding": np.repeat(flooding, n)}))
    return pd.concat(tables, ignore_index=True)


def spread(comparison: pd.DataFrame, figure: str = "E") -> pd.DataFrame:
    """Stage and component against method for one figure, with lowest, highest and their difference."""
    known = [column for column in comparison.columns if column not in ("stage", "method", "component", "failed")]
    if figure not in known:
        raise InputError(f"figure = {figure!r}: expected one of {', '.join(known)}")
    rows = comparison.dropna(subset=["stage"]) if "stage" in comparison else comparison
    wide = rows.pivot_table(index=["stage", "component"], columns="method", values=figure, sort=False, dropna=False)
    methods = list(wide.columns)
    wide["lowest"], wide["highest"] = wide[methods].min(axis=1), wide[methods].max(axis=1)
    wide["difference"] = wide["highest"] - wide["lowest"]
    return wide.reset_index()
