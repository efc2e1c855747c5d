"""Column times as ratios in one run: rate-based against equilibrium, growth with the stages, a dense root-finder.

    OPENBLAS_NUM_THREADS=1 python tests/benchmarks/column_speed.py [repeats]

Processor time, the fastest of several repeats. "Rate-based alone" starts from its equilibrium profile.
"""
from __future__ import annotations

import sys
import time
import warnings

import numpy as np
from scipy.optimize import root

from ratebased.column import (
    Column,
    DistillateRate,
    Feed,
    LiquidFeed,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    VaporFeed,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.column.contact import Mixed, layout
from ratebased.column.equilibrium import solve_state
from ratebased.column.problem import make_problem
from ratebased.column.rate_system import RateSetup, RateState, rate_system
from ratebased.column.ratebased import _start_from
from ratebased.equipment import FixedCoefficients
from ratebased.properties import ConstantVolatility, ThermoProperties


def constant_volatility():
    return ConstantVolatility([f"c{i}" for i in range(5)], [8.0, 4.0, 2.0, 1.0, 0.4], [24e3, 28e3, 32e3, 36e3, 43e3],
                              a=22.5, b=4000.0, vapor_heat_capacity=[65.0, 80.0, 95.0, 110.0, 135.0],
                              liquid_heat_capacity=[120.0, 140.0, 165.0, 190.0, 230.0], reference_temperature=350.0,
                              vapor_molar_density=35.0, liquid_molar_density=9e3)


def activity_model():
    return ThermoProperties.from_names(["acetone", "methanol", "ethanol", "2-propanol", "water"], "unifac",
                                       T_range=(300.0, 420.0))


def distillation(stages):
    z = np.array([0.22, 0.24, 0.26, 0.16, 0.12])
    return Column(stages, [Feed(stages // 2, 100.0 * z, vapor_fraction=0.2)], 1.2e5 + 700.0 * np.arange(stages),
                  condenser=TotalCondenser(), reboiler=Reboiler(),
                  specifications=[RefluxRatio(2.5), DistillateRate(38.0)])


def trays(n=5):
    rng = np.random.default_rng(1)
    kappa = 0.02 * np.exp(rng.uniform(0.0, 2.0, (n, n)))
    kappa = np.sqrt(kappa * kappa.T)
    return FixedCoefficients(kappa, 6e-3 * kappa, 120.0, h_vapor=80.0, h_liquid=1500.0)


def fastest(run, repeats):
    times = []
    for _ in range(repeats):
        start = time.process_time()
        run()
        times.append(time.process_time() - start)
    return min(times)


def dense(repeats):
    """One scipy.optimize.root on all equations of an absorber, no Jacobian given, against `solve_ratebased`."""
    model, contactor = constant_volatility(), trays()
    column = Column(10, [LiquidFeed(1, [0.1, 0.1, 1.0, 10.0, 60.0], 340.0),
                         VaporFeed(10, [30.0, 30.0, 20.0, 5.0, 1.0], 350.0)], 3e5)
    problem = make_problem(column, model)
    setup = RateSetup(problem, layout(contactor, column), Mixed(), Mixed())
    e, _, _ = solve_state(problem, None, None)
    start = _start_from(setup, e.v, e.T, e.l, e.T)
    n, C = problem.n, problem.contact.size
    sizes = [n, 1, n, 1, 2 * n + 1]
    places = np.cumsum([0, *sizes])

    def unpack(w):
        a = w.reshape(C, -1)
        parts = [a[:, places[k]:places[k + 1]] for k in range(5)]
        return RateState(parts[0] * 100, parts[1][:, 0] * 100, parts[2] * 100, parts[3][:, 0] * 100,
                         parts[4] * np.r_[np.ones(2 * n), 100.0], start.y_I, start.y_condenser)

    def residual(w):
        system = rate_system(setup, unpack(w))
        return np.concatenate((system.bulk, system.interface), 1).ravel()

    first = np.hstack((start.v / 100, start.T_V[:, None] / 100, start.l / 100, start.T_L[:, None] / 100,
                       start.z / np.r_[np.ones(2 * n), 100.0])).ravel()
    solution = root(residual, first, method="hybr", tol=1e-10)
    own = solve_ratebased(column, model, contactor)
    gap = np.abs(unpack(solution.x).v - own.V[:, None] * own.y).max() / problem.F
    slow = fastest(lambda: root(residual, first, method="hybr", tol=1e-10), 1)
    quick = fastest(lambda: solve_ratebased(column, model, contactor), repeats)
    print(f"dense root on an absorber, 10 trays x 5 ({first.size} unknowns; converged {solution.success}, apart by "
          f"{gap:.0e}): {slow * 1e3:.0f} ms against {quick * 1e3:.1f} ms, {slow / quick:.0f} times")


def main(repeats=7):
    warnings.simplefilter("ignore")
    contactor = trays()
    for title, model in (("constant volatility", constant_volatility()), ("UNIFAC", activity_model())):
        column = distillation(40)
        equilibrium = solve_equilibrium(column, model)
        rate = solve_ratebased(column, model, contactor, start=equilibrium)
        slow = fastest(lambda: solve_equilibrium(column, model), repeats)                         # noqa: B023
        alone = fastest(lambda: solve_ratebased(column, model, contactor, start=equilibrium), repeats)  # noqa: B023
        both = fastest(lambda: solve_ratebased(column, model, contactor), repeats)                # noqa: B023
        print(f"40 stages x 5, {title}: equilibrium {slow * 1e3:.1f} ms ({equilibrium.report.iterations} it.), "
              f"rate-based alone {alone * 1e3:.1f} ms ({rate.report.iterations} it.), both {both * 1e3:.1f} ms; ratio "
              f"alone {alone / slow:.2f}, both {both / slow:.2f}")
    model = constant_volatility()
    rows = []
    for stages in (10, 20, 40, 80, 160):
        column = distillation(stages)
        equilibrium = solve_equilibrium(column, model)
        rate = solve_ratebased(column, model, contactor, start=equilibrium)
        t_e = fastest(lambda: solve_equilibrium(column, model), repeats)                          # noqa: B023
        t_r = fastest(lambda: solve_ratebased(column, model, contactor, start=equilibrium), repeats)  # noqa: B023
        rows.append((stages, t_e / equilibrium.report.iterations, t_r / rate.report.iterations))
        print(f"{stages:4d} stages: equilibrium {t_e * 1e3:6.1f} ms ({equilibrium.report.iterations} it.), rate-based "
              f"alone {t_r * 1e3:6.1f} ms ({rate.report.iterations} it.)")
    per = {stages: (e, r) for stages, e, r in rows}
    print(f"time of one iteration, 160 over 40 stages: equilibrium {per[160][0] / per[40][0]:.1f}, rate-based "
          f"{per[160][1] / per[40][1]:.1f} (linear: 4)")
    dense(repeats)


if __name__ == "__main__":
    main(*(int(argument) for argument in sys.argv[1:]))
