"""Makes profile.csv: an equilibrium-stage calculation of the absorber over `thermo`, each stage for 0.6 m of bed.

All balances of all stages at once by Newton's method (Naphtali & Sandholm, AIChE J. 17 (1971) 148) with a
Jacobian by differences. Air does not dissolve. The plant is invented.

    python make_profile.py [profile.csv]
"""
from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
from thermo import UNIFAC, ChemicalConstantsPackage
from thermo.unifac import DOUFIP2016, DOUFSG

NAMES = ["air", "acetone", "ethanol", "water"]
SOLUTES = NAMES[1:]
STAGES, HEIGHT = 8, 0.6                                         # m of bed a stage
PRESSURE, PRESSURE_DROP = 102500.0, 120.0                       # Pa at the top, Pa a stage
GAS, GAS_TEMPERATURE = 20.0 * np.array([0.955, 0.020, 0.010, 0.015]), 303.15
WATER, WATER_TEMPERATURE = 75.0, 291.15                         # mol/s, K
REFERENCE = 298.15                                              # K, ideal gas

constants, pure = ChemicalConstantsPackage.from_IDs(SOLUTES)
_, gases = ChemicalConstantsPackage.from_IDs(["nitrogen", "oxygen"])
activity = UNIFAC.from_subgroups(T=298.15, xs=[1 / 3] * 3, chemgroups=constants.UNIFAC_Dortmund_groups, version=1,
                                 subgroups=DOUFSG, interaction_data=DOUFIP2016)


def gas_enthalpies(T: float) -> np.ndarray:
    """Partial molar enthalpies of air and the three vapours, J/mol."""
    nitrogen, oxygen = (c.T_dependent_property_integral(REFERENCE, T) for c in gases.HeatCapacityGases)
    return np.array([0.79 * nitrogen + 0.21 * oxygen,
                     *(c.T_dependent_property_integral(REFERENCE, T) for c in pure.HeatCapacityGases)])


def liquid_enthalpy(T: float, l: np.ndarray) -> float:
    """Enthalpy flow of the liquid, W."""
    latent = np.array([h.T_dependent_property(T) for h in pure.EnthalpyVaporizations])
    excess = activity.to_T_xs(T, list(l / l.sum())).HE() * l.sum()
    return float(l @ (gas_enthalpies(T)[1:] - latent) + excess)


def residual(u: np.ndarray) -> np.ndarray:
    """Component balances, equilibria and energy balances of all stages."""
    state = u.reshape(STAGES, 7)
    l, v, T = np.exp(state[:, :3]), np.exp(state[:, 3:6]), state[:, 6] * 300.0
    l_in = np.vstack(([1e-12, 1e-12, WATER], l[:-1]))
    v_in = np.vstack((v[1:], GAS[1:]))
    T_l, T_v = np.append(WATER_TEMPERATURE, T[:-1]), np.append(T[1:], GAS_TEMPERATURE)
    rows = []
    for j in range(STAGES):
        P = PRESSURE + PRESSURE_DROP * j
        x = l[j] / l[j].sum()
        gamma = activity.to_T_xs(T[j], list(x)).gammas()
        K = np.array([g * p.T_dependent_property(T[j]) / P for g, p in zip(gamma, pure.VaporPressures)])
        V = v[j].sum() + GAS[0]
        heat = (np.append(GAS[0], v_in[j]) @ gas_enthalpies(T_v[j]) - np.append(GAS[0], v[j]) @ gas_enthalpies(T[j])
                + liquid_enthalpy(T_l[j], l_in[j]) - liquid_enthalpy(T[j], l[j]))
        rows.append(np.concatenate(((l_in[j] + v_in[j] - l[j] - v[j]) / (l_in[j] + v_in[j]),
                                    np.log(v[j] / V / (K * x)), [heat / 1e5])))
    return np.concatenate(rows)


def newton(u: np.ndarray) -> np.ndarray:
    """Newton's method with a Jacobian by differences, steps of at most one in the logarithms of the flows and 10 K."""
    limit = np.tile([1.0] * 6 + [10.0 / 300.0], STAGES)
    for _ in range(60):
        F = residual(u)
        J = np.stack([(residual(u + 1e-6 * e) - F) / 1e-6 for e in np.eye(u.size)], 1)
        step = -np.linalg.solve(J, F)
        u = u + step * min(1.0, (limit / np.abs(step)).min())
        if np.abs(step).max() < 1e-10:
            return u
    raise RuntimeError(f"not converged: {np.abs(F).max():.1e}")


def write(path: Path) -> None:
    """The profile as CSV."""
    share = np.linspace(0.02, 1.0, STAGES)[:, None]
    start = np.concatenate((np.log(np.hstack((0.9 * share * GAS[1:3], np.full((STAGES, 1), WATER)))),
                            np.log(np.hstack((share * GAS[1:3], np.full((STAGES, 1), 0.5)))),
                            np.full((STAGES, 1), 297.0 / 300.0)), 1)
    u = newton(start.ravel())
    state = u.reshape(STAGES, 7)
    l, v, T = np.exp(state[:, :3]), np.exp(state[:, 3:6]), state[:, 6] * 300.0
    head = ["stage", "kind", "height_m", "T_K", "P_Pa", "L_mol_s", "V_mol_s"]
    lines = [",".join(head + [p + name for p in ("x_", "y_") for name in NAMES])]
    for j in range(STAGES):
        x, g = np.append(0.0, l[j] / l[j].sum()), np.append(GAS[0], v[j])
        numbers = [HEIGHT, T[j], PRESSURE + PRESSURE_DROP * j, l[j].sum(), g.sum()]
        lines.append(f"{j + 1},segment," + ",".join(f"{value:.10g}" for value in numbers) + ","
                     + ",".join(f"{value:.13f}" for value in [*x, *(g / g.sum())]))
    path.write_text("\n".join(lines) + "\n")


if __name__ == "__main__":
    write(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).with_name("profile.csv"))
