"""Diffusivities of the models are those of the correlations, and sane for gases that are no liquid."""
import numpy as np
import pytest

from correlations.errors import OutOfRangeWarning
from correlations.gas_diffusivity import fuller
from correlations.liquid_diffusivity import hayduk_minhas, hayduk_minhas_aqueous, wilke_chang
from correlations.mixture_diffusivity import kooijman_taylor, wesselingh_krishna
from ratebased.properties import ThermoProperties
from ratebased.properties.diffusion import Fuller, HaydukMinhas, LiquidDiffusivity, WilkeChang

M, V = np.array([0.0461, 0.0180, 0.0581]), np.array([62.6e-6, 18.8e-6, 77.5e-6])
FULLER_VOLUME = np.array([51.77e-6, 13.1e-6, 67.67e-6])
T, P = np.array([300.0, 360.0]), np.array([1e5, 3e5])
MU = np.array([[1.0e-3, 0.85e-3, 0.30e-3], [0.4e-3, 0.32e-3, 0.2e-3]])
OFF = ~np.eye(3, dtype=bool)


def test_gas_pairs():
    found = Fuller(M, FULLER_VOLUME)(T, P)
    for s in range(2):
        for i in range(3):
            for j in range(3):
                expected = fuller(T[s], P[s], M[i], M[j], FULLER_VOLUME[i], FULLER_VOLUME[j])
                assert found[s, i, j] == pytest.approx(expected, rel=1e-13)


def test_gas_pairs_outside_the_range_warn():
    with pytest.warns(OutOfRangeWarning, match="pressure"):
        high = Fuller(M, FULLER_VOLUME)(np.array(300.0), np.array(2e6))
    np.testing.assert_allclose(high, Fuller(M, FULLER_VOLUME)(np.array(300.0), np.array(2e5)) / 10, rtol=1e-12)


def test_dilute_pairs():
    phi, sigma = np.array([1.5, 2.26, 1.0]), np.array([0.0175, 0.0589, 0.0189])
    water = np.array([False, True, False])
    chang = WilkeChang(M, V, phi)(T, MU)
    hayduk = HaydukMinhas(V, V, sigma, water)(T, MU)
    for s in range(2):
        for i in range(3):
            for j in range(3):
                assert chang[s, i, j] == pytest.approx(wilke_chang(T[s], MU[s, j], M[j], V[i], phi[j]), rel=1e-13)
                expected = hayduk_minhas_aqueous(T[s], MU[s, 1], V[i]) if j == 1 else hayduk_minhas(
                    T[s], MU[s, j], V[i], V[j], sigma[i], sigma[j])
                assert hayduk[s, i, j] == pytest.approx(expected, rel=1e-13)


def test_liquid_of_solvents_is_the_plain_rule_and_a_dissolved_gas_adds_itself():
    """A trace of gas leaves the pairs of the solvents; the gas in a pure solvent has its dilute diffusivity there."""
    dilute = WilkeChang(M, V, np.ones(3))
    plain = LiquidDiffusivity(dilute, np.ones(3, bool))
    x = np.array([[0.3, 0.5, 0.2], [0.1, 0.1, 0.8]])
    np.testing.assert_array_equal(plain(T, x, MU), kooijman_taylor(x, dilute(T, MU)))
    other = LiquidDiffusivity(dilute, np.ones(3, bool), wesselingh_krishna)
    np.testing.assert_array_equal(other(T, x, MU), wesselingh_krishna(x, dilute(T, MU)))
    with_gas = LiquidDiffusivity(dilute, np.array([True, True, False]))
    two = np.array([0.4, 0.6, 0.0])
    alone = LiquidDiffusivity(WilkeChang(M[:2], V[:2], np.ones(2)), np.ones(2, bool))
    np.testing.assert_allclose(with_gas(T, two, MU)[:, 0, 1], alone(T, two[:2], MU[:, :2])[:, 0, 1], rtol=1e-13)
    pure = np.array([1.0, 0.0, 0.0])
    np.testing.assert_allclose(with_gas(T, pure, MU)[:, 2, 0], dilute(T, MU)[:, 2, 0], rtol=1e-13)


def test_two_gases_in_one_solvent():
    model = ThermoProperties.from_names(["oxygen", "nitrogen", "water"], henry=["oxygen", "nitrogen"],
                                        T_range=(285.0, 350.0))
    D = model.liquid_transport(298.15, 1e5, [1e-5, 1e-5, 1 - 2e-5]).diffusivity
    assert np.isfinite(D).all() and (D > 0).all()
    np.testing.assert_allclose(D, D.T)


def test_words_choose_the_dilute_method():
    x = [0.3, 0.7]
    chang, hayduk = (ThermoProperties.from_names(["acetic acid", "water"], T_range=(290.0, 390.0), diffusivity=word)
                     for word in ("wilke-chang", "hayduk-minhas"))
    one, two = (m.liquid_transport(320.0, 1e5, x).diffusivity[0, 1] for m in (chang, hayduk))
    assert one != two and one == pytest.approx(two, rel=0.5)
    assert "Hayduk & Minhas (1982)" in " ".join(hayduk.summary().method)
