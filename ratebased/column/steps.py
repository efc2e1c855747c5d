"""Small pieces that both column models use: fractions and draws with their derivatives, limited Newton steps."""
from __future__ import annotations

import numpy as np

from ..properties.protocol import Array

TINY = 1e-40
"""Floor of positive unknowns, mol/s or mole fraction: far below anything that could leak into a balance."""


def fractions(flows: Array) -> tuple[Array, Array, Array]:
    """Total (...), fractions (..., n) and d fraction_i/d flow_k, (..., n, n)."""
    total = flows.sum(-1)
    z = flows / total[..., None]
    slope = (np.eye(flows.shape[-1]) - z[..., :, None]) / total[..., None, None]
    return total, z, slope


def after_draw(flows: Array, draw: Array) -> tuple[Array, Array]:
    """What goes on after a side draw of fixed rate, and its derivative by the flows, (..., n, n)."""
    total = flows.sum(-1)
    share = 1.0 - draw / total
    slope = share[..., None, None] * np.eye(flows.shape[-1])
    if draw.any():
        slope = slope + (flows * (draw / total ** 2)[..., None])[..., :, None]
    return flows * share[..., None], slope


def limited(value: Array, step: Array) -> Array:
    """Positive unknowns (..., n) after a step: downwards by the reciprocal, so that none turns negative and quadratic
    convergence is kept; upwards at most to three times the value plus the largest of all, so that a trace can grow to
    where it belongs but nothing runs away. Entries that are exactly zero (absent by a mask) stay."""
    present = value > 0
    ratio = step / np.where(present, value, 1.0)
    up = np.minimum(value + step, 3.0 * value + value.sum(-1).max())
    moved = np.where(ratio >= 0, up, value / (1.0 - np.minimum(ratio, 0.0)))
    return np.where(present, np.maximum(moved, TINY), 0.0)
