"""`interface_flux`: constructed answers, closures, derivatives, masks, order of components, errors and warnings."""
from __future__ import annotations

import json
import warnings
from dataclasses import fields, replace
from pathlib import Path

import numpy as np
import pytest
from interface_cases import AT_LEAST_TERNARY, KINDS, construct, merged
from interface_models import Margules, constant_volatility, margules, random_bulks
from reference_interface import numbers, problem

from ratebased.bootstrap import Bootstrap
from ratebased.errors import (
    ConvergenceError,
    HighFluxWarning,
    InputError,
    NoSolutionError,
    PropertyRangeError,
    UnstableMixtureError,
)
from ratebased.film import (
    FilmFlux,
    effective,
    explicit_burghardt_krupiczka,
    explicit_taylor_smith,
    krishna_standart,
    linearized,
    numerical,
)
from ratebased.interface import (
    Bulk,
    InterfaceStatus,
    branch,
    bulks_from_interface,
    interface_flux,
    paths,
    shooting,
    solutions,
)
from ratebased.interface.blocks import evaluate
from ratebased.interface.newton import Iterate
from ratebased.interface.problem import prepare
from ratebased.properties import ConstantVolatility
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
    assert (fast.status == general.status).all()


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
@pytest.fixture(params=["constant volatility", "margules", "gas and salt", "real vapor by differences"])
def mixture(request):
    rng = np.random.default_rng(11)
    model = {"constant volatility": constant_volatility(rng, 4),
             "margules": margules(rng, 4, heat=150.0, cp_slope=4e-3),
             "gas and salt": margules(rng, 4, condensable=[True, True, True, False],
                                      volatile=[False, True, True, True]),
             "real vapor by differences": margules(rng, 3, heat=100.0, virial=1e-3, model=Margules)}[request.param]
    return model, *random_bulks(rng, (6,), model)


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


# ------------------------------------------------------------------------------------------------------- permutations
def permuted_bulk(bulk, order):
    return replace(bulk, composition=bulk.composition[..., order],
                   kappa=bulk.kappa[..., order, :][..., :, order])


def test_order_of_components_does_not_matter():
    rng = np.random.default_rng(13)
    model = margules(rng, 4, heat=150.0, condensable=[True, False, True, True])
    vapor, liquid = random_bulks(rng, (8,), model)
    r = interface_flux(vapor, liquid, model, P, derivatives=True)
    per_component = {"alpha": 1, "latent": 1, "vapor_cp": 1, "liquid_cp": 1, "condensable": 1, "volatile": 1,
                     "interaction": 2, "interaction_heat": 2, "virial": 2}
    for order in ([1, 0, 3, 2], [3, 2, 1, 0], [0, 2, 3, 1]):
        other = replace(model, **{k: (getattr(model, k)[order] if d == 1 else getattr(model, k)[order][:, order])
                                  for k, d in per_component.items()})
        q = interface_flux(permuted_bulk(vapor, order), permuted_bulk(liquid, order), other, P, derivatives=True)
        np.testing.assert_allclose(q.N, r.N[..., order], atol=1e-12 * np.abs(r.N).max())
        np.testing.assert_allclose(q.T_I, r.T_I, rtol=1e-13)
        np.testing.assert_allclose(q.vapor_entropy_share, r.vapor_entropy_share, rtol=1e-9)
        columns = [*order, 4, *[5 + j for j in order], 9]
        scale = np.abs(r.derivatives.dN).max()
        np.testing.assert_allclose(q.derivatives.dN, r.derivatives.dN[..., order, :][..., columns], atol=1e-8 * scale)


@pytest.mark.parametrize("place", range(4))
def test_trace_component_keeps_its_digits(place):
    """A trace of 1e-12: its flux scales with it, wherever it stands among the components."""
    rng = np.random.default_rng(14)
    model = constant_volatility(rng, 4)
    vapor, liquid = random_bulks(rng, (), model)

    def with_trace(bulk, value):
        x = bulk.composition.copy()
        x[place] = 0.0
        x /= x.sum()
        x *= 1.0 - value
        x[place] = value
        return replace(bulk, composition=x)

    reference = interface_flux(with_trace(vapor, 1e-6), with_trace(liquid, 1e-6), model, P, tolerance=1e-13)
    trace = interface_flux(with_trace(vapor, 1e-12), with_trace(liquid, 1e-12), model, P, tolerance=1e-13)
    assert trace.N[place] * 1e6 == pytest.approx(reference.N[place], rel=2e-3)
    others = np.arange(4) != place
    np.testing.assert_allclose(trace.N[others], reference.N[others], rtol=1e-4)


# --------------------------------------------------------------------------------------------------------- other films
def test_another_film_method_through_differences():
    """The same film as a plain function goes the way of differences and gives the same interface."""
    def plain(x0, xd, kappa, c_t, bootstrap: Bootstrap, *, gamma=None, throw=True) -> FilmFlux:
        return krishna_standart(x0, xd, kappa, c_t, bootstrap, gamma=gamma, throw=throw)

    rng = np.random.default_rng(15)
    model = margules(rng, 3, heat=100.0)
    vapor, liquid = random_bulks(rng, (4,), model)
    one = interface_flux(vapor, liquid, model, P, derivatives=True)
    two = interface_flux(vapor, liquid, model, P, film=plain, derivatives=True)
    np.testing.assert_allclose(two.N, one.N, atol=1e-8 * np.abs(one.N).max())
    np.testing.assert_allclose(two.derivatives.dN, one.derivatives.dN, atol=1e-6 * np.abs(one.derivatives.dN).max())


def test_films_integrated_numerically_give_the_same_interface(mixture):
    """The film equations themselves, by collocation: an answer that owes nothing to matrix functions."""
    model, vapor, liquid = mixture
    exact = interface_flux(vapor, liquid, model, P)
    r = interface_flux(vapor, liquid, model, P, film=numerical)
    np.testing.assert_allclose(r.N, exact.N, atol=1e-8 * np.abs(exact.N).max())
    np.testing.assert_allclose(r.T_I, exact.T_I, atol=1e-6)


def test_linearized_films_have_rows_of_their_own():
    """The same as through differences of its N; near the exact films where the fluxes are small."""
    def plain(x0, xd, kappa, c_t, bootstrap: Bootstrap, *, gamma=None, throw=True) -> FilmFlux:
        return linearized(x0, xd, kappa, c_t, bootstrap, gamma=gamma, throw=throw)

    rng = np.random.default_rng(27)
    model = margules(rng, 3, heat=100.0)
    vapor, liquid = random_bulks(rng, (4,), model)
    own, differences = (interface_flux(vapor, liquid, model, P, film=f) for f in (linearized, plain))
    exact = interface_flux(vapor, liquid, model, P)
    np.testing.assert_allclose(differences.N, own.N, atol=1e-8 * np.abs(own.N).max())
    assert np.abs(own.N - exact.N).max() > 1e-5 * np.abs(exact.N).max()
    np.testing.assert_allclose(own.N, exact.N, atol=0.05 * np.abs(exact.N).max())


@pytest.mark.parametrize("film", [effective, explicit_burghardt_krupiczka, explicit_taylor_smith])
def test_approximate_films_are_exact_for_binaries(film):
    rng = np.random.default_rng(28)
    model = constant_volatility(rng, 2)
    vapor, liquid = random_bulks(rng, (4,), model)
    exact, r = interface_flux(vapor, liquid, model, P), interface_flux(vapor, liquid, model, P, film=film)
    np.testing.assert_allclose(r.N, exact.N, atol=1e-7 * np.abs(exact.N).max())


# ------------------------------------------------------------------------------------------------------- limiting cases
def test_equilibrium_exchanges_nothing():
    """A vapour y = K x at the liquid's boiling point: no flux, whatever the coefficients."""
    rng = np.random.default_rng(16)
    model = constant_volatility(rng, 3)
    vapor, liquid = random_bulks(rng, (), model)
    x = liquid.composition
    T = model.b / (model.a + np.log((model.volatility * x).sum() / P))
    y = model.k_value(T, P, x, x) * x
    r = interface_flux(replace(vapor, composition=y / y.sum(), temperature=T), replace(liquid, temperature=T), model, P,
                       derivatives=True)
    assert np.abs(r.N).max() < 1e-13 and r.T_I == pytest.approx(T, rel=1e-13)
    assert r.status == InterfaceStatus.SOLVED and np.isfinite(r.derivatives.dN).all()
    assert r.vapor_entropy_share >= 0


def test_huge_liquid_conductance_holds_the_interface_at_the_liquid_temperature():
    """A gas that limits the flux: without one, and with all heat removed, nothing would."""
    rng = np.random.default_rng(17)
    model = constant_volatility(rng, 3, condensable=[True, True, False])
    vapor, liquid = random_bulks(rng, (5,), model)
    mixed = 0.4 * vapor.composition + 0.6 * np.array([0.0, 0.0, 1.0])
    vapor, liquid = replace(vapor, composition=mixed), replace(liquid, temperature=np.linspace(300.0, 330.0, 5))
    r = interface_flux(vapor, replace(liquid, heat_transfer=np.full(5, 1e12)), model, P)
    np.testing.assert_allclose(r.T_I, liquid.temperature, atol=1e-5)
    less = interface_flux(vapor, replace(liquid, heat_transfer=np.full(5, 1e7)), model, P)
    np.testing.assert_allclose(less.N, r.N, atol=1e-3 * np.abs(r.N).max())


def test_binary_with_equal_capacities_and_latent_heats_is_near_equimolar():
    """Equal latent heats, no heat capacities, no conduction to speak of: sum N -> 0 (constant molar overflow)."""
    model = ConstantVolatility(("a", "b"), [2.0, 1.0], 3.0e4, a=23.0, b=4025.0)
    T = 350.0
    k = np.array([[0.0, 0.02], [0.02, 0.0]])
    r = interface_flux(Bulk(np.array([0.5, 0.5]), T, k, 1e-9, 35.0),
                       Bulk(np.array([0.4, 0.6]), T, 0.01 * k, 1e-9, 1.2e4), model, P)
    assert abs(r.N.sum()) < 1e-9 * np.abs(r.N).max()
    assert r.N[0] != 0


def controlled(side, spread):
    """Ternary, equal latent heats, no heat capacities, one film in control; N_i/(y_i - y*_i) of the components."""
    rng = np.random.default_rng(19)
    model = ConstantVolatility(("a", "b", "c"), [4.0, 2.0, 1.0], 3e4, a=23.0, b=4025.0)
    x, y = np.array([0.3, 0.3, 0.4]), np.array([0.35, 0.4, 0.25])
    weight = model.volatility * x
    T = model.b / (model.a + np.log(weight.sum() / P))
    kappa = np.where(np.eye(3), 0.0, pairs_of(rng, spread))
    slow, fast = 0.02 * kappa, 1e4 * kappa
    vapor, liquid = (slow, fast) if side == "vapor" else (fast, 1e-4 * kappa)
    r = interface_flux(Bulk(y, T, vapor, 1e-9, 35.0), Bulk(x, T, liquid, 1e-9, 1.2e4), model, P)
    return r.N / (y - weight / weight.sum())


def pairs_of(rng, spread):
    k = np.triu(spread ** rng.uniform(-0.5, 0.5, (3, 3)), 1)
    return k + k.T


def test_equal_diffusivities_with_vapor_control_give_equal_coefficients():
    ratio = controlled("vapor", 1.0)
    np.testing.assert_allclose(ratio, ratio[0], rtol=2e-3)


def test_equal_diffusivities_with_liquid_control_do_not():
    """K differs among the components, so their driving forces in the liquid do: not a consequence of diffusion."""
    ratio = controlled("liquid", 1.0)
    assert ratio.max() > 1.3 * ratio.min()


def test_unequal_diffusivities_with_vapor_control_do_not():
    ratio = controlled("vapor", 10.0)
    assert ratio.max() > 1.1 * ratio.min()


# ------------------------------------------------------------------------------------------------------------ reverse
@pytest.mark.parametrize("known", ["vapor_temperature", "energy_flux"])
def test_bulks_from_the_interface_are_the_bulks(mixture, known):
    model, vapor, liquid = mixture
    r = interface_flux(vapor, liquid, model, P, tolerance=1e-13)
    closing = {"vapor_temperature": vapor.temperature} if known == "vapor_temperature" else {
        "energy_flux": r.energy_flux}
    v, l = bulks_from_interface(r.N, model, P, x_I=r.x_I, y_I=r.y_I, T_I=r.T_I, kappa_vapor=vapor.kappa,
                                kappa_liquid=liquid.kappa, heat_transfer_vapor=vapor.heat_transfer,
                                heat_transfer_liquid=liquid.heat_transfer, molar_density_vapor=vapor.molar_density,
                                molar_density_liquid=liquid.molar_density, **closing)
    np.testing.assert_allclose(v.composition, vapor.composition, atol=1e-9)
    np.testing.assert_allclose(l.composition, liquid.composition, atol=1e-9)
    np.testing.assert_allclose(v.temperature, vapor.temperature, atol=1e-6)
    np.testing.assert_allclose(l.temperature, liquid.temperature, atol=1e-6)


def test_bulks_from_the_vapor_side_of_the_interface():
    rng = np.random.default_rng(18)
    model = margules(rng, 3)
    vapor, liquid = random_bulks(rng, (4,), model)
    r = interface_flux(vapor, liquid, model, P, tolerance=1e-13)
    v, l = bulks_from_interface(r.N, model, P, y_I=r.y_I, kappa_vapor=vapor.kappa, kappa_liquid=liquid.kappa,
                                heat_transfer_vapor=vapor.heat_transfer, heat_transfer_liquid=liquid.heat_transfer,
                                molar_density_vapor=vapor.molar_density, molar_density_liquid=liquid.molar_density,
                                vapor_temperature=vapor.temperature)
    np.testing.assert_allclose(l.composition, liquid.composition, atol=1e-8)
    np.testing.assert_allclose(l.temperature, liquid.temperature, atol=1e-5)
    with pytest.raises(NoSolutionError, match="vapor.*need a bulk mole fraction of -"):
        bulks_from_interface(20.0 * r.N[0], model, P, x_I=r.x_I[0], kappa_vapor=vapor.kappa[0],
                             kappa_liquid=liquid.kappa[0], heat_transfer_vapor=50.0, heat_transfer_liquid=1000.0,
                             molar_density_vapor=35.0, molar_density_liquid=1.2e4, vapor_temperature=360.0)
    with pytest.raises(InputError, match="T_I = 300 K: the interface boils at"):
        bulks_from_interface(r.N[0], model, P, x_I=r.x_I[0], T_I=300.0, kappa_vapor=0.02, kappa_liquid=1e-4,
                             heat_transfer_vapor=50.0, heat_transfer_liquid=1000.0, molar_density_vapor=35.0,
                             molar_density_liquid=1.2e4, vapor_temperature=360.0)


# ------------------------------------------------------------------------------------------------------------ failures
@pytest.fixture
def one():
    rng = np.random.default_rng(20)
    model = constant_volatility(rng, 3, condensable=[True, True, False])
    return model, *random_bulks(rng, (), model)


def test_a_gas_in_the_liquid_is_an_error(one):
    model, vapor, liquid = one
    with pytest.raises(InputError, match=r"liquid.composition\[2\] = 0.1: c is not condensable"):
        interface_flux(vapor, replace(liquid, composition=np.array([0.4, 0.5, 0.1])), model, P)


def test_bad_input_names_argument_and_entry(one):
    model, vapor, liquid = one
    with pytest.raises(InputError, match="liquid.heat_transfer"):
        interface_flux(vapor, replace(liquid, heat_transfer=0.0), model, P)
    with pytest.raises(InputError, match=r"vapor.composition"):
        interface_flux(replace(vapor, composition=np.array([0.5, 0.2, 0.2])), liquid, model, P)
    with pytest.raises(InputError, match="P = -1"):
        interface_flux(vapor, liquid, model, -1.0)
    with pytest.raises(InputError, match="start: expected a result of batch shape"):
        first = interface_flux(vapor, liquid, model, P)
        interface_flux(replace(vapor, temperature=np.full(3, 350.0)), liquid, model, P, start=first)


def test_solutions_takes_one_interface(one):
    model, vapor, liquid = one
    with pytest.raises(InputError, match="takes one interface"):
        solutions(replace(vapor, temperature=np.full(3, 350.0)), liquid, model, P)
    with pytest.raises(InputError, match="starts = 1"):
        solutions(vapor, liquid, model, P, starts=1)
    every = solutions(vapor, liquid, model, P, starts=60)
    r = interface_flux(vapor, liquid, model, P)
    assert every.N.shape == (1, 3)
    np.testing.assert_allclose(every.N[0], r.N, rtol=1e-9)


def test_one_component_is_an_error():
    model = ConstantVolatility(("a",), [1.0], 3e4, a=23.0, b=4025.0)
    one = np.ones((1, 1))
    with pytest.raises(InputError, match="two components or more"):
        interface_flux(Bulk(np.ones(1), 350.0, one, 50.0, 35.0), Bulk(np.ones(1), 350.0, one, 1e3, 1e4), model, P)


def test_nothing_that_can_pass_is_an_error():
    model = ConstantVolatility(("gas", "salt"), [1.0, 1.0], 3e4, a=23.0, b=4025.0, condensable=[False, True],
                               volatile=[True, False])
    with pytest.raises(InputError, match="no component is both condensable and volatile"):
        interface_flux(Bulk(np.array([1.0, 0.0]), 350.0, np.array(0.02), 50.0, 35.0),
                       Bulk(np.array([0.0, 1.0]), 350.0, np.array(1e-4), 1e3, 1e4), model, P)


@pytest.mark.parametrize("x", [0.5, 0.2])
def test_unstable_liquid_is_an_error(x):
    """|A| = 4 in a symmetric binary: x(1 - x) > 1/8, inside the spinodal from 0.146 to 0.854."""
    rng = np.random.default_rng(21)
    model = replace(margules(rng, 2), interaction=np.array([[0.0, 4.0], [4.0, 0.0]]), alpha=np.array([1.0, 1.0]))
    vapor, liquid = random_bulks(rng, (), model)
    liquid = replace(liquid, composition=np.array([x, 1.0 - x]))
    with pytest.raises(UnstableMixtureError, match="would split in two"):
        interface_flux(vapor, liquid, model, P)
    r = interface_flux(vapor, liquid, model, P, throw=False)
    assert r.status == InterfaceStatus.UNSTABLE_LIQUID and np.isnan(r.N).all()


def test_temperature_outside_the_property_range(one):
    class Ranged:
        T_range = (300.0, 345.0)

        def __init__(self, model):
            self.model = model

        def __getattr__(self, name):
            return getattr(self.model, name)

    model, vapor, liquid = one
    ranged = Ranged(model)
    with pytest.raises(PropertyRangeError, match="vapor.temperature"):
        interface_flux(replace(vapor, temperature=400.0), replace(liquid, temperature=340.0), ranged, P)
    vapor, liquid = replace(vapor, temperature=350.0), replace(liquid, temperature=350.0)
    free = interface_flux(vapor, liquid, model, P)
    ranged.T_range = (300.0, float(free.T_I) + 30.0)
    inside = interface_flux(vapor, liquid, ranged, P)
    assert inside.T_I == pytest.approx(float(free.T_I), rel=1e-10)
    middle = 0.5 * (350.0 + float(free.T_I))
    assert abs(free.T_I - 350.0) > 1.0
    ranged.T_range = (300.0, middle) if free.T_I > 350.0 else (middle, 400.0)
    with pytest.raises(PropertyRangeError, match="T_I runs out"):
        interface_flux(vapor, liquid, ranged, P)


def test_failed_entries_leave_the_others_alone():
    """One hopeless interface in a batch: NaN and its status there, the others as if alone."""
    rng = np.random.default_rng(22)
    model = margules(rng, 3)
    vapor, liquid = random_bulks(rng, (4,), model)
    bad = replace(model, interaction=np.stack([model.interaction] * 4))
    bad.interaction[2] = 6.0 * (1 - np.eye(3))
    r = interface_flux(vapor, liquid, bad, P, throw=False)
    alone = interface_flux(vapor, liquid, model, P)
    good = [0, 1, 3]
    np.testing.assert_allclose(r.N[good], alone.N[good], rtol=1e-8, atol=1e-12)
    assert r.status[2] > InterfaceStatus.OTHER_BRANCH and np.isnan(r.N[2]).all() and np.isnan(r.T_I[2])
    with pytest.raises((ConvergenceError, UnstableMixtureError)) as caught:
        interface_flux(vapor, liquid, bad, P)
    assert "interface[2]" in str(caught.value)


def test_high_flux_warns():
    model = ConstantVolatility(("a", "b"), [1.2, 1.0], 3.0e4, a=23.0, b=4025.0, vapor_heat_capacity=100.0)
    k = np.array([[0.0, 1.0], [1.0, 0.0]])
    with pytest.warns(HighFluxWarning, match="beyond 30"):
        interface_flux(Bulk(np.array([0.5, 0.5]), 420.0, k, 2.0, 35.0),
                       Bulk(np.array([0.5, 0.5]), 300.0, 0.01 * k, 2e4, 1e4), model, P)


def test_frame_and_shapes():
    rng = np.random.default_rng(23)
    model = constant_volatility(rng, 3)
    vapor, liquid = random_bulks(rng, (2, 3), model)
    r = interface_flux(vapor, liquid, model, P, derivatives=True)
    shapes = {"N": (2, 3, 3), "T_I": (2, 3), "status": (2, 3), "u": (2, 3, 3)}
    assert all(getattr(r, k).shape == s for k, s in shapes.items())
    assert r.derivatives.dN.shape == (2, 3, 3, 8) and r.derivatives.dT_I.shape == (2, 3, 8)
    frame = r.to_frame()
    assert len(frame) == 6 and frame["status"].eq("solved").all()
    assert frame["N_b_mol_m2_s"].iloc[4] == r.N[1, 1, 1]
    single = interface_flux(*(replace(b, **{f.name: np.asarray(getattr(b, f.name))[1, 2] for f in fields(b)})
                              for b in (vapor, liquid)), model, P)
    np.testing.assert_allclose(single.N, r.N[1, 2], rtol=1e-10)
    assert single.T_I.shape == ()
