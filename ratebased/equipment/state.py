"""The state of a stage as a contactor sees it, made from bulk states and a property model."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..properties.protocol import PropertyModel
from .protocol import ContactState


def contact_state(properties: PropertyModel, V: ArrayLike, L: ArrayLike, T_V: ArrayLike, T_L: ArrayLike, P: ArrayLike,
                  y: ArrayLike, x: ArrayLike, height: ArrayLike | None = None) -> ContactState:
    """Traffic and bulk properties of a batch of stages.

    V, L mol/s, T_V, T_L K, P Pa: (...). y, x: mole fractions, (..., n). height: of a packed segment, m, (...). The
    arguments are taken as they are: whoever owns the bulk states has checked them.
    """
    V, L, T_V, T_L, P = (np.asarray(value, float) for value in (V, L, T_V, T_L, P))
    y, x = np.asarray(y, float), np.asarray(x, float)
    return ContactState(V=V, L=L, vapor_molar_mass=y @ properties.molar_mass,
                        liquid_molar_mass=x @ properties.molar_mass, P=P,
                        vapor=properties.vapor_transport(T_V, P, y), liquid=properties.liquid_transport(T_L, P, x),
                        height=None if height is None else np.asarray(height, float))
