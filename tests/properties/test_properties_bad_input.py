"""What property models refuse, by name; what they take: empty batches, lists, whole numbers."""
from __future__ import annotations

import numpy as np
import pytest

from ratebased.errors import InputError, PropertyRangeError, PropertyWarning
from ratebased.properties import ConstantVolatility, CubicProperties, ThermoProperties, bubble_point
from ratebased.properties.differences import liquid_heat_capacity

NAMES = ["methanol", "water"]
X = [0.4, 0.6]
METHODS = ("thermodynamic_factor", "vapor_thermodynamic_factor", "vapor_enthalpy", "liquid_enthalpy",
           "vapor_heat_capacity", "liquid_heat_capacity", "vapor_transport", "liquid_transport")


@pytest.fixture(scope="module", params=["activity", "cubic"])
def model(request):
    if request.param == "activity":
        return ThermoProperties.from_names(NAMES)
    return CubicProperties.from_names(["propane", "butane"], T_range=(250.0, 360.0))


@pytest.mark.parametrize("T, P, x, error, words", [
    (900.0, 1e5, X, PropertyRangeError, "T = 900 K is outside the range"),
    (np.nan, 1e5, X, PropertyRangeError, "T = nan"),
    ([300.0, 900.0], 1e5, X, PropertyRangeError, r"T\[1\] = 900 K"),
    ("hot", 1e5, X, InputError, "T: expected numbers, got 'hot'"),
    (300.0, -1e5, X, InputError, "P = -100000"),
    (300.0, np.nan, X, InputError, "P = nan"),
    (300.0, [1e5, 0.0], X, InputError, r"P\[1\] = 0"),
    (300.0, 1e5, [0.4, np.nan], InputError, r"[xy]\[1\] = nan"),
    (300.0, 1e5, [-0.1, 1.1], InputError, r"[xy]\[0\] = -0.1: a mole fraction cannot be negative"),
    (300.0, 1e5, [0.4, 0.7], InputError, "[xy]: mole fractions sum to 1.1"),
    (300.0, 1e5, [[0.4, 0.6], [0.3, 0.3]], InputError, r"[xy]\[1\]: mole fractions sum to 0.6"),
    (300.0, 1e5, [0.2, 0.3, 0.5], InputError, "[xy]: expected 2 components"),
])
def test_bad_states(model, T, P, x, error, words):
    """Every method of both models names the argument, the entry and the value; no NaN, no negative K comes out."""
    with pytest.raises(error, match=words):
        model.k_value(T, P, x, X)
    for name in METHODS:
        with pytest.raises(error, match=words):
            getattr(model, name)(T, P, x)


def test_empty_batches(model):
    """No stages give no values, in the right shape."""
    T, x = np.zeros(0), np.zeros((0, 2))
    assert model.k_value(T, 1e5, x, x).shape == (0, 2)
    for name in METHODS[:6]:
        assert getattr(model, name)(T, 1e5, x).shape[0] == 0
    assert model.liquid_transport(T, 1e5, x).molar_density.shape == (0,)
    assert bubble_point(model, np.zeros(0), X)[1].shape == (0, 2)


def test_whole_numbers_and_lists(model):
    """Integers and lists are numbers as well as arrays are."""
    T = 300
    np.testing.assert_array_equal(model.k_value(T, 100000, X, X), model.k_value(300.0, 1e5, np.array(X), np.array(X)))


@pytest.mark.parametrize("change, words", [
    (dict(volatility=[1.0, 2.0, 3.0]), "volatility: expected 2 entries"),
    (dict(volatility=["high", "low"]), "volatility: expected numbers"),
    (dict(a=np.nan), "a = nan"),
    (dict(b="big"), "b = 'big'"),
    (dict(vapor_molar_density=-1.0), "vapor_molar_density = -1"),
    (dict(condensable=["no", "yes"]), "condensable: expected numbers"),
])
def test_constant_volatility_refuses(change, words):
    """Parameters of the wrong length or kind, or not finite."""
    with pytest.raises(InputError, match=words):
        ConstantVolatility(["a", "b"], **(dict(volatility=[2.0, 1.0], latent_heat=3e4, a=20.0, b=3600.0) | change))


def test_names_are_words():
    """Numbers are no names."""
    with pytest.raises(InputError, match="names: expected a list of component names"):
        ThermoProperties.from_names([1, 2])


def test_second_virial_coefficient_beyond_its_range():
    """A warning above P/Pc = (T/Tc)/2, an error where the volume is gone; never a negative density."""
    model = ThermoProperties.from_names(NAMES, vapor="virial")
    assert model.vapor_transport(350.0, 1e5, X).molar_density > 0.0
    T, P, y = np.array(430.0), np.array([2e5, 8e6]), np.array([0.0, 1.0])
    with pytest.warns(PropertyWarning, match=r"P\[1\] = 8e\+06 Pa at 430 K.*beyond its range"):
        assert (model._vapor.compressibility(T, P, y) > 0.0).all()
    with pytest.raises(PropertyRangeError, match=r"P\[1\] = 1e\+08 Pa at 350 K.*leaves no volume"):
        model.vapor_transport(350.0, [1e5, 1e8], X)


def test_differences_stay_inside_the_range_of_a_model() -> None:
    class Ranged:
        T_range = (300.0, 400.0)

        def liquid_enthalpy(self, T: np.ndarray, P: np.ndarray, x: np.ndarray) -> np.ndarray:
            assert ((T >= 300.0) & (T <= 400.0)).all()
            return 120.0 * T[..., None] * np.ones_like(x)

    T, x = np.array([300.0, 350.0, 400.0]), np.full((3, 2), 0.5)
    found = liquid_heat_capacity(Ranged(), T, np.full(3, 1e5), x)
    np.testing.assert_allclose(found, 120.0, rtol=1e-6)
