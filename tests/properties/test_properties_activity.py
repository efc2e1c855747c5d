"""Activity kernels against the data library's scalar models, against differences, and against Gibbs and Duhem."""
import numpy as np
import pytest

from ratebased.errors import InputError
from ratebased.properties.activity import DissolvedGases, Ideal, Nrtl, Unifac, Uniquac, Wilson, ln_gamma_and_derivatives
from ratebased.properties.henry import HenryConstant, HenryLaw
from ratebased.properties.protocol import GAS_CONSTANT
from ratebased.properties.thermo_data import ComponentData, unifac_groups

TEMPERATURES = np.array([290.0, 335.0, 390.0])
MIXTURES = {  # chosen so that groups and components coincide in number in one of them, and for one, two, eight
    "one": ["ethanol"],
    "two": ["methanol", "water"],
    "five groups, five components": ["ethanol", "water", "acetone", "n-hexane", "1-propanol"],
    "buried group": ["tert-butanol", "toluene", "water"],
    "eight": ["ethanol", "water", "acetone", "n-hexane", "1-propanol", "toluene", "ethyl acetate", "chloroform"],
}


def compositions(n, count, seed=1):
    return np.random.default_rng(seed).dirichlet(np.ones(n), count)


def pair(rng, n, low, high):
    matrix = rng.uniform(low, high, (n, n))
    np.fill_diagonal(matrix, 0.0)
    return matrix


def local_composition_models(n, seed):
    """Our model and the oracle with the same random temperature-dependent parameters, every term of the form used."""
    import thermo

    rng = np.random.default_rng(seed)
    a, b, c = pair(rng, n, -1, 1), pair(rng, n, -300, 600), pair(rng, n, -0.1, 0.1)
    d, e, f = pair(rng, n, -1e-3, 1e-3), pair(rng, n, -1e4, 1e4), pair(rng, n, -1e-6, 1e-6)
    alpha, slope = pair(rng, n, 0.2, 0.47), pair(rng, n, -1e-4, 1e-4)
    r, q = rng.uniform(0.9, 4, n), rng.uniform(1, 4, n)
    x = [1.0 / n] * n
    a_, b_, c_, d_, e_, f_, alpha_, slope_ = (m.tolist() for m in (a, b, c, d, e, f, alpha, slope))
    yield (Nrtl(n, tau_a=a, tau_b=b, tau_c=c, tau_d=d, tau_e=e, tau_f=f, alpha=alpha, alpha_slope=slope),
           thermo.NRTL(T=300.0, xs=x, tau_as=a_, tau_bs=b_, tau_es=c_, tau_fs=d_, tau_gs=e_, tau_hs=f_,
                       alpha_cs=alpha_, alpha_ds=slope_))
    yield (Wilson(n, lambda_a=a, lambda_b=b, lambda_c=c, lambda_d=d, lambda_e=e, lambda_f=f),
           thermo.Wilson(T=300.0, xs=x, lambda_as=a_, lambda_bs=b_, lambda_cs=c_, lambda_ds=d_, lambda_es=e_,
                         lambda_fs=f_))
    yield (Uniquac(r, q, tau_a=a, tau_b=b, tau_c=c, tau_d=d, tau_e=e, tau_f=f),
           thermo.UNIQUAC(T=300.0, xs=x, rs=r.tolist(), qs=q.tolist(), tau_as=a_, tau_bs=b_, tau_cs=c_, tau_ds=d_,
                          tau_es=e_, tau_fs=f_))


def group_models(names):
    import thermo
    from thermo.unifac import DOUFIP2016, DOUFSG

    data = ComponentData(names)
    indices = range(len(names))
    constants = data.constants
    x = [1.0 / len(names)] * len(names)
    yield (Unifac(*unifac_groups(data, indices, modified=False)),
           thermo.UNIFAC.from_subgroups(T=300.0, xs=x, chemgroups=constants.UNIFAC_groups))
    yield (Unifac(*unifac_groups(data, indices, modified=True), r_exponent=0.75),
           thermo.UNIFAC.from_subgroups(T=300.0, xs=x, chemgroups=constants.UNIFAC_Dortmund_groups, version=1,
                                        subgroups=DOUFSG, interaction_data=DOUFIP2016))


def assert_equal_to_oracle(model, oracle, n):
    x = compositions(n, 3)
    jet = model.ln_gamma(TEMPERATURES, x, 1)
    J = model.mole_number_derivatives(TEMPERATURES, x)
    for s, T in enumerate(TEMPERATURES):
        state = oracle.to_T_xs(float(T), x[s].tolist())
        gammas = np.array(state.gammas())
        np.testing.assert_allclose(jet.value[s], np.log(gammas), rtol=0, atol=1e-10)
        np.testing.assert_allclose(jet.terms[1][s], state.dlngammas_dT(), rtol=0, atol=1e-10)
        np.testing.assert_allclose(J[s], np.array(state.dgammas_dns()) / gammas[:, None], rtol=1e-10, atol=1e-10)
        excess = -GAS_CONSTANT * T ** 2 * jet.terms[1][s] @ x[s]
        np.testing.assert_allclose(excess, state.HE(), rtol=1e-9, atol=1e-7)


@pytest.mark.parametrize("n", [2, 5, 8])
def test_local_composition_models_equal_the_oracle(n):
    for model, oracle in local_composition_models(n, seed=n):
        assert_equal_to_oracle(model, oracle, n)


@pytest.mark.parametrize("names", MIXTURES.values(), ids=MIXTURES)
def test_group_contribution_equals_the_oracle(names):
    if len(names) == 1:
        model = next(group_models(["ethanol", "water"]))[0]
        alone = Unifac(*unifac_groups(ComponentData(names), [0], modified=False))
        assert alone.size == 1 and model.size == 2
        np.testing.assert_allclose(alone.ln_gamma(TEMPERATURES, np.ones((3, 1)), 2).terms, 0.0, atol=1e-14)
        return
    for model, oracle in group_models(names):
        assert_equal_to_oracle(model, oracle, len(names))


def all_models(n):
    yield Ideal(n)
    for model, _ in local_composition_models(n, seed=17):
        yield model
    names = MIXTURES["eight"][:n]
    for model, _ in group_models(names):
        yield model
    solvents = Wilson(n - 1, lambda_b=pair(np.random.default_rng(3), n - 1, -300, 300))
    law = HenryLaw([[HenryConstant(1e7 * (j + 1), 1500.0 + 100 * j, c=0.5, d=1e-3) for j in range(n - 1)]])
    yield DissolvedGases(n, solvents, list(range(1, n)), law, [0])


@pytest.mark.parametrize("n", [3, 8])
def test_gibbs_duhem_symmetry_and_derivatives(n):
    """sum_j x_j J_ij = 0 (homogeneity), J symmetric (one Gibbs energy), J and T derivatives against differences."""
    x = compositions(n, 3, seed=5)
    step, mole = 1e-2, 1e-6
    for model in all_models(n):
        jet = model.ln_gamma(TEMPERATURES, x, 2)
        J = model.mole_number_derivatives(TEMPERATURES, x)
        size = np.abs(J).max() + 1.0
        assert np.abs(J @ x[..., None]).max() < 1e-12 * size
        assert np.abs(J - np.swapaxes(J, -1, -2)).max() < 1e-12 * size
        up, down = (model.ln_gamma(TEMPERATURES + h, x, 1) for h in (step, -step))
        for k in (0, 1):
            difference = (up.terms[k] - down.terms[k]) / (2 * step)
            np.testing.assert_allclose(jet.terms[k + 1], difference, rtol=1e-6, atol=1e-9)
        for j in range(n):
            unit = mole * np.eye(n)[j]
            difference = (model.ln_gamma(TEMPERATURES, (x + unit) / (1 + mole)).value
                          - model.ln_gamma(TEMPERATURES, (x - unit) / (1 - mole)).value) / (2 * mole)
            np.testing.assert_allclose(J[..., j], difference, rtol=1e-6, atol=1e-7 * size)


@pytest.mark.parametrize("n", [2, 5])
def test_order_of_components_does_not_matter(n):
    order = np.random.default_rng(0).permutation(n)
    rng = np.random.default_rng(4)
    tau = pair(rng, n, -300, 600)
    x = compositions(n, 2)
    T = np.array([300.0, 350.0])
    one = Nrtl(n, tau_b=tau).ln_gamma(T, x).value
    two = Nrtl(n, tau_b=tau[np.ix_(order, order)]).ln_gamma(T, x[:, order]).value
    np.testing.assert_allclose(two, one[:, order], atol=1e-13)


def test_temperature_and_composition_broadcast():
    """One composition at many temperatures, many compositions at one, and both at once give the same numbers."""
    x = compositions(3, 4)
    for model in all_models(3):
        many_T = model.ln_gamma(TEMPERATURES, x[0], 2), model.mole_number_derivatives(TEMPERATURES, x[0])
        many_x = model.ln_gamma(TEMPERATURES[1], x, 2), model.mole_number_derivatives(TEMPERATURES[1], x)
        table = model.ln_gamma(TEMPERATURES[:, None], x, 2), model.mole_number_derivatives(TEMPERATURES[:, None], x)
        for k in range(3):
            assert table[0].terms[k].shape == (3, 4, 3)
            np.testing.assert_allclose(many_T[0].terms[k], table[0].terms[k][:, 0], rtol=1e-12, atol=1e-15)
            np.testing.assert_allclose(many_x[0].terms[k], table[0].terms[k][1], rtol=1e-12, atol=1e-15)
        np.testing.assert_allclose(many_T[1], table[1][:, 0], rtol=1e-12, atol=1e-14)
        np.testing.assert_allclose(many_x[1], table[1][1], rtol=1e-12, atol=1e-14)


def test_shared_evaluation_equals_the_separate_ones():
    x = compositions(3, 3)
    for model in all_models(3):
        jet, J = ln_gamma_and_derivatives(model, TEMPERATURES, x, 2)
        for one, two in zip(jet.terms, model.ln_gamma(TEMPERATURES, x, 2).terms):
            np.testing.assert_array_equal(one, two)
        np.testing.assert_array_equal(J, model.mole_number_derivatives(TEMPERATURES, x))


def test_absent_component_has_its_infinite_dilution_value():
    """x_i = 0 exactly is finite everywhere and the limit of x_i -> 0."""
    x, nearly = np.array([0.0, 0.4, 0.6]), np.array([1e-9, 0.4, 0.6 - 1e-9])
    for model in all_models(3):
        if isinstance(model, DissolvedGases):
            continue
        at, near = model.ln_gamma(np.array(330.0), x, 2), model.ln_gamma(np.array(330.0), nearly, 2)
        for a, b in zip(at.terms, near.terms):
            np.testing.assert_allclose(a, b, rtol=1e-6, atol=1e-7)
        assert np.isfinite(model.mole_number_derivatives(np.array(330.0), x)).all()


def test_uniquac_without_interactions_and_with_equal_sizes_is_ideal():
    x = compositions(3, 2)
    model = Uniquac([2.0, 2.0, 2.0], [1.5, 1.5, 1.5])
    np.testing.assert_allclose(model.ln_gamma(np.array(300.0), x).value, 0.0, atol=1e-14)


def test_wilson_from_energies_has_the_published_form():
    """Lambda_12 = V2/V1 exp(-a12/RT); binary formula of Wilson (1964), written out independently."""
    V, energy, T, x = [74.05, 18.07], [[0.0, 1200.0], [6000.0, 0.0]], 330.0, np.array([0.3, 0.7])
    L12 = V[1] / V[0] * np.exp(-energy[0][1] / (GAS_CONSTANT * T))
    L21 = V[0] / V[1] * np.exp(-energy[1][0] / (GAS_CONSTANT * T))
    s1, s2 = x[0] + L12 * x[1], x[1] + L21 * x[0]
    bracket = L12 / s1 - L21 / s2
    expected = [-np.log(s1) + x[1] * bracket, -np.log(s2) - x[0] * bracket]
    np.testing.assert_allclose(Wilson.from_energies(V, energy).ln_gamma(np.array(T), x).value, expected, atol=1e-13)


def test_henry_in_one_solvent_leaves_the_solvent_ideal_in_the_gas():
    """With one solvent ln H does not mix: the solvent keeps gamma = 1, the gas its H, both uncoupled."""
    law = HenryLaw([[HenryConstant(4.4e9, 1500.0)]])
    model = DissolvedGases(2, Ideal(1), [0], law, [1])
    x = np.array([0.99, 0.01])
    T = np.array(310.0)
    expected = np.log(4.4e9) - 1500.0 * (1 / 310.0 - 1 / 298.15)
    np.testing.assert_allclose(model.ln_gamma(T, x).value, [0.0, expected], atol=1e-12)
    np.testing.assert_allclose(model.mole_number_derivatives(T, x), 0.0, atol=1e-15)


@pytest.mark.parametrize("make, words", [
    (lambda: Nrtl(2, tau_b=[[0, 1], [2, 3]]), r"tau_b\[1, 1\] = 3"),
    (lambda: Nrtl(2, tau_b=[[0, 1, 2], [2, 3, 4]]), r"tau_b: expected shape \(2, 2\)"),
    (lambda: Wilson(2, lambda_a=[[0, np.nan], [1, 0]]), r"lambda_a\[0, 1\] = nan"),
    (lambda: Uniquac([1.0, -2.0], [1.0, 1.0]), r"r\[1\] = -2"),
    (lambda: Unifac([[1, 0], [0, 0]], [1, 1], [1, 1], np.zeros((2, 2))), "component 1 has no group"),
    (lambda: HenryConstant(-1.0, 0.0), "reference"),
])
def test_bad_parameters_are_named(make, words):
    with pytest.raises(InputError, match=words):
        make()
