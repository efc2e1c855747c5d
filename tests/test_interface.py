"""`interface_flux`: constructed answers, closures, derivatives, paths and branches."""
from __future__ import annotations

import json
import warnings
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from interface_cases import AT_LEAST_TERNARY, KINDS, construct, merged
from interface_models import MIXTURES, constant_volatility, mixture_and_bulks, random_bulks
from reference_interface import numbers, problem

from ratebased.errors import (
    HighFluxWarning,
    NoSolutionError,
)
from ratebased.film import (
    krishna_standart,
)
from ratebased.interface import (
    InterfaceStatus,
    branch,
    interface_flux,
    paths,
    shooting,
)
from ratebased.interface.blocks import evaluate
from ratebased.interface.newton import Iterate
from ratebased.interface.problem import prepare
from ratebased.properties.protocol import GAS_CONSTANT

P = 1.0e5


def solve(case, **options):
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", HighFluxWarning)
        return interface_flux(case.vapor, case.liquid, case.model, case.P, **options)


def off(result, case):
    return np.abs(result.N - case.N).max(-1) / np.abs(case.N).max(-1)


# ------------------------------------------------------------------------------------------------ constructed answers
@pytest.mark.slow
@pytest.mark.parametrize("kind", KINDS)
def test_constructed_ideal(kind):
    """Every kind, n = 2..6, film matrices up to a 1-norm of 25: all solved, the drawn root but for a few."""
    rng = np.random.default_rng(KINDS.index(kind))
    far = total = 0
    for n in range(2, 7):
        if n == 2 and kind in AT_LEAST_TERNARY:
            continue
        case = construct(rng, kind, n, 50)
        r = solve(case, throw=False)
        assert r.solved.all()
        far += int((off(r, case) > 1e-5).sum())
        total += len(case.P)
        # an iterate is accepted on its step, not on a loose residual
        assert np.quantile(off(r, case), 0.9) < 1e-9
        assert r.residual.max() < 1e-9 and r.equilibrium_residual.max() < 1e-10 and r.energy_residual.max() < 1e-10
    assert far <= 0.02 * total


@pytest.mark.slow
@pytest.mark.parametrize("kind", KINDS)
def test_constructed_nonideal(kind):
    """Two-suffix Margules in equilibrium and film, |A_ij| up to 2.5, eigenvalues of [Gamma] above 0.15."""
    rng = np.random.default_rng(100 + KINDS.index(kind))
    far = total = 0
    for n in range(2, 6):
        if n == 2 and kind in AT_LEAST_TERNARY:
            continue
        case = construct(rng, kind, n, 12, interaction=2.5)
        r = solve(case, throw=False)
        assert r.solved.all()
        far += int((off(r, case) > 1e-5).sum())
        total += len(case.P)
    assert far <= 2


def test_fast_path_agrees_with_the_general_one(monkeypatch):
    rng = np.random.default_rng(5)
    kinds = ("ordinary", "condensation", "evaporation")
    case = merged([construct(rng, kind, 4, 120, lean=True) for kind in kinds], rng)
    fast = solve(case)
    monkeypatch.setattr(shooting, "WORTHWHILE", 10 ** 9)
    general = solve(case)
    scale = np.abs(general.N).max(-1)
    assert np.quantile(np.abs(fast.N - general.N).max(-1) / scale, 0.99) < 1e-10
    np.testing.assert_allclose(fast.T_I, general.T_I, rtol=1e-9)
    np.testing.assert_allclose(fast.size, general.size, rtol=1e-8)
    np.testing.assert_allclose(fast.energy_flux, general.energy_flux, rtol=1e-8, atol=1e-6)
    assert (fast.status < InterfaceStatus.OTHER_BRANCH).all() and (general.status < InterfaceStatus.OTHER_BRANCH).all()


def test_fast_path_on_the_reference_interfaces():
    """Every reference case as a batch large enough for the fast path, to the tolerance of the file."""
    cases = json.loads((Path(__file__).parent / "data" / "interface_reference.json").read_text())["cases"]
    shot = 0
    for case in cases:
        vapor, liquid, model, pressure = problem(case)
        count = shooting.WORTHWHILE
        vapor = replace(vapor, temperature=np.full(count, vapor.temperature))
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", HighFluxWarning)
            r = interface_flux(vapor, liquid, model, pressure)
        N = numbers(case["outputs"]["N"])
        assert np.abs(r.N - N).max() <= 1e-10 * np.abs(N).max() + 20 * case["rounding_sensitivity"], case["id"]
        assert np.abs(r.T_I - float(case["outputs"]["T_I"])).max() <= 1e-8, case["id"]
        shot += bool(r.residual.max() > 0 and r.size.max() < shooting.LARGEST)
    assert shot > 60


def test_warm_start_agrees_and_is_short():
    rng = np.random.default_rng(6)
    for count in (20, 400):
        case = construct(rng, "ordinary", 3, count)
        first = solve(case)
        moved = replace(case, vapor=replace(case.vapor, temperature=case.vapor.temperature + 0.05))
        cold, warm = solve(moved), solve(moved, start=first)
        np.testing.assert_allclose(warm.N, cold.N, rtol=1e-7, atol=1e-9 * np.abs(cold.N).max())
        assert np.median(warm.iterations) <= 3


# ------------------------------------------------------------------------------------------------------------ closures
@pytest.fixture(params=MIXTURES)
def mixture(request):
    return mixture_and_bulks(request.param)


def test_energy_closes_at_both_faces(mixture):
    model, vapor, liquid = mixture
    r = interface_flux(vapor, liquid, model, P)
    T = r.T_I
    E = [r.q_vapor_bulk + (r.N * model.vapor_enthalpy(vapor.temperature, P, vapor.composition)).sum(-1),
         r.q_vapor_interface + (r.N * model.vapor_enthalpy(T, P, vapor.composition)).sum(-1),
         r.q_liquid_interface + (r.N * model.liquid_enthalpy(T, P, liquid.composition)).sum(-1),
         r.q_liquid_bulk + (r.N * model.liquid_enthalpy(liquid.temperature, P, liquid.composition)).sum(-1)]
    scale = 5e4 * np.abs(r.N).sum(-1) + np.abs(r.q_vapor_bulk) + np.abs(r.q_liquid_bulk)
    for face in E:
        assert np.abs(face - r.energy_flux).max() < 1e-10 * scale.max()


def test_interface_is_at_equilibrium_and_sums_close(mixture):
    model, vapor, liquid = mixture
    r = interface_flux(vapor, liquid, model, P)
    K = model.k_value(r.T_I, P, r.x_I, r.y_I)
    ordinary = model.condensable & model.volatile
    np.testing.assert_allclose(r.y_I[..., ordinary], (K * r.x_I)[..., ordinary], rtol=1e-9)
    assert np.abs(r.x_I.sum(-1) - 1).max() < 1e-10 and np.abs(r.y_I.sum(-1) - 1).max() < 1e-10
    assert (r.N[..., ~ordinary] == 0).all()


def test_films_of_the_answer_solve_the_film_problem(mixture):
    """The film room, given the interface state and the total flux, finds the same fluxes."""
    from ratebased.bootstrap import TotalFlux
    model, vapor, liquid = mixture
    r = interface_flux(vapor, liquid, model, P)
    again = krishna_standart(vapor.composition, r.y_I / r.y_I.sum(-1, keepdims=True), vapor.kappa, vapor.molar_density,
                             TotalFlux(r.N.sum(-1)))
    np.testing.assert_allclose(again.N, r.N, atol=1e-9 * np.abs(r.N).max())
    gamma = r.liquid_film.gamma
    again = krishna_standart(r.x_I / r.x_I.sum(-1, keepdims=True), liquid.composition, liquid.kappa,
                             liquid.molar_density, TotalFlux(r.N.sum(-1)), gamma=gamma)
    np.testing.assert_allclose(again.N, r.N, atol=1e-8 * np.abs(r.N).max())


def test_entropy_share(mixture):
    model, vapor, liquid = mixture
    r = interface_flux(vapor, liquid, model, P)
    assert ((r.vapor_entropy_share > 0) & (r.vapor_entropy_share < 1)).all()
    with np.errstate(divide="ignore", invalid="ignore"):
        terms = np.where(r.N == 0, 0.0, r.N * np.log(vapor.composition / r.y_I))
    np.testing.assert_allclose(r.vapor_film.entropy_production, GAS_CONSTANT * terms.sum(-1), rtol=1e-8)


def test_inert_components_follow_the_logarithm():
    """sum_j K_kj N_j = ln(y_I,k/y_k) for a gas, ln(x_k/x_I,k) for a salt: an exact integral of the film equations."""
    rng = np.random.default_rng(12)
    model = constant_volatility(rng, 4, condensable=[True, True, True, False], volatile=[False, True, True, True])
    vapor, liquid = random_bulks(rng, (5,), model)
    r = interface_flux(vapor, liquid, model, P)
    c, y, x = r.films, vapor.composition, liquid.composition
    np.testing.assert_allclose((c.K_vapor[:, 3] * r.N).sum(-1), np.log(r.y_I[:, 3] / y[:, 3]), rtol=1e-9)
    np.testing.assert_allclose((c.K_liquid[:, 0] * r.N).sum(-1), np.log(x[:, 0] / r.x_I[:, 0]), rtol=1e-9, atol=1e-13)


# --------------------------------------------------------------------------------------------------------- derivatives
def test_derivatives_by_both_bulks(mixture):
    """Against central differences by mole numbers and temperatures."""
    model, vapor, liquid = mixture
    n = len(model.names)
    r = interface_flux(vapor, liquid, model, P, derivatives=True, tolerance=1e-13)

    def outputs(v, l):
        q = interface_flux(v, l, model, P, start=r, tolerance=1e-13)
        return {"dN": q.N, "dE": q.energy_flux, "dq_vapor_bulk": q.q_vapor_bulk, "dT_I": q.T_I}

    for first, bulk, present in ((0, vapor, model.volatile), (n + 1, liquid, model.condensable)):
        for j in [*np.flatnonzero(present), n]:
            h = 1e-5 if j < n else 1e-3
            ends = []
            for side in (1, -1):
                if j < n:
                    g = bulk.composition + side * h * np.eye(n)[j]
                    moved = replace(bulk, composition=g / g.sum(-1, keepdims=True))
                else:
                    moved = replace(bulk, temperature=bulk.temperature + side * h)
                ends.append(outputs(moved, liquid) if bulk is vapor else outputs(vapor, moved))
            for key, up in ends[0].items():
                slope = getattr(r.derivatives, key)
                assert np.abs((up - ends[1][key]) / (2 * h) - slope[..., first + j]).max() < 2e-7 * np.abs(slope).max()


# --------------------------------------------------------------------------------------------------- paths and branches
@pytest.mark.parametrize("interaction", [0.0, 1.5])
def test_continuation_reaches_the_same_solution(interaction):
    rng = np.random.default_rng(24)
    case = construct(rng, "condensation", 3, 12, interaction=interaction)
    r = solve(case)
    prepared = prepare(case.vapor, case.liquid, case.model, case.P, krishna_standart)
    run, reached = branch.continuation(prepared, 1e-10)
    assert run.converged.all() and (reached == 1.0).all()
    np.testing.assert_allclose(run.z[:, :3], r.N, atol=1e-9 * np.abs(r.N).max())
    assert (r.status == InterfaceStatus.SOLVED).all()


def test_second_start_and_continuation_take_over(monkeypatch):
    """Newton made to fail from the first start, then from both: the next path solves, and the status names it."""
    rng = np.random.default_rng(25)
    case = construct(rng, "ordinary", 3, 6)
    expected = solve(case)
    real, calls, allowed = paths.newton, [], [0]

    def lame(problem, z, y, *, tolerance, max_iterations=60):
        calls.append(1)
        run = real(problem, z, y, tolerance=tolerance, max_iterations=max_iterations)
        return replace(run, converged=run.converged & (len(calls) > allowed[0]))

    monkeypatch.setattr(paths, "newton", lame)
    for failures, label in enumerate((InterfaceStatus.SECOND_START, InterfaceStatus.CONTINUATION), 1):
        allowed[0] = failures
        calls.clear()
        r = solve(case)
        assert (r.status == label).all()
        np.testing.assert_allclose(r.N, expected.N, atol=1e-9 * np.abs(expected.N).max())
    nothing = Iterate(np.full((6, 7), 300.0), np.zeros((6, 3)), np.zeros(6, bool), np.zeros(6, int))
    monkeypatch.setattr(paths, "newton", lambda p, z, y, **options: nothing)
    monkeypatch.setattr(paths, "continuation", lambda p, tolerance: (nothing, np.full(6, 0.25)))
    with pytest.raises(NoSolutionError, match=r"interface\[0\].*25 % of the way.*6 of 6") as caught:
        solve(case)
    assert caught.value.failed.all() and caught.value.best.shape == (6, 7)


@pytest.mark.parametrize("kind", ["ordinary", "noncondensing", "nonvolatile", "wide-diffusivity", "high-flux"])
def test_sign_at_zero_flux_is_the_one_derived(kind):
    """The fast path knows the sign at zero flux beforehand: the general path, which computes it, agrees."""
    rng = np.random.default_rng(26)
    case = construct(rng, kind, 4, 300, lean=True)
    prepared = prepare(case.vapor, case.liquid, case.model, case.P, krishna_standart)
    shot = shooting.solve(prepared, 1e-10)
    z, y = shot.z[shot.solved], shot.y_I[shot.solved]
    rest = prepared.take(shot.solved)
    at_zero = branch.zero_flux_sign(rest)
    assert (at_zero == at_zero[0]).all() and at_zero[0] != 0
    general = branch.determinant_sign(evaluate(rest, z, y, False).dz) == at_zero
    assert (general == shot.connected[shot.solved]).all()
    assert shot.solved.sum() > (10 if kind == "high-flux" else 200)
