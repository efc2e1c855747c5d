"""Makes profile.csv: an equilibrium-stage calculation of the column, by the bubble-point method over `thermo`.

Component balances stage by stage (one tridiagonal system a component), stage temperatures from bubble points, flows
from the energy balances, repeated until nothing moves (Wang & Henke, Hydrocarbon Process. 45(8) (1966) 155). The plant
is invented. Stage 1 is the total condenser, the last one the reboiler.

    python make_profile.py [profile.csv]
"""
from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
from scipy.linalg import solve_banded
from scipy.optimize import brentq
from thermo import UNIFAC, ChemicalConstantsPackage
from thermo.unifac import DOUFIP2016, DOUFSG

NAMES = ["acetone", "ethanol", "water"]
STAGES, FEED_STAGE = 20, 6
FEED, COMPOSITION = 40.0, np.array([0.25, 0.20, 0.55])          # mol/s of boiling liquid
DISTILLATE, REFLUX_RATIO = 10.0, 9.0
TOP_PRESSURE, PRESSURE_DROP = 101325.0, 600.0                   # Pa, Pa a tray
REFERENCE = 298.15                                              # K, ideal gas


class Mixture:
    """K-values, bubble points and enthalpies of the mixture, scalar calls of `thermo`."""

    def __init__(self) -> None:
        constants, correlations = ChemicalConstantsPackage.from_IDs(NAMES)
        self.pure = correlations
        self.activity = UNIFAC.from_subgroups(
            T=330.0, xs=[1 / 3] * 3, chemgroups=constants.UNIFAC_Dortmund_groups, version=1, subgroups=DOUFSG,
            interaction_data=DOUFIP2016)

    def k_value(self, T: float, P: float, x: np.ndarray) -> np.ndarray:
        gamma = self.activity.to_T_xs(T, list(x)).gammas()
        return np.array([g * p.T_dependent_property(T) / P for g, p in zip(gamma, self.pure.VaporPressures)])

    def bubble_point(self, P: float, x: np.ndarray) -> tuple[float, np.ndarray]:
        T = brentq(lambda T: np.log(self.k_value(T, P, x) @ x), 320.0, 385.0, xtol=1e-10)
        return T, self.k_value(T, P, x)

    def vapor_enthalpy(self, T: float, y: np.ndarray) -> float:
        return float(sum(f * c.T_dependent_property_integral(REFERENCE, T)
                         for f, c in zip(y, self.pure.HeatCapacityGases)))

    def liquid_enthalpy(self, T: float, x: np.ndarray) -> float:
        latent = sum(f * h.T_dependent_property(T) for f, h in zip(x, self.pure.EnthalpyVaporizations))
        return self.vapor_enthalpy(T, x) - latent + self.activity.to_T_xs(T, list(x)).HE()


def solve() -> dict[str, np.ndarray]:
    """The column as arrays over stages; L and V are what goes on to the next stage."""
    mixture = Mixture()
    S, n, f = STAGES, len(NAMES), FEED_STAGE - 1
    P = TOP_PRESSURE + PRESSURE_DROP * np.arange(S)
    T_feed, _ = mixture.bubble_point(P[f], COMPOSITION)
    H_feed = mixture.liquid_enthalpy(T_feed, COMPOSITION)
    feed = np.zeros((S, n))
    feed[f] = FEED * COMPOSITION
    reflux = REFLUX_RATIO * DISTILLATE
    V = np.full(S, reflux + DISTILLATE)
    V[0] = 0.0
    x = np.tile(COMPOSITION, (S, 1))
    T = np.linspace(330.0, 372.0, S)
    sweeps = 0
    while sweeps < 2000:
        sweeps += 1
        L = np.array([(V[j + 1] if j + 1 < S else 0.0) + feed[:j + 1].sum() - DISTILLATE for j in range(S)])
        K = np.stack([mixture.k_value(t, p, z) for t, p, z in zip(T, P, x)])
        flows = np.empty((S, n))
        for i in range(n):
            band = np.zeros((3, S))
            band[1] = L + V * K[:, i]
            band[1, 0] = L[0] + DISTILLATE
            band[0, 1:] = -V[1:] * K[1:, i]
            band[2, :-1] = -L[:-1]
            flows[:, i] = solve_banded((1, 1), band, feed[:, i])
        new = flows / flows.sum(1, keepdims=True)
        x = x + 0.5 * (new - x)
        x = x / x.sum(1, keepdims=True)
        points = [mixture.bubble_point(p, z) for p, z in zip(P, x)]
        T = np.array([t for t, _ in points])
        y = np.stack([k * z for (_, k), z in zip(points, x)])
        HL = np.array([mixture.liquid_enthalpy(t, z) for t, z in zip(T, x)])
        HV = np.array([mixture.vapor_enthalpy(t, z) for t, z in zip(T, y)])
        duty = (reflux + DISTILLATE) * (HV[1] - HL[0])
        for j in range(1, S - 1):                               # balances round everything above stage j + 1
            below = feed[:j + 1].sum() - DISTILLATE
            heat = (H_feed * FEED if j >= f else 0.0) - DISTILLATE * HL[0] - duty
            V[j + 1] = (below * HL[j] - heat) / (HV[j + 1] - HL[j])
        moved = np.abs(new - x).max()
        if moved < 1e-13:
            break
    else:
        raise RuntimeError(f"not converged: {moved:.1e}")
    L = np.array([(V[j + 1] if j + 1 < S else 0.0) + feed[:j + 1].sum() - DISTILLATE for j in range(S)])
    print(f"{sweeps} sweeps; distillate {x[0].round(4)}, bottoms {x[-1].round(6)}", file=sys.stderr)
    return {"T": T, "P": P, "L": L, "V": V, "x": x, "y": y, "T_feed": np.array([T_feed])}


def write(path: Path) -> None:
    """The profile as CSV."""
    c = solve()
    kinds = ["condenser", *["tray"] * (STAGES - 2), "reboiler"]
    head = ["stage", "kind", "T_K", "P_Pa", "L_mol_s", "V_mol_s"] + [p + name for p in ("x_", "y_") for name in NAMES]
    lines = [",".join(head)]
    for j in range(STAGES):
        numbers = [c["T"][j], c["P"][j], c["L"][j], c["V"][j]]
        fractions = [*c["x"][j], *c["y"][j]]
        lines.append(f"{j + 1},{kinds[j]}," + ",".join(f"{v:.8g}" for v in numbers) + ","
                     + ",".join(f"{v:.12f}" for v in fractions))
    path.write_text("\n".join(lines) + "\n")
    print(f"feed at its bubble point: {c['T_feed'][0]:.4f} K", file=sys.stderr)


if __name__ == "__main__":
    write(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).with_name("profile.csv"))
