"""The same column predicted in three ways, side by side: one efficiency, component efficiencies fed back,
rate-based.
"""
from __future__ import annotations

import warnings
from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from correlations.overall import oconnell, oconnell_absorber

from ..arguments import finite_scalar
from ..errors import ConvergenceError, InputError, RateBasedWarning
from ..properties.protocol import Array, PropertyModel
from ..show import Shown
from .back_calculation import ColumnEfficiencies
from .contact import ContactorLayout, FlowPattern
from .definition import Column
from .equilibrium import solve_equilibrium
from .profile import Profile
from .ratebased import solve_ratebased
from .resize import resized, resized_efficiency, resized_layout, stage_map
from .specifications import ComponentRecovery, ProductPurity

if TYPE_CHECKING:
    import pandas as pd

ONE_EFFICIENCY = "equilibrium, one efficiency"
FED_BACK = "equilibrium, component efficiencies"
RATE_BASED = "rate-based"
NEGLIGIBLE = 1e-7
"""Mole fraction: below it two columns are the same."""


@dataclass(frozen=True, eq=False)
class Comparison(Shown):
    """Three predictions of one column.

    profiles: by model name, in the order one efficiency, component efficiencies, rate-based. efficiency: the one
    Murphree efficiency and where it comes from. table: back-calculated component efficiencies. differences: the largest
    ones, in words, largest first. purity: component name and product that the stage counts are for, with the mole
    fraction. stages_needed: contact stages with which each model reaches it while one less does not; None where it is
    not reached with up to three times the stages; empty where a purity or recovery is specified.
    """

    profiles: dict[str, Profile]
    efficiency: float
    efficiency_source: str
    table: ColumnEfficiencies
    differences: tuple[str, ...]
    purity: tuple[str, str, float]
    stages_needed: dict[str, int | None]

    def to_frame(self) -> pd.DataFrame:
        """One row a model: purities and recoveries of the end products, duties, contact stages needed."""
        import pandas as pd
        rows = []
        for model, profile in self.profiles.items():
            row: dict[str, object] = {"model": model}
            for product in ("top", "bottom"):
                row |= {f"{product}_x_{name}": profile.purity(i, product) for i, name in enumerate(profile.names)}
            row |= {f"top_recovery_{name}": profile.recovery(i) for i, name in enumerate(profile.names)}
            row |= {f"{end}_duty_W": q for end, q in profile.duties.items()}
            row["contact_stages_needed"] = self.stages_needed.get(model)
            rows.append(row)
        return pd.DataFrame(rows)

    def profile_frame(self) -> pd.DataFrame:
        """One row a stage: temperatures and compositions of the three models beside each other."""
        import pandas as pd
        short = {ONE_EFFICIENCY: "one", FED_BACK: "fed_back", RATE_BASED: "rate"}
        first = next(iter(self.profiles.values()))
        columns: dict[str, object] = {"stage": np.arange(1, first.stages + 1), "kind": list(first.kinds)}
        for model, profile in self.profiles.items():
            columns[f"T_K_{short[model]}"] = profile.T_L
        for i, name in enumerate(first.names):
            for model, profile in self.profiles.items():
                columns[f"x_{name}_{short[model]}"] = profile.x[:, i]
        return pd.DataFrame(columns)


def compare(column: Column, properties: PropertyModel, contactor: ContactorLayout, *, efficiency: float | None = None,
            component: int | str | None = None, product: str = "top", purity: float | None = None,
            count_stages: bool = True, vapor: FlowPattern | None = None,
            liquid: FlowPattern | None = None) -> Comparison:
    """Predict a column three ways and say how far apart they are.

    Parameters
    ----------
    column, properties, contactor, vapor, liquid : as for `solve_ratebased`.
    efficiency : the one Murphree vapour efficiency of the first model. None: O'Connell's overall efficiency for the key
        components (the absorber form without condenser and reboiler); for a packed bed the median of the segments' own.
    component, product, purity : what the stage counts are for; None: the light key in the top product (of an absorber
        the component that it removes most of), at the mole fraction of the rate-based column.
    count_stages : False leaves the counts out (about twenty more solutions). They are left out too where the column is
        searched for a purity or a recovery: every number of stages reaches it then.

    Raises
    ------
    InputError, ConvergenceError : as for the two solvers; a product that is no end product, a purity outside 0..1. A
        model other than the rate-based one that finds no solution for a given number of stages counts
        as not reaching the purity.
    """
    if product not in ("top", "bottom"):
        raise InputError(f"product = {product!r}: expected 'top' or 'bottom'")
    if purity is not None and not 0.0 < finite_scalar("purity", purity) < 1.0:
        raise InputError(f"purity = {purity}: expected a number between 0 and 1")
    rate = solve_ratebased(column, properties, contactor, vapor=vapor, liquid=liquid)
    fixed = column.with_(pressure=rate.P)
    table = rate.efficiency()
    light, heavy = key_components(rate)
    if efficiency is None:
        value, source = _rule_of_thumb(rate, table, properties, light, heavy)
    else:
        value, source = finite_scalar("efficiency", efficiency), "given"
    fed = table.vaporization_set()
    profiles = {ONE_EFFICIENCY: solve_equilibrium(fixed, properties, value),
                FED_BACK: solve_equilibrium(fixed, properties, fed), RATE_BASED: rate}
    i = light if component is None else rate._component(component)
    target = rate.purity(i, product) if purity is None else float(purity)
    needed: dict[str, int | None] = {}
    if count_stages and not isinstance(column.search, ProductPurity | ComponentRecovery):
        def with_fed(n: int) -> Profile:
            return solve_equilibrium(resized(fixed, n), properties, resized_efficiency(fed, fixed, n))

        def rate_based(n: int) -> Profile:
            return solve_ratebased(resized(column, n), properties, resized_layout(contactor, stage_map(column, n)),
                                   vapor=vapor, liquid=liquid)

        solvers: dict[str, Callable[[int], Profile]] = {
            ONE_EFFICIENCY: lambda n: solve_equilibrium(resized(fixed, n), properties, value),
            FED_BACK: with_fed, RATE_BASED: rate_based}
        for model, solve in solvers.items():
            needed[model] = stages_for_purity(solve, profiles[model], i, product, target)
    return Comparison(profiles, value, source, table, tuple(_differences(profiles)), (rate.names[i], product, target),
                      needed)


def key_components(profile: Profile) -> tuple[int, int]:
    """Light and heavy key: of the components in order of their K, the neighbours whose recoveries at the top lie
    furthest apart; of an absorber or a stripper without ends twice the component of whose own feed the largest share
    changes phase. Masked ones take no part.
    """
    model = profile.model_or(None)
    ordinary = np.flatnonzero(model.condensable & model.volatile)
    if not profile.duties:
        fed = (profile.feeds.vapor + profile.feeds.liquid).sum(0)
        removed = (np.abs(profile.feeds.vapor.sum(0) - profile.products["top"].flows) / fed)[ordinary]
        k = int(ordinary[np.argmax(removed)])
        return k, k
    if ordinary.size == 1:
        return int(ordinary[0]), int(ordinary[0])
    c = profile.contact_index
    K = model.k_value(profile.T_L[c], profile.P[c], profile.x[c], profile.y[c])
    order = ordinary[np.argsort(-np.log(K[:, ordinary]).mean(0))]
    recovery = np.array([profile.recovery(int(i)) for i in order])
    k = int(np.argmax(np.abs(np.diff(recovery))))
    return int(order[k]), int(order[k + 1])


def _rule_of_thumb(profile: Profile, table: ColumnEfficiencies, properties: PropertyModel, light: int, heavy: int
                   ) -> tuple[float, str]:
    if profile.height is not None:
        return float(np.nanmedian(table.murphree)), "median of the segments' component efficiencies"
    c = profile.contact_index
    T, P, x = profile.T_L[c], profile.P[c], profile.x[c]
    K = properties.k_value(T, P, x, profile.y[c])
    transport = properties.liquid_transport(T, P, x)
    viscosity = float(np.mean(transport.viscosity))
    if "condenser" in profile.duties or "reboiler" in profile.duties:
        alpha = float(np.exp(np.mean(np.log(K[:, light] / K[:, heavy]))))
        volatility = max(alpha, 1.0)
        words = "O'Connell (1946), key components at the mean of the stages"
        if alpha < 1.0:
            words += f"; their relative volatility of {alpha:.3g} taken as one"
        return float(oconnell(volatility, viscosity)), words
    molar_mass = float(np.mean(x @ properties.molar_mass))
    density = float(np.mean(transport.mass_density))
    value = oconnell_absorber(float(np.mean(K[:, light])), molar_mass, viscosity, density)
    return float(value), "O'Connell (1946) for absorbers, key component at the mean of the stages"


def stages_for_purity(solve: Callable[[int], Profile], known: Profile, component: int, product: str,
                      target: float) -> int | None:
    """Contact stages with which a column reaches a mole fraction in a product while one stage less does not.

    The search goes out from the stages of `known`: downwards from a column that reaches it, else upwards (to three
    times the stages), then downwards, since a purity need not rise with the stages. None: not reached, or not solved,
    anywhere. A target above the component's fraction in what is fed counts as reached from above, one below it from
    below. `solve(n)` gives the column of n contact stages.
    """
    now = int(known.contact_index.size)
    values: dict[int, float | None] = {now: known.purity(component, product)}
    sign = 1.0 if target >= _fed_fraction(known, component, product) else -1.0

    def reached(n: int) -> bool:
        if n not in values:
            with warnings.catch_warnings():           # doubts about a trial are no doubts about the column compared
                warnings.simplefilter("ignore", RateBasedWarning)
                try:
                    values[n] = solve(n).purity(component, product)
                except (ConvergenceError, InputError):
                    values[n] = None
        value = values[n]
        return value is not None and sign * (value - target) >= -1e-9

    if reached(now):
        return _fewest(reached, now)
    for step, end in ((1, 3 * now), (-1, 1)):
        stride, last, n = 1, now, now
        while n != end:
            last, n = n, min(n + stride, end) if step > 0 else max(n - stride, end)
            if reached(n):
                return _bisected(reached, n, last) if step > 0 else _fewest(reached, n)
            stride *= 2
    return None


def _fewest(reached: Callable[[int], bool], good: int) -> int:
    """Downwards from a number that reaches, in growing strides, to the last before one that does not."""
    stride = 1
    while good > 1:
        n = max(good - stride, 1)
        if not reached(n):
            return _bisected(reached, good, n)
        good, stride = n, 2 * stride
    return good


def _bisected(reached: Callable[[int], bool], good: int, bad: int) -> int:
    """`good` reaches, `bad` does not: a number that does with a neighbour towards `bad` that does not."""
    while abs(good - bad) > 1:
        middle = (good + bad) // 2
        if reached(middle):
            good = middle
        else:
            bad = middle
    return good


def _fed_fraction(profile: Profile, component: int, product: str) -> float:
    """In all feeds; without condenser and reboiler in the feeds of the product's own phase."""
    feeds = profile.feeds.vapor + profile.feeds.liquid
    if not profile.duties:
        feeds = profile.feeds.vapor if profile.products[product].phase == "vapor" else profile.feeds.liquid
    return float(feeds[:, component].sum() / feeds.sum())


def _differences(profiles: dict[str, Profile]) -> list[str]:
    """The largest differences from the rate-based column in words, those of the models in turn."""
    rate = profiles[RATE_BASED]
    sentences: list[tuple[float, str]] = []
    for model in (ONE_EFFICIENCY, FED_BACK):
        other = profiles[model]
        error = feed_back_error(other, rate)
        if error < NEGLIGIBLE:
            sentences.append((0.0, f"{model}: the same column as the rate-based one, to {error:.1g} mole fraction."))
            continue
        dx = np.abs(other.x - rate.x)
        j, i = (int(k) for k in np.unravel_index(int(np.argmax(dx)), dx.shape))
        sentences.append((error, f"{model}: the largest difference in the liquid is {error:.2g} mole fraction, "
                          f"{rate.names[i]} on stage {j + 1} ({other.x[j, i]:.4g} against {rate.x[j, i]:.4g} "
                          f"rate-based)."))
        dT = np.abs(other.T_L - rate.T_L)
        j = int(np.argmax(dT))
        sentences.append((float(dT[j]) / 100.0, f"{model}: the largest temperature difference is {dT[j]:.2g} K, on "
                                                f"stage {j + 1} ({other.T_L[j]:.2f} K against {rate.T_L[j]:.2f} K)."))
        for product in ("top", "bottom"):
            z, w = other.products[product].composition, rate.products[product].composition
            i = int(np.argmax(np.abs(z - w)))
            sentences.append((float(abs(z[i] - w[i])), f"{model}: {rate.names[i]} in the {product} product comes out "
                                                       f"at {z[i]:.4g}, {w[i]:.4g} rate-based."))
        for end, q in rate.duties.items():
            off = other.duties[end] / q - 1.0 if q else 0.0
            sentences.append((abs(off), f"{model}: the {end} duty is {100 * off:+.2g} % off "
                                        f"({other.duties[end] / 1e3:.1f} kW "
                              f"against {q / 1e3:.1f} kW)."))
    return [words for _, words in sorted(sentences, key=lambda s: -s[0])]


def feed_back_error(fed: Profile, rate: Profile) -> float:
    """Largest |x - x_rate| over a column fed with efficiencies."""
    if fed.x.shape != rate.x.shape:
        raise InputError(f"profiles of {fed.x.shape} and {rate.x.shape} stages and components")
    difference: Array = np.abs(fed.x - rate.x)
    return float(difference.max())
