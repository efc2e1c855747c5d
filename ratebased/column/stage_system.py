"""The equations of rate-based contact stages with their Jacobian blocks, vectorised over stages.

A stage has bulk unknowns w = (v, T_V, l, T_L), the component flows and temperatures that leave it, and interface
unknowns z = (N, u, T_I). Rows: n liquid balances, liquid energy, n vapour balances, vapour energy, then the 2n + 1 rows
of `ratebased.interface`. Neighbours enter through the streams that come in, so the rows fit any column.
"""
from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from ..equipment.protocol import TransferCoefficients
from ..interface import Bulk, InterfaceBlocks, interface_blocks
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import Array, PropertyModel
from .steps import fractions


@dataclass(frozen=True)
class StageUnknowns:
    """What leaves a stage before side draws, and its interface; batched over stages.

    v, l: component flows, mol/s, (..., n). T_V, T_L K. N: fluxes from vapour to liquid, mol/(m2 s). u: x_I,i or, for a
    non-condensing component, y_I,i. T_I K.
    """

    v: Array
    T_V: Array
    l: Array
    T_L: Array
    N: Array
    u: Array
    T_I: Array

    @property
    def z(self) -> Array:
        """(N, u, T_I) in one array, (..., 2n+1)."""
        return np.concatenate((self.N, self.u, self.T_I[..., None]), -1)

    def packed(self) -> Array:
        """All unknowns in the order (v, T_V, l, T_L, N, u, T_I), (..., 4n+3)."""
        return np.concatenate((self.v, self.T_V[..., None], self.l, self.T_L[..., None], self.z), -1)

    @classmethod
    def unpacked(cls, values: ArrayLike) -> StageUnknowns:
        """The inverse of `packed`."""
        a = np.asarray(values, float)
        n = (a.shape[-1] - 3) // 4
        i = np.cumsum([n, 1, n, 1, n, n])
        return cls(a[..., :n], a[..., n], a[..., i[1]:i[2]], a[..., i[2]], a[..., i[3]:i[4]], a[..., i[4]:i[5]],
                   a[..., i[5]])


@dataclass(frozen=True)
class Entering:
    """A phase as it enters a stage: flows mol/s, (..., n); temperature K; enthalpy flow, W.

    The temperature is used by stages whose bulk is a mean of both ends only; a mixture of streams has the one that its
    enthalpy implies.
    """

    flows: Array
    temperature: Array
    enthalpy: Array


@dataclass(frozen=True)
class Caloric:
    """Partial molar enthalpies, J/mol, and heat capacities, J/(mol K), of what leaves, vapour and liquid, (..., n)."""

    H_V: Array
    C_V: Array
    H_L: Array
    C_L: Array


@dataclass(frozen=True)
class StageBlocks:
    """Residuals and Jacobian blocks of a batch of stages; m = 2n+2 bulk rows, k = 2n+1 interface rows.

    bulk (..., m), interface (..., k): residuals. Blocks are named rows_by_columns; `vapor_in` and `liquid_in` have the
    n+2 columns (flows, temperature, enthalpy). interface_by_vapor_in and interface_by_liquid_in are None where no bulk
    state depends on what enters. films: the interface blocks themselves. y_bulk, T_V_bulk, x_bulk, T_L_bulk: the states
    that the films start from.
    """

    bulk: Array
    interface: Array
    bulk_by_bulk: Array
    bulk_by_interface: Array
    interface_by_bulk: Array
    interface_by_interface: Array
    bulk_by_vapor_in: Array
    bulk_by_liquid_in: Array
    interface_by_vapor_in: Array | None
    interface_by_liquid_in: Array | None
    films: InterfaceBlocks
    y_bulk: Array
    T_V_bulk: Array
    x_bulk: Array
    T_L_bulk: Array

    @property
    def residual(self) -> Array:
        """All rows, (..., 4n+3)."""
        return np.concatenate((self.bulk, self.interface), -1)

    @property
    def by_own(self) -> Array:
        """Derivative of all rows by the stage's own unknowns in the order of `StageUnknowns.packed`."""
        upper = np.concatenate((self.bulk_by_bulk, self.bulk_by_interface), -1)
        return np.concatenate((upper, np.concatenate((self.interface_by_bulk, self.interface_by_interface), -1)), -2)

    @property
    def by_vapor_in(self) -> Array:
        """Derivative of all rows by the entering vapour (flows, temperature, enthalpy), (..., 4n+3, n+2)."""
        return _stack(self.bulk_by_vapor_in, self.interface_by_vapor_in, self.interface.shape[-1])

    @property
    def by_liquid_in(self) -> Array:
        """Derivative of all rows by the entering liquid (flows, temperature, enthalpy), (..., 4n+3, n+2)."""
        return _stack(self.bulk_by_liquid_in, self.interface_by_liquid_in, self.interface.shape[-1])


    def by_vapor_below(self, H: Array, heat_capacity: Array) -> Array:
        """Derivative of all rows by flows and temperature of the vapour stream that enters, (..., 4n+3, n+1).

        H: its partial molar enthalpies, J/mol, (..., n); heat_capacity: its flow of heat capacity, W/K, (...). For one
        stream alone: in a mixture with a feed the temperature is that of the mixture.
        """
        return _by_stream(self.by_vapor_in, H, heat_capacity)

    def by_liquid_above(self, H: Array, heat_capacity: Array) -> Array:
        """`by_vapor_below` for the liquid."""
        return _by_stream(self.by_liquid_in, H, heat_capacity)


def _by_stream(block: Array, H: Array, heat_capacity: Array) -> Array:
    slope = block[..., :-1].copy()
    slope[..., :-1] += block[..., -1:] * H[..., None, :]
    slope[..., -1] += block[..., -1] * np.asarray(heat_capacity)[..., None]
    return slope


def _stack(upper: Array, lower: Array | None, k: int) -> Array:
    rest = np.zeros((*upper.shape[:-2], k, upper.shape[-1])) if lower is None else lower
    return np.concatenate((upper, rest), -2)


def stage_residuals(state: StageUnknowns, vapor_in: Entering, liquid_in: Entering, properties: PropertyModel,
                    P: ArrayLike, coefficients: TransferCoefficients, c_vapor: ArrayLike, c_liquid: ArrayLike, *,
                    duty: ArrayLike = 0.0, vapor_weight: ArrayLike = 0.0, liquid_weight: ArrayLike = 0.0,
                    vapor_temperature_weight: ArrayLike | None = None,
                    liquid_temperature_weight: ArrayLike | None = None,
                    flow_scale: float = 1.0, energy_scale: float = 1.0, y_interface: Array | None = None,
                    leaving: Caloric | None = None, held: InterfaceBlocks | None = None) -> StageBlocks:
    """Residuals of rate-based stages and their derivatives, for a column script of one's own.

    Parameters
    ----------
    state : what leaves the stages and their interfaces.
    vapor_in, liquid_in : what enters from below and from above, feeds included and draws of the neighbour taken off.
    properties, P : property model, pressures Pa.
    coefficients : pair coefficients m/s, heat-transfer coefficients W/(m2 K) and area m2 of each stage; taken as
        constants
        in the derivatives. c_vapor, c_liquid : molar densities of the films, mol/m3.
    duty : heat added to the liquid, W.
    vapor_weight, liquid_weight : share of the entering state in the bulk state that the film starts from: 0 for a phase
        mixed on the stage (bulk = leaving state), 1/2 for the mean of both ends. The temperatures have shares of their
        own where they are given.
    flow_scale, energy_scale : divide the balances (mol/s) and energy rows (W).
    y_interface : interface vapour at which K is first evaluated; None: the bulk vapour.
    leaving : enthalpies of what leaves, where they are known already.
    held : interface blocks of a state near by whose derivatives by the bulk states serve again (residuals are always
        those of `state`): near a solution they hardly change, and with a non-ideal liquid they are dear.

    Returns
    -------
    StageBlocks : rows liquid balances, liquid energy, vapour balances, vapour energy, interface. Signs: leaving minus
        entering, minus what the interface brings (N and energy positive from vapour to liquid). The scale of the
        interface's energy row is taken as constant in the derivatives. Nothing is checked: the
        kernels below trust their input.

    Source: nonequilibrium stage of Krishnamurthy & Taylor, AIChE J. 31 (1985) 449, with exact films.
    """
    v, T_V, l, T_L = state.v, state.T_V, state.l, state.T_L
    n = v.shape[-1]
    m, k = 2 * n + 2, 2 * n + 1
    batch = v.shape[:-1]
    fe, ee = 1.0 / flow_scale, 1.0 / energy_scale
    P = np.asarray(P, float)
    _, y, dy = fractions(v)
    _, x, dx = fractions(l)
    theta_V, theta_L = np.broadcast_to(vapor_weight, batch), np.broadcast_to(liquid_weight, batch)
    heat_V = theta_V if vapor_temperature_weight is None else np.broadcast_to(vapor_temperature_weight, batch)
    heat_L = theta_L if liquid_temperature_weight is None else np.broadcast_to(liquid_temperature_weight, batch)
    y_b, T_Vb, dy_b, dy_in = _bulk(y, T_V, dy, vapor_in, theta_V, heat_V)
    x_b, T_Lb, dx_b, dx_in = _bulk(x, T_L, dx, liquid_in, theta_L, heat_L)
    films = interface_blocks(
        Bulk(y_b, T_Vb, coefficients.kappa_vapor, coefficients.h_vapor, np.asarray(c_vapor, float)),
        Bulk(x_b, T_Lb, coefficients.kappa_liquid, coefficients.h_liquid, np.asarray(c_liquid, float)),
        properties, P, state.z, y_guess=y_interface, bulk_derivatives=held is None)
    slopes = films if held is None else held
    assert slopes.dw is not None and slopes.dE_V_dw is not None and slopes.dE_L_dw is not None
    if leaving is None:
        leaving = Caloric(np.broadcast_to(properties.vapor_enthalpy(T_V, P, y), v.shape),
                          vapor_heat_capacity(properties, T_V, P, y),
                          np.broadcast_to(properties.liquid_enthalpy(T_L, P, x), l.shape),
                          liquid_heat_capacity(properties, T_L, P, x))
    HV, CV, HL, CL = leaving.H_V, leaving.C_V, leaving.H_L, leaving.C_L
    area = np.broadcast_to(coefficients.area, batch)
    AN = area[..., None] * state.N

    iv, iTV, il, iTL = slice(0, n), n, slice(n + 1, m - 1), m - 1
    ql, qhl, qv, qhv = slice(0, n), n, slice(n + 1, m - 1), m - 1
    bulk = np.empty((*batch, m))
    bulk[..., ql] = (l - liquid_in.flows - AN) * fe
    bulk[..., qhl] = ((l * HL).sum(-1) - liquid_in.enthalpy - area * films.E_L - duty) * ee
    bulk[..., qv] = (v - vapor_in.flows + AN) * fe
    bulk[..., qhv] = ((v * HV).sum(-1) - vapor_in.enthalpy + area * films.E_V) * ee

    def chain(by_y: Array, slope: Array) -> Array:
        return np.asarray(by_y @ slope)

    # bulk rows by bulk unknowns; E depends on them through the states at the films
    es = area * ee
    E_V, E_L = slopes.dE_V_dw[..., None, :], slopes.dE_L_dw[..., None, :]
    one = np.eye(n) * fe
    ww = np.zeros((*batch, m, m))
    ww[..., ql, il], ww[..., qv, iv] = one, one
    ww[..., qhl, il], ww[..., qhl, iTL] = HL * ee, (l * CL).sum(-1) * ee
    ww[..., qhv, iv], ww[..., qhv, iTV] = HV * ee, (v * CV).sum(-1) * ee
    energy = np.zeros((*batch, 2, m))
    y_part, x_part = slice(0, n), slice(n + 1, m - 1)
    for row, E in ((0, E_L), (1, E_V)):
        energy[..., row, iv] = chain(E[..., y_part], dy_b)[..., 0, :]
        energy[..., row, iTV] = E[..., 0, n] * (1.0 - heat_V)
        energy[..., row, il] = chain(E[..., x_part], dx_b)[..., 0, :]
        energy[..., row, iTL] = E[..., 0, m - 1] * (1.0 - heat_L)
    ww[..., qhl, :] -= es[..., None] * energy[..., 0, :]
    ww[..., qhv, :] += es[..., None] * energy[..., 1, :]
    # bulk rows by interface unknowns
    wz = np.zeros((*batch, m, k))
    diagonal = np.arange(n)
    wz[..., diagonal, diagonal] = -area[..., None] * fe
    wz[..., n + 1 + diagonal, diagonal] = area[..., None] * fe
    wz[..., qhl, :], wz[..., qhv, :] = -es[..., None] * films.dE_L_dz, es[..., None] * films.dE_V_dz
    # interface rows by bulk unknowns
    zw = np.empty((*batch, k, m))
    zw[..., iv], zw[..., iTV] = chain(slopes.dw[..., y_part], dy_b), slopes.dw[..., n] * (1.0 - heat_V)[..., None]
    zw[..., il], zw[..., iTL] = chain(slopes.dw[..., x_part], dx_b), slopes.dw[..., m - 1] * (1.0 - heat_L)[..., None]
    # what enters
    by_vapor, by_liquid = np.zeros((*batch, m, n + 2)), np.zeros((*batch, m, n + 2))
    by_vapor[..., qv, :n], by_vapor[..., qhv, n + 1] = -one, -ee
    by_liquid[..., ql, :n], by_liquid[..., qhl, n + 1] = -one, -ee
    z_by_vapor = z_by_liquid = None
    if dy_in is not None:
        z_by_vapor = _by_entering(slopes.dw, y_part, dy_in, n, heat_V)
        by_vapor[..., qhl, :] -= es[..., None] * _by_entering(E_L, y_part, dy_in, n, heat_V)[..., 0, :]
        by_vapor[..., qhv, :] += es[..., None] * _by_entering(E_V, y_part, dy_in, n, heat_V)[..., 0, :]
    if dx_in is not None:
        z_by_liquid = _by_entering(slopes.dw, x_part, dx_in, m - 1, heat_L)
        by_liquid[..., qhl, :] -= es[..., None] * _by_entering(E_L, x_part, dx_in, m - 1, heat_L)[..., 0, :]
        by_liquid[..., qhv, :] += es[..., None] * _by_entering(E_V, x_part, dx_in, m - 1, heat_L)[..., 0, :]
    result = films if held is None else replace(films, dw=held.dw, dE_V_dw=held.dE_V_dw, dE_L_dw=held.dE_L_dw)
    return StageBlocks(bulk, films.residual, ww, wz, zw, films.dz, by_vapor, by_liquid, z_by_vapor, z_by_liquid, result,
                       y_b, T_Vb, x_b, T_Lb)


def _bulk(z: Array, T: Array, dz: Array, entering: Entering, theta: Array, heat: Array
          ) -> tuple[Array, Array, Array, Array | None]:
    """Bulk composition and temperature, the derivative of the composition by the leaving and by the entering flows."""
    if not (theta.any() or heat.any()):
        return z, T, dz, None
    _, z_in, dz_in = fractions(entering.flows)
    t = theta[..., None]
    return ((1.0 - t) * z + t * z_in, (1.0 - heat) * T + heat * entering.temperature, (1.0 - t)[..., None] * dz,
            t[..., None] * dz_in)


def _by_entering(rows: Array, part: slice, slope: Array, temperature: int, heat: Array) -> Array:
    """Rows with columns (y, T_V, x, T_L) by the n+2 numbers of an entering stream."""
    n = slope.shape[-1]
    result = np.zeros((*rows.shape[:-1], n + 2))
    result[..., :n] = rows[..., part] @ slope
    result[..., n] = rows[..., temperature] * heat[..., None]
    return result
