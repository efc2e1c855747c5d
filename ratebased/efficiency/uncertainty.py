"""Intervals of the efficiencies from the scatter of their inputs, and which input dominates.

One scrambled Sobol set, normal scores, all samples of all rows in one batched pass; first-order shares
b_j^2 var(z_j)/var from one linear regression on the scores.
"""
from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, fields, replace

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from correlations.gas_diffusivity import fuller
from correlations.liquid_diffusivity import wilke_chang

from ..equipment import Contactor, ContactState, Hardware, TransferCoefficients, by_contactor
from ..errors import InputError
from ..interface import FilmState, InterfaceFlux
from ..properties.protocol import Array, LiquidTransport, Mask, PropertyModel, VaporTransport
from ..stage_profile import StageProfile
from .definitions import equilibrium_vapor, murphree_vapor, small_driving_force
from .rating import RatingOptions, RowGroup, bulk_states, contact_rows, packed_rows

GOOD_REGRESSION = 0.8
"""Share of the variance a linear regression must explain before its shares are reported."""

DEVIATION = 1.25
"""Standard deviation over mean absolute error of a normal scatter, sqrt(pi/2)."""

SAMPLE_TOLERANCE = 1e-7
"""Of the interfaces of the samples: far below any spread, two iterations fewer."""

CHUNK = 4096
"""Stages solved in one batch: bounds the memory, and fits the caches."""


@dataclass(frozen=True)
class Uncertainty:
    """Relative standard deviations of the inputs, lognormal, independent of each other.

    vapor, liquid : pair coefficients of each phase. area : interfacial area. None takes the mean error the contactor's
        correlation has in print, times 1.25 (a normal scatter of mean absolute error e has the standard deviation
        e sqrt(pi/2)), else `assumed`. vapor_diffusivity, liquid_diffusivity : None takes those of Fuller's and of Wilke
        & Chang's equations. k_value : of each component's K, one factor for y* and the interface.
    assumed : where nothing is published (the result says where it was used).
    samples : a power of two. seed : of the scrambling.
    """

    vapor: float | None = None
    liquid: float | None = None
    area: float | None = None
    vapor_diffusivity: float | None = None
    liquid_diffusivity: float | None = None
    k_value: float = 0.03
    assumed: float = 0.20
    samples: int = 256
    seed: int = 1

    def __post_init__(self) -> None:
        for name in ("vapor", "liquid", "area", "vapor_diffusivity", "liquid_diffusivity", "k_value", "assumed"):
            value = getattr(self, name)
            if value is not None and not 0 <= value < 2:
                raise InputError(f"{name} = {value}: expected a relative standard deviation from 0 to below 2")
        if self.samples < 8 or self.samples & (self.samples - 1):
            raise InputError(f"samples = {self.samples}: expected a power of two, 8 or more")

    def spreads(self, contactor: Contactor) -> tuple[dict[str, float], tuple[str, ...]]:
        """Relative standard deviation of each input but K, and the names of those that were assumed."""
        used = getattr(contactor, "correlations", {})
        found: dict[str, float] = {}
        assumed = []
        for name in ("vapor", "liquid", "area"):
            given = getattr(self, name)
            if given is None and name in used:
                error = used[name].record.validity.mean_error
                given = self.assumed if error is None else DEVIATION * error
                if error is None:
                    assumed.append(name)
            elif given is None and name != "area":
                given = self.assumed
                assumed.append(name)
            found[name] = given or 0.0
        for name, correlation in (("vapor_diffusivity", fuller), ("liquid_diffusivity", wilke_chang)):
            given = getattr(self, name)
            found[name] = DEVIATION * (correlation.record.validity.mean_error or 0.0) if given is None else given
        return found, tuple(assumed)


@dataclass(frozen=True)
class Interval:
    """Quantiles of a figure over the samples, (R, n)."""

    p05: Array
    p50: Array
    p95: Array


@dataclass(frozen=True)
class UncertaintyResult:
    """Spread of the rated rows; arrays over rows and components.

    inputs : names of the uncertain inputs, I of them. murphree, change (y_out - y_in) : intervals. hetp : of packed
    rows (R rows; infinite where more than a twentieth of the samples have none), or None. pole : the driving force
    y* - y_in changes sign among the samples or is too small in more than a twentieth of them, so the interval of E is
    none: read that of the change. negative : probability of E < 0. shares : first-order shares, (R, n, I), of E where
    `of_efficiency`, else of the change. explained : R^2 of the regression behind them. assumed : inputs whose
    scatter is not published and was assumed.
    """

    inputs: tuple[str, ...]
    murphree: Interval
    change: Interval
    hetp: Interval | None
    pole: Mask
    negative: Array
    shares: Array
    of_efficiency: Mask
    explained: Array
    assumed: tuple[str, ...]

    def dominating(self, row: int, component: int) -> str:
        """The input with the largest share, in words."""
        name = self.inputs[int(self.shares[row, component].argmax())]
        return WORDS.get(name, name)


@dataclass(frozen=True)
class ScaledVolatility:
    """A property model whose K-values are multiplied by `factor`, (B, n): one model for a whole batch."""

    model: PropertyModel
    factor: Array

    def __getattr__(self, name: str) -> object:
        return getattr(self.model, name)

    def entries(self, index: NDArray[np.int64]) -> ScaledVolatility:
        """The model of some entries of the batch."""
        return ScaledVolatility(self.model, self.factor[index])

    @property
    def names(self) -> tuple[str, ...]:
        return self.model.names

    @property
    def molar_mass(self) -> Array:
        return self.model.molar_mass

    @property
    def condensable(self) -> Mask:
        return self.model.condensable

    @property
    def volatile(self) -> Mask:
        return self.model.volatile

    def k_value(self, T: Array, P: Array, x: Array, y: Array) -> Array:
        return self.model.k_value(T, P, x, y) * self.factor

    def thermodynamic_factor(self, T: Array, P: Array, x: Array) -> Array:
        return self.model.thermodynamic_factor(T, P, x)

    def vapor_enthalpy(self, T: Array, P: Array, y: Array) -> Array:
        return self.model.vapor_enthalpy(T, P, y)

    def liquid_enthalpy(self, T: Array, P: Array, x: Array) -> Array:
        return self.model.liquid_enthalpy(T, P, x)

    def vapor_transport(self, T: Array, P: Array, y: Array) -> VaporTransport:
        return self.model.vapor_transport(T, P, y)

    def liquid_transport(self, T: Array, P: Array, x: Array) -> LiquidTransport:
        return self.model.liquid_transport(T, P, x)


@dataclass(frozen=True)
class _Change:
    """Factors of one batch on diffusivities, coefficients and area, each (B)."""

    vapor: Array
    liquid: Array
    area: Array
    vapor_diffusivity: Array
    liquid_diffusivity: Array

    def state(self, state: ContactState) -> ContactState:
        """Diffusivities scaled."""
        vapor = replace(state.vapor, diffusivity=state.vapor.diffusivity * self.vapor_diffusivity[:, None, None])
        liquid = replace(state.liquid, diffusivity=state.liquid.diffusivity * self.liquid_diffusivity[:, None, None])
        return replace(state, vapor=vapor, liquid=liquid)

    def coefficients(self, c: TransferCoefficients) -> TransferCoefficients:
        """Mass- and heat-transfer coefficients of a phase scaled alike (the analogy ties them)."""
        return replace(c, kappa_vapor=c.kappa_vapor * self.vapor[:, None, None], h_vapor=c.h_vapor * self.vapor,
                       kappa_liquid=c.kappa_liquid * self.liquid[:, None, None], h_liquid=c.h_liquid * self.liquid,
                       area=c.area * self.area)


WORDS = {"vapor": "the vapour coefficients", "liquid": "the liquid coefficients", "area": "the interfacial area",
         "vapor_diffusivity": "the vapour diffusivities", "liquid_diffusivity": "the liquid diffusivities"}
FACTORS = ("vapor", "liquid", "area", "vapor_diffusivity", "liquid_diffusivity")


def sample_rows(profile: StageProfile, hardware: Hardware, properties: PropertyModel, uncertainty: Uncertainty,
                options: RatingOptions | None = None) -> UncertaintyResult:
    """Spread of every contact row under the uncertain inputs; errors as for `rate_rows`.

    The froth by the fast default whatever `options` say of the point.
    """
    from scipy.stats import qmc  # slow to import, and only needed here

    options = replace(options or RatingOptions(), point=RatingOptions().point)
    rows, entering, packed = contact_rows(profile, properties)
    n, R, S = len(profile.names), rows.size, uncertainty.samples
    ordinary = np.flatnonzero(properties.condensable & properties.volatile)
    scores = ndtri(np.clip(qmc.Sobol(len(FACTORS) + ordinary.size, scramble=True, rng=uncertainty.seed).random(S),
                           1e-12, 1 - 1e-12))
    K = np.ones((S, n))
    K[:, ordinary] = np.exp(_log_deviation(uncertainty.k_value) * scores[:, len(FACTORS):])
    bulk = bulk_states(profile, rows, entering, packed)
    y_out, driving = np.zeros((S, R, n)), np.zeros((S, R, n))
    E, small = np.zeros((S, R, n)), np.zeros((S, R, n), bool)
    HETP, no_HETP = np.zeros((S, R, n)), np.ones((S, R, n), bool)
    assumed: set[str] = set()
    active = np.zeros(len(FACTORS), bool)
    members = [(contactor, part) for contactor, index in by_contactor(hardware, profile.number[rows])
               for part in (index[~packed[index]], index[packed[index]]) if part.size]
    for contactor, index in members:
        spreads, guessed = uncertainty.spreads(contactor)
        assumed |= set(guessed)
        factors = np.exp(_log_deviation([spreads[name] for name in FACTORS]) * scores[:, :len(FACTORS)])
        active |= np.array([spreads[name] > 0 for name in FACTORS])
        plain = RowGroup(profile, rows, entering, bulk, index, contactor, properties)
        near, shift = None, np.zeros((R, n))
        if not packed[index[0]]:
            # Samples take the liquid's path in one stretch, a third of the work; what that does to the rated row itself
            # is taken off every sample.
            rough = plain.trays(options, stretches=1)[0]
            shift[index] = plain.trays(options)[0].y - rough.y
            near = rough.point.middle
        place = np.zeros(R, np.int64)
        place[index] = np.arange(index.size)
        for s, j in _chunks(S, index):
            model = ScaledVolatility(properties, K[s])
            group = RowGroup(profile, rows, entering, bulk, j, contactor, model, _Change(*factors[s].T))
            x, T, P = profile.x[rows[j]], profile.T_L[rows[j]], profile.P[rows[j]]
            if packed[index[0]]:
                segment = group.segments()
                y_out[s, j] = segment.y
                heights = packed_rows(j, group, x, T, segment, options)
                HETP[s, j], no_HETP[s, j] = heights.HETP, heights.undefined
            else:
                start = None if near is None else repeated(near, place[j])
                y_out[s, j] = shift[j] + group.trays(options, start=start, tolerance=SAMPLE_TOLERANCE,
                                                     stretches=1)[0].y
            star = equilibrium_vapor(model, P, x, T, entering.y[j], y_out=y_out[s, j],
                                     at_liquid_temperature=options.at_liquid_temperature).composition
            driving[s, j] = star - entering.y[j]
            E[s, j] = murphree_vapor(entering.y[j], y_out[s, j], star)
            small[s, j] = small_driving_force(entering.y[j], star, options.driving_force_limit)
    change = y_out - entering.y
    pole = ((driving > 0).any(0) & (driving < 0).any(0)) | (small.mean(0) > 0.05)
    used = np.append(np.flatnonzero(active), len(FACTORS) + np.arange(ordinary.size))
    names = (*FACTORS, *(f"K {profile.names[i]}" for i in ordinary))
    of_E, explained_E = _shares(scores[:, used], np.where(pole, 0.0, E))
    of_change, explained = _shares(scores[:, used], change)
    good = (explained_E > GOOD_REGRESSION) & ~pole
    return UncertaintyResult(
        inputs=tuple(names[i] for i in used), murphree=_interval(E), change=_interval(change),
        hetp=_interval(np.where(no_HETP.mean(0) > 0.05, np.inf, HETP)) if packed.any() else None,
        pole=pole, negative=(E < 0).mean(0),
        shares=np.where(good[..., None], of_E, of_change), of_efficiency=good,
        explained=np.where(good, explained_E, explained), assumed=tuple(sorted(assumed)))


def _chunks(samples: int, index: NDArray[np.int64]) -> Iterator[tuple[NDArray[np.int64], NDArray[np.int64]]]:
    """(sample, row) of every combination, in pieces of at most `CHUNK`."""
    step = max(1, CHUNK // max(1, index.size))
    for start in range(0, samples, step):
        s = np.arange(start, min(samples, start + step))
        yield np.repeat(s, index.size), np.tile(index, s.size)


def repeated(interface: InterfaceFlux, index: NDArray[np.int64]) -> InterfaceFlux:
    """Entries of a batch of interfaces with one axis, an entry as often as `index` names it."""
    f = interface.films
    gammas = (None if g is None else g[index] for g in (f.gamma_vapor, f.gamma_liquid))
    films = FilmState(f.y[index], f.x[index], f.K_vapor[index], f.K_liquid[index], *gammas)
    arrays = {field.name: getattr(interface, field.name)[index] for field in fields(interface)
              if isinstance(getattr(interface, field.name), np.ndarray)}
    return replace(interface, **arrays, films=films, derivatives=None)


def _log_deviation(relative: float | list[float]) -> Array:
    """Standard deviation of the logarithm of a lognormal factor with this relative standard deviation."""
    return np.sqrt(np.log1p(np.square(relative)))


def _interval(values: Array) -> Interval:
    # Nearest-rank quantiles: an infinite sample must not turn its neighbours into NaN.
    return Interval(*np.quantile(values, (0.05, 0.5, 0.95), axis=0, method="nearest"))


def _shares(scores: Array, values: Array) -> tuple[Array, Array]:
    """First-order shares (R, n, I) and explained share of the variance (R, n), from one regression."""
    S = scores.shape[0]
    flat = values.reshape(S, -1)
    flat = flat - flat.mean(0)
    z = scores - scores.mean(0)
    slope = np.linalg.lstsq(z, flat, rcond=None)[0]
    total = (flat**2).sum(0)
    safe = np.where(total > 0, total, 1.0)
    shares = slope**2 * (z**2).sum(0)[:, None] / safe
    explained = np.where(total > 0, 1.0 - ((flat - z @ slope) ** 2).sum(0) / safe, 0.0)
    shape: Sequence[int] = values.shape[1:]
    return shares.T.reshape(*shape, -1), explained.reshape(shape)
