"""An absorber solved by a script of one's own: the library's stage equations inside scipy.optimize.root.

A wash oil takes hydrocarbons out of a gas on eight trays. The script owns the column (who feeds whom) and the solver;
the library gives residuals and Jacobian blocks of all stages at once.
"""
import numpy as np
from scipy.optimize import root

from ratebased import ConstantVolatility
from ratebased.column import (
    Column,
    Entering,
    LiquidFeed,
    StageUnknowns,
    VaporFeed,
    solve_equilibrium,
    solve_ratebased,
    stage_residuals,
)
from ratebased.equipment import FixedCoefficients, contact_state

mix = ConstantVolatility(["gas", "light", "heavy", "oil"], [35, 1.3, .26, .002], [2e3, 18e3, 24e3, 48e3], a=21.0,
                         b=2600.0, vapor_heat_capacity=[35, 70, 95, 200], liquid_heat_capacity=[60, 120, 150, 350])
tray = FixedCoefficients(0.03, 2e-4, 40.0, h_vapor=60.0, h_liquid=900.0)
S, n, P, stages = 8, 4, np.full(8, 3e5), np.arange(8)
lean, rich, T_lean, T_rich = np.array([0.0, 0.0, 0.2, 60.0]), np.array([80.0, 12.0, 6.0, 0.01]), 300.0, 308.0
H_lean, H_rich = lean @ mix.liquid_enthalpy(T_lean, P[0], lean), rich @ mix.vapor_enthalpy(T_rich, P[0], rich)
M, F = 4 * n + 3, lean.sum() + rich.sum()
scale = np.r_[np.full(n, F), 300.0, np.full(n, F), 300.0, np.ones(2 * n), 300.0]      # unknowns of order one


def system(unknowns):
    s = StageUnknowns.unpacked(unknowns.reshape(S, M) * scale)
    V, L = s.v.sum(1), s.l.sum(1)
    y, x = s.v / V[:, None], s.l / L[:, None]
    HV, HL = mix.vapor_enthalpy(s.T_V, P, y), mix.liquid_enthalpy(s.T_L, P, x)
    CV, CL = (s.v * mix.vapor_heat_capacity(s.T_V, P, y)).sum(1), (s.l * mix.liquid_heat_capacity(s.T_L, P, x)).sum(1)
    below = Entering(np.vstack((s.v[1:], rich)), np.r_[s.T_V[1:], T_rich], np.r_[(s.v * HV).sum(1)[1:], H_rich])
    above = Entering(np.vstack((lean, s.l[:-1])), np.r_[T_lean, s.T_L[:-1]], np.r_[H_lean, (s.l * HL).sum(1)[:-1]])
    state = contact_state(mix, V, L, s.T_V, s.T_L, P, y, x)
    b = stage_residuals(s, below, above, mix, P, tray.transfer(state), state.vapor.molar_density,
                        state.liquid.molar_density, flow_scale=F, energy_scale=F * 3e4)
    J = np.zeros((S, S, M, M))                                          # row stage, column stage
    J[stages, stages] = b.by_own
    J[stages[:-1], stages[1:], :, :n + 1] = b.by_vapor_below(np.roll(HV, -1, 0), np.roll(CV, -1))[:-1]
    J[stages[1:], stages[:-1], :, n + 1:2 * n + 2] = b.by_liquid_above(np.roll(HL, 1, 0), np.roll(CL, 1))[1:]
    return b.residual.ravel(), (J * scale).transpose(0, 2, 1, 3).reshape(S * M, S * M)


column = Column(S, [LiquidFeed(1, lean, T_lean), VaporFeed(S, rich, T_rich)], P)
e = solve_equilibrium(column, mix)
start = StageUnknowns(e.V[:, None] * e.y, e.T_V, e.L[:, None] * e.x, e.T_L, np.zeros((S, n)), e.x, e.T_L)
solution = root(system, (start.packed() / scale).ravel(), jac=True, tol=1e-12)
own = StageUnknowns.unpacked(solution.x.reshape(S, M) * scale)
library = solve_ratebased(column, mix, tray)
difference = np.abs(own.v - library.V[:, None] * library.y).max() / F
if __name__ == "__main__":
    print(f"root: {solution.message} {solution.nfev} evaluations\ngas leaving: {own.v[0].round(4)} mol/s\n"
          f"largest difference from solve_ratebased: {difference:.1e} of the feed")
