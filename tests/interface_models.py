"""Property models and bulks for the interface tests: small, analytic, every derivative known."""
from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ratebased.interface import Bulk
from ratebased.properties import ConstantVolatility
from ratebased.properties.protocol import GAS_CONSTANT, KDerivatives


@dataclass(frozen=True)
class Margules:
    """Two-suffix Margules liquid, ln gamma_i = (A x)_i - x'Ax/2, A = interaction + interaction_heat/T, over vapour
    pressures alpha_i exp(a - b/T); a vapour of second virial coefficients (0: ideal gas) enters K through ln phi.

    Any parameter may carry a leading batch axis: the model is then one of a whole batch and `entries` picks from it.
    """

    names: tuple[str, ...]
    alpha: np.ndarray
    a: np.ndarray
    b: np.ndarray
    latent: np.ndarray
    vapor_cp: np.ndarray
    liquid_cp: np.ndarray
    reference_temperature: np.ndarray
    condensable: np.ndarray
    volatile: np.ndarray
    interaction: np.ndarray
    interaction_heat: np.ndarray
    virial: np.ndarray
    cp_slope: float = 0.0

    @property
    def molar_mass(self):
        return np.full(len(self.names), 0.05)

    @property
    def ordinary(self):
        return self.condensable & self.volatile

    def entries(self, index):
        fixed = {"names", "condensable", "volatile", "cp_slope"}
        own = {"alpha": 1, "a": 0, "b": 0, "latent": 1, "vapor_cp": 1, "liquid_cp": 1, "reference_temperature": 0,
               "interaction": 2, "interaction_heat": 2, "virial": 2}
        assert fixed | set(own) == set(self.__dataclass_fields__)
        return replace(self, **{k: getattr(self, k)[index] for k, core in own.items() if getattr(self, k).ndim > core})

    def _A(self, T):
        return self.interaction + self.interaction_heat / T[..., None, None]

    @staticmethod
    def _partial(A, x):
        Ax = (A @ x[..., None])[..., 0]
        return Ax - 0.5 * (x * Ax).sum(-1, keepdims=True)

    def k_value(self, T, P, x, y):
        T, P = np.asarray(T, float), np.asarray(P, float)
        ln = self._partial(self._A(T), x) + (self.a - self.b / T - np.log(P))[..., None]
        ln_phi = 2.0 * (P / (GAS_CONSTANT * T))[..., None] * self._partial(self.virial, y)
        return np.where(self.ordinary, self.alpha * np.exp(ln - ln_phi), 0.0)

    def thermodynamic_factor(self, T, P, x):
        A = self._A(np.asarray(T, float))
        slope = A - (A @ x[..., None])[..., 0][..., None, :]
        return np.eye(x.shape[-1] - 1) + x[..., :-1, None] * (slope - slope[..., -1:])[..., :-1, :-1]

    def vapor_enthalpy(self, T, P, y):
        t = np.asarray(T, float)[..., None] - np.asarray(self.reference_temperature)[..., None]
        return self.latent + self.vapor_cp * (t + 0.5 * self.cp_slope * t * t) + 0.0 * y

    def liquid_enthalpy(self, T, P, x):
        t = np.asarray(T, float)[..., None] - np.asarray(self.reference_temperature)[..., None]
        excess = GAS_CONSTANT * self._partial(self.interaction_heat, x)
        return self.liquid_cp * (t + 0.5 * self.cp_slope * t * t) + excess


@dataclass(frozen=True)
class DifferentiatedMargules(Margules):
    """The same with its own derivatives of ln K."""

    def k_value_derivatives(self, T, P, x, y):
        T, P = np.asarray(T, float), np.asarray(P, float)
        A = self._A(T)

        def by_moles(S, z):
            Sz = (S @ z[..., None])[..., 0]
            quadratic = (z * Sz).sum(-1)[..., None, None]
            return S - Sz[..., :, None] - Sz[..., None, :] + quadratic

        ordinary = self.ordinary[:, None]
        density = (P / (GAS_CONSTANT * T))[..., None]
        by_T = (self.b / T ** 2)[..., None] - self._partial(self.interaction_heat, x) / (T ** 2)[..., None] \
            + 2.0 * density * self._partial(self.virial, y) / T[..., None]
        vapor = np.where(ordinary, -2.0 * density[..., None] * by_moles(self.virial, y), 0.0)
        liquid = np.where(ordinary, by_moles(A, x), 0.0)
        return KDerivatives(np.where(self.ordinary, by_T, 0.0), liquid + 0.0 * vapor, vapor + 0.0 * liquid)


@dataclass(frozen=True)
class BatchVolatility:
    """Constant relative volatility with parameters of a whole batch: K_i = alpha_i exp(a - b/T)/P."""

    names: tuple[str, ...]
    alpha: np.ndarray
    a: np.ndarray
    b: np.ndarray
    latent: np.ndarray
    vapor_cp: np.ndarray
    liquid_cp: np.ndarray
    reference_temperature: np.ndarray
    condensable: np.ndarray
    volatile: np.ndarray

    @property
    def ordinary(self):
        return self.condensable & self.volatile

    def entries(self, index):
        own = ("alpha", "a", "b", "latent", "vapor_cp", "liquid_cp", "reference_temperature")
        return replace(self, **{k: getattr(self, k)[index] for k in own})

    def k_value(self, T, P, x, y):
        return self.alpha * np.where(self.ordinary, (np.exp(self.a - self.b / T) / P)[..., None], 0.0)

    def k_value_derivatives(self, T, P, x, y):
        slope = np.where(self.ordinary, (self.b / T ** 2)[..., None], 0.0)
        none = np.zeros((*slope.shape, slope.shape[-1]))
        return KDerivatives(slope, none, none)

    def thermodynamic_factor(self, T, P, x):
        m = x.shape[-1] - 1
        return np.broadcast_to(np.eye(m), (*x.shape[:-1], m, m))

    def vapor_enthalpy(self, T, P, y):
        return self.latent + self.vapor_cp * (T - self.reference_temperature)[..., None]

    def liquid_enthalpy(self, T, P, x):
        return self.liquid_cp * (T - self.reference_temperature)[..., None]

    def vapor_heat_capacity(self, T, P, y):
        return self.vapor_cp

    def liquid_heat_capacity(self, T, P, x):
        return self.liquid_cp


def symmetric(rng, size, n):
    A = np.triu(rng.uniform(-size, size, (n, n)), 1)
    return A + A.T


def margules(rng, n, *, size=1.0, heat=0.0, virial=0.0, cp_slope=0.0, condensable=None, volatile=None,
             model=DifferentiatedMargules):
    """A random mixture boiling near 350 K at one bar."""
    yes = np.ones(n, bool)
    return model(tuple("abcdefgh"[:n]), 10 ** rng.uniform(-0.5, 0.5, n), np.float64(23.0), np.float64(4025.0),
                 rng.uniform(2.5e4, 4.5e4, n), rng.uniform(30, 150, n), rng.uniform(70, 250, n), np.float64(340.0),
                 yes if condensable is None else np.array(condensable, bool),
                 yes if volatile is None else np.array(volatile, bool),
                 symmetric(rng, size, n), symmetric(rng, heat, n), symmetric(rng, virial, n), cp_slope)


def constant_volatility(rng, n, **masks):
    return ConstantVolatility("abcdefgh"[:n], 10 ** rng.uniform(-0.5, 0.5, n), rng.uniform(2.5e4, 4.5e4, n), a=23.0,
                              b=4025.0, vapor_heat_capacity=rng.uniform(30, 150, n),
                              liquid_heat_capacity=rng.uniform(70, 250, n), reference_temperature=340.0, **masks)


def pairs(rng, shape, n, base, spread=10.0):
    k = np.triu(base * spread ** rng.uniform(-0.5, 0.5, (*shape, n, n)), 1)
    return k + np.swapaxes(k, -1, -2)


def random_bulks(rng, shape, properties):
    """Bulks around the boiling range of the models above, masks respected."""
    n = len(properties.names)
    y = rng.gamma(1.0, 1.0, (*shape, n)) * properties.volatile + 0.02 * properties.volatile
    x = rng.gamma(1.0, 1.0, (*shape, n)) * properties.condensable + 0.02 * properties.condensable
    y, x = y / y.sum(-1, keepdims=True), x / x.sum(-1, keepdims=True)
    return (Bulk(y, rng.uniform(345, 370, shape), pairs(rng, shape, n, 0.02), rng.uniform(20, 100, shape),
                 np.full(shape, 35.0)),
            Bulk(x, rng.uniform(335, 355, shape), pairs(rng, shape, n, 1e-4), rng.uniform(500, 5000, shape),
                 np.full(shape, 1.2e4)))


MIXTURES = ("constant volatility", "margules", "gas and salt", "real vapor by differences")


def mixture_and_bulks(name):
    """One of `MIXTURES` and six pairs of bulks of it."""
    rng = np.random.default_rng(11)
    model = {"constant volatility": constant_volatility(rng, 4),
             "margules": margules(rng, 4, heat=150.0, cp_slope=4e-3),
             "gas and salt": margules(rng, 4, condensable=[True, True, True, False],
                                      volatile=[False, True, True, True]),
             "real vapor by differences": margules(rng, 3, heat=100.0, virial=1e-3, model=Margules)}[name]
    return model, *random_bulks(rng, (6,), model)
