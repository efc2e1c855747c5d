"""The efficiency table: rated rows as a DataFrame, as text and as files, with everything a reader needs beside them."""
from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from ..equipment import Hardware
from ..properties.protocol import Array, PropertyModel
from ..stage_profile import ProfileDraw, ProfileFeed, StageProfile
from .rating import RatedRows, RatingOptions, rate_rows

if TYPE_CHECKING:
    import pandas as pd

CAUTION = ("Screening and design aid. Published correlations scatter by tens of per cent; verify hydraulics, "
           "materials, relief and safety with licensed practice and local codes before anything is built or changed.")

LEGEND = (
    "E: Murphree vapour efficiency (y_out - y_in)/(y* - y_in), y* at the {basis} of the leaving liquid; only n-1 of a "
    "stage are independent (sum of E (y* - y_in) is zero). [..]: y_out - y_in where |y* - y_in| is too small for E to "
    "mean anything. eta: vaporisation efficiency y_out/(K x), K at the leaving liquid's temperature; with the "
    "superheat it reproduces the stage in an equilibrium-stage column. N: mean flux from vapour to liquid, "
    "mol/(m2 s) of {area}.")


@dataclass(frozen=True)
class EfficiencyTable:
    """Component efficiencies of every contact row of a profile.

    rows : all arrays. source : where the profile is from.
    """

    rows: RatedRows
    source: str

    @property
    def distance(self) -> Array:
        """Largest |y_out - y| of each row between the vapour computed and the profile's own, (R,)."""
        return np.abs(self.rows.y_out - self.rows.y_profile).max(-1)

    def flags(self) -> list[str]:
        """One text a row: what to know before using its figures."""
        r = self.rows
        texts: list[list[str]] = [[] for _ in r.number]
        sound = r.ordinary & ~r.flagged
        for where, words in ((r.ordinary & r.flagged, "driving force too small"),
                             (sound & (r.murphree < 0), "negative"), (sound & (r.murphree > 1), "above one")):
            for j in np.flatnonzero(where.any(-1)):
                texts[j].append(f"{', '.join(np.array(r.names)[where[j]])}: {words}")
        for limit, words in (("flooding", "above flooding"), ("weeping", "weeping"), ("downcomer", "downcomer full")):
            value = getattr(r.hydraulics, limit)
            if value is not None:
                for j in np.flatnonzero(value > 1):
                    texts[j].append(words)
        for note, where in r.notes.items():
            for j in np.flatnonzero(where):
                texts[j].append(note)
        return ["; ".join(text) for text in texts]

    def to_frame(self) -> pd.DataFrame:
        """One row a stage.

        `stage, kind, T_K, P_Pa, flooding, superheat_K`, then for each component `E_<name>` (empty where flagged),
        `eta_<name>`, `N_<name>_mol_m2_s`; then `T_vapor_K`, the offsets `T_vapor_minus_bubble_K` and
        `T_liquid_minus_bubble_K` (bubble-point basis), `dependent` (the component whose Murphree efficiency follows
        from the others), `dy_<name>` = y_out - y_in, y_in, y_out, y_star, flows, area, pools, hydraulics, transfer
        units of packed rows, residuals, `distance_y` and `flags`.
        """
        import pandas as pd

        r = self.rows
        limits = r.hydraulics
        columns: dict[str, Any] = {
            "stage": r.number, "kind": list(r.kind), "T_K": r.T_L, "P_Pa": r.P,
            "flooding": limits.flooding if limits.flooding is not None else [None] * r.number.size,
            "superheat_K": r.T_V - r.T_L}
        for i, name in enumerate(r.names):
            columns[f"E_{name}"] = np.where(r.flagged[:, i], np.nan, r.murphree[:, i])
            columns[f"eta_{name}"] = r.vaporization[:, i]
            columns[f"N_{name}_mol_m2_s"] = r.flux[:, i]
        columns["T_vapor_K"] = r.T_V
        if r.T_bubble is not None:
            columns["T_vapor_minus_bubble_K"] = r.T_V - r.T_bubble
            columns["T_liquid_minus_bubble_K"] = r.T_L - r.T_bubble
        columns["dependent"] = [r.names[i] for i in r.dependent]
        for label, values in (("dy", r.y_out - r.y_in), ("y_in", r.y_in), ("y_out", r.y_out), ("y_star", r.y_star)):
            for i, name in enumerate(r.names):
                columns[f"{label}_{name}"] = values[:, i]
        columns |= {"V_in_mol_s": r.V_in, "V_out_mol_s": r.V_out, "area_m2": r.area, "pools": r.pools,
                    "heat_to_liquid_W": r.energy}
        for label in ("pressure_drop", "liquid_holdup", "weeping", "downcomer", "entrainment"):
            value = getattr(limits, label)
            if value is not None:
                columns[label] = value
        columns |= self._packed_columns()
        columns |= {"vapor_film_share": r.vapor_entropy_share, "distance_y": self.distance,
                    "interface_residual": r.interface_residual, "energy_residual": r.energy_residual,
                    "component_closure": r.component_closure, "energy_closure": r.energy_closure,
                    "flags": self.flags()}
        return pd.DataFrame(columns)

    def _packed_columns(self) -> dict[str, Array]:
        packed = self.rows.packed
        if packed is None:
            return {}
        columns: dict[str, Array] = {}

        def spread(values: Array) -> Array:
            full = np.full(self.rows.number.size, np.nan)
            full[packed.position] = values
            return full

        columns["height_m"] = spread(packed.height)
        for i, name in enumerate(self.rows.names):
            columns[f"HETP_{name}_m"] = spread(np.where(packed.undefined[:, i], np.nan, packed.HETP[:, i]))
            for label in ("H_OV", "H_V", "H_L"):
                columns[f"{label}_{name}_m"] = spread(getattr(packed, label)[:, i])
            for label in ("N_OV", "N_V", "N_L"):
                columns[f"{label}_{name}"] = spread(getattr(packed, label)[:, i])
        return columns

    def legend(self) -> str:
        """What the columns of the printed table mean."""
        areas = " / ".join(sorted(set(self.rows.area_basis)))
        text = LEGEND.format(basis=self.rows.star_basis, area=areas)
        if self.rows.packed is not None:
            text += (" HETP: height equivalent to a theoretical plate of each component, m; empty where it has no "
                     "value.")
        return text

    def to_markdown(self) -> str:
        """The table as Markdown, with legend and caution."""
        lines = self._cells()
        widths = [max(len(row[k]) for row in lines) for k in range(len(lines[0]))]
        text = ["| " + " | ".join(cell.rjust(width) for cell, width in zip(row, widths)) + " |" for row in lines]
        text.insert(1, "|" + "|".join("-" * (width + 1) + ":" for width in widths) + "|")
        return "\n".join([*text, "", self.legend(), "", CAUTION, ""])

    def to_text(self) -> str:
        """The table for a terminal."""
        import textwrap

        lines = self._cells()
        widths = [max(len(row[k]) for row in lines) for k in range(len(lines[0]))]
        text = ["  ".join(cell.rjust(width) for cell, width in zip(row, widths)).rstrip() for row in lines]
        text.insert(1, "-" * max(len(line) for line in text))
        return "\n".join([*text, "", *textwrap.wrap(self.legend(), 110), "", *textwrap.wrap(CAUTION, 110)])

    def _cells(self) -> list[list[str]]:
        r = self.rows
        shown = np.flatnonzero(r.ordinary)
        names = [r.names[i] for i in shown]
        head = ["stage", "T / K", "P / kPa", "flood", "superheat / K"]
        for symbol in ("E", "eta", "N"):
            head += [f"{symbol} {name}" for name in names]
        if r.packed is not None:
            head += [f"HETP {name} / m" for name in names]
        rows = [[*head, "remarks"]]
        flood = r.hydraulics.flooding
        where = {} if r.packed is None else {int(k): m for m, k in enumerate(r.packed.position)}
        flags = self.flags()
        for j in range(r.number.size):
            cells = [str(r.number[j]), f"{r.T_L[j]:.2f}", f"{r.P[j] / 1e3:.2f}",
                     "" if flood is None or np.isnan(flood[j]) else f"{flood[j]:.2f}", f"{r.T_V[j] - r.T_L[j]:+.2f}"]
            dy = r.y_out[j] - r.y_in[j]
            cells += [f"[{dy[i]:+.1e}]" if r.flagged[j, i] else f"{r.murphree[j, i]:.3f}" for i in shown]
            cells += [f"{r.vaporization[j, i]:.4f}" for i in shown] + [f"{r.flux[j, i]:+.2e}" for i in shown]
            if r.packed is not None:
                m = where.get(j)
                cells += ["" if m is None or r.packed.undefined[m, i] else f"{r.packed.HETP[m, i]:.3f}" for i in shown]
            rows.append([*cells, flags[j]])
        return rows

    def _repr_html_(self) -> str:
        html: str = self.to_frame().to_html(index=False, na_rep="", float_format=lambda value: f"{value:.4g}")
        return html + f"<p>{self.legend()}</p><p>{CAUTION}</p>"

    def __str__(self) -> str:
        return self.to_text()


def efficiency_table(profile: pd.DataFrame | StageProfile, hardware: Hardware, properties: PropertyModel, *,
                     feeds: tuple[ProfileFeed, ...] = (), draws: tuple[ProfileDraw, ...] = (),
                     options: RatingOptions | None = None) -> EfficiencyTable:
    """Component efficiencies (trays) and HETPs (packings) of every contact row of a profile.

    profile: DataFrame with the columns of `StageProfile` (or a `StageProfile`, which brings its own feeds and draws).
    hardware: one contactor or `Section`s. properties: a property model with the profile's components in its order.
    Raises `InputError` for bad input, `ConvergenceError` where an interface has no solution.
    """
    if not isinstance(profile, StageProfile):
        profile = StageProfile.from_frame(profile, properties.names, feeds=feeds, draws=draws)
    return EfficiencyTable(rate_rows(profile, hardware, properties, options), profile.source)
