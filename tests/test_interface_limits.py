"""The interface in limiting cases: order of components, other film methods, control by one film, read backwards."""
from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from interface_models import MIXTURES, Margules, constant_volatility, margules, mixture_and_bulks, random_bulks

from ratebased.bootstrap import Bootstrap
from ratebased.errors import (
    ApproximationWarning,
    InputError,
    NoSolutionError,
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
    bulks_from_interface,
    interface_flux,
)
from ratebased.properties import ConstantVolatility
from ratebased.properties.protocol import GAS_CONSTANT

P = 1.0e5


class MargulesGas(Margules):
    """With the thermodynamic factor of its vapour."""

    def vapor_thermodynamic_factor(self, T, P, y):
        slope = 2.0 * np.asarray(P / (GAS_CONSTANT * np.asarray(T)))[..., None, None] * (
            self.virial - (self.virial @ y[..., None])[..., 0][..., None, :])
        return np.eye(y.shape[-1] - 1) + y[..., :-1, None] * (slope - slope[..., -1:])[..., :-1, :-1]


class FixedFactors:
    """A model with [Gamma] of both phases given."""

    def __init__(self, model, vapor, liquid):
        self.model, self.factors = model, (vapor, liquid)

    def __getattr__(self, name):
        if name == "entries":
            raise AttributeError(name)
        return getattr(self.model, name)

    def vapor_thermodynamic_factor(self, T, P, y):
        return np.array(np.broadcast_to(self.factors[0], (*y.shape[:-1], *self.factors[0].shape)))

    def thermodynamic_factor(self, T, P, x):
        return np.array(np.broadcast_to(self.factors[1], (*x.shape[:-1], *self.factors[1].shape)))


@pytest.fixture(params=MIXTURES)
def mixture(request):
    return mixture_and_bulks(request.param)


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
    assert trace.N[place] * 1e6 == pytest.approx(reference.N[place], rel=1e-4)
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


def test_bulks_behind_one_interface_and_many_temperatures():
    """Every argument broadcasts; shapes that do not are named; fluxes that overflow are no solution, never NaN."""
    rng = np.random.default_rng(18)
    model = margules(rng, 3)
    vapor, liquid = random_bulks(rng, (), model)
    r = interface_flux(vapor, liquid, model, P)
    films = dict(x_I=r.x_I, kappa_vapor=vapor.kappa, kappa_liquid=liquid.kappa, heat_transfer_vapor=50.0,
                 heat_transfer_liquid=1000.0, molar_density_vapor=35.0, molar_density_liquid=1.2e4)
    temperatures = np.array([355.0, 360.0])
    _, many = bulks_from_interface(r.N, model, P, vapor_temperature=temperatures, **films)
    for i, T in enumerate(temperatures):
        _, one = bulks_from_interface(r.N, model, P, vapor_temperature=T, **films)
        np.testing.assert_allclose(many.temperature[i], one.temperature, rtol=1e-12)
        np.testing.assert_allclose(many.composition[i], one.composition, rtol=1e-9)
    with pytest.raises(InputError, match=r"P \(3,\), .*vapor_temperature \(2,\)"):
        bulks_from_interface(r.N, model, np.full(3, P), vapor_temperature=temperatures, **films)
    with pytest.raises(NoSolutionError, match="vapor: far more flux than the film can carry"):
        bulks_from_interface(1e5 * r.N, model, P, vapor_temperature=360.0, **films)


# -------------------------------------------------------------------------------------- one [Gamma] for each film
@pytest.mark.parametrize("virial", [0.0, 1e-3], ids=["ideal gas", "real vapor"])
def test_averaging_error_is_the_change_with_averaged_factors(virial):
    """Within 5 % of what solving again with the 1-4-1 average of [Gamma] gives; the largest ones warn."""
    rng = np.random.default_rng(2)
    model = margules(rng, 3, virial=virial, model=MargulesGas)
    vapor, liquid = random_bulks(rng, (12,), model)
    assert interface_flux(vapor, liquid, model, P).error is None
    with pytest.warns(ApproximationWarning, match="one .Gamma. at the mean composition"):
        r = interface_flux(vapor, liquid, model, P, estimate=True)
    for i in range(12):
        y, x = (replace(b, composition=b.composition[i], temperature=b.temperature[i], kappa=b.kappa[i],
                        heat_transfer=b.heat_transfer[i], molar_density=b.molar_density[i]) for b in (vapor, liquid))

        def averaged(factor, bulk, face, i=i):
            mean, T = 0.5 * (bulk.composition + face), 0.5 * (bulk.temperature + r.T_I[i])
            return (factor(T, P, bulk.composition) + 4.0 * factor(T, P, mean) + factor(T, P, face)) / 6.0

        fixed = FixedFactors(model, averaged(model.vapor_thermodynamic_factor, y, r.y_I[i]),
                             averaged(model.thermodynamic_factor, x, r.x_I[i]))
        again = interface_flux(y, x, fixed, P)
        change = np.abs(again.N - r.N[i]).max() / np.abs(r.N[i]).max()
        np.testing.assert_allclose(r.error[i], change, rtol=0.05, atol=1e-7)


def test_averaging_error_of_ideal_phases_is_nil():
    rng = np.random.default_rng(5)
    model = constant_volatility(rng, 3)
    vapor, liquid = random_bulks(rng, (3,), model)
    assert not interface_flux(vapor, liquid, model, P, estimate=True).error.any()
