"""The efficiency table: rated rows as a DataFrame, as text and as files, with everything a reader needs beside them."""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from ..equipment import Hardware
from ..errors import InputError
from ..explanation import FluxExplanation, explain_flux
from ..properties.protocol import Array, PropertyModel
from ..stage_profile import ProfileDraw, ProfileFeed, StageProfile
from .rating import RatedRows, RatingOptions, rate_rows
from .uncertainty import Uncertainty, UncertaintyResult, sample_rows

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

    rows : all arrays. source : where the profile is from. uncertainty : intervals, where asked for.
    """

    rows: RatedRows
    source: str
    uncertainty: UncertaintyResult | None = None

    @property
    def distance(self) -> Array:
        """Largest |y_out - y| of each row between the vapour computed and the profile's own, (R,)."""
        return np.abs(self.rows.y_out - self.rows.y_profile).max(-1)

    def row_of(self, stage: int) -> int:
        """Index of a stage among the rated rows."""
        found = np.flatnonzero(self.rows.number == stage)
        if not found.size:
            raise InputError(f"stage = {stage}: no rated row; there are {self.rows.number.tolist()}")
        return int(found[0])

    def explain(self, stage: int) -> FluxExplanation:
        """The parts of every flux of a row, at the middle of the froth over the leaving liquid (or of the segment)."""
        j = self.row_of(stage)
        for member, interface in self.rows.interfaces:
            position = np.flatnonzero(member == j)
            if position.size:
                return explain_flux(interface, (int(position[0]),))
        raise InputError(f"stage = {stage}: no interface")

    def sentence(self, stage: int, name: str) -> str:
        """Why the efficiency of a component in a row is what it is, with its interval where there is one."""
        r, j = self.rows, self.row_of(stage)
        if name not in r.names:
            raise InputError(f"name = {name!r}: expected one of {', '.join(r.names)}")
        i = r.names.index(name)
        driving, change = r.y_star[j, i] - r.y_in[j, i], r.y_out[j, i] - r.y_in[j, i]
        if r.flagged[j, i]:
            text = f"Stage {stage}, {name}: y* - y_in = {driving:+.2g} is too small for an efficiency"
        else:
            text = f"Stage {stage}, {name}: E = {r.murphree[j, i]:.3f} (y* - y_in = {driving:+.2g})"
        text += f", y_out - y_in = {change:+.2g}"
        point = r.point_murphree[j, i]
        if not r.flagged[j, i] and (point < 0) != (r.murphree[j, i] < 0):
            text += f"; over the leaving liquid alone E = {point:.3f}, the liquid upstream turns the sign"
        tray = r.kind[j] == "tray"
        text += ". In the middle of the froth over the leaving liquid, " if tray else ". In the segment, "
        text += self.explain(stage).sentence(name)
        u = self.uncertainty
        if u is not None:
            figure, what = (u.change, "y_out - y_in") if u.pole[j, i] else (u.murphree, "E")
            text += (f" Interval (5 to 95 %) of {what}: {figure.p05[j, i]:.3g} to {figure.p95[j, i]:.3g}; probability "
                     f"of E < 0: {u.negative[j, i]:.2f}; dominated by {u.dominating(j, i)} "
                     f"({100 * u.shares[j, i].max():.0f} % of the variance).")
        return text

    def remarkable(self) -> list[str]:
        """Sentences for every efficiency that is negative, and for the largest above one, flagged ones left out."""
        r = self.rows
        sound = r.ordinary & ~r.flagged
        picked = [(int(j), int(i)) for j, i in np.argwhere(sound & (r.murphree < 0))]
        above = np.where(sound, r.murphree, 0.0)
        if above.size and above.max() > 1:
            j, i = np.unravel_index(int(above.argmax()), above.shape)
            picked.append((int(j), int(i)))
        return [self.sentence(int(r.number[j]), r.names[i]) for j, i in picked]

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
        columns |= {"V_in_mol_s": r.V_in, "V_out_mol_s": r.V_out, "area_m2": r.area,
                    "pools": np.where(np.isfinite(r.pools), r.pools, np.nan),
                    "heat_to_liquid_W": r.energy}
        for label, name in (("pressure_drop", "pressure_drop_Pa"), ("clear_liquid", "clear_liquid_m"),
                            ("liquid_holdup", "liquid_holdup"), ("weeping", "weep_velocity_ratio"),
                            ("downcomer", "downcomer_level_ratio"), ("entrainment", "entrainment_kg_kg")):
            value = getattr(limits, label)
            if value is not None:
                columns[name] = value
        columns |= self._packed_columns() | self._uncertainty_columns()
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
                height = getattr(packed, label)[:, i]
                columns[f"{label}_{name}_m"] = spread(np.where(np.isfinite(height), height, np.nan))
            for label in ("N_OV", "N_V", "N_L"):
                units = getattr(packed, label)[:, i]
                columns[f"{label}_{name}"] = spread(np.where(np.isfinite(units), units, np.nan))
        return columns

    def _uncertainty_columns(self) -> dict[str, Any]:
        u = self.uncertainty
        if u is None:
            return {}
        columns: dict[str, Any] = {}
        figures = [("E", u.murphree, u.pole), ("dy", u.change, np.zeros_like(u.pole))]
        if u.hetp is not None and self.rows.packed is not None:
            blank = np.ones_like(u.pole)
            blank[self.rows.packed.position] = self.rows.packed.undefined
            blank |= ~(np.isfinite(u.hetp.p05) & np.isfinite(u.hetp.p95))
            figures.append(("HETP", u.hetp, blank))
        for label, interval, blank in figures:
            for quantile in ("p05", "p50", "p95"):
                for i, name in enumerate(self.rows.names):
                    value = getattr(interval, quantile)[:, i]
                    columns[f"{label}_{quantile}_{name}"] = np.where(blank[:, i], np.nan, value)
        for i, name in enumerate(self.rows.names):
            columns[f"P_negative_{name}"] = u.negative[:, i]
            columns[f"dominating_{name}"] = [u.dominating(j, i) for j in range(u.pole.shape[0])]
        return columns

    def to_design_package(self, folder: Path, *, title: str = "Efficiency table", hardware: Hardware | None = None,
                          inputs: Sequence[Path] = ()) -> None:
        """Write table.csv, table.md and table.json: the table, the correlations of `hardware` with source and range,
        residuals, versions, checksums of the `inputs`."""
        from .package import write_package

        write_package(self, Path(folder), title=title, hardware=hardware, inputs=inputs)

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
        odd = [line for sentence in self.remarkable() for line in (f"- {sentence}",)]
        remarks = ["", "Odd rows", "", *odd] if odd else []
        return "\n".join([*text, "", self.legend(), *remarks, "", CAUTION, ""])

    def to_text(self) -> str:
        """The table for a terminal."""
        import textwrap

        lines = self._cells()
        widths = [max(len(row[k]) for row in lines) for k in range(len(lines[0]))]
        text = ["  ".join(cell.rjust(width) for cell, width in zip(row, widths)).rstrip() for row in lines]
        text.insert(1, "-" * max(len(line) for line in text))
        paragraphs = [self.legend(), *self.remarkable(), CAUTION]
        return "\n".join([*text, *(line for p in paragraphs for line in ("", *textwrap.wrap(p, 110)))])

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
                     options: RatingOptions | None = None,
                     uncertainty: Uncertainty | None = None) -> EfficiencyTable:
    """Component efficiencies (trays) and HETPs (packings) of every contact row of a profile.

    profile: DataFrame with the columns of `StageProfile` (or a `StageProfile`, which brings its own feeds and draws).
    hardware: one contactor or `Section`s. properties: a property model with the profile's components in its order.
    uncertainty: adds intervals, see `Uncertainty`.
    Raises `InputError` for bad input, `ConvergenceError` where an interface has no solution.
    """
    if isinstance(profile, StageProfile):
        if feeds or draws:
            raise InputError("feeds, draws: a StageProfile brings its own")
    else:
        profile = StageProfile.from_frame(profile, properties.names, feeds=feeds, draws=draws)
    rows = rate_rows(profile, hardware, properties, options)
    spread = None if uncertainty is None else sample_rows(profile, hardware, properties, uncertainty, options)
    return EfficiencyTable(rows, profile.source, spread)
