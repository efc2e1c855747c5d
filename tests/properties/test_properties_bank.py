"""Chebyshev bank and temperature jets: exact on what they must be exact on, errors where there is nothing to give."""
import numpy as np
import pytest

from ratebased.errors import InputError, PropertyRangeError
from ratebased.properties.bank import TemperatureBank
from ratebased.properties.jet import Jet, temperature


def test_polynomials_and_their_derivatives_are_exact():
    bank = TemperatureBank((280.0, 400.0), {"cubic": [lambda T: 1e-6 * T ** 3, lambda T: 2.0],
                                            "line": [lambda T: T] * 2})
    T = np.linspace(280.0, 400.0, 24).reshape(2, 12)
    value, slope, curve, line = bank.view(("cubic", 0), ("cubic", 1), ("cubic", 2), ("line", 0))(bank.basis(T))
    np.testing.assert_allclose(value[..., 0], 1e-6 * T ** 3, rtol=1e-13)
    np.testing.assert_allclose(slope[..., 0], 3e-6 * T ** 2, rtol=1e-12)
    np.testing.assert_allclose(curve[..., 0], 6e-6 * T, rtol=1e-10)
    np.testing.assert_allclose(value[..., 1], 2.0)
    np.testing.assert_allclose(line, np.stack([T, T], -1), rtol=1e-14)


def test_a_kink_at_a_known_limit_costs_nothing():
    def kinked(T):
        return np.exp(0.01 * T) if T < 321.0 else np.exp(3.21) + 0.5 * (T - 321.0)

    T = np.concatenate([np.linspace(280.0, 400.0, 97), [321.0 - 1e-9, 321.0, 321.0 + 1e-9]])
    truth = np.array([kinked(t) for t in T])
    with_limit = TemperatureBank((280.0, 400.0), {"f": [kinked]}, limits=[321.0])
    without = TemperatureBank((280.0, 400.0), {"f": [kinked]})
    value, = with_limit.view(("f", 0))(with_limit.basis(T))
    np.testing.assert_allclose(value[:, 0], truth, rtol=1e-11)
    assert with_limit.fit_error["f"][0] < 1e-11 < 1e-4 < without.fit_error["f"][0]


def test_outside_the_range_names_range_and_value():
    bank = TemperatureBank((280.0, 400.0), {"f": [lambda T: T]})
    for bad in (279.99, 400.01, np.nan):
        with pytest.raises(PropertyRangeError, match=r"T\[1\] = .*280 to 400 K"):
            bank.basis(np.array([300.0, bad]))
    assert bank.view(("f", 0))(bank.basis(np.array([280.0, 400.0])))[0].shape == (2, 1)
    with pytest.raises(InputError, match="T_range"):
        TemperatureBank((400.0, 280.0), {"f": [lambda T: T]})


def test_jets_follow_the_rules_of_calculus():
    """Every operation on a jet against central differences of the plain function."""
    def function(T):
        one = T * 0.01
        return ((one.exp() + 2.0) / (T.log() * T) - 3.0 / T + (1.0 - T ** 1.5 * 1e-3) * one).reciprocal()

    T0, h = np.array([300.0, 350.0]), 1e-1
    jet = function(temperature(T0, 2))
    plain = [function(temperature(T0 + k * h, 0)).value for k in (-2, -1, 0, 1, 2)]
    first = (plain[0] - 8 * plain[1] + 8 * plain[3] - plain[4]) / (12 * h)
    second = (-plain[0] + 16 * plain[1] - 30 * plain[2] + 16 * plain[3] - plain[4]) / (12 * h * h)
    np.testing.assert_allclose(jet.value, plain[2])
    np.testing.assert_allclose(jet.terms[1], first, rtol=1e-8)
    np.testing.assert_allclose(jet.terms[2], second, rtol=1e-6)


def test_jets_of_matrices():
    rng = np.random.default_rng(0)
    A, B = (Jet(list(rng.random((3, 4, 3, 3)))) for _ in range(2))
    product = A @ B
    np.testing.assert_allclose(product.terms[2], A.terms[2] @ B.terms[0] + 2 * A.terms[1] @ B.terms[1]
                               + A.terms[0] @ B.terms[2])
    left = rng.random((3, 3))
    np.testing.assert_allclose((left @ A).terms[1], left @ A.terms[1])
    np.testing.assert_allclose(A.transpose().terms[2], np.swapaxes(A.terms[2], -1, -2))
