"""Cubic equations of state against the data library's scalar ones, differences, and each other's limits."""
import numpy as np
import pytest

from ratebased.errors import InputError, NoSolutionError, PropertyWarning
from ratebased.properties import CubicProperties, ThermoProperties
from ratebased.properties.cubic import PENG_ROBINSON, SOAVE, CubicEquation, CubicVapor, Phase
from ratebased.properties.protocol import GAS_CONSTANT

NAMES = ["propane", "n-butane", "n-pentane", "nitrogen", "n-hexane"]
K_IJ = np.array([[0, .01, .02, .08, .02], [.01, 0, .005, .07, .01], [.02, .005, 0, .06, 0], [.08, .07, .06, 0, .1],
                 [.02, .01, 0, .1, 0]])
STATES = [(340.0, 8e5, [.30, .39, .25, .01, .05]), (300.0, 1e6, [.25, .25, .35, .05, .10]),
          (380.0, 2e6, [.20, .30, .40, .02, .08])]


@pytest.fixture(scope="module")
def library():
    from thermo import ChemicalConstantsPackage

    return ChemicalConstantsPackage.from_IDs(NAMES)


@pytest.fixture(scope="module")
def model():
    return CubicProperties.from_names(NAMES, T_range=(240.0, 460.0), k_ij=K_IJ)


@pytest.mark.parametrize("form, oracle_name", [(PENG_ROBINSON, "PRMIX"), (SOAVE, "SRKMIX")], ids=["PR", "Soave"])
def test_equal_to_the_oracle(library, form, oracle_name):
    """ln phi, its T and mole-number derivatives, departure enthalpy: 1e-10 relative to their size."""
    import thermo

    constants, functions = library
    equation = CubicEquation(form, constants.Tcs, constants.Pcs, constants.omegas, K_IJ)
    keywords = dict(Tcs=constants.Tcs, Pcs=constants.Pcs, omegas=constants.omegas, kijs=K_IJ.tolist())
    for T, P, z in STATES:
        for phase, kind in ((Phase.VAPOR, thermo.CEOSGas), (Phase.LIQUID, thermo.CEOSLiquid)):
            state = kind(getattr(thermo, oracle_name), keywords, HeatCapacityGases=functions.HeatCapacityGases, T=T,
                         P=P, zs=z)
            assert state.eos_mix.phase == "l/g"  # both roots: the oracle swaps silently where there is one
            args = np.array(T), np.array(P), np.array(z)
            jet = equation.ln_phi(*args, phase, 1)
            np.testing.assert_allclose(jet.value, state.lnphis(), atol=1e-10)
            np.testing.assert_allclose(jet.terms[1], state.dlnphis_dT(), atol=1e-10)
            np.testing.assert_allclose(equation.mole_number_derivatives(*args, phase), state.dlnphis_dns(), atol=1e-10)
            departure = -GAS_CONSTANT * T ** 2 * jet.terms[1] @ np.array(z)
            np.testing.assert_allclose(departure, state.H_dep(), rtol=1e-10)
            np.testing.assert_allclose(equation.compressibility(*args, phase), state.Z(), rtol=1e-10)


@pytest.mark.parametrize("n", [1, 2, 5, 8])
def test_symmetry_gibbs_duhem_and_differences(n):
    rng = np.random.default_rng(n)
    Tc, Pc, omega = rng.uniform(350, 550, n), rng.uniform(3e6, 5e6, n), rng.uniform(0.1, 0.4, n)
    equation = CubicEquation(SOAVE, Tc, Pc, omega, 0.0)
    z = rng.dirichlet(np.ones(n), 4)
    T, P = np.linspace(300, 330, 4), np.full(4, 5e5)
    for phase in Phase:
        J = equation.mole_number_derivatives(T, P, z, phase)
        scale = np.abs(J).max() + 1.0
        assert np.abs(J - np.swapaxes(J, -1, -2)).max() < 1e-12 * scale
        assert np.abs(J @ z[..., None]).max() < 1e-12 * scale
        for j in range(n):
            unit = 1e-6 * np.eye(n)[j]
            up, down = (equation.ln_phi(T, P, (z + s * unit) / (1 + s * 1e-6), phase).value for s in (1, -1))
            np.testing.assert_allclose(J[..., j], (up - down) / 2e-6, rtol=1e-6, atol=1e-7 * scale)
        jet = equation.ln_phi(T, P, z, phase, 2)
        up, down = (equation.ln_phi(T + s * 1e-2, P, z, phase, 1) for s in (1, -1))
        for k in (0, 1):
            np.testing.assert_allclose(jet.terms[k + 1], (up.terms[k] - down.terms[k]) / 2e-2, rtol=1e-5, atol=1e-10)


def test_limits():
    """P -> 0: an ideal gas. At the critical point of a pure component: three equal roots, Zc of the equation."""
    for form, Zc in ((PENG_ROBINSON, 0.307401308698703), (SOAVE, 1.0 / 3.0)):
        equation = CubicEquation(form, [500.0], [4e6], [0.2])
        z = np.array([1.0])
        assert abs(equation.ln_phi(np.array(400.0), np.array(1e-3), z, Phase.VAPOR).value[0]) < 1e-8
        assert equation.compressibility(np.array(500.0), np.array(4e6), z, Phase.VAPOR) == pytest.approx(Zc, abs=2e-5)


def test_missing_root_is_continued_and_said_so():
    """Where the liquid root ends, the continuation starts at the same Z; `exists` changes there."""
    equation = CubicEquation(PENG_ROBINSON, [500.0], [4e6], [0.2])
    z = np.ones(1)
    P = np.full(4001, 1e6)
    T = np.linspace(380.0, 480.0, 4001)
    Z = equation.compressibility(T, P, np.ones((4001, 1)), Phase.LIQUID)
    exists = equation.exists(T, P, np.ones((4001, 1)), Phase.LIQUID)
    assert exists[0] and not exists[-1] and np.count_nonzero(np.diff(exists.astype(int))) == 1
    assert np.abs(np.diff(Z)).max() < 0.02  # a swap to the vapour root would jump by 0.5
    assert equation.exists(np.array(470.0), np.array(1e6), z, Phase.VAPOR)


def test_derivatives_of_the_model(model):
    from ratebased.properties.differences import k_value_derivatives

    x = np.array([.2, .3, .3, .01, .19])
    P = np.array(1e6)
    T, y = model.bubble_point(P, x)

    class WithoutDerivatives:
        def __getattr__(self, name):
            if name == "k_value_derivatives":
                raise AttributeError(name)
            return getattr(model, name)

    own, numerical = model.k_value_derivatives(T, P, x, y), k_value_derivatives(WithoutDerivatives(), T, P, x, y)
    np.testing.assert_allclose(own.temperature, numerical.temperature, rtol=1e-7)
    np.testing.assert_allclose(own.liquid, numerical.liquid, atol=1e-7)
    np.testing.assert_allclose(own.vapor, numerical.vapor, atol=1e-7)
    for phase, z in (("liquid", x), ("vapor", y)):
        H = getattr(model, f"{phase}_enthalpy")
        slope = (H(T + 1e-2, P, z) - H(T - 1e-2, P, z)) / 2e-2
        np.testing.assert_allclose(getattr(model, f"{phase}_heat_capacity")(T, P, z), slope, rtol=1e-6)


def test_latent_heat_follows_clausius_clapeyron():
    """One Gibbs energy: at saturation of a pure component H_V - H_L = -R T2 d ln(K)/dT along ln K = 0 in T (per P)."""
    model = CubicProperties.from_names(["propane", "n-butane"], T_range=(240.0, 350.0))
    x = np.array([1.0, 0.0])
    P = np.array([2e5, 5e5, 9e5])
    T, _ = model.bubble_point(P, np.tile(x, (3, 1)))
    slope = model.k_value_derivatives(T, P, np.tile(x, (3, 1)), np.tile(x, (3, 1))).temperature[:, 0]
    latent = model.vapor_enthalpy(T, P, np.tile(x, (3, 1))) - model.liquid_enthalpy(T, P, np.tile(x, (3, 1)))
    np.testing.assert_allclose(latent[:, 0], GAS_CONSTANT * T ** 2 * slope, rtol=1e-10)


def test_thermodynamic_factors_of_both_phases(model):
    """Column differences of the mole-number derivatives against differences of ln phi at a constant sum."""
    z, T, P = np.array([.2, .3, .3, .01, .19]), np.array(330.0), np.array(8e5)
    for phase, gamma in ((Phase.LIQUID, model.thermodynamic_factor(T, P, z)),
                         (Phase.VAPOR, model.vapor_thermodynamic_factor(T, P, z))):
        for j in range(4):
            step = 1e-6 * (np.eye(5)[j] - np.eye(5)[4])
            up, down = (model.equation.ln_phi(T, P, z + s * step, phase).value for s in (1, -1))
            expected = np.eye(5)[:4, j] + z[:4] * ((up - down) / 2e-6)[:4]
            np.testing.assert_allclose(gamma[:, j], expected, atol=1e-8)


def test_bubble_and_dew_agree_and_supercritical_is_refused(model):
    x = np.random.default_rng(3).dirichlet([5, 5, 5, 0.2, 5], 6)
    T, y = model.bubble_point(8e5, x)
    T_back, x_back = model.dew_point(8e5, y)
    np.testing.assert_allclose(T_back, T, atol=1e-6)
    np.testing.assert_allclose(x_back, x, atol=1e-8)
    small = CubicProperties.from_names(["propane", "n-butane"], T_range=(240.0, 460.0))
    with pytest.raises(NoSolutionError, match="critical"):
        small.bubble_point(7e6, [0.5, 0.5])


def test_states_broadcast(model):
    """One temperature at several pressures, several compositions at one state: the same numbers as one by one."""
    z = np.random.default_rng(2).dirichlet(np.ones(5), 4)
    P = np.array([4e5, 6e5, 8e5, 1e6])
    virial = ThermoProperties.from_names(["propane", "n-butane"], "ideal", T_range=(250.0, 350.0), vapor="virial")
    for one, x in ((model, z), (virial, z[:, :2] / z[:, :2].sum(1, keepdims=True))):
        n = x.shape[-1]
        for name, shape in (("k_value", (4, n)), ("vapor_enthalpy", (4, n)), ("liquid_heat_capacity", (4, n)),
                            ("vapor_thermodynamic_factor", (4, n - 1, n - 1))):
            call = getattr(one, name)
            args = (x[0], x[0]) if name == "k_value" else (x[0],)
            by_pressure = call(320.0, P, *args)
            single = np.stack([call(320.0, p, *args) for p in P])
            np.testing.assert_allclose(np.broadcast_to(by_pressure, shape), single, rtol=1e-12)
            args = (x, x[::-1]) if name == "k_value" else (x,)
            by_composition = call(320.0, 5e5, *args)
            single = np.stack([call(320.0, 5e5, *(a[k] for a in args)) for k in range(4)])
            np.testing.assert_allclose(by_composition, single, rtol=1e-12)


def test_two_routes_to_one_mixture():
    """Near-ideal propane/n-butane at 0.6 MPa: the equation of state against vapour pressures with an ideal liquid,
    virial vapour and Poynting's correction. They share critical constants only; y within 0.005, T within 0.5 K."""
    names, x = ["propane", "n-butane"], np.array([[0.2, 0.8], [0.46, 0.54], [0.8, 0.2]])
    cubic = CubicProperties.from_names(names, T_range=(250.0, 350.0))
    virial = ThermoProperties.from_names(names, "ideal", T_range=(250.0, 350.0), vapor="virial", poynting=True)
    (T_one, y_one), (T_two, y_two) = cubic.bubble_point(6e5, x), virial.bubble_point(6e5, x)
    np.testing.assert_allclose(T_one, T_two, atol=0.5)
    np.testing.assert_allclose(y_one, y_two, atol=0.005)
    P = np.full(3, 6e5)
    latent = [(m.vapor_enthalpy(T, P, y) * y).sum(-1) - (m.liquid_enthalpy(T, P, x) * x).sum(-1)
              for m, T, y in ((cubic, T_one, y_one), (virial, T_two, y_two))]
    np.testing.assert_allclose(latent[0], latent[1], rtol=0.02)


def test_transport_of_light_components_is_held_at_its_critical_limit(model):
    """Nitrogen has no liquid at 330 K: its liquid properties are held, positive, and the summary says so."""
    x = np.array([.2, .3, .3, .01, .19])
    T, P = np.array([250.0, 330.0, 370.0]), np.array(3e6)
    assert model.phase_exists(T, P, x, Phase.LIQUID).all()
    transport = model.liquid_transport(T, P, x)
    for field in ("molar_density", "viscosity", "conductivity", "surface_tension", "heat_capacity"):
        value = getattr(transport, field)
        assert value.shape == (3,) and np.isfinite(value).all() and (value > 0).all(), field
    with pytest.warns(PropertyWarning, match="no liquid root"):
        model.liquid_transport(np.array([250.0, 459.0]), P, x)
    notes = model.summary().set_index(["component", "property"]).note
    assert "held constant above" in notes["nitrogen", "ln_liquid_viscosity"]


def test_real_vapor_beside_activity_coefficients(library):
    constants, _ = library
    equation = CubicEquation(SOAVE, constants.Tcs, constants.Pcs, constants.omegas, K_IJ)
    vapor = CubicVapor(equation)
    T, P, z = STATES[0]
    args = np.array(T), np.array(P), np.array(z)
    np.testing.assert_array_equal(vapor.ln_phi(*args).value, equation.ln_phi(*args, Phase.VAPOR).value)
    np.testing.assert_array_equal(vapor.compressibility(*args), equation.compressibility(*args, Phase.VAPOR))


def test_asymmetric_interaction_is_refused():
    with pytest.raises(InputError, match=r"k_ij\[0, 1\] = 0.1 differs"):
        CubicEquation(SOAVE, [400.0, 500.0], [4e6, 3e6], [0.1, 0.2], [[0.0, 0.1], [0.2, 0.0]])
