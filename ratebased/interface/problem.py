"""One batch of interfaces made ready: everything that does not change while the unknowns are sought."""
from __future__ import annotations

from dataclasses import dataclass, fields
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..film.blocks import coth_blocks, resistances
from ..properties.protocol import Mask, PropertyModel
from .film_rows import FilmMethod, FilmRows, rows_of
from .records import Bulk

Array = NDArray[np.float64]

ABUNDANT = 1e-3
"""Mole fraction a component must have in both phases of every interface of a batch to be left out of both films."""
MARGIN = 0.05
"""K, how far iterates of T_I keep from the ends of a property model's range."""


@dataclass(frozen=True)
class InterfaceProblem:
    """Bulks, resistances, enthalpies at the bulk temperatures and scales of a batch of interfaces.

    flux_scale : a typical c kappa of the two films in series, mol/(m2 s). energy_scale : of the energy row, W/m2: the
    largest latent heat times that flux, plus what both films conduct at one kelvin (so that neither a tiny nor a huge
    h spoils the row). rows : the film equations. pivot_* : the component left out of those of each film, the one that
    is nowhere a trace (a trace would lose its digits). ideal_* : [Gamma] is the identity for every composition probed,
    so it is not asked for again.
    """

    properties: PropertyModel
    P: Array
    y: Array
    x: Array
    T_V: Array
    T_L: Array
    h_V: Array
    h_L: Array
    K_V: Array
    K_L: Array
    H_V: Array
    H_L: Array
    flux_scale: Array
    energy_scale: Array
    rows: FilmRows
    pivot_vapor: int
    pivot_liquid: int
    ideal_vapor: bool
    ideal_liquid: bool

    @property
    def n(self) -> int:
        return int(self.y.shape[-1])

    @property
    def condensable(self) -> Mask:
        return self.properties.condensable

    @property
    def volatile(self) -> Mask:
        return self.properties.volatile

    @property
    def ordinary(self) -> Mask:
        return self.condensable & self.volatile

    @property
    def limits(self) -> tuple[float, float]:
        """Temperature range of the property model, K, less room for differences; wide open where it states none."""
        low, high = getattr(self.properties, "T_range", (1.0, 1e5))
        return float(low) + MARGIN, float(high) - MARGIN

    @property
    def exact_films(self) -> bool:
        """True where the films are those of Krishna and Standart, not an approximation of them."""
        return self.rows is coth_blocks

    def take(self, index: Any) -> InterfaceProblem:
        """The entries `index` of a problem with one batch axis."""
        values = {f.name: getattr(self, f.name) for f in fields(self)}
        values |= {k: v[index] for k, v in values.items() if isinstance(v, np.ndarray)}
        return InterfaceProblem(**(values | {"properties": entries(self.properties, index)}))


def entries(properties: PropertyModel, index: Any) -> PropertyModel:
    """The model of some entries of a batch: itself, unless its parameters vary over the batch (method `entries`)."""
    own = getattr(properties, "entries", None)
    return properties if own is None else own(index)


def prepare(vapor: Bulk, liquid: Bulk, properties: PropertyModel, P: Array, film: FilmMethod) -> InterfaceProblem:
    """The problem of two bulks; shapes broadcast, nothing is checked."""
    P, T_V, T_L = np.asarray(P, float), np.asarray(vapor.temperature, float), np.asarray(liquid.temperature, float)
    y, x = np.asarray(vapor.composition, float), np.asarray(liquid.composition, float)
    K_V = resistances(vapor.kappa, vapor.molar_density)
    K_L = resistances(liquid.kappa, liquid.molar_density)
    n = y.shape[-1]
    pairs = max(1, n * (n - 1))
    total = K_V.sum((-1, -2)) + K_L.sum((-1, -2))
    flux_scale = pairs / np.where(total > 0, total, pairs)
    H_V = np.asarray(properties.vapor_enthalpy(T_V, P, y))
    H_L = np.asarray(properties.liquid_enthalpy(T_L, P, x))
    h_V, h_L = np.asarray(vapor.heat_transfer, float), np.asarray(liquid.heat_transfer, float)
    latent = np.abs(H_V - H_L).max(-1)
    return InterfaceProblem(properties, P, y, x, T_V, T_L, h_V, h_L, K_V, K_L, H_V, H_L, flux_scale,
                            latent * flux_scale + h_V + h_L, rows_of(film), *_pivots(y, x),
                            _always_ideal(getattr(properties, "vapor_thermodynamic_factor", None), T_V, P, y,
                                          properties.volatile),
                            _always_ideal(properties.thermodynamic_factor, T_L, P, x, properties.condensable))


def _pivots(y: Array, x: Array) -> tuple[int, int]:
    """The component left out of the rows of each film: one abundant in both phases, else in its own."""
    smallest = [c.reshape(-1, c.shape[-1]).min(0, initial=1.0) for c in (y, x)]
    common = np.minimum(*smallest)
    if common.max() > ABUNDANT:
        return int(common.argmax()), int(common.argmax())
    return int(smallest[0].argmax()), int(smallest[1].argmax())


def _always_ideal(factor: Any, T: Array, P: Array, composition: Array, mask: Mask) -> bool:
    """True where [Gamma] is the identity at the bulks and at a probe mixture of no special composition.

    A pure bulk alone would not do: there the factor of every mixture is the identity in the components left.
    """
    if factor is None or composition.shape[-1] < 2:
        return True
    n = composition.shape[-1]
    probe = np.where(mask, 1.0 / (np.arange(n) + 1.7), 0.0)
    probe = np.broadcast_to(probe / probe.sum(), composition.shape)
    gamma = np.asarray(factor(np.stack([T, T]), P, np.stack([composition, probe])))
    return bool(np.array_equal(gamma, np.broadcast_to(np.eye(n - 1), gamma.shape)))
