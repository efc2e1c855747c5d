"""A point of the froth: vapour rising in plug flow through liquid of one composition and temperature.

State u = (g_1..g_n, T_V), component flows of the vapour and its temperature; s runs from 0 (below) to 1 (above):
dg_i/ds = -area N_i and (sum_i g_i cp_i) dT_V/ds = -area q_V, q_V the conductive flux at the bulk face of the
vapour film.
Flows rather than mole fractions, because the total flow changes. A vapour whose partial molar enthalpies depend on its
temperature alone, as those of an ideal gas do, keeps its energy balance exactly.
"""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Protocol

import numpy as np
from scipy.integrate import solve_ivp
from scipy.linalg import expm

from ..equipment.protocol import Array, TransferCoefficients
from ..errors import ConvergenceError
from ..interface import Bulk, InterfaceFlux, interface_flux
from ..properties.differences import vapor_heat_capacity
from ..properties.protocol import GAS_CONSTANT, PropertyModel


@dataclass(frozen=True)
class FrothPoint:
    """What a point of the froth is given, batched over stages.

    V_in mol/s, y_in (..., n), T_V_in K: the vapour that enters. x (..., n), T_L: the liquid. P: Pa. coefficients: pair
    coefficients, heat-transfer coefficients and area; c_vapor, c_liquid: molar densities they go with, mol/m3. start:
    an interface of the same batch in a state close by, to start from. tolerance: of the interfaces.
    """

    V_in: Array
    y_in: Array
    T_V_in: Array
    x: Array
    T_L: Array
    P: Array
    coefficients: TransferCoefficients
    c_vapor: Array
    c_liquid: Array
    start: InterfaceFlux | None = None
    tolerance: float = 1e-10


NO_CONDUCTION = 1e-12
"""Factor on the heat-transfer coefficient beside a vapour that has no heat capacity."""

LocalCoefficients = Callable[[Array, Array, Array], TransferCoefficients]
"""Coefficients at a local state of the vapour: called with (V, y, T_V), each batched over stages."""


@dataclass(frozen=True)
class PointResult:
    """Vapour above a point of the froth.

    V mol/s, y (..., n), T_V K: the vapour that leaves. transferred: to the liquid, mol/s, (..., n). energy: enthalpy
    transferred to the liquid, W. sensitivity_vapor: d(g, T_V) out by d(g, T_V) in, (..., n+1, n+1).
    sensitivity_liquid: by (x, T_L), (..., n+1, n+1). flux: mean interfacial flux, mol/(m2 s), (..., n).
    interface_residual (films, equilibrium and sums, scaled), energy_residual: worst of the interfaces solved.
    energy_closure: enthalpy in - out against the energy flux integrated on its own, over the sum of the magnitudes of
    the enthalpy each component takes along: the error of the method (component flows close by construction). error:
    estimate of max|y|, (...). solutions: how many batched interface solutions it took. middle: the interface at the
    mean state.
    """

    V: Array
    y: Array
    T_V: Array
    transferred: Array
    energy: Array
    sensitivity_vapor: Array
    sensitivity_liquid: Array
    flux: Array
    interface_residual: Array
    energy_residual: Array
    energy_closure: Array
    error: Array
    solutions: int
    middle: InterfaceFlux


class PointMethod(Protocol):
    """A way to take the vapour through the froth: `exponential_midpoint` or `integral`."""

    def __call__(self, point: FrothPoint, properties: PropertyModel, *,
                 local: LocalCoefficients | None = None) -> PointResult: ...


def exponential_midpoint(point: FrothPoint, properties: PropertyModel, *, local: LocalCoefficients | None = None,
                         steps: int = 1) -> PointResult:
    """The vapour above a point by one exponential step in component flows and temperature, or several.

    u_m = u_0 + (h/2) phi(h J_0/2) f_0 and u_1 = u_0 + h phi(h J_m) [f_m + J_m (u_0 - u_m)], phi(Z) = (exp Z - 1)/Z,
    J the Jacobian of the interface model itself. Two interface solutions a step. Exact where the interface is linear
    in the vapour's state; total flow, conduction and high-flux corrections are all inside f. Within 1 % of `integral`
    for vapours up to 80 K superheated. `local` re-evaluates the coefficients at the middle state.
    Source: exponential Rosenbrock-Euler step about the midpoint (Hochbruck & Ostermann, Acta Numerica 19 (2010) 209).
    """
    n = point.x.shape[-1]
    froth = _Froth(point, properties, local)
    u = froth.start()
    given = np.zeros(u.shape[:-1])
    total = np.zeros(u.shape)
    vapor = np.broadcast_to(np.eye(n + 1), (*u.shape, n + 1)).copy()
    liquid = np.zeros(vapor.shape)
    error = np.zeros(u.shape[:-1])
    h = 1.0 / steps
    for _ in range(steps):
        f0, J0, _, _, interface = froth.linearized(u)
        euler = h * phi_action(h * J0, f0[..., None])[..., 0]
        middle = u + 0.5 * h * phi_action(0.5 * h * J0, f0[..., None])[..., 0]
        fm, Jm, Wm, (Em, by_E), interface = froth.linearized(middle, interface)
        slope = fm + np.einsum("...ij,...j->...i", Jm, u - middle)
        phi = phi_action(h * Jm, np.broadcast_to(np.eye(n + 1), Jm.shape))
        action = h * phi @ np.concatenate((slope[..., None], Wm), -1)
        step = action[..., 0]
        given += h * (Em + (by_E * (u - middle)).sum(-1)) + h * (by_E * _phi_integral(h * Jm, h * slope)).sum(-1)
        propagator = np.eye(n + 1) + h * Jm @ phi
        liquid = propagator @ liquid + action[..., 1:]
        vapor = propagator @ vapor
        error += np.abs(step - euler)[..., :n].max(-1) / u[..., :n].sum(-1)
        total += step
        u = u + step
    return froth.result(u, -total[..., :n], given, vapor, liquid, error, 2 * steps, interface)


def integral(point: FrothPoint, properties: PropertyModel, *, local: LocalCoefficients | None = None,
             rtol: float = 1e-10) -> PointResult:
    """The vapour above a point by integration of the full interface model with error control: the yardstick.

    An explicit pair of order 8 (Dormand & Prince, J. Comput. Appl. Math. 6 (1980) 19; its DOP853 form, Hairer,
    Norsett & Wanner 1993) on all stages together, about a hundred interface solutions. The sensitivities are those of
    `exponential_midpoint`, which costs two solutions more and is read only by the liquid-mixing correction.
    """
    n = point.x.shape[-1]
    froth = _Froth(point, properties, local)
    u0 = froth.start()
    scale = np.concatenate((np.broadcast_to(point.V_in[..., None], point.y_in.shape),
                            np.full((*point.V_in.shape, 1), 100.0)), -1)
    worst = np.zeros((2, *point.V_in.shape))
    last: InterfaceFlux | None = None
    solutions = 0

    def slope(s: float, flat: Array) -> Array:
        nonlocal last, solutions
        state = flat.reshape(*u0.shape[:-1], n + 2)
        last, f, energy = froth.slope(state[..., :-1] * scale, last)
        solutions += 1
        worst[0] = np.maximum(worst[0], last.residual)
        worst[1] = np.maximum(worst[1], last.energy_residual)
        rate = np.concatenate((f / scale, (energy / enthalpy_scale)[..., None]), -1)
        return rate.ravel()

    latent = np.abs(properties.vapor_enthalpy(point.T_V_in, point.P, point.y_in)
                    - properties.liquid_enthalpy(point.T_L, point.P, point.x)).max(-1)
    enthalpy_scale = point.V_in * np.maximum(latent, GAS_CONSTANT * point.T_L)   # for the error control only
    start = np.concatenate((u0 / scale, np.zeros((*u0.shape[:-1], 1))), -1).ravel()
    run = solve_ivp(slope, (0.0, 1.0), start, method="DOP853", rtol=rtol, atol=rtol * 1e-2)
    if not run.success:
        raise ConvergenceError(f"integration up the froth stopped at s = {run.t[-1]:.3g}: {run.message}")
    end = run.y[:, -1].reshape(*u0.shape[:-1], n + 2)
    u = end[..., :-1] * scale
    quick = exponential_midpoint(point, properties, local=local)
    result = froth.result(u, u0[..., :n] - u[..., :n], end[..., -1] * enthalpy_scale, quick.sensitivity_vapor,
                          quick.sensitivity_liquid, np.full(u.shape[:-1], rtol), solutions + quick.solutions,
                          quick.middle)
    return replace(result, interface_residual=np.maximum(worst[0], quick.interface_residual),
                   energy_residual=np.maximum(worst[1], quick.energy_residual))


class _Froth:
    """The right-hand side du/ds of a batch of points, its Jacobian and the bookkeeping around it."""

    def __init__(self, point: FrothPoint, properties: PropertyModel, local: LocalCoefficients | None) -> None:
        self.point, self.properties, self.local = point, properties, local
        c = point.coefficients
        self.liquid = Bulk(point.x, point.T_L, c.kappa_liquid, c.h_liquid, point.c_liquid)
        self.worst = np.zeros((2, *point.V_in.shape))
        # A vapour without heat capacity has the temperature of its interface: it conducts nothing.
        self.without_heat = ~((point.y_in * self.capacity(self.start())).sum(-1) > 0)
        self.absent = (point.y_in == 0) & (point.x == 0)

    def start(self) -> Array:
        p = self.point
        return np.concatenate((p.V_in[..., None] * p.y_in, p.T_V_in[..., None]), -1)

    def interface(self, u: Array, last: InterfaceFlux | None, derivatives: bool) -> tuple[InterfaceFlux, Array]:
        p = self.point
        g, T_V = u[..., :-1], u[..., -1]
        V = g.sum(-1)
        y = np.maximum(g, 0.0) / np.maximum(g, 0.0).sum(-1, keepdims=True)
        coefficients, c_vapor, liquid = p.coefficients, p.c_vapor, self.liquid
        if self.local is not None:
            coefficients = self.local(V, y, T_V)
            c_vapor = self.properties.vapor_transport(T_V, p.P, y).molar_density
            liquid = replace(liquid, kappa=coefficients.kappa_liquid, heat_transfer=coefficients.h_liquid)
        h_vapor = np.where(self.without_heat, NO_CONDUCTION * coefficients.h_vapor, coefficients.h_vapor)
        vapor = Bulk(y, T_V, coefficients.kappa_vapor, h_vapor, c_vapor)
        answer = interface_flux(vapor, liquid, self.properties, p.P, start=p.start if last is None else last,
                                derivatives=derivatives, tolerance=p.tolerance)
        self.worst[0] = np.maximum(self.worst[0], answer.residual)
        self.worst[1] = np.maximum(self.worst[1], answer.energy_residual)
        return answer, coefficients.area

    def capacity(self, u: Array) -> Array:
        """cp_i of the vapour, J/(mol K)."""
        g = np.maximum(u[..., :-1], 0.0)
        return vapor_heat_capacity(self.properties, u[..., -1], self.point.P, g / g.sum(-1, keepdims=True))

    def slope(self, u: Array, last: InterfaceFlux | None) -> tuple[InterfaceFlux, Array, Array]:
        """The interface, du/ds and the enthalpy given to the liquid, W per unit of s."""
        answer, area = self.interface(u, last, False)
        heat = (u[..., :-1] * self.capacity(u)).sum(-1)
        warm = np.where(heat > 0, answer.q_vapor_bulk / np.where(heat > 0, heat, 1.0), 0.0)
        return (answer, -area[..., None] * np.concatenate((answer.N, warm[..., None]), -1),
                area * answer.energy_flux)

    def linearized(self, u: Array, last: InterfaceFlux | None = None
                   ) -> tuple[Array, Array, Array, tuple[Array, Array], InterfaceFlux]:
        """du/ds, its Jacobians by u and by the liquid's (x, T_L), and the enthalpy given, W, with its slope by u."""
        n = u.shape[-1] - 1
        answer, area = self.interface(u, last, True)
        d = answer.derivatives
        if d is None:
            raise ConvergenceError("the interface gave no derivatives")
        g = u[..., :-1]
        V = g.sum(-1)[..., None, None]
        y = g / V[..., 0]
        cp = self.capacity(u)
        heat = (g * cp).sum(-1)
        safe = np.where(heat > 0, heat, 1.0)[..., None]
        on = (heat > 0)[..., None]
        q = answer.q_vapor_bulk[..., None]
        warm = np.where(on, q / safe, 0.0)
        rows = np.concatenate((d.dN, np.where(on, d.dq_vapor_bulk / safe, 0.0)[..., None, :]), -2)
        by_y, by_T, by_liquid = rows[..., :n], rows[..., n], rows[..., n + 1:]
        by_g = (by_y - np.einsum("...ij,...j->...i", by_y, y)[..., None]) / V
        by_g[..., n, :] -= np.where(on, q * cp / safe**2, 0.0)
        a = -area[..., None, None]
        J = a * np.concatenate((by_g, by_T[..., None]), -1)
        by_E = np.concatenate(((d.dE[..., :n] - (d.dE[..., :n] * y).sum(-1, keepdims=True)) / V[..., 0],
                               d.dE[..., n:n + 1]), -1)
        energy = (area * answer.energy_flux, area[..., None] * by_E)
        return a[..., 0] * np.concatenate((answer.N, warm), -1), J, a * by_liquid, energy, answer

    def result(self, u: Array, transferred: Array, given: Array, vapor: Array, liquid: Array, error: Array,
               solutions: int, middle: InterfaceFlux) -> PointResult:
        p = self.point
        g = np.where(self.absent, 0.0, u[..., :-1])
        transferred = np.where(self.absent, 0.0, transferred)
        T_V = np.where(self.without_heat, middle.T_I, u[..., -1])
        V = g.sum(-1)
        y = g / V[..., None]
        H_in = p.V_in[..., None] * p.y_in * self.properties.vapor_enthalpy(p.T_V_in, p.P, p.y_in)
        H_out = g * self.properties.vapor_enthalpy(T_V, p.P, y)
        lost = (H_in - H_out).sum(-1)
        size = np.abs(H_in - H_out).sum(-1) + np.abs(given)
        area = p.coefficients.area
        return PointResult(V=V, y=y, T_V=T_V, transferred=transferred, energy=lost, sensitivity_vapor=vapor,
                           sensitivity_liquid=liquid, flux=transferred / area[..., None],
                           interface_residual=self.worst[0], energy_residual=self.worst[1],
                           energy_closure=np.abs(lost - given) / np.where(size > 0, size, 1.0), error=error,
                           solutions=solutions, middle=middle)


def _phi_integral(Z: Array, b: Array) -> Array:
    """Integral over s = 0..1 of s phi(s Z) b: the second phi function, (exp Z - 1 - Z)/Z^2 times b."""
    m = b.shape[-1]
    big = np.zeros((*Z.shape[:-2], m + 2, m + 2))
    big[..., :m, :m], big[..., :m, m], big[..., m, m + 1] = Z, b, 1.0
    return _exponential(big)[..., :m, m + 1]


def _exponential(matrix: Array) -> Array:
    with np.errstate(over="ignore", invalid="ignore"):
        result = np.asarray(expm(matrix))
    if not np.isfinite(result).all():
        failed = ~np.isfinite(result).all((-2, -1))
        raise ConvergenceError("the froth's step overflows: more transfer units than its linear response can carry; "
                               "use `integral`", failed=np.asarray(failed))
    return result


def phi_action(Z: Array, B: Array) -> Array:
    """phi(Z) B with phi(Z) = (exp Z - 1)/Z, Z (..., m, m), B (..., m, k): the corner of one matrix exponential."""
    m, k = B.shape[-2:]
    big = np.zeros((*Z.shape[:-2], m + k, m + k))
    big[..., :m, :m], big[..., :m, m:] = Z, B
    return _exponential(big)[..., :m, m:]
