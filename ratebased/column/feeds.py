"""Feeds split into the vapour and the liquid that join a stage, by a flash at the pressure of the stage."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.optimize import brentq

from ..arguments import finite_scalar, positive_scalar
from ..errors import ConvergenceError, InputError
from ..properties.protocol import Array, PropertyModel
from ..properties.saturation import bubble_point, dew_point
from .definition import AnyFeed, Feed, LiquidFeed, VaporFeed, feed_flows

FLASH_TOLERANCE = 1e-13
MAX_SUBSTITUTIONS = 500


@dataclass(frozen=True)
class FlashResult:
    """Two phases in equilibrium: temperature K, vapor and liquid component flows, mol/s, (n,)."""

    temperature: float
    vapor: Array
    liquid: Array

    @property
    def vapor_fraction(self) -> float:
        """Of the moles."""
        return float(self.vapor.sum() / (self.vapor.sum() + self.liquid.sum()))


def flash(properties: PropertyModel, flows: ArrayLike, P: float, *, temperature: float | None = None,
          vapor_fraction: float | None = None) -> FlashResult:
    """A feed at pressure P, Pa, split into vapour and liquid at a temperature, K, or at a vapour fraction.

    flows: mol/s, (n,). Non-condensing components go to the vapour, non-volatile ones to the liquid. Rachford & Rice
    (1952) inside successive substitution of K (which may depend on both compositions); at a vapour fraction a bracketed
    search in temperature.

    Raises
    ------
    InputError : bad arguments; a vapour fraction that the masked components make impossible.
    ConvergenceError : substitution or the search in temperature failed.
    """
    z = feed_flows("flows", flows)
    if z.shape != (len(properties.names),):
        raise InputError(f"flows: {z.shape[0]} components, the property model has {len(properties.names)}")
    P = positive_scalar("P", P)
    if (temperature is None) == (vapor_fraction is None):
        raise InputError("flash: give either temperature or vapor_fraction")
    if temperature is not None:
        return _at_temperature(properties, z, P, positive_scalar("temperature", temperature))
    assert vapor_fraction is not None
    fraction = finite_scalar("vapor_fraction", vapor_fraction)
    if not 0.0 <= fraction <= 1.0:
        raise InputError(f"vapor_fraction = {fraction}: expected a number from 0 to 1")
    return _at_vapor_fraction(properties, z, P, fraction)


def _at_temperature(properties: PropertyModel, flows: Array, P: float, T: float) -> FlashResult:
    F = flows.sum()
    z = flows / F
    gas, heavy = ~properties.condensable, ~properties.volatile
    ordinary = ~(gas | heavy)
    x, y = _first_phases(z, gas, heavy)

    def k_at(x: Array, y: Array) -> Array:
        return np.where(ordinary, properties.k_value(np.asarray(T), np.asarray(P), x, y), 1.0)

    K = k_at(x, y)
    for _ in range(MAX_SUBSTITUTIONS):
        beta = _rachford_rice(z, K, ordinary, float(z[gas].sum()), float(z[heavy].sum()))
        x = np.where(ordinary, z / (1.0 + beta * (K - 1.0)), 0.0)
        y = np.where(ordinary, K * x, 0.0)
        x = np.where(heavy, z / max(1.0 - beta, 1e-300), x) if heavy.any() else x
        y = np.where(gas, z / max(beta, 1e-300), y) if gas.any() else y
        x, y = x / x.sum(), y / y.sum()
        new = k_at(x, y)
        change = np.abs(np.log(new / K)).max()
        K = new
        if change < FLASH_TOLERANCE:
            break
    else:
        raise ConvergenceError(f"flash at T = {T:g} K, P = {P:g} Pa: K still changes by {change:.2g} after "
                               f"{MAX_SUBSTITUTIONS} substitutions", best=(x, y), residual=float(change))
    share = beta * np.where(ordinary, K / (1.0 + beta * (K - 1.0)), 0.0)
    share = np.where(gas, 1.0, share)
    vapor = flows * np.clip(share, 0.0, 1.0)
    return FlashResult(T, vapor, flows - vapor)


def _first_phases(z: Array, gas: NDArray[np.bool_], heavy: NDArray[np.bool_]) -> tuple[Array, Array]:
    x, y = np.where(gas, 0.0, z), np.where(heavy, 0.0, z)
    if x.sum() <= 0 or y.sum() <= 0:
        raise InputError("flash: a feed of masked components alone has one phase; use LiquidFeed or VaporFeed")
    return x / x.sum(), y / y.sum()


def _rachford_rice(z: Array, K: Array, ordinary: NDArray[np.bool_], gas: float, heavy: float) -> float:
    """Vapour fraction, 0..1: sum y - sum x = 0, monotone between its poles."""
    zo, d = z[ordinary], K[ordinary] - 1.0

    def excess(beta: float) -> float:
        value = float((zo * d / (1.0 + beta * d)).sum())
        if gas:
            value += gas / beta
        if heavy:
            value -= heavy / (1.0 - beta)
        return value

    low, high = (1e-14 if gas else 0.0), (1.0 - 1e-14 if heavy else 1.0)
    if not gas and excess(low) <= 0:
        return 0.0
    if not heavy and excess(high) >= 0:
        return 1.0
    return float(brentq(excess, low, high, xtol=1e-16, rtol=8.9e-16, maxiter=500))


def _at_vapor_fraction(properties: PropertyModel, flows: Array, P: float, wanted: float) -> FlashResult:
    z = flows / flows.sum()
    gas, heavy = float(z[~properties.condensable].sum()), float(z[~properties.volatile].sum())
    if not gas <= wanted <= 1.0 - heavy:
        raise InputError(f"vapor_fraction = {wanted:g}: the non-condensing components alone make {gas:g} of the feed, "
                         f"the non-volatile ones {heavy:g} stay in the liquid; give the temperature")
    if gas or heavy:
        low, high = _bracket(properties, flows, P, wanted)
    else:
        if wanted == 0.0:
            boiling, _ = bubble_point(properties, P, z)
            return FlashResult(float(boiling), np.zeros_like(flows), flows.copy())
        low, high = float(bubble_point(properties, P, z)[0]), float(dew_point(properties, P, z)[0])
        if wanted == 1.0:
            return FlashResult(high, flows.copy(), np.zeros_like(flows))
        if high - low < 1e-9 * low:
            return FlashResult(low, flows * wanted, flows * (1.0 - wanted))
    found = _two_phase(properties, flows, P, wanted, low + wanted * (high - low))
    if found is not None:
        return found
    if wanted in (0.0, 1.0):
        raise ConvergenceError(f"flash at vapor_fraction = {wanted:g}, P = {P:g} Pa: no temperature found between "
                               f"{low:g} and {high:g} K; give the temperature")
    T = brentq(lambda t: _at_temperature(properties, flows, P, t).vapor_fraction - wanted, low, high, xtol=1e-11,
               rtol=8.9e-16)
    return _at_temperature(properties, flows, P, float(T))


def _two_phase(properties: PropertyModel, flows: Array, P: float, beta: float, T: float) -> FlashResult | None:
    """Newton's method in T at a vapour fraction strictly between the limits, K substituted; None if it fails."""
    z = flows / flows.sum()
    gas, heavy = ~properties.condensable, ~properties.volatile
    ordinary = ~(gas | heavy)
    x, y = _first_phases(z, gas, heavy)
    gas_share, heavy_share = float(z[gas].sum()), float(z[heavy].sum())
    low, high = getattr(properties, "T_range", (1.0, 1e5))
    pressure = np.asarray(P)

    def k_at(T: float, x: Array, y: Array) -> Array:
        return np.where(ordinary, properties.k_value(np.asarray(T), pressure, x, y), 1.0)

    for _ in range(MAX_SUBSTITUTIONS):
        K, step = k_at(T, x, y), 1e-3 if T + 1e-3 < high else -1e-3
        slope = (k_at(T + step, x, y) - K) / step
        rest = 1.0 + beta * (K - 1.0)
        excess = float(np.where(ordinary, z * (K - 1.0) / rest, 0.0).sum())
        excess += gas_share / beta if gas_share else 0.0
        excess -= heavy_share / (1.0 - beta) if heavy_share else 0.0
        change = float(np.clip(-excess / (z * slope / rest ** 2)[ordinary].sum(), -20.0, 20.0))
        T = min(max(T + change, low), high)
        new_x, new_y = np.where(gas, 0.0, z / rest), np.where(heavy, 0.0, K * z / rest)
        new_x[heavy] = z[heavy] / (1.0 - beta) if heavy_share else 0.0
        new_y[gas] = z[gas] / beta if gas_share else 0.0
        new_x, new_y = new_x / new_x.sum(), new_y / new_y.sum()
        moved = max(float(np.abs(new_x - x).max()), float(np.abs(new_y - y).max()), abs(change) / T)
        x, y = new_x, new_y
        if moved < FLASH_TOLERANCE * 10.0:
            share = np.where(ordinary, beta * K / rest, np.where(gas, 1.0, 0.0))
            vapor = flows * share
            return FlashResult(T, vapor, flows - vapor)
    return None


def _bracket(properties: PropertyModel, flows: Array, P: float, wanted: float) -> tuple[float, float]:
    low, high = getattr(properties, "T_range", (100.0, 1000.0))
    temperatures = np.linspace(low, high, 25)
    below = None
    for T in temperatures:
        fraction = _at_temperature(properties, flows, P, float(T)).vapor_fraction
        if fraction > 0.0 and fraction >= wanted - 1e-12:
            if below is None:
                break
            return below, float(T)
        below = float(T)
    raise InputError(f"vapor_fraction = {wanted:g}: not reached between {low:g} and {high:g} K; give the temperature")


@dataclass(frozen=True)
class StageFeeds:
    """What the feeds bring to each stage, (S, n) mol/s, with enthalpy flows W, (S,), and mixing temperatures K, (S,).

    Temperatures weigh the streams by their heat capacity flows; zero where no such stream enters.
    """

    vapor: Array
    liquid: Array
    vapor_enthalpy: Array
    liquid_enthalpy: Array
    vapor_temperature: Array
    liquid_temperature: Array
    streams: tuple[FlashResult, ...]


def stage_feeds(feeds: tuple[AnyFeed, ...], pressures: Array, properties: PropertyModel) -> StageFeeds:
    """All feeds flashed at the pressures of their stages and added up."""
    S, n = pressures.shape[0], len(properties.names)
    flows, enthalpy = np.zeros((2, S, n)), np.zeros((2, S))
    weight, weighted = np.zeros((2, S)), np.zeros((2, S))
    streams = []
    for k, feed in enumerate(feeds):
        if feed.flows.shape != (n,):
            raise InputError(f"feeds[{k}].flows: {feed.flows.shape[0]} components, the property model has {n}")
        j = feed.stage - 1
        split = _split(feed, float(pressures[j]), properties, k)
        streams.append(split)
        T, P = np.asarray(split.temperature), np.asarray(pressures[j])
        for phase, part in enumerate((split.vapor, split.liquid)):
            total = part.sum()
            if total <= 0:
                continue
            molar = properties.liquid_enthalpy if phase else properties.vapor_enthalpy
            H = part @ np.broadcast_to(molar(T, P, part / total), (n,))
            up = part @ np.broadcast_to(molar(T + 1e-3, P, part / total), (n,))
            capacity = max((up - H) / 1e-3, 1e-9 * total)
            flows[phase, j] += part
            enthalpy[phase, j] += H
            weight[phase, j] += capacity
            weighted[phase, j] += capacity * T
    temperature = weighted / np.where(weight > 0, weight, 1.0)
    return StageFeeds(flows[0], flows[1], enthalpy[0], enthalpy[1], temperature[0], temperature[1], tuple(streams))


def _split(feed: AnyFeed, P: float, properties: PropertyModel, k: int) -> FlashResult:
    zero = np.zeros_like(feed.flows)
    masks = {LiquidFeed: properties.condensable, VaporFeed: properties.volatile}
    allowed = masks.get(type(feed))
    if allowed is not None:
        for i in np.flatnonzero((feed.flows > 0) & ~allowed):
            phase = "liquid" if isinstance(feed, LiquidFeed) else "vapour"
            raise InputError(f"feeds[{k}].flows[{i}] = {feed.flows[i]:g}: {properties.names[i]} is never in the "
                             f"{phase}")
    if isinstance(feed, LiquidFeed):
        return FlashResult(feed.temperature, zero, feed.flows)
    if isinstance(feed, VaporFeed):
        return FlashResult(feed.temperature, feed.flows, zero)
    assert isinstance(feed, Feed)
    return flash(properties, feed.flows, P, temperature=feed.temperature, vapor_fraction=feed.vapor_fraction)
