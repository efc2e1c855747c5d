"""Entropy production on the contact stages of a rate-based column, by cause.

The entropy flux through a film is (E - sum N_i mu_i)/T with the energy flux E and the fluxes N constant across it, so a
film produces E (1/T_d - 1/T_0) - sum N_i [mu_i/T]_0^d. mu_i/T comes from the property model itself: the vapour as an
ideal mixture, mu_i/T = g_i(T) + R ln(y_i P) with g_i' = -H_V,i/T^2 (Gibbs and Helmholtz), the liquid by equilibrium
with it, mu_i/T = g_i(T) + R ln(K_i x_i P). Entropies of streams follow as s = (H - mu)/T.

Fluxes and flows enter apart from each other: films and interface produce what N and E say, the bulks what the streams
that enter and leave say, each against mu_b/T and 1/T of the bulk. Their sum is the entropy that the streams carry off
only if component and energy balances of both phases hold: that is the closure. It closes for any model; whether the
model belongs to one Gibbs energy is what the inconsistency term shows.
"""
from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import GAS_CONSTANT, Array, PropertyModel
from ..show import Shown
from .profile import Profile

if TYPE_CHECKING:
    import pandas as pd

NODES, WEIGHTS = np.polynomial.legendre.leggauss(12)


@dataclass(frozen=True, eq=False)
class EntropyProduction(Shown):
    """W/K of each contact stage, (C,).

    vapor_diffusion, liquid_diffusion: R sum N_i ln(a_0/a_d) of the films. vapor_conduction, liquid_conduction: of the
    heat conducted in them. vapor_mixing, liquid_mixing: entering streams against the bulk. inconsistency: what is left
    over, zero when K, enthalpies and heat capacities of the model belong to one Gibbs energy. total: their sum, films
    and interface by the fluxes, bulks by the flows. streams: the entropies of the streams of the stage and its duty
    alone; closure: |total - streams| over the turnover, zero when the fluxes are those of the flows.
    """

    stage: NDArray[np.int64]
    vapor_diffusion: Array
    liquid_diffusion: Array
    vapor_conduction: Array
    liquid_conduction: Array
    vapor_mixing: Array
    liquid_mixing: Array
    inconsistency: Array
    streams: Array
    closure: Array

    @property
    def total(self) -> Array:
        """Sum of all causes, W/K, (C,)."""
        parts: Array = (self.vapor_diffusion + self.liquid_diffusion + self.vapor_conduction + self.liquid_conduction
                        + self.vapor_mixing + self.liquid_mixing + self.inconsistency)
        return parts

    def to_frame(self) -> pd.DataFrame:
        """One row a contact stage, W/K."""
        import pandas as pd
        names = [n for n in self.__dataclass_fields__ if n not in ("stage", "closure")]
        return pd.DataFrame({"stage": self.stage} | {f"{n}_W_K": getattr(self, n) for n in names}
                            | {"total_W_K": self.total})


class _Potentials:
    """mu_i/T of both phases.

    g_i(T), zero at one temperature, is the same for every stream: its enthalpies are those of one vapour (and, for a
    component that never boils, one liquid) of mean composition and pressure.
    """

    def __init__(self, model: PropertyModel, profile: Profile) -> None:
        self.model = model
        self.T_0, self.P_0 = float(np.mean(profile.T_L)), float(np.mean(profile.P))
        c = profile.contact_index
        self.y_0, self.x_0 = profile.y[c].mean(0), profile.x[c].mean(0)

    def standard(self, T: Array) -> Array:
        """g_i(T): minus the integral of H_i/T^2 from T_0, Gauss-Legendre."""
        half = 0.5 * (np.asarray(T, float) - self.T_0)
        P = np.broadcast_to(self.P_0, half.shape)
        shape = (*half.shape, self.y_0.size)
        y, x = np.broadcast_to(self.y_0, shape), np.broadcast_to(self.x_0, shape)
        total = np.zeros(shape)
        for node, weight in zip(NODES, WEIGHTS):
            t = self.T_0 + half * (1.0 + node)
            H = np.asarray(self.model.vapor_enthalpy(t, P, y))
            if not self.model.volatile.all():
                H = np.where(self.model.volatile, H, self.model.liquid_enthalpy(t, P, x))
            total -= weight * (half / t ** 2)[..., None] * H
        return total

    def vapor(self, T: Array, P: Array, y: Array) -> Array:
        return self.standard(T) + GAS_CONSTANT * _ln(y * P[..., None])

    def liquid(self, T: Array, P: Array, x: Array, y: Array) -> Array:
        model = self.model
        both = model.condensable & model.volatile
        K = np.where(both, model.k_value(T, P, x, y), 0.0)
        bound = _ln(np.where(model.volatile, K * x * P[..., None], x))
        return self.standard(T) + GAS_CONSTANT * bound


def _ln(a: Array) -> Array:
    """Logarithm, zero for absent components: they carry no flow."""
    return np.log(np.where(a > 0, a, 1.0))


def entropy_production(profile: Profile, *, properties: PropertyModel | None = None) -> EntropyProduction:
    """Entropy produced on each contact stage of a rate-based column, W/K.

    Needs moderate pressure: the vapour is taken as an ideal mixture. Heat added to a stage enters at its bulk liquid
    temperature. Feeds of one phase to one stage count as one stream.

    Raises
    ------
    InputError : an equilibrium profile, or a loaded one without property model.
    """
    model = profile.model_or(properties)
    r = profile.record()
    c = profile.contact_index
    P, A = profile.P[c], r.area
    mu = _Potentials(model, profile)
    y_b, x_b, T_V, T_L = r.y_bulk, r.x_bulk, r.T_V_bulk, r.T_L_bulk
    vapor_b, liquid_b = mu.vapor(T_V, P, y_b), mu.liquid(T_L, P, x_b, y_b)
    vapor_I, liquid_I = mu.vapor(r.T_I, P, r.y_I), mu.liquid(r.T_I, P, r.x_I, r.y_I)
    N, E = r.N, r.energy_flux
    # an absent or masked component has N = 0; its potential is arbitrary
    vapor_film = A * (E * (1.0 / r.T_I - 1.0 / T_V) - (N * (vapor_I - vapor_b)).sum(-1))
    liquid_film = A * (E * (1.0 / T_L - 1.0 / r.T_I) - (N * (liquid_b - liquid_I)).sum(-1))
    interface = -A * (N * (liquid_I - vapor_I)).sum(-1)
    vapor_diffusion = A * GAS_CONSTANT * (N * (_ln(y_b) - _ln(r.y_I))).sum(-1)
    K_I, K_b = model.k_value(r.T_I, P, r.x_I, r.y_I), model.k_value(r.T_I, P, x_b, r.y_I)
    both = model.condensable & model.volatile
    activity = _ln(np.where(both, K_I * r.x_I, 0.0)) - _ln(np.where(both, K_b * x_b, 0.0))
    liquid_diffusion = A * GAS_CONSTANT * (N * activity).sum(-1)
    cp_V = _mean_cp(model.vapor_enthalpy, vapor_heat_capacity(model, r.T_I, P, y_b), T_V, r.T_I, P, y_b)
    cp_L = _mean_cp(model.liquid_enthalpy, liquid_heat_capacity(model, r.T_I, P, x_b), T_L, r.T_I, P, x_b)
    q_V = E - (N * model.vapor_enthalpy(T_V, P, y_b)).sum(-1)
    q_L = E - (N * model.liquid_enthalpy(T_L, P, x_b)).sum(-1)
    vapor_conduction = A * _conduction(q_V, (N * cp_V).sum(-1), T_V, r.T_I)
    liquid_conduction = -A * _conduction(q_L, (N * cp_L).sum(-1), T_L, r.T_I)
    v = _Phase(profile, mu, True, y_b, T_V)
    l = _Phase(profile, mu, False, x_b, T_L)
    duty = profile.duty[c] / T_L
    total = vapor_film + liquid_film + interface + v.against_bulk(vapor_b) + l.against_bulk(liquid_b)
    vapor_mixing, liquid_mixing = v.mixing(), l.mixing()
    inconsistency = total - (vapor_diffusion + liquid_diffusion + vapor_conduction + liquid_conduction + vapor_mixing
                             + liquid_mixing)
    streams = v.leaving - v.entering + l.leaving - l.entering - duty
    turnover = sum(np.abs(part) for part in (v.leaving, v.entering, l.leaving, l.entering))
    return EntropyProduction(r.stage, vapor_diffusion, liquid_diffusion, vapor_conduction, liquid_conduction,
                             vapor_mixing, liquid_mixing, inconsistency, streams, np.abs(total - streams) / turnover)


def _mean_cp(enthalpy: object, slope: Array, T_0: Array, T_1: Array, P: Array, z: Array) -> Array:
    assert callable(enthalpy)
    dT = (T_1 - T_0)[..., None]
    near = np.abs(dT) < 1e-6
    difference = np.asarray(enthalpy(T_1, P, z)) - np.asarray(enthalpy(T_0, P, z))
    return np.where(near, slope, difference / np.where(near, 1.0, dT))


def _conduction(q_0: Array, flow_cp: Array, T_0: Array, T_1: Array) -> Array:
    """Integral of -q/T^2 dT from T_0 to T_1, q = q_0 - flow_cp (T - T_0): the heat conducted across a film."""
    return (q_0 + flow_cp * T_0) * (1.0 / T_1 - 1.0 / T_0) + flow_cp * np.log(T_1 / T_0)


class _Phase:
    """The streams of one phase at the contact stages: two that enter (neighbour, feed) and one that leaves.

    Each carries the enthalpy that it has where it leaves and the entropy of its own state at the pressure of the stage.
    """

    def __init__(self, profile: Profile, mu: _Potentials, vapor: bool, z_b: Array, T_b: Array) -> None:
        self.mu, self.is_vapor, self.z_b, self.T_b = mu, vapor, z_b, T_b
        model = mu.model
        self.enthalpy = model.vapor_enthalpy if vapor else model.liquid_enthalpy
        c, S = profile.contact_index, profile.stages
        self.P = profile.P[c]
        total, draw, z, T = (profile.V, profile.vapor_draw, profile.y, profile.T_V) if vapor else (
            profile.L, profile.liquid_draw, profile.x, profile.T_L)
        feed, T_feed = (profile.feeds.vapor, profile.feeds.vapor_temperature) if vapor else (
            profile.feeds.liquid, profile.feeds.liquid_temperature)
        place = c + (1 if vapor else -1)
        near = np.clip(place, 0, S - 1)
        coming = np.where(((place >= 0) & (place < S))[:, None], (total[:, None] * z)[near], 0.0)
        self.going = (((total + draw)[:, None] * z)[c], T[c], self.P)
        self.coming = ((coming, T[near], profile.P[near]), (feed[c], T_feed[c], self.P))
        self.entering = sum((self._entropy(*stream) for stream in self.coming), np.zeros(c.size))
        self.leaving = self._entropy(*self.going)

    def _state(self, flows: Array, T: Array) -> tuple[Array, Array]:
        """Composition and temperature of a stream; an empty one has those of the bulk."""
        total = flows.sum(-1, keepdims=True)
        return (np.where(total > 0, flows / np.where(total > 0, total, 1.0), self.z_b),
                np.where(total[..., 0] > 0, T, self.T_b))

    def _potential(self, T: Array, z: Array) -> Array:
        if self.is_vapor:
            return self.mu.vapor(T, self.P, z)
        return self.mu.liquid(T, self.P, z, np.broadcast_to(self.mu.y_0, z.shape))

    def _entropy(self, flows: Array, T: Array, P: Array) -> Array:
        z, T = self._state(flows, T)
        H = np.asarray(self.enthalpy(T, P, z))
        return np.asarray((flows * (H / T[..., None] - self._potential(T, z))).sum(-1))

    def against_bulk(self, mu_b: Array) -> Array:
        """Production between the streams and the bulk: sum flow (H/T_b - s - mu_b/T_b), entering minus leaving."""
        def against(flows: Array, T: Array, P: Array) -> Array:
            z, T = self._state(flows, T)
            H = np.asarray(self.enthalpy(T, P, z))
            potential = self._potential(T, z) - mu_b
            return np.asarray((flows * (H * (1.0 / self.T_b - 1.0 / T)[..., None] + potential)).sum(-1))

        return sum((against(*stream) for stream in self.coming), np.zeros(self.T_b.size)) - against(*self.going)

    def mixing(self) -> Array:
        """The same by its two causes: heat between unequal temperatures and diffusion at the temperature of the bulk.

        A stream gives sum flow [cp (ln(T_b/T) + T/T_b - 1) + R ln(a/a_b)]: never negative when it enters a mixed bulk.
        """
        return sum((self._toward_bulk(*stream) for stream in self.coming), np.zeros(self.T_b.size)
                   ) - self._toward_bulk(*self.going)

    def _toward_bulk(self, flows: Array, T: Array, _: Array) -> Array:
        z, T = self._state(flows, T)
        heat = np.asarray(self.enthalpy(self.T_b, self.P, z)) - np.asarray(self.enthalpy(T, self.P, z))
        ratio = self.T_b / T
        near = np.abs(ratio - 1.0) < 1e-9
        # cp (ln r - 1 + 1/r) with cp = heat/(T_b - T)
        factor = np.where(near, 0.0, (np.log(ratio) - 1.0 + 1.0 / ratio) / np.where(near, 1.0, self.T_b - T))
        activity = (self._potential(self.T_b, z) - self._potential(self.T_b, self.z_b))
        return np.asarray((flows * (heat * factor[..., None] + activity)).sum(-1))
