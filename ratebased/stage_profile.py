"""A stage profile: the rows of a column as another calculation or a plant gives them, checked once.

Stages are numbered from the top; row j holds the liquid and the vapour leaving stage j, net of side draws, so that the
vapour entering stage j is row j+1's (with a vapour feed to j) and the liquid entering it row j-1's (with a liquid
feed).
Columns of a file or DataFrame: `stage, T_K, P_Pa, L_mol_s, V_mol_s, x_<name>..., y_<name>...`; optional `T_vapor_K`
(else the vapour leaves at `T_K`), `kind` ("tray" or "segment"; "condenser" and "reboiler" rows are no contact stages)
and `height_m` (packed segments).
"""
from __future__ import annotations

import warnings
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from .arguments import mole_fractions
from .errors import InputError, PlausibilityWarning
from .properties.protocol import Array, Mask

if TYPE_CHECKING:
    import pandas as pd

CONTACT_KINDS = ("tray", "segment")
OTHER_KINDS = ("condenser", "reboiler")
LOWEST_TEMPERATURE = 100.0
"""K. A profile below it is refused: it is far more likely to be in degrees Celsius."""
LOWEST_PRESSURE = 200.0
"""Pa. A profile below it is refused: it is far more likely to be in kPa or bar."""


@dataclass(frozen=True)
class ProfileFeed:
    """A feed in one phase, joining the vapour or the liquid that enters its stage.

    stage: number. phase: "vapor" or "liquid". flow: mol/s. composition: mole fractions, (n,). temperature: K.
    """

    stage: int
    phase: str
    flow: float
    composition: Array
    temperature: float


@dataclass(frozen=True)
class ProfileDraw:
    """A side draw with the composition and temperature of the leaving stream. stage; phase; flow, mol/s."""

    stage: int
    phase: str
    flow: float


@dataclass(frozen=True)
class StageProfile:
    """The rows of a column, arrays over the S rows from the top.

    names; number (S,); kind (S,); T_L, T_V K; P Pa; L, V mol/s; x, y (S, n); height m or None; feeds, draws. `source`
    names the file or table in messages.
    """

    names: tuple[str, ...]
    number: NDArray[np.int64]
    kind: tuple[str, ...]
    T_L: Array
    T_V: Array
    P: Array
    L: Array
    V: Array
    x: Array
    y: Array
    height: Array | None
    feeds: tuple[ProfileFeed, ...]
    draws: tuple[ProfileDraw, ...]
    source: str

    @property
    def contact(self) -> Mask:
        """True for rows that are contact stages."""
        return np.array([kind in CONTACT_KINDS for kind in self.kind])

    def row_of(self, stage: int, what: str) -> int:
        """Row index of a stage number."""
        rows = np.flatnonzero(self.number == stage)
        if not rows.size:
            raise InputError(f"{what}: stage {stage} is not in {self.source}, which has stages {self.number[0]} to "
                             f"{self.number[-1]}")
        return int(rows[0])

    @classmethod
    def read_csv(cls, path: str | Path, names: Sequence[str], *, feeds: Sequence[ProfileFeed] = (),
                 draws: Sequence[ProfileDraw] = (), fraction_tolerance: float = 1e-4,
                 balance_tolerance: float = 0.02) -> StageProfile:
        """The profile in a CSV file; see `from_frame`."""
        import pandas as pd

        path = Path(path)
        try:
            head = pd.read_csv(path, skipinitialspace=True, comment="#", header=None, nrows=1, dtype=str)
            frame = pd.read_csv(path, skipinitialspace=True, comment="#")
        except FileNotFoundError as error:
            raise InputError(f"{path}: no such file") from error
        except OSError as error:
            raise InputError(f"{path}: cannot be read: {error.strerror}") from error
        except (pd.errors.ParserError, pd.errors.EmptyDataError, UnicodeDecodeError) as error:
            raise InputError(f"{path}: not a readable CSV table: {error}") from error
        titles = head.iloc[0].tolist()
        if len(titles) == frame.shape[1]:
            frame.columns = pd.Index(titles)             # as written: pandas renames a title that appears twice
        return cls.from_frame(frame, names, feeds=feeds, draws=draws, fraction_tolerance=fraction_tolerance,
                              balance_tolerance=balance_tolerance, source=str(path))

    @classmethod
    def from_frame(cls, frame: pd.DataFrame, names: Sequence[str], *, feeds: Sequence[ProfileFeed] = (),
                   draws: Sequence[ProfileDraw] = (), fraction_tolerance: float = 1e-4, balance_tolerance: float = 0.02,
                   source: str = "profile") -> StageProfile:
        """The profile in a DataFrame.

        names: components, in the order of the property model. fraction_tolerance: mole fractions of a row may sum to
        one within it (they are renormalised, with a `PlausibilityWarning` above 1e-9). balance_tolerance: largest open
        component balance of a contact stage, as a fraction of the larger of the two flows through it; a tenth of it
        warns.

        Raises
        ------
        InputError : naming file, row, column and value.
        """
        names = tuple(names)
        reader = _Reader(frame, source)
        reader.check_columns(names)
        number = reader.integers("stage")
        if number.size < 1:
            raise InputError(f"{source}: no rows")
        step = np.flatnonzero(np.diff(number) != 1)
        if step.size:
            reader.fail(int(step[0]) + 1, "stage", number[step[0] + 1],
                        f"stages must be consecutive, expected {number[step[0]] + 1}")
        kind = reader.kinds()
        contact = np.array([k in CONTACT_KINDS for k in kind])
        T_L = reader.numbers("T_K", LOWEST_TEMPERATURE, "is it in degrees Celsius? Temperatures are in K")
        T_V = (reader.numbers("T_vapor_K", LOWEST_TEMPERATURE, "is it in degrees Celsius? Temperatures are in K")
               if "T_vapor_K" in frame else T_L.copy())
        P = reader.numbers("P_Pa", LOWEST_PRESSURE, "is it in bar or kPa? Pressures are in Pa")
        L = reader.flows("L_mol_s", contact)
        V = reader.flows("V_mol_s", contact)
        x = reader.fractions("x_", names, fraction_tolerance)
        y = reader.fractions("y_", names, fraction_tolerance)
        height = None
        if "height_m" in frame:
            height = reader.heights("height_m", np.array([k == "segment" for k in kind]))
        profile = cls(names, number, kind, T_L, T_V, P, L, V, x, y, height, tuple(feeds), tuple(draws), source)
        profile._check_streams()
        profile._check_balances(reader, balance_tolerance)
        return profile

    def _check_streams(self) -> None:
        for label, streams in (("feed", self.feeds), ("draw", self.draws)):
            for stream in streams:
                self.row_of(stream.stage, label)
                if stream.phase not in ("vapor", "liquid"):
                    raise InputError(f"{label} to stage {stream.stage}: phase = {stream.phase!r}, expected 'vapor' or "
                                     "'liquid' (a feed in two phases is given as two)")
                if not (np.isfinite(stream.flow) and stream.flow > 0):
                    raise InputError(f"{label} to stage {stream.stage}: flow = {stream.flow}, expected a number above "
                                     "zero, mol/s")
                if isinstance(stream, ProfileFeed):
                    where = f"feed to stage {stream.stage}"
                    composition = mole_fractions(f"{where}: composition", stream.composition, len(self.names))
                    if composition.ndim != 1:
                        raise InputError(f"{where}: composition has shape {composition.shape}, expected "
                                         f"({len(self.names)},)")
                    if not (np.isfinite(stream.temperature) and stream.temperature >= LOWEST_TEMPERATURE):
                        raise InputError(f"{where}: temperature = {stream.temperature}, expected K, above "
                                         f"{LOWEST_TEMPERATURE:g}")

    def component_balance(self) -> Array:
        """Open balance of each component round each row, in - out, mol/s, (S, n); meaningful for contact rows."""
        liquid, vapor = self.L[:, None] * self.x, self.V[:, None] * self.y
        open_ = -liquid - vapor
        open_[1:] += liquid[:-1]
        open_[:-1] += vapor[1:]
        for feed in self.feeds:
            open_[self.row_of(feed.stage, "feed")] += feed.flow * np.asarray(feed.composition)
        for draw in self.draws:
            row = self.row_of(draw.stage, "draw")
            open_[row] -= draw.flow * (self.x if draw.phase == "liquid" else self.y)[row]
        return open_

    def _check_balances(self, reader: _Reader, tolerance: float) -> None:
        rows = np.flatnonzero(self.contact)
        if not rows.size:
            raise InputError(f"{self.source}: no contact stage (rows of kind {' or '.join(CONTACT_KINDS)})")
        through = np.maximum(self.L, self.V)
        relative = np.abs(self.component_balance()) / np.where(through > 0, through, 1.0)[:, None]
        worst = rows[np.argmax(relative[rows].max(1))]
        i = int(np.argmax(relative[worst]))
        text = (f"the balance of {self.names[i]} round stage {self.number[worst]} is open by "
                f"{self.component_balance()[worst, i]:.4g} mol/s, {100 * relative[worst, i]:.2g} % of the flow "
                "(a feed or draw missing?)")
        if not relative[worst, i] <= tolerance:
            reader.fail(int(worst), "x_" + self.names[i], self.x[worst, i],
                        text + f"; allowed: {100 * tolerance:.3g} %")
        if relative[worst, i] > 0.1 * tolerance:
            warnings.warn(f"{self.source}: {text}", PlausibilityWarning, stacklevel=4)


class _Reader:
    """Columns of a table as arrays, with errors that name file, row, column and value."""

    def __init__(self, frame: pd.DataFrame, source: str) -> None:
        self.frame, self.source = frame, source

    def fail(self, row: int, column: str, value: object, why: str) -> None:
        raise InputError(f"{self.source}, row {row + 1}, column {column}: {value}: {why}")

    def check_columns(self, names: tuple[str, ...]) -> None:
        have = [str(column) for column in self.frame.columns]
        twice = sorted({column for column in have if have.count(column) > 1})
        if twice:
            raise InputError(f"{self.source}: column {twice[0]} appears more than once")
        need = ["stage", "T_K", "P_Pa", "L_mol_s", "V_mol_s"] + [s + name for s in ("x_", "y_") for name in names]
        missing = [column for column in need if column not in have]
        if missing:
            raise InputError(f"{self.source}: column {missing[0]} is missing (columns found: {', '.join(have)})")
        for column in have:
            if column[:2] in ("x_", "y_") and column[2:] not in names:
                raise InputError(f"{self.source}: column {column} names a component that is not in the mixture "
                                 f"({', '.join(names)})")

    def raw(self, column: str) -> Array:
        import pandas as pd

        values = pd.to_numeric(self.frame[column], errors="coerce").to_numpy(float)
        bad = np.flatnonzero(~np.isfinite(values))
        if bad.size:
            self.fail(int(bad[0]), column, self.frame[column].iloc[bad[0]], "expected a finite number")
        return values

    def integers(self, column: str) -> NDArray[np.int64]:
        values = self.raw(column)
        bad = np.flatnonzero(values != np.round(values))
        if bad.size:
            self.fail(int(bad[0]), column, values[bad[0]], "expected a whole number")
        return values.astype(np.int64)

    def numbers(self, column: str, lowest: float, hint: str) -> Array:
        values = self.raw(column)
        bad = np.flatnonzero(values < lowest)
        if bad.size:
            self.fail(int(bad[0]), column, values[bad[0]], f"below {lowest:g}: {hint}")
        return values

    def flows(self, column: str, contact: Mask) -> Array:
        values = self.raw(column)
        bad = np.flatnonzero((values < 0) | (contact & (values <= 0)))
        if bad.size:
            self.fail(int(bad[0]), column, values[bad[0]], "a flow must be above zero (mol/s)")
        return values

    def heights(self, column: str, needed: Mask) -> Array:
        import pandas as pd

        values = pd.to_numeric(self.frame[column], errors="coerce").to_numpy(float)
        bad = np.flatnonzero(needed & ~(values > 0))
        if bad.size:
            self.fail(int(bad[0]), column, self.frame[column].iloc[bad[0]], "a height must be above zero (m)")
        return np.where(np.isfinite(values), values, 0.0)

    def fractions(self, prefix: str, names: tuple[str, ...], tolerance: float) -> Array:
        values = np.stack([self.raw(prefix + name) for name in names], -1)
        bad = np.argwhere((values < 0) | (values > 1))
        if bad.size:
            row, i = (int(k) for k in bad[0])
            self.fail(row, prefix + names[i], values[row, i], "a mole fraction lies between 0 and 1")
        total = values.sum(-1)
        off = np.abs(total - 1.0)
        row = int(np.argmax(off))
        if off[row] > tolerance:
            self.fail(row, f"{prefix}...", f"sum {total[row]:.8g}",
                      f"mole fractions must sum to one within {tolerance:g}")
        if off[row] > 1e-9:
            warnings.warn(f"{self.source}: {prefix} fractions sum to one within {off[row]:.1e} only (row {row + 1}) "
                          "and were renormalised", PlausibilityWarning, stacklevel=5)
        return np.asarray(values / total[:, None])

    def kinds(self) -> tuple[str, ...]:
        if "kind" not in self.frame:
            default = "segment" if "height_m" in self.frame else "tray"
            return (default,) * len(self.frame)
        kinds = tuple(str(value).strip() for value in self.frame["kind"])
        for row, kind in enumerate(kinds):
            if kind not in CONTACT_KINDS + OTHER_KINDS:
                self.fail(row, "kind", kind, f"expected one of {', '.join(CONTACT_KINDS + OTHER_KINDS)}")
        return kinds
