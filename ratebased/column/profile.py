"""A solved column: arrays over its stages, products, duties; as a table, saved and loaded without loss."""
from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import asdict, dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..arguments import whole_number
from ..errors import InputError
from ..properties.protocol import Array, PropertyModel
from ..show import Shown
from .feeds import FlashResult, StageFeeds

if TYPE_CHECKING:
    import pandas as pd

    from .back_calculation import ColumnEfficiencies, ColumnHeights
    from .entropy import EntropyProduction

FORMAT = "column profile 1"


@dataclass(frozen=True)
class ProductStream:
    """phase: "liquid" or "vapor". flows mol/s, (n,). temperature K. enthalpy: flow, W."""

    phase: str
    flows: Array
    temperature: float
    enthalpy: float

    @property
    def composition(self) -> Array:
        """Mole fractions, (n,)."""
        fractions: Array = self.flows / self.flows.sum()
        return fractions


@dataclass(frozen=True, eq=False)
class ContactRecord:
    """What a rate-based solution knows of its C contact stages, top to bottom.

    stage: numbers, (C,). T_I K; x_I, y_I mole fractions at the interface; N mol/(m2 s) from vapour to liquid, (C, n);
    energy_flux W/m2 from vapour to liquid. area m2. y_bulk, T_V_bulk, x_bulk, T_L_bulk: the states that the films start
    from. hydraulics: operating limits by name, (C,) each. notes: remarks of the contactor, with the stages they speak
    of. basis: which area. pattern: how the phases flow through a stage, in words.
    """

    stage: NDArray[np.int64]
    T_I: Array
    x_I: Array
    y_I: Array
    N: Array
    energy_flux: Array
    area: Array
    y_bulk: Array
    T_V_bulk: Array
    x_bulk: Array
    T_L_bulk: Array
    hydraulics: Mapping[str, Array]
    notes: Mapping[str, NDArray[np.int64]]
    basis: str
    pattern: str


@dataclass(frozen=True)
class SolutionReport:
    """How a column was solved.

    iterations of the last solve; residual: scaled, before the final step; component_closure: largest |in - out| of a
    component over its own feed; energy_closure: |in - out| over feed times largest latent heat; path: the way it was
    reached; smallest_gamma_eigenvalue of [Gamma] over the stages (at or below zero a liquid would split in two);
    smallest_flow mol/s of a phase leaving a stage; largest_rate_factor: of the films, |A|_1, zero for equilibrium
    stages.
    """

    iterations: int
    residual: float
    component_closure: float
    energy_closure: float
    path: str
    smallest_gamma_eigenvalue: float
    smallest_flow: float
    largest_rate_factor: float = 0.0


@dataclass(frozen=True, eq=False)
class Profile(Shown):
    """A solved column of S stages, numbered from the top, condenser and reboiler included.

    names; model: "equilibrium" or "rate-based"; kinds: one word a stage. T_L, T_V K; P Pa; L, V mol/s, NET of side
    draws: what goes on to the next stage; x, y (S, n). A total condenser has V = 0, L = reflux and y the bubble vapour
    of its condensate. height: m of each stage of a packed bed, or None. feeds: what joins each stage. liquid_draw,
    vapor_draw mol/s; duty: heat added on the contact stages, W. products: "top", "bottom" and the side draws. duties:
    heat added to the column in "condenser" and "reboiler", W. contact: fluxes and interfaces (rate-based only).
    """

    names: tuple[str, ...]
    model: str
    kinds: tuple[str, ...]
    T_L: Array
    T_V: Array
    P: Array
    L: Array
    V: Array
    x: Array
    y: Array
    height: Array | None
    feeds: StageFeeds
    liquid_draw: Array
    vapor_draw: Array
    duty: Array
    products: Mapping[str, ProductStream]
    duties: Mapping[str, float]
    report: SolutionReport
    contact: ContactRecord | None = None
    properties: PropertyModel | None = field(default=None, compare=False, repr=False)

    @property
    def stages(self) -> int:
        return len(self.kinds)

    @property
    def contact_index(self) -> NDArray[np.intp]:
        """Indices (from 0) of the contact stages."""
        return np.flatnonzero([kind in ("tray", "segment") for kind in self.kinds])

    def purity(self, component: int | str, product: str = "top") -> float:
        """Mole fraction of a component in a product."""
        return float(self._product(product).composition[self._component(component)])

    def recovery(self, component: int | str, product: str = "top") -> float:
        """Share of a component's feed that leaves in a product."""
        i = self._component(component)
        return float(self._product(product).flows[i] / (self.feeds.vapor + self.feeds.liquid)[:, i].sum())

    def _component(self, component: int | str) -> int:
        if isinstance(component, str):
            if component not in self.names:
                raise InputError(f"component {component!r}: the profile holds {', '.join(self.names)}")
            return self.names.index(component)
        index = whole_number("component", component)
        if not 0 <= index < len(self.names):
            raise InputError(f"component = {component}: expected an index from 0 to {len(self.names) - 1}")
        return index

    def _product(self, product: str) -> ProductStream:
        if product not in self.products:
            raise InputError(f"product {product!r}: the column has {', '.join(self.products)}")
        return self.products[product]

    def entering_vapor(self) -> Array:
        """Component flows of the vapour that enters each stage from below, its feed included, mol/s, (S, n)."""
        flows = self.feeds.vapor.copy()
        flows[:-1] += (self.V[:, None] * self.y)[1:]
        return flows

    def entering_liquid(self) -> Array:
        """Component flows of the liquid that enters each stage from above, its feed included, mol/s, (S, n)."""
        flows = self.feeds.liquid.copy()
        flows[1:] += (self.L[:, None] * self.x)[:-1]
        return flows

    def model_or(self, properties: PropertyModel | None) -> PropertyModel:
        """The property model given, or the one the profile was solved with (a loaded profile holds none)."""
        model = properties if properties is not None else self.properties
        if model is None:
            raise InputError("properties: a loaded profile holds no property model, give the one it was solved with")
        if tuple(model.names) != self.names:
            raise InputError(f"properties: a model of {', '.join(model.names)}, the profile holds "
                             f"{', '.join(self.names)}")
        return model

    def record(self) -> ContactRecord:
        """The contact record of a rate-based profile."""
        if self.contact is None:
            raise InputError("profile: an equilibrium column has no fluxes; solve it rate-based")
        return self.contact

    # ------------------------------------------------------------------------------------------- what follows from it
    def efficiency(self, *, limit: float = 0.01, at_liquid_temperature: bool | None = None,
                   properties: PropertyModel | None = None) -> ColumnEfficiencies:
        """Back-calculated component efficiencies of the contact stages; see `back_calculation.column_efficiencies`."""
        from .back_calculation import column_efficiencies
        return column_efficiencies(self, limit=limit, at_liquid_temperature=at_liquid_temperature,
                                   properties=properties)

    def hetp(self, *, limit: float = 0.01, properties: PropertyModel | None = None) -> ColumnHeights:
        """Heights equivalent to a theoretical plate of each component; see `back_calculation.column_heights`."""
        from .back_calculation import column_heights
        return column_heights(self, limit=limit, properties=properties)

    def entropy_production(self, *, properties: PropertyModel | None = None) -> EntropyProduction:
        """Entropy produced on each contact stage, W/K, by cause; see `entropy.entropy_production`."""
        from .entropy import entropy_production
        return entropy_production(self, properties=properties)

    # ------------------------------------------------------------------------------------------- tables and files
    def to_frame(self) -> pd.DataFrame:
        """One row a stage: stage, kind, T_K (liquid), T_vapor_K, P_Pa, L_mol_s, V_mol_s, x_<name>, y_<name>; for a
        packed bed height_m; for a rate-based column T_interface_K, area_m2, flux_<name> (mol/(m2 s), vapour to liquid),
        interface_x_<name>, interface_y_<name> and the hydraulics, blank on condenser and reboiler rows."""
        import pandas as pd
        columns: dict[str, Any] = {"stage": np.arange(1, self.stages + 1), "kind": list(self.kinds), "T_K": self.T_L,
                                   "T_vapor_K": self.T_V, "P_Pa": self.P, "L_mol_s": self.L, "V_mol_s": self.V}
        columns |= {f"x_{name}": self.x[:, i] for i, name in enumerate(self.names)}
        columns |= {f"y_{name}": self.y[:, i] for i, name in enumerate(self.names)}
        if self.height is not None:
            columns["height_m"] = self.height
        if self.contact is not None:
            c = self.contact
            spread = {"T_interface_K": c.T_I, "area_m2": c.area}
            for word, array in (("flux", c.N), ("interface_x", c.x_I), ("interface_y", c.y_I)):
                spread |= {f"{word}_{name}": array[:, i] for i, name in enumerate(self.names)}
            spread |= {f"hydraulics_{name}": value for name, value in c.hydraulics.items()}
            for name, value in spread.items():
                full = np.full(self.stages, np.nan)
                full[c.stage - 1] = value
                columns[name] = full
        return pd.DataFrame(columns)

    def save(self, path: str | Path) -> tuple[Path, Path]:
        """Write `<path>.csv`, the table of `to_frame`, and `<path>.json`, everything; returns both paths.

        Numbers are written with all their digits: `Profile.load` gives back equal arrays.
        """
        base = Path(path)
        table, record = base.with_name(base.name + ".csv"), base.with_name(base.name + ".json")
        self.to_frame().to_csv(table, index=False)
        data = {"format": FORMAT} | {name: _plain(getattr(self, name)) for name in self.__dataclass_fields__
                                     if name != "properties"}
        record.write_text(json.dumps(data, indent=1), encoding="utf-8")
        return table, record

    @classmethod
    def load(cls, path: str | Path) -> Profile:
        """A profile written by `save`; `path` without or with its ending .json. It holds no property model.

        Raises `InputError` for a file that is missing, broken or another's.
        """
        base = Path(path)
        record = base if base.suffix == ".json" else base.with_name(base.name + ".json")
        try:
            data = json.loads(record.read_text(encoding="utf-8"))
        except (OSError, ValueError) as error:
            raise InputError(f"{record}: cannot be read, {error}") from error
        if not isinstance(data, dict) or data.pop("format", None) != FORMAT:
            raise InputError(f"{record}: not a column profile ({FORMAT!r} expected in its field `format`)")
        try:
            return cls._from_record(data)
        except KeyError as error:
            raise InputError(f"{record}: the field {error} is missing") from error
        except (TypeError, ValueError, AttributeError) as error:
            raise InputError(f"{record}: a field is not what a column profile holds, {error}") from error

    @classmethod
    def _from_record(cls, data: dict[str, Any]) -> Profile:
        for name in ("T_L", "T_V", "P", "L", "V", "x", "y", "liquid_draw", "vapor_draw", "duty"):
            data[name] = np.array(data[name], float)
        data["height"] = None if data["height"] is None else np.array(data["height"], float)
        data["names"], data["kinds"] = tuple(data["names"]), tuple(data["kinds"])
        feeds = {k: np.array(v, float) for k, v in data["feeds"].items() if k != "streams"}
        streams = tuple(FlashResult(s["temperature"], np.array(s["vapor"], float), np.array(s["liquid"], float))
                        for s in data["feeds"]["streams"])
        data["feeds"] = StageFeeds(**feeds, streams=streams)
        data["products"] = {k: ProductStream(v["phase"], np.array(v["flows"], float), v["temperature"], v["enthalpy"])
                            for k, v in data["products"].items()}
        data["report"] = SolutionReport(**data["report"])
        if data["contact"] is not None:
            c = data["contact"]
            for name, value in c.items():
                if isinstance(value, list):
                    c[name] = np.array(value, np.int64 if name == "stage" else float)
            c["hydraulics"] = {k: np.array(v, float) for k, v in c["hydraulics"].items()}
            c["notes"] = {k: np.array(v, np.int64) for k, v in c["notes"].items()}
            data["contact"] = ContactRecord(**c)
        return cls(**data)


def _plain(value: Any) -> Any:
    if isinstance(value, np.ndarray):
        return value.tolist()
    if isinstance(value, Mapping):
        return {k: _plain(v) for k, v in value.items()}
    if isinstance(value, tuple):
        return [_plain(item) for item in value]
    if isinstance(value, StageFeeds | FlashResult | ProductStream | ContactRecord):
        return {k: _plain(getattr(value, k)) for k in value.__dataclass_fields__}
    if isinstance(value, SolutionReport):
        return asdict(value)
    return value
