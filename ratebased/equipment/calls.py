"""Calling correlations for a batch of stages: no warnings, but a note for every range that a stage leaves."""
from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from correlations.record import Correlation

from .protocol import Array


class Calls:
    """Evaluates correlations for stages of shape `batch` and collects where each left its published range."""

    def __init__(self, batch: tuple[int, ...]) -> None:
        self.batch = batch
        self.notes: dict[str, NDArray[np.bool_]] = {}

    def __call__(self, function: Correlation[..., Any], **arguments: Any) -> Array:
        """The correlation for each stage, (...)."""
        self._note(function, arguments, 0)
        return np.broadcast_to(np.asarray(function.silent(**arguments), float), self.batch)

    def noted(self, function: Correlation[..., Any], **arguments: Any) -> Any:
        """The correlation's own result, for those that give more than one array."""
        self._note(function, arguments, 0)
        return function.silent(**arguments)

    def pairs(self, function: Correlation[..., Any], diffusivity: Array, **arguments: Any) -> Array:
        """The correlation for each pair of each stage, (..., n, n), from pair diffusivities (..., n, n)."""
        n = diffusivity.shape[-1]
        spread = {name: _for_pairs(value, self.batch) for name, value in arguments.items()}
        spread["diffusivity"] = np.where(np.eye(n, dtype=bool), 1e-9, diffusivity)
        self._note(function, spread, 2)
        return np.broadcast_to(np.asarray(function.silent(**spread), float), (*self.batch, n, n))

    def _note(self, function: Correlation[..., Any], arguments: dict[str, Any], pair_axes: int) -> None:
        for variable, mask in function.record.outside(**arguments).items():
            mask = np.asarray(mask)
            if pair_axes and mask.ndim >= pair_axes:
                mask = np.asarray(mask.any((-2, -1)))
            text = f"{function.__name__}: {variable} outside its published range"
            old = self.notes.get(text, np.zeros(self.batch, bool))
            self.notes[text] = old | np.broadcast_to(mask, self.batch)


def _for_pairs(value: Any, batch: tuple[int, ...]) -> Any:
    """Per-stage values against the two pair axes; plain numbers stay."""
    array = np.asarray(value, float)
    return array[..., None, None] if batch and array.ndim else array


def pair_mean(values: Array) -> Array:
    """Mean over the pairs, (..., n, n) -> (...); the value itself for a single component."""
    n = values.shape[-1]
    if n == 1:
        return np.asarray(values[..., 0, 0])
    off = ~np.eye(n, dtype=bool)
    return np.asarray((values * off).sum((-2, -1)) / (n * (n - 1)))
