"""From a solved state to a profile: products, duties, closures."""
from __future__ import annotations

import warnings
from typing import TYPE_CHECKING

import numpy as np

from ..errors import PlausibilityWarning
from ..properties.protocol import Array
from ..properties.saturation import bubble_point, smallest_gamma_eigenvalue
from .ends import bubble_vapor
from .problem import Problem
from .profile import ContactRecord, ProductStream, Profile, SolutionReport
from .start import State, masked

if TYPE_CHECKING:
    from .equilibrium import StageRows


def equilibrium_profile(problem: Problem, rows: StageRows, state: State, iterations: int, residual: float,
                        path: str = "direct") -> Profile:
    """Profile of an equilibrium column."""
    return make_profile(problem, state.v, state.T + rows.vapor_offset, state.l, state.T + rows.liquid_offset,
                        "equilibrium", iterations, residual, path)


def make_profile(problem: Problem, v: Array, T_V: Array, l: Array, T_L: Array, model: str, iterations: int,
                 residual: float, path: str, contact: ContactRecord | None = None, rate_factor: float = 0.0) -> Profile:
    """Profile from component flows before draws; rounding below zero is zero, and so is what is never in a phase."""
    column, properties = problem.column, problem.properties
    v, l = masked(problem, np.maximum(v, 0.0), np.maximum(l, 0.0))
    V, L = v.sum(1), l.sum(1)
    x = l / L[:, None]
    y = v / np.where(V > 0, V, 1.0)[:, None]
    products: dict[str, ProductStream] = {}
    T_V = T_V.copy()
    if problem.total_condenser:
        T_bubble = T_L[:1] + problem.subcooling
        y[0] = _condensate_vapor(problem, T_bubble, l[:1])
        T_V[0] = T_bubble[0]
        products["top"] = _stream(problem, "liquid", v[0], T_L[0], 0)
    else:
        products["top"] = _stream(problem, "vapor", v[0] * (1.0 - problem.vapor_draw[0] / V[0]), T_V[0], 0)
    products["bottom"] = _stream(problem, "liquid", l[-1] * (1.0 - problem.liquid_draw[-1] / L[-1]), T_L[-1],
                                 problem.S - 1)
    for j in np.flatnonzero(problem.liquid_draw):
        products[f"liquid_draw_{j + 1}"] = _stream(problem, "liquid", problem.liquid_draw[j] * x[j], T_L[j], int(j))
    for j in np.flatnonzero(problem.vapor_draw):
        products[f"vapor_draw_{j + 1}"] = _stream(problem, "vapor", problem.vapor_draw[j] * y[j], T_V[j], int(j))
    net_V, net_L = V - problem.vapor_draw, L - problem.liquid_draw
    if problem.total_condenser:
        net_V[0] = 0.0
    duties = _duties(problem, products, net_V, net_L, T_V, T_L, x, y)
    feed = problem.feed_components
    out = np.sum([p.flows for p in products.values()], axis=0)
    heat_in = (problem.feeds.vapor_enthalpy.sum() + problem.feeds.liquid_enthalpy.sum()
               + problem.duty[problem.contact].sum() + sum(duties.values()))
    heat_out = sum(p.enthalpy for p in products.values())
    flows_leaving = np.concatenate((V, L))
    eigenvalues = smallest_gamma_eigenvalue(properties, T_L, problem.P, x)
    least = int(np.argmin(eigenvalues))
    if eigenvalues[least] <= 0:
        warnings.warn(f"stage {least + 1}: [Gamma] has an eigenvalue of {eigenvalues[least]:.2g}, this liquid would "
                      "split in two", PlausibilityWarning, stacklevel=4)
    report = SolutionReport(
        iterations=iterations, residual=residual, component_closure=float(np.max(np.abs(out - feed) / feed)),
        energy_closure=float(abs(heat_in - heat_out) / problem.energy_scale), path=path,
        smallest_gamma_eigenvalue=float(eigenvalues[least]),
        smallest_flow=float(flows_leaving.min()), largest_rate_factor=rate_factor)
    return Profile(tuple(properties.names), model, column.kinds, T_L, T_V, problem.P, net_L, net_V, x, y,
                   column.segment_height, problem.feeds, problem.liquid_draw, problem.vapor_draw,
                   np.where(column.contact, problem.duty, 0.0), products, duties, report, contact, properties)


def _condensate_vapor(problem: Problem, T: Array, l: Array) -> Array:
    if problem.heavy.any():
        x = l / l.sum()
        return bubble_vapor(problem, problem.P[:1], T, l, x)[0]
    return bubble_point(problem.properties, problem.P[0], l[0] / l[0].sum(), T[0])[1]


def _stream(problem: Problem, phase: str, flows: Array, T: float, j: int) -> ProductStream:
    z = flows / flows.sum()
    properties = problem.properties
    molar = properties.liquid_enthalpy if phase == "liquid" else properties.vapor_enthalpy
    H = np.broadcast_to(molar(np.asarray(T), np.asarray(problem.P[j]), z), z.shape)
    return ProductStream(phase, flows, float(T), float(flows @ H))


def _duties(problem: Problem, products: dict[str, ProductStream], V: Array, L: Array, T_V: Array, T_L: Array, x: Array,
            y: Array) -> dict[str, float]:
    """Heat added in condenser and reboiler, by their own energy balances."""
    HV = (np.broadcast_to(problem.properties.vapor_enthalpy(T_V, problem.P, y), y.shape) * y).sum(1)
    HL = (np.broadcast_to(problem.properties.liquid_enthalpy(T_L, problem.P, x), x.shape) * x).sum(1)
    feeds = problem.feeds
    brought = feeds.vapor_enthalpy + feeds.liquid_enthalpy
    duties = {}
    if problem.top is not None:
        duties["condenser"] = float(products["top"].enthalpy + L[0] * HL[0] - V[1] * HV[1] - brought[0])
    if problem.reboiler:
        duties["reboiler"] = float(V[-1] * HV[-1] + products["bottom"].enthalpy - L[-2] * HL[-2] - brought[-1])
    return duties
