"""One vapour condensing from a gas that stays behind.

Sources: A. P. Colburn and O. A. Hougen, Ind. Eng. Chem. 26 (1934) 1178: N = F ln((1 - y_I)/(1 - y)), y_I =
p_sat(T_I)/P, and the heat balance of the condensing surface, h_V (T_V - T_I) + lambda N = h_L (T_I - T_L);
G. Ackermann, VDI Forschungsheft 382 (1937): h_V multiplied by a/(1 - e^-a), a = N cp_V/h_V (equations from memory).
The scalar equation is solved here by bracketing on T_I, without the library.
"""
from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq

from ratebased.interface import Bulk, interface_flux
from ratebased.properties import ConstantVolatility

P, A, B, T_REF = 1.013e5, 25.3, 5150.0, 373.0
PAIR = np.array([[0.0, 1.0], [1.0, 0.0]])


def scalar_solution(y, T_V, T_L, F, h_V, h_L, latent, cp_V, cp_L):
    """T_I and N of the film equations, lambda at T_I."""
    def balance(T):
        y_I = np.exp(A - B / T) / P
        N = F * np.log((1 - y_I) / (1 - y))
        a_V, a_L = N * cp_V / h_V, N * cp_L / h_L
        ackermann = a_V / -np.expm1(-a_V) if a_V else 1.0
        drained = a_L / np.expm1(a_L) if a_L else 1.0
        heat = latent + (cp_V - cp_L) * (T - T_REF)
        return h_V * ackermann * (T_V - T) + heat * N - h_L * drained * (T - T_L), N

    hottest = B / (A - np.log(P)) - 1e-9
    T = brentq(lambda T: balance(T)[0], T_L - 40.0, min(T_V, hottest), xtol=1e-12)
    return T, balance(T)[1]


@pytest.mark.parametrize("gas_last", [True, False])
@pytest.mark.parametrize("cp_V, cp_L", [(0.0, 0.0), (34.0, 75.0)])
@pytest.mark.parametrize("y, T_V, T_L, h_L", [(0.9, 372.0, 320.0, 2000.0), (0.5, 360.0, 300.0, 5000.0),
                                              (0.2, 400.0, 310.0, 800.0), (0.98, 380.0, 350.0, 8000.0),
                                              (0.05, 390.0, 335.0, 500.0)])
def test_condensation_with_a_gas(gas_last, cp_V, cp_L, y, T_V, T_L, h_L):
    F, h_V, latent = 1.1, 45.0, 4.07e4
    names, condensable = ("steam", "gas"), [True, False]
    composition, x = np.array([y, 1 - y]), np.array([1.0, 0.0])
    if not gas_last:
        names, condensable, composition, x = names[::-1], condensable[::-1], composition[::-1], x[::-1]
    # the gas has a heat capacity of its own; it carries no heat because it does not move
    heat = [cp_V if name == "steam" else 29.0 for name in names]
    model = ConstantVolatility(names, [1.0, 1.0], latent, a=A, b=B, vapor_heat_capacity=heat,
                               liquid_heat_capacity=cp_L, reference_temperature=T_REF, condensable=condensable)
    r = interface_flux(Bulk(composition, T_V, F * PAIR, h_V, 1.0), Bulk(x, T_L, PAIR, h_L, 1.0), model, P)
    T, N = scalar_solution(y, T_V, T_L, F, h_V, h_L, latent, cp_V, cp_L)
    steam = names.index("steam")
    assert r.T_I == pytest.approx(T, abs=1e-8)
    assert r.N[steam] == pytest.approx(N, rel=1e-8, abs=1e-12)
    assert r.N[1 - steam] == 0.0
    assert r.x_I[steam] == pytest.approx(1.0, abs=1e-12)
    # heat to the wall: conduction + latent heat, the balance of the paper
    heat_of_vaporization = latent + (cp_V - cp_L) * (T - T_REF)
    assert r.q_liquid_interface == pytest.approx(r.q_vapor_interface + heat_of_vaporization * N, rel=1e-8)
