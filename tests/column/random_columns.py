"""Random columns from a seed: distillation and absorption, trays and packing, ideal and non-ideal mixtures."""
from __future__ import annotations

import functools
import warnings
from dataclasses import dataclass, field

import numpy as np

from ratebased.column import (
    Column,
    DistillateRate,
    Feed,
    LiquidDraw,
    LiquidFeed,
    PartialCondenser,
    Profile,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    VaporDraw,
    VaporFeed,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.column.problem import make_problem
from ratebased.column.start import dry_margin, overflow, starting_state
from ratebased.equipment import Contactor, FixedCoefficients
from ratebased.equipment.packings import RandomPacking
from ratebased.equipment.trays import SieveTray
from ratebased.errors import ConvergenceError, PlausibilityWarning, RateBasedWarning
from ratebased.properties import ConstantVolatility, PropertyModel, ThermoProperties

MIXTURES = (
    (("methanol", "ethanol", "water"), "unifac"), (("acetone", "methanol", "ethanol", "water"), "unifac"),
    (("pentane", "hexane", "heptane", "octane", "toluene"), "unifac"),
    (("benzene", "toluene", "ethylbenzene"), "ideal"), (("acetone", "chloroform", "benzene", "toluene"), "unifac"),
    (("methanol", "acetone", "ethyl acetate", "ethanol", "2-propanol", "toluene"), "unifac"))


@dataclass(frozen=True)
class Case:
    """A column with its mixture and hardware. kind: words for the report."""

    column: Column
    properties: PropertyModel
    contactor: Contactor
    kind: str


@functools.cache
def real_mixture(index: int) -> ThermoProperties:
    names, activity = MIXTURES[index]
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        return ThermoProperties.from_names(list(names), activity, T_range=(270.0, 460.0))


def constant_volatility(rng: np.random.Generator, n: int) -> ConstantVolatility:
    """Real enthalpies: latent heats grow and heat capacities with them as the volatility falls."""
    alpha = np.sort(np.exp(rng.uniform(np.log(0.3), np.log(10.0), n)))[::-1]
    latent = np.sort(rng.uniform(24e3, 42e3, n))
    vapor = np.sort(rng.uniform(60.0, 140.0, n))
    return ConstantVolatility([f"c{i + 1}" for i in range(n)], alpha, latent, a=22.5, b=4000.0,
                              vapor_heat_capacity=vapor,
                              liquid_heat_capacity=1.7 * vapor, reference_temperature=350.0, vapor_molar_density=35.0,
                              liquid_molar_density=9e3)


def fixed(rng: np.random.Generator, n: int, V: float, c_vapor: float = 35.0, ratio: float = 10.0,
          units: tuple[float, float] = (0.2, 5.0)) -> FixedCoefficients:
    """Pair coefficients spread over `ratio`; the area gives that many transfer units of the vapour film."""
    def pairs(low: float) -> np.ndarray:
        k = low * np.exp(rng.uniform(0.0, np.log(ratio), (n, n)))
        return np.sqrt(k * k.T)

    kappa = pairs(0.015)
    mean = float(np.mean(kappa[~np.eye(n, dtype=bool)]))
    area = np.exp(rng.uniform(*np.log(units))) * V / (c_vapor * mean)
    return FixedCoefficients(kappa, pairs(1.2e-4), area, h_vapor=80.0, h_liquid=1500.0)


def distillation(seed: int) -> Case:
    """3-6 components, 8-60 stages, reflux 0.5-20; one or two feeds, sometimes a draw or a partial condenser."""
    rng = np.random.default_rng(seed)
    real = rng.random() < 0.4
    properties: PropertyModel
    if real:
        index = int(rng.integers(len(MIXTURES)))
        properties = real_mixture(index)
    else:
        properties = constant_volatility(rng, int(rng.integers(3, 7)))
    n = len(properties.names)
    stages = int(rng.integers(8, 61))
    packed = bool(rng.random() < 0.35)
    P = 101325.0 * (1.0 + rng.uniform(0, 0.6)) + rng.uniform(0, 700) * np.arange(stages)
    feeds = []
    for _ in range(1 + int(rng.random() < 0.3)):
        z = rng.dirichlet(np.ones(n)) * 0.9 + 0.1 / n
        stage = int(rng.integers(3, stages - 1))
        feeds.append(Feed(stage, rng.uniform(40, 120) * z, vapor_fraction=float(rng.choice([0.0, 0.3, 0.6, 1.0],
                                                                                              p=[.55, .2, .15, .1]))))
    F = sum(f.flows.sum() for f in feeds)
    draws: list[LiquidDraw | VaporDraw] = []
    if rng.random() < 0.15:
        kind = LiquidDraw if rng.random() < 0.5 else VaporDraw
        draws.append(kind(int(rng.integers(3, stages - 1)), 0.08 * F))
    R = float(np.exp(rng.uniform(np.log(0.5), np.log(20.0))))
    condenser = PartialCondenser() if rng.random() < 0.2 else TotalCondenser()
    D = rng.uniform(0.15, 0.75) * F
    column = Column(stages, feeds, P, condenser=condenser, reboiler=Reboiler(), draws=draws,
                    specifications=[RefluxRatio(R), DistillateRate(D)], segment_height=0.3 if packed else None)
    hardware = real and rng.random() < 0.6
    V = (R + 1.0) * D
    contactor: Contactor
    if not hardware:
        contactor = fixed(rng, n, V, ratio=float(rng.choice([10.0, 100.0])), units=(0.1, 1.2) if packed else (0.2, 5.0))
    else:
        flows, _ = overflow(make_problem(column, properties))
        diameter = float(np.sqrt(4 / np.pi * flows.max() * 8.314 * 350.0 / P[0] / rng.uniform(0.7, 1.1)))
        contactor = RandomPacking(diameter=diameter, specific_area=200.0, void_fraction=0.95) if packed else SieveTray(
            diameter=diameter, spacing=0.5, weir_height=0.05, hole_diameter=0.006, hole_area_fraction=0.1)
    return Case(column, properties, contactor, ("packed" if packed else "trays") + (", real" if real else ", ideal")
                + (", correlations" if hardware else ""))


def absorber(seed: int) -> Case:
    """3-30 stages, K from 0.02 to 3000; half with an oil that never boils, a third with a gas that never condenses."""
    rng = np.random.default_rng(10_000 + seed)
    n = int(rng.integers(3, 6))
    oil, gas = bool(rng.random() < 0.5), bool(rng.random() < 0.33)
    P = float(rng.choice([2e5, 1e6, 2e6]))
    K = np.exp(rng.uniform(np.log(0.05), np.log(8.0), n))
    K[0], K[-1] = (np.exp(rng.uniform(np.log(30.0), np.log(3000.0))), 0.02)
    condensable, volatile = np.ones(n, bool), np.ones(n, bool)
    condensable[0], volatile[-1] = not gas, not oil
    latent = np.concatenate(([2e3], np.sort(rng.uniform(14e3, 26e3, n - 2)), [48e3]))
    vapor = np.sort(rng.uniform(35.0, 150.0, n))
    a, b = 22.0, 2600.0
    properties = ConstantVolatility([f"c{i + 1}" for i in range(n)], K * P / np.exp(a - b / 305.0), latent, a=a, b=b,
                                    vapor_heat_capacity=vapor, liquid_heat_capacity=1.6 * vapor,
                                    condensable=condensable, volatile=volatile,
                                    vapor_molar_density=P / (8.314 * 305), liquid_molar_density=5e3)
    stages = int(rng.integers(3, 31))
    packed = bool(rng.random() < 0.3)
    y = np.append(rng.dirichlet(np.concatenate(([6.0], np.ones(n - 2)))), 0.0)
    rich, lean = 100.0 * y, np.zeros(n)
    lean[-1] = rng.uniform(50, 200)
    column = Column(stages, [LiquidFeed(1, lean, rng.uniform(290, 310)), VaporFeed(stages, rich, rng.uniform(295,
                                                                                                             320))], P,
                    segment_height=0.3 if packed else None)
    contactor = fixed(rng, n, 100.0, P / (8.314 * 305), units=(0.1, 1.0) if packed else (0.1, 3.0))
    return Case(column, properties, contactor, ("packed" if packed else "trays") + (", oil" if oil else "")
                + (", gas" if gas else ""))


@dataclass
class Outcome:
    """What became of a case: profiles or the text of the error; the dry-section estimate."""

    case: Case
    margin: float | None = None
    equilibrium: Profile | None = None
    rate: Profile | None = None
    errors: list[str] = field(default_factory=list)

    @property
    def flagged(self) -> bool:
        return self.margin is not None and self.margin <= 0


def solve(case: Case) -> Outcome:
    """Both models, doubts about a solution left to the caller."""
    outcome = Outcome(case)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", RateBasedWarning)
        warnings.simplefilter("error", RuntimeWarning)
        warnings.simplefilter("ignore", PlausibilityWarning)
        problem = make_problem(case.column, case.properties)
        outcome.margin = dry_margin(problem, starting_state(problem))
        for name, run in (("equilibrium", lambda: solve_equilibrium(case.column, case.properties)),
                          ("rate", lambda: solve_ratebased(case.column, case.properties, case.contactor))):
            try:
                setattr(outcome, name, run())
            except ConvergenceError as error:
                outcome.errors.append(f"{name}: {error}")
    return outcome
