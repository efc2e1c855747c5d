"""Heat-transfer coefficients by analogy from the pair mass-transfer coefficients."""
from __future__ import annotations

import numpy as np

from ..errors import InputError
from ..properties.protocol import LiquidTransport, VaporTransport
from .calls import pair_mean
from .protocol import Array


def analogy(kappa: Array, bulk: VaporTransport | LiquidTransport, exponent: float) -> Array:
    """h = kappa c cp Le^p of the mean pair coefficient and the mean pair diffusivity, W/(m2 K), (...).

    p is the exponent of kappa ~ D^p: replacing D by the thermal diffusivity gives it (penetration 1/2; Chilton &
    Colburn 1934: 2/3). Le = conductivity/(c cp D).
    """
    diffusivity = pair_mean(bulk.diffusivity)
    volumetric = bulk.molar_density * bulk.heat_capacity
    if not (volumetric > 0).all():
        raise InputError("heat capacity of a phase is zero: the heat-transfer analogy needs one")
    return np.asarray(pair_mean(kappa) * volumetric * (bulk.conductivity / (volumetric * diffusivity)) ** exponent)
