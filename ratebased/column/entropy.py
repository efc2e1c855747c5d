"""Entropy production on the contact stages of a rate-based column, by cause.

The entropy flux through a film is (E - sum N_i mu_i)/T with the energy flux E and the fluxes N constant across it, so a
film produces E (1/T_d - 1/T_0) - sum N_i [mu_i/T]_0^d. mu_i/T comes from the property model itself: the vapour as an
ideal mixture, mu_i/T = g_i(T) + R ln(y_i P) with g_i' = -H_V,i/T^2 (Gibbs and Helmholtz), the liquid by equilibrium
with it, mu_i/T = g_i(T) + R ln(K_i x_i P). Entropies of streams follow as s = (H - mu)/T, so the balance of a stage
closes for any model; whether the model belongs to one Gibbs energy is what the inconsistency term shows.
"""
from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import GAS_CONSTANT, Array, PropertyModel
from .profile import Profile

if TYPE_CHECKING:
    import pandas as pd

NODES, WEIGHTS = np.polynomial.legendre.leggauss(12)


@dataclass(frozen=True, eq=False)
class EntropyProduction:
    """W/K of each contact stage, (C,).

    vapor_diffusion, liquid_diffusion: R sum N_i ln(a_0/a_d) of the films. vapor_conduction, liquid_conduction: of the
    heat conducted in them. vapor_mixing, liquid_mixing: entering streams against the bulk. inconsistency: what is left
    of the films, zero when K, enthalpies and heat capacities of the model belong to one Gibbs energy. total: their sum.
    streams: the same from the entropies of the streams of the stage and its duty; closure: |total - streams| over the
    turnover.
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
    """mu_i/T and s_i of both phases, relative to g_i(T_0) = 0 at one temperature for all."""

    def __init__(self, model: PropertyModel, T_0: float) -> None:
        self.model, self.T_0 = model, T_0

    def standard(self, T: Array, P: Array, y: Array) -> Array:
        """g_i(T): minus the integral of H_V,i/T^2 from T_0, Gauss-Legendre."""
        half = 0.5 * (T - self.T_0)
        total = np.zeros(y.shape)
        for node, weight in zip(NODES, WEIGHTS):
            t = self.T_0 + half * (1.0 + node)
            total -= weight * (half / t ** 2)[..., None] * self.model.vapor_enthalpy(t, P, y)
        return total

    def vapor(self, T: Array, P: Array, y: Array) -> Array:
        return self.standard(T, P, y) + GAS_CONSTANT * _ln(y * P[..., None])

    def liquid(self, T: Array, P: Array, x: Array, y: Array) -> Array:
        model = self.model
        both = model.condensable & model.volatile
        K = np.where(both, model.k_value(T, P, x, y), 0.0)
        bound = self.standard(T, P, y) + GAS_CONSTANT * _ln(K * x * P[..., None])
        if model.volatile.all():
            return bound
        # a component that never boils has no vapour to refer to: an ideal solute with the enthalpy of the liquid
        half = 0.5 * (T - self.T_0)
        own = np.zeros(x.shape)
        for node, weight in zip(NODES, WEIGHTS):
            t = self.T_0 + half * (1.0 + node)
            own -= weight * (half / t ** 2)[..., None] * model.liquid_enthalpy(t, P, x)
        return np.where(model.volatile, bound, own + GAS_CONSTANT * _ln(x))


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
    mu = _Potentials(model, float(np.mean(profile.T_L)))
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
    inconsistency = (vapor_film + liquid_film + interface - vapor_diffusion - liquid_diffusion - vapor_conduction
                     - liquid_conduction)
    vapor_mixing, vapor_streams, size_V = _phase(profile, model, mu, c, True, y_b, T_V, vapor_b, A[:, None] * N,
                                                 A * q_V)
    liquid_mixing, liquid_streams, size_L = _phase(profile, model, mu, c, False, x_b, T_L, liquid_b, -A[:, None] * N,
                                                   -A * q_L)
    duty = profile.duty[c] / T_L
    liquid_mixing = liquid_mixing - duty
    streams = vapor_streams + liquid_streams - duty
    total = (vapor_film + liquid_film + interface) + vapor_mixing + liquid_mixing
    return EntropyProduction(r.stage, vapor_diffusion, liquid_diffusion, vapor_conduction, liquid_conduction,
                             vapor_mixing,
                             liquid_mixing, inconsistency, streams, np.abs(total - streams) / (size_V + size_L))


def _mean_cp(enthalpy: object, slope: Array, T_0: Array, T_1: Array, P: Array, z: Array) -> Array:
    assert callable(enthalpy)
    dT = (T_1 - T_0)[..., None]
    near = np.abs(dT) < 1e-6
    difference = np.asarray(enthalpy(T_1, P, z)) - np.asarray(enthalpy(T_0, P, z))
    return np.where(near, slope, difference / np.where(near, 1.0, dT))


def _conduction(q_0: Array, flow_cp: Array, T_0: Array, T_1: Array) -> Array:
    """Integral of -q/T^2 dT from T_0 to T_1, q = q_0 - flow_cp (T - T_0): the heat conducted across a film."""
    return (q_0 + flow_cp * T_0) * (1.0 / T_1 - 1.0 / T_0) + flow_cp * np.log(T_1 / T_0)


def _phase(profile: Profile, model: PropertyModel, mu: _Potentials, c: NDArray[np.intp], vapor: bool, z_b: Array,
           T_b: Array,
           mu_b: Array, gone: Array, heat_gone: Array) -> tuple[Array, Array, Array]:
    """Production of one phase's streams against its bulk, its net stream entropy (out - in) and the turnover."""
    S = profile.stages
    shift = 1 if vapor else -1
    flow = (profile.V + profile.vapor_draw)[:, None] * profile.y if vapor else \
        (profile.L + profile.liquid_draw)[:, None] * profile.x
    net = profile.V[:, None] * profile.y if vapor else profile.L[:, None] * profile.x
    T = profile.T_V if vapor else profile.T_L
    feed = profile.feeds.vapor if vapor else profile.feeds.liquid
    T_feed = profile.feeds.vapor_temperature if vapor else profile.feeds.liquid_temperature
    enthalpy = model.vapor_enthalpy if vapor else model.liquid_enthalpy
    P = profile.P[c]

    def entropy(flows: Array, T: Array, P: Array) -> Array:
        """(...,): of a stream."""
        total = flows.sum(-1, keepdims=True)
        z = flows / np.where(total > 0, total, 1.0)
        T = np.where(total[..., 0] > 0, T, float(np.mean(profile.T_L)))
        potential = mu.vapor(T, P, z) if vapor else mu.liquid(T, P, z, z)
        H = np.asarray(enthalpy(T, P, z))
        return np.asarray((flows * (H / T[..., None] - potential)).sum(-1))

    neighbour = np.clip(c + shift, 0, S - 1)
    inside = (c + shift >= 0) & (c + shift < S)
    incoming = np.where(inside[:, None], net[neighbour], 0.0)
    # each stream carries its entropy at its own state; pressure differences between stages are throttled by the stage
    s_in = entropy(incoming, T[neighbour], P) + entropy(feed[c], T_feed[c], P)
    s_out = entropy(flow[c], T[c], P)
    s_b = np.asarray(enthalpy(T_b, P, z_b)) / T_b[..., None] - mu_b
    mixing = s_out - s_in + (gone * s_b).sum(-1) + heat_gone / T_b
    return mixing, s_out - s_in, np.abs(s_out) + np.abs(s_in)
