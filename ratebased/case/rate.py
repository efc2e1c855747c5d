"""The case file of `ratebased rate`: mixture, profile, feeds, draws, hardware, options.

    title = "..."
    [mixture]      see `mixture.properties_from`
    [profile]      file = "profile.csv"; optional fraction_tolerance, balance_tolerance
    [[feed]]       stage, phase ("liquid" or "vapor"), flow_mol_s, T_K, composition = {name = fraction, ...}
    [[draw]]       stage, phase, flow_mol_s
    [[hardware]]   see `hardware.hardware_from`
    [rate]         optional: point ("midpoint" or "integral"), mixing ("pools", "mixed" or "plug"),
                   driving_force_limit, at_liquid_temperature, local_coefficients
    [uncertainty]  optional: asks for intervals; vapor, liquid, area, vapor_diffusivity, liquid_diffusivity, k_value,
                   assumed (relative standard deviations), samples, seed
"""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from ..efficiency import EfficiencyTable, RatingOptions, Uncertainty, efficiency_table
from ..equipment import Section
from ..errors import InputError
from ..stage import PlugFlow, PointResult, WellMixed, exponential_midpoint, integral
from ..stage_profile import ProfileDraw, ProfileFeed, StageProfile
from ..toml_table import TomlTable
from .hardware import hardware_from
from .mixture import component_names, properties_from

if TYPE_CHECKING:
    from ..properties.protocol import PropertyModel

POINT_METHODS: dict[str, Callable[..., PointResult]] = {"midpoint": exponential_midpoint, "integral": integral}
MIXING = {"pools": None, "mixed": WellMixed(), "plug": PlugFlow()}


@dataclass(frozen=True)
class RateCase:
    """Everything `efficiency_table` needs, read from one file. files: those read, for the record of the inputs."""

    title: str
    properties: PropertyModel
    profile: StageProfile
    hardware: tuple[Section, ...]
    options: RatingOptions
    uncertainty: Uncertainty | None
    files: tuple[Path, ...]

    def rate(self) -> EfficiencyTable:
        """The efficiency table; errors as for `efficiency_table`."""
        return efficiency_table(self.profile, self.hardware, self.properties, options=self.options,
                                uncertainty=self.uncertainty)


def read_rate_case(path: Path) -> RateCase:
    """The case in a TOML file; paths inside it are relative to its folder. Raises `InputError`."""
    return rate_case(TomlTable.load(path), path)


def rate_case(top: TomlTable, path: Path) -> RateCase:
    """The case in an open table, as read from (or meant for) `path`; finishes it."""
    title = top.text("title", path.stem)
    mixture = top.table("mixture")
    names = component_names(mixture)
    profile_table = top.table("profile")
    file = path.parent / profile_table.text("file")
    tolerances = {key: profile_table.number(key, default, above=0.0)
                  for key, default in (("fraction_tolerance", 1e-4), ("balance_tolerance", 0.02))}
    profile_table.finish()
    profile = StageProfile.read_csv(file, names, feeds=[_feed(t, names) for t in top.tables("feed")],
                                    draws=[_draw(t) for t in top.tables("draw")], **tolerances)
    sections = hardware_from(top.tables("hardware"), (int(profile.number[0]), int(profile.number[-1])), names,
                             str(path))
    options = _options(top.table("rate", required=False))
    uncertainty = _uncertainty(top.table("uncertainty")) if top.has("uncertainty") else None
    top.finish()
    properties = properties_from(mixture, [
        *map(float, (profile.T_L.min(), profile.T_L.max(), profile.T_V.min(), profile.T_V.max())),
        *(feed.temperature for feed in profile.feeds)])
    return RateCase(title, properties, profile, sections, options, uncertainty, (path, file))


def _feed(table: TomlTable, names: list[str]) -> ProfileFeed:
    feed = ProfileFeed(table.whole("stage"), table.text("phase"), table.number("flow_mol_s", above=0.0),
                table.composition("composition", names), table.number("T_K", above=100.0))
    table.finish()
    return feed


def _draw(table: TomlTable) -> ProfileDraw:
    draw = ProfileDraw(table.whole("stage"), table.text("phase"), table.number("flow_mol_s", above=0.0))
    table.finish()
    return draw


def _uncertainty(table: TomlTable) -> Uncertainty:
    spreads = {key: table.optional_number(key) for key in (
        "vapor", "liquid", "area", "vapor_diffusivity", "liquid_diffusivity")}
    default = Uncertainty()
    try:
        found = Uncertainty(**spreads, k_value=table.number("k_value", default.k_value),
                            assumed=table.number("assumed", default.assumed),
                            samples=table.whole("samples", default.samples), seed=table.whole("seed", default.seed))
    except InputError as error:
        raise error if table.where in str(error) else InputError(f"{table.where}: {error}") from error
    table.finish()
    return found


def _options(table: TomlTable) -> RatingOptions:
    basis = table.flag("at_liquid_temperature") if table.has("at_liquid_temperature") else None
    options = RatingOptions(
        point=table.choice("point", POINT_METHODS, "midpoint"), mixing=table.choice("mixing", MIXING, "pools"),
        driving_force_limit=table.number("driving_force_limit", 0.01, above=0.0), at_liquid_temperature=basis,
        local_coefficients=table.flag("local_coefficients", False))
    table.finish()
    return options
