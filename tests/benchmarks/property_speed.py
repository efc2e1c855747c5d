"""Properties of 40 stages and 5 components: this library's arrays against a loop over the data library's objects.

Run as a script; prints ratios measured in one run, single-threaded, the fastest of several repeats. Both sides give,
for every stage: K, [Gamma], partial molar enthalpies and heat capacities of both phases, density, viscosity,
conductivity, heat capacity and pair diffusivities of both phases, surface tension. The loop keeps its objects and
passes lists, which is its quickest way. The data library has no diffusivities: the loop evaluates the same published
formulas pair by pair with the standard `math` module.
"""
from __future__ import annotations

import math
import time
import warnings
from collections.abc import Callable
from typing import Any

import numpy as np

NAMES = ["ethanol", "water", "acetone", "n-hexane", "1-propanol"]
STAGES = 40
P = 101325.0
R = 8.31446261815324
NRTL_B = np.array([[0, -55, 36, 562, 10], [671, 0, 603, 1512, 826], [188, 316, 0, 251, 150], [464, 2275, 268, 0, 560],
                   [20, 90, 140, 410, 0]], float)


def fastest(function: Callable[[], Any], repeats: int, number: int = 1) -> float:
    """Seconds of processor time a call, the best of `repeats` batches of `number` calls."""
    best = math.inf
    for _ in range(repeats):
        start = time.process_time()
        for _ in range(number):
            function()
        best = min(best, (time.process_time() - start) / number)
    return best


class StageLoop:
    """The plain script: one stage after the other through the data library's phase and property objects."""

    def __init__(self, model: Any, excess: Any) -> None:
        import thermo

        from ratebased.properties.thermo_data import ComponentData

        data = ComponentData(NAMES)
        self.c, self.f = data.constants, data.functions
        f = self.f
        self.liquid = thermo.GibbsExcessLiquid(
            VaporPressures=f.VaporPressures, VolumeLiquids=f.VolumeLiquids, HeatCapacityGases=f.HeatCapacityGases,
            EnthalpyVaporizations=f.EnthalpyVaporizations, GibbsExcessModel=excess, caloric_basis="Hvap", T=345.0, P=P,
            zs=[0.2] * 5)
        self.gas = thermo.IdealGas(HeatCapacityGases=f.HeatCapacityGases, T=345.0, P=P, zs=[0.2] * 5)
        self.volumes = (model.components.diffusion_volume * 1e6).tolist()
        self.boiling_volumes = (model.components.boiling_volume * 1e6).tolist()
        self.association = [1.5, 2.26, 1.0, 1.0, 1.0]

    def stage(self, T: float, x: list[float], y: list[float]) -> list[Any]:
        f, n = self.f, 5
        liquid = self.liquid.to(T=T, P=P, zs=x)
        K = liquid.phis()
        excess = liquid.GibbsExcessModel
        gammas, slopes, by_T = excess.gammas(), excess.dgammas_dns(), excess.dlngammas_dT()
        gamma = [[(i == j) + x[i] * (slopes[i][j] - slopes[i][n - 1]) / gammas[i] for j in range(n - 1)]
                 for i in range(n - 1)]
        ideal = [o.T_dependent_property_integral(298.15, T) for o in f.HeatCapacityGases]
        latent = [o.T_dependent_property(T) for o in f.EnthalpyVaporizations]
        h_liquid = [h - v - R * T * T * g for h, v, g in zip(ideal, latent, by_T)]
        cp_vapor = [o.T_dependent_property(T) for o in f.HeatCapacityGases]
        cp_liquid = [c - o.T_dependent_property_derivative(T) for c, o in zip(cp_vapor, f.EnthalpyVaporizations)]
        excess_cp = excess.CpE()
        mass = [a * M for a, M in zip(x, self.c.MWs)]
        w = [a / sum(mass) for a in mass]
        mixed_liquid = [o.mixture_property(T, P, x, w) for o in (
            f.VolumeLiquidMixture, f.ViscosityLiquidMixture, f.ThermalConductivityLiquidMixture,
            f.SurfaceTensionMixture)]
        mixed_vapor = [o.mixture_property(T, P, y, w) for o in (f.ViscosityGasMixture, f.ThermalConductivityGasMixture)]
        bulk = [sum(a * c for a, c in zip(x, cp_liquid)) + excess_cp, sum(a * c for a, c in zip(y, cp_vapor)),
                P / (R * T)]
        return [K, gamma, h_liquid, ideal, bulk, mixed_liquid, mixed_vapor, self.gas_pairs(T), self.liquid_pairs(T, x)]

    def gas_pairs(self, T: float) -> list[list[float]]:
        M, v = self.c.MWs, self.volumes
        D = [[0.0] * 5 for _ in range(5)]
        for i in range(5):
            for j in range(i):
                mass = 2.0 / (1.0 / M[i] + 1.0 / M[j])
                D[i][j] = D[j][i] = 1.43e-7 * T ** 1.75 / (P / 1e5 * math.sqrt(mass) * (
                    v[i] ** (1 / 3) + v[j] ** (1 / 3)) ** 2)
        return D

    def liquid_pairs(self, T: float, x: list[float]) -> list[list[float]]:
        mu = [o.T_dependent_property(T) * 1e3 for o in self.f.ViscosityLiquids]
        M, V, phi = self.c.MWs, self.boiling_volumes, self.association
        dilute = [[7.4e-12 * math.sqrt(phi[j] * M[j]) * T / (mu[j] * V[i] ** 0.6) for j in range(5)] for i in range(5)]
        D = [[0.0] * 5 for _ in range(5)]
        for i in range(5):
            for j in range(i):
                value = dilute[i][j] ** x[j] * dilute[j][i] ** x[i]
                for k in range(5):
                    if k != i and k != j:
                        value *= (dilute[i][k] * dilute[j][k]) ** (0.5 * x[k])
                D[i][j] = D[j][i] = value
        return D

    def all(self, T: list[float], x: list[list[float]], y: list[list[float]]) -> list[list[Any]]:
        return [self.stage(*state) for state in zip(T, x, y)]


def main() -> None:
    import thermo

    from ratebased.properties import ThermoProperties
    from ratebased.properties.thermo_data import ComponentData

    warnings.simplefilter("ignore")
    rng = np.random.default_rng(0)
    x, y = rng.dirichlet(np.ones(5), STAGES), rng.dirichlet(np.ones(5), STAGES)
    T, pressure = np.linspace(310.0, 390.0, STAGES), np.full(STAGES, P)
    groups = ComponentData(NAMES).constants.UNIFAC_groups
    alpha = np.where(np.eye(5, dtype=bool), 0.0, 0.3)
    cases = {
        "NRTL": (dict(activity="nrtl", parameters={"tau_b": NRTL_B, "alpha": 0.3}),
                 thermo.NRTL(T=345.0, xs=[0.2] * 5, tau_bs=NRTL_B.tolist(), alpha_cs=alpha.tolist())),
        "UNIFAC": (dict(activity="unifac"), thermo.UNIFAC.from_subgroups(T=345.0, xs=[0.2] * 5, chemgroups=groups)),
    }
    lists = T.tolist(), x.tolist(), y.tolist()
    for name, (options, excess) in cases.items():
        model = ThermoProperties.from_names(NAMES, T_range=(300.0, 400.0), **options)  # type: ignore[arg-type]
        loop = StageLoop(model, excess)
        everything = model.evaluate(T, pressure, x, y)
        stages = loop.all(*lists)
        for s in (0, 20, 39):  # both sides compute the same numbers
            np.testing.assert_allclose(everything.k_value[s], stages[s][0], rtol=1e-9)
            np.testing.assert_allclose(everything.thermodynamic_factor[s], stages[s][1], atol=1e-9)
            np.testing.assert_allclose(everything.liquid_enthalpy[s], stages[s][2], rtol=1e-9)
            np.testing.assert_allclose(everything.liquid.heat_capacity[s], stages[s][4][0], rtol=1e-6)
            off = ~np.eye(5, dtype=bool)
            np.testing.assert_allclose(everything.vapor.diffusivity[s][off], np.array(stages[s][7])[off], rtol=1e-9)
            np.testing.assert_allclose(everything.liquid.diffusivity[s][off], np.array(stages[s][8])[off], rtol=1e-9)

        def separate(model: ThermoProperties = model) -> None:
            model.k_value(T, pressure, x, y)
            model.thermodynamic_factor(T, pressure, x)
            model.vapor_enthalpy(T, pressure, y)
            model.liquid_enthalpy(T, pressure, x)
            model.vapor_transport(T, pressure, y)
            model.liquid_transport(T, pressure, x)

        loops, calls, together = [], [], []
        for _ in range(7):  # interleaved, so that a busy machine slows both
            loops.append(fastest(lambda loop=loop: loop.all(*lists), 2))
            calls.append(fastest(separate, 5, 40))
            together.append(fastest(lambda model=model: model.evaluate(T, pressure, x, y), 5, 40))
        slow, quick, joint = min(loops), min(calls), min(together)
        print(f"{name}: loop {slow * 1e6:.0f} us; six calls {quick * 1e6:.0f} us, ratio {slow / quick:.0f}; "
              f"one evaluation {joint * 1e6:.0f} us, ratio {slow / joint:.0f}")


if __name__ == "__main__":
    main()
