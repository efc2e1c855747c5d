"""Efficiencies: fast froth step against the integral, table against its property evaluations, samples against runs.

    python tests/benchmarks/efficiency_speed.py [stages of the accuracy check, default 200]

Figures are ratios within this run.
"""
from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

from ratebased import (
    ConstantVolatility,
    ProfileFeed,
    SieveTray,
    StageProfile,
    ThermoProperties,
    bubble_point,
    exponential_midpoint,
    integral,
)
from ratebased.efficiency import Uncertainty, rate_rows, sample_rows
from ratebased.equipment import TransferCoefficients, contact_state
from ratebased.properties.differences import k_value_derivatives, liquid_heat_capacity, vapor_heat_capacity
from ratebased.stage import FrothPoint

PRESSURE = 101325.0


def random_point(rng: np.random.Generator) -> tuple[FrothPoint, ConstantVolatility]:
    """A ternary or quaternary froth: unequal pairs, either film in control, a vapour up to 80 K superheated."""
    n = int(rng.integers(3, 5))
    latent = rng.uniform(2.8e4, 4.2e4, n)
    model = ConstantVolatility(
        [f"c{i}" for i in range(n)], np.exp(rng.uniform(-1.2, 1.2, n)), latent, a=22.6, b=4000.0,
        vapor_heat_capacity=rng.uniform(50, 120, n), liquid_heat_capacity=rng.uniform(90, 200, n),
        reference_temperature=350.0, vapor_molar_density=35.0, liquid_molar_density=1.1e4)
    x, y = rng.dirichlet(np.ones(n)), rng.dirichlet(np.ones(n))
    T, star = bubble_point(model, PRESSURE, x)
    y_in = 0.6 * star + 0.4 * y
    kappa_v = np.exp(rng.uniform(-1, 1, (n, n)))
    kappa_l = np.exp(rng.uniform(-1, 1, (n, n)))
    c = TransferCoefficients(
        (0.012 * (kappa_v + kappa_v.T))[None], (10 ** rng.uniform(-4.3, -3) * (kappa_l + kappa_l.T))[None],
        np.full(1, rng.uniform(20, 80)), np.full(1, rng.uniform(500, 3000)), np.full(1, rng.uniform(0.5, 3.0)),
        "random")
    superheat = rng.uniform(0, 3) if rng.random() < 0.5 else rng.uniform(20, 80)
    point = FrothPoint(np.ones(1), y_in[None], np.full(1, float(T) + superheat), x[None], np.full(1, float(T)),
                       np.full(1, PRESSURE), c, np.full(1, 35.0), np.full(1, 1.1e4))
    return point, model


def midpoint_errors(count: int, seed: int = 5) -> np.ndarray:
    """max|y - y_integral|/max|y_out - y_in| of `count` random froths."""
    rng = np.random.default_rng(seed)
    errors = []
    for _ in range(count):
        point, model = random_point(rng)
        exact, fast = integral(point, model, rtol=1e-8), exponential_midpoint(point, model)
        errors.append(np.abs(fast.y - exact.y).max() / np.abs(exact.y - point.y_in).max())
    return np.array(errors)


def sixty_stages() -> tuple[StageProfile, SieveTray, ThermoProperties]:
    """Total-reflux equilibrium stages of five alcohols and water, repeated to sixty rows."""
    names = ["methanol", "ethanol", "1-propanol", "1-butanol", "water"]
    model = ThermoProperties.from_names(names, "unifac-modified", T_range=(300.0, 430.0))
    x = np.array([0.05, 0.1, 0.15, 0.2, 0.5])
    rows = []
    for _ in range(6):
        T, y = bubble_point(model, PRESSURE, x)
        rows.append((float(T), x, y))
        x = y
    import pandas as pd

    rows = [row for row in reversed(rows) for _ in range(10)]
    table = pd.DataFrame({"stage": np.arange(1, 61), "T_K": [r[0] for r in rows], "P_Pa": PRESSURE, "L_mol_s": 50.0,
                          "V_mol_s": 50.0, "kind": ["tray"] * 59 + ["reboiler"]})
    for i, name in enumerate(names):
        table[f"x_{name}"], table[f"y_{name}"] = [r[1][i] for r in rows], [r[2][i] for r in rows]
    feed = ProfileFeed(1, "liquid", 50.0, rows[0][2], rows[0][0])
    profile = StageProfile.from_frame(table, names, feeds=[feed], balance_tolerance=1e3)
    return profile, SieveTray(1.6, 0.5, 0.05, 0.005, 0.1), model


def fastest(function: Callable[[], object], repeats: int) -> float:
    """Seconds of the fastest of several runs."""
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        function()
        times.append(time.perf_counter() - start)
    return min(times)


def property_evaluations(profile: StageProfile, model: ThermoProperties) -> None:
    """What an interface iteration asks of the properties, once for all rows."""
    T, P, x, y = profile.T_L, profile.P, profile.x, profile.y
    model.k_value(T, P, x, y)
    k_value_derivatives(model, T, P, x, y)
    model.thermodynamic_factor(T, P, x)
    model.vapor_enthalpy(T, P, y)
    model.liquid_enthalpy(T, P, x)
    vapor_heat_capacity(model, T, P, y)
    liquid_heat_capacity(model, T, P, x)
    contact_state(model, profile.V, profile.L, T, T, P, y, x)


def main() -> None:
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 200
    errors = midpoint_errors(count)
    print(f"exponential midpoint against the integral, {count} random stages: median {np.median(errors):.2e}, "
          f"90 % {np.quantile(errors, 0.9):.2e}, worst {errors.max():.2e} of the largest change")
    import warnings

    warnings.simplefilter("ignore")
    profile, tray, model = sixty_stages()
    table = fastest(lambda: rate_rows(profile, tray, model), 5)
    once = fastest(lambda: property_evaluations(profile, model), 20)
    calls = count_evaluations(profile, tray, model)
    print(f"table of 59 rows x 5 components: {1e3 * table:.1f} ms; one evaluation of all its properties "
          f"{1e3 * once:.2f} ms; the properties it evaluates in all {1e3 * calls:.1f} ms: ratio {table / calls:.1f}")
    samples = fastest(lambda: sample_rows(profile, tray, model, Uncertainty(samples=512)), 1)
    print(f"512 samples of that table in one pass: {samples:.1f} s; 512 separate runs would take {512 * table:.1f} s: "
          f"ratio {512 * table / samples:.1f}")


def count_evaluations(profile: StageProfile, tray: SieveTray, model: ThermoProperties) -> float:
    """Seconds spent inside the property model while the table is made."""
    spent = 0.0
    depth = 0

    def timed(function: Callable[..., object]) -> Callable[..., object]:
        def call(*arguments: object, **keywords: object) -> object:
            nonlocal spent, depth
            depth += 1
            start = time.perf_counter()
            try:
                return function(*arguments, **keywords)
            finally:
                depth -= 1
                if depth == 0:
                    spent += time.perf_counter() - start
        return call

    names = [name for name in ("k_value", "k_value_derivatives", "thermodynamic_factor", "vapor_enthalpy",
                               "liquid_enthalpy", "vapor_heat_capacity", "liquid_heat_capacity", "vapor_transport",
                               "liquid_transport", "thermodynamic_factor_slopes") if hasattr(model, name)]
    for name in names:
        object.__setattr__(model, name, timed(getattr(model, name)))
    try:
        rate_rows(profile, tray, model)
    finally:
        for name in names:
            object.__delattr__(model, name)
    return spent


if __name__ == "__main__":
    sys.path.insert(0, str(Path(__file__).parents[1]))
    main()
