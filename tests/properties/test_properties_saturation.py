"""Saturation points of any property model: closed forms, round trips, masks, failures."""
import numpy as np
import pytest

from ratebased.errors import InputError, PropertyRangeError
from ratebased.properties import ConstantVolatility, bubble_point, dew_point, smallest_gamma_eigenvalue
from ratebased.properties.differences import k_value_derivatives, liquid_heat_capacity, vapor_heat_capacity

P = 101325.0
MODEL = ConstantVolatility(["a", "b", "c"], [4.0, 2.0, 1.0], 3e4, a=20.0, b=3600.0, vapor_heat_capacity=60.0,
                           liquid_heat_capacity=130.0)


class OnlyRequired:
    """The required methods of a model and nothing else."""

    def __init__(self, model):
        for name in ("names", "molar_mass", "condensable", "volatile", "k_value", "thermodynamic_factor",
                     "vapor_enthalpy", "liquid_enthalpy", "vapor_transport", "liquid_transport"):
            setattr(self, name, getattr(model, name))


def test_constant_volatility_in_closed_form():
    """sum alpha_i x_i exp(a - b/T) = P gives T; y_i = alpha_i x_i/sum alpha x; the dew point undoes it."""
    x = np.random.default_rng(0).dirichlet(np.ones(3), (4, 5))
    T, y = bubble_point(MODEL, P, x)
    mean = x @ np.array([4.0, 2.0, 1.0])
    np.testing.assert_allclose(T, 3600.0 / (20.0 - np.log(P / mean)), rtol=1e-12)
    np.testing.assert_allclose(y, x * [4.0, 2.0, 1.0] / mean[..., None], rtol=1e-10)
    T_back, x_back = dew_point(MODEL, P, y)
    np.testing.assert_allclose(T_back, T, rtol=1e-12)
    np.testing.assert_allclose(x_back, x, rtol=1e-10)
    assert T.shape == (4, 5) and y.shape == (4, 5, 3)


def test_a_model_without_optional_methods_gives_the_same():
    x = np.random.default_rng(1).dirichlet(np.ones(3), 4)
    T, y = bubble_point(OnlyRequired(MODEL), P, x)
    T_own, y_own = bubble_point(MODEL, P, x)
    np.testing.assert_allclose(T, T_own, rtol=1e-11)
    np.testing.assert_allclose(y, y_own, rtol=1e-9)
    args = T, np.full(4, P), x
    np.testing.assert_allclose(liquid_heat_capacity(OnlyRequired(MODEL), *args), 130.0, rtol=1e-7)
    np.testing.assert_allclose(vapor_heat_capacity(OnlyRequired(MODEL), *args), 60.0, rtol=1e-7)


def test_pressure_and_starts_broadcast():
    x = np.array([0.2, 0.3, 0.5])
    pressures = np.array([5e4, 1e5, 5e5])
    T, y = bubble_point(MODEL, pressures, x, T_guess=[200.0, 350.0, 900.0])
    assert T.shape == (3,) and y.shape == (3, 3) and (np.diff(T) > 0).all()
    for k in range(3):
        T_one, y_one = bubble_point(MODEL, pressures[k], x)
        assert np.shape(T_one) == () and T_one == pytest.approx(T[k], rel=1e-12)


def test_absent_and_single_components():
    T, y = bubble_point(MODEL, P, [0.0, 1.0, 0.0])
    np.testing.assert_array_equal(y, [0.0, 1.0, 0.0])
    alone = ConstantVolatility(["a"], [1.0], 3e4, a=20.0, b=3600.0)
    T_alone, y_alone = bubble_point(alone, P, [1.0])
    assert T_alone == pytest.approx(3600.0 / (20.0 - np.log(P))) and y_alone == 1.0


def test_gas_that_does_not_condense():
    """At a vapour share y_g the liquid boils as if the pressure were P (1 - y_g)."""
    gas = ConstantVolatility(["a", "b", "g"], [4.0, 2.0, 1.0], 3e4, a=20.0, b=3600.0, condensable=[True, True, False])
    T, y = bubble_point(gas, P, [0.3, 0.7, 0.0], y_noncondensing=[0.0, 0.0, 0.4])
    T_without, y_without = bubble_point(gas, 0.6 * P, [0.3, 0.7, 0.0])
    assert T == pytest.approx(T_without, rel=1e-12)
    np.testing.assert_allclose(y[:2], 0.6 * y_without[:2], rtol=1e-10)
    assert y[2] == 0.4
    T_dew, x = dew_point(gas, P, y)
    assert T_dew == pytest.approx(T, rel=1e-12)
    np.testing.assert_allclose(x, [0.3, 0.7, 0.0], atol=1e-11)


def test_component_that_does_not_evaporate():
    solute = ConstantVolatility(["s", "a", "b"], [1.0, 4.0, 2.0], 3e4, a=20.0, b=3600.0,
                                volatile=[False, True, True])
    T, y = bubble_point(solute, P, [0.5, 0.2, 0.3])
    assert y[0] == 0.0 and y.sum() == pytest.approx(1.0)
    T_dew, x = dew_point(solute, P, y, x_nonvolatile=[0.5, 0.0, 0.0])
    assert T_dew == pytest.approx(T, rel=1e-12)
    np.testing.assert_allclose(x, [0.5, 0.2, 0.3], atol=1e-11)


@pytest.mark.parametrize("call, words", [
    (lambda m: bubble_point(m, -1.0, [0.5, 0.5, 0.0]), "P = -1"),
    (lambda m: bubble_point(m, P, [0.5, 0.6, 0.0]), "sum to 1.1"),
    (lambda m: bubble_point(m, P, [0.5, 0.4, 0.1]), "x: g cannot be in this phase"),
    (lambda m: bubble_point(m, P, [0.5, 0.5, 0.0], y_noncondensing=[0.1, 0.0, 0.1]), "y_noncondensing"),
    (lambda m: bubble_point(m, P, [0.5, 0.5, 0.0], y_noncondensing=[0.0, 0.0, 1.0]), "y_noncondensing"),
    (lambda m: dew_point(m, P, [0.0, 0.0, 1.0]), "no component that is both"),
    (lambda m: bubble_point(m, P, [0.5, 0.5, 0.0], T_guess=0.0), "T_guess = 0"),
    (lambda m: bubble_point(m, [P, P], np.full((3, 3), [0.5, 0.5, 0.0])), r"do not broadcast: P \(2,\), x \(3,\)"),
])
def test_bad_arguments_are_named(call, words):
    gas = ConstantVolatility(["a", "b", "g"], [4.0, 2.0, 1.0], 3e4, a=20.0, b=3600.0, condensable=[True, True, False])
    with pytest.raises(InputError, match=words):
        call(gas)


def test_a_model_without_a_k_value_is_named():
    class Broken(OnlyRequired):
        def __init__(self, model):
            super().__init__(model)
            self.k_value = lambda T, P, x, y: model.k_value(T, P, x, y) * np.array([1.0, 0.0, 1.0])

    with pytest.raises(InputError, match="K of b is 0"):
        bubble_point(Broken(MODEL), P, [0.2, 0.3, 0.5])


def test_solution_outside_the_range_is_an_error():
    class Bounded(OnlyRequired):
        T_range = (300.0, 350.0)

    with pytest.raises(PropertyRangeError, match=r"bubble point\[1\].*300 to 350 K"):
        bubble_point(Bounded(MODEL), [1e4, 1e6], [0.2, 0.3, 0.5])


def test_differences_of_masked_components_are_zero():
    gas = ConstantVolatility(["a", "b", "g"], [4.0, 2.0, 1.0], 3e4, a=20.0, b=3600.0, condensable=[True, True, False])
    d = k_value_derivatives(OnlyRequired(gas), np.array(350.0), np.array(P), np.array([0.3, 0.7, 0.0]),
                            np.array([0.2, 0.3, 0.5]))
    np.testing.assert_allclose(d.temperature, [3600.0 / 350.0 ** 2] * 2 + [0.0], rtol=1e-8)
    np.testing.assert_allclose(d.liquid, 0.0, atol=1e-9)


def test_smallest_eigenvalue_of_an_ideal_liquid_is_one():
    np.testing.assert_allclose(smallest_gamma_eigenvalue(MODEL, 300.0, P, [[0.2, 0.3, 0.5]]), [1.0])
