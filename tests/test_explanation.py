"""The split of a flux: exact sum, no dependence on the order of components, no pull where all pairs are alike."""
from __future__ import annotations

import numpy as np
import pytest

from ratebased import Bulk, ConstantVolatility, InputError, interface_flux, krishna_standart
from ratebased.bootstrap import Equimolar, LinearBootstrap, Stagnant
from ratebased.explanation import explain_flux
from ratebased.film.split import flux_split
from ratebased.maxwell_stefan import resistances

rng = np.random.default_rng(7)
KAPPA = np.array([[1.0, 1.0, 3e-1], [1.0, 1.0, 6e-1], [3e-1, 6e-1, 1.0]]) * 1e-4
X0, XD = np.array([0.3, 0.3, 0.4]), np.array([0.2, 0.45, 0.35])
GAMMA = np.array([[0.8, -0.25], [0.1, 0.55]])
LATENT = np.array([3.0e4, 3.4e4, 4.1e4])


def test_parts_sum_to_the_flux_for_random_films() -> None:
    x0, xd = rng.dirichlet(np.ones(4), 200), rng.dirichlet(np.ones(4), 200)
    kappa = np.exp(rng.uniform(-1, 1, (200, 4, 4)))
    kappa = kappa + np.swapaxes(kappa, -1, -2)
    film = krishna_standart(x0, xd, kappa, np.full(200, 40.0), Equimolar())
    split = flux_split(film.N, x0, xd, resistances(kappa, np.full(200, 40.0)))
    assert np.abs(split.total - film.N).max() < 1e-12 * np.abs(film.N).max()


def test_order_of_components_changes_nothing() -> None:
    order = np.array([2, 0, 1])
    full = np.zeros((3, 3))
    full[:2, :2] = GAMMA
    full[2] = -full[:2].sum(0)
    swapped = full[np.ix_(order, order)]
    swapped = (swapped - swapped[:, -1:])[:-1, :-1]
    kappa = KAPPA[np.ix_(order, order)]
    c = np.array(1e4)
    one = krishna_standart(X0, XD, KAPPA, c, LinearBootstrap(LATENT), gamma=GAMMA)
    two = krishna_standart(X0[order], XD[order], kappa, c, LinearBootstrap(LATENT[order]), gamma=swapped)
    a = flux_split(one.N, X0, XD, resistances(KAPPA, c), GAMMA)
    b = flux_split(two.N, X0[order], XD[order], resistances(kappa, c), swapped)
    scale = np.abs(one.N).max()
    for name in ("own", "nonideality", "bulk_flow", "high_flux"):
        assert np.abs(getattr(a, name)[order] - getattr(b, name)).max() < 1e-12 * scale, name
    assert np.abs(a.pull[np.ix_(order, order)] - b.pull).max() < 1e-12 * scale


def test_no_pull_where_all_pairs_are_alike() -> None:
    film = krishna_standart(X0, XD, 2e-4, np.array(1e4), LinearBootstrap(LATENT))
    split = flux_split(film.N, X0, XD, resistances(np.full((3, 3), 2e-4), np.array(1e4)))
    assert np.abs(split.pull).max() < 1e-14 * np.abs(film.N).max()
    assert np.abs(split.nonideality).max() == 0.0


def test_binary_has_own_gradient_and_bulk_flow_only_at_low_flux() -> None:
    x0, xd = np.array([0.300, 0.700]), np.array([0.299, 0.701])
    film = krishna_standart(x0, xd, 2e-4, np.array(1e4), Stagnant(1))
    split = flux_split(film.N, x0, xd, resistances(np.full((2, 2), 2e-4), np.array(1e4)))
    assert split.own[0] == pytest.approx(2e-4 * 1e4 * 1e-3, rel=1e-12)
    assert np.abs(split.pull).max() < 1e-12 * abs(film.N[0])
    assert abs(split.high_flux[0]) < 1e-5 * abs(film.N[0])


def test_the_sentence_names_film_parts_and_pair() -> None:
    """Two-bulb conditions of Duncan & Toor (AIChE J. 8 (1962) 38): nitrogen moves without a gradient of its own."""
    model = ConstantVolatility(["hydrogen", "nitrogen", "carbon dioxide"], [1.0, 1.0, 1.0], 3e4, a=22.6, b=4000.0)
    D = np.array([[1.0, 83.3, 68.0], [83.3, 1.0, 16.8], [68.0, 16.8, 1.0]]) * 1e-6
    x = np.array([0.45, 0.50, 0.05])
    T = np.array(4000.0 / (22.6 - np.log(101325.0)))
    answer = interface_flux(Bulk(np.array([0.05, 0.50, 0.45]), T, D / 1e-3, np.array(30.0), np.array(35.0)),
                            Bulk(x, T, np.full((3, 3), 1e-1), np.array(3e3), np.array(1e4)), model, 101325.0)
    explained = explain_flux(answer)
    assert explained.controlling.phase == "vapour"
    assert explained.vapor.regime[1] in ("osmotic", "reverse")
    text = explained.sentence("nitrogen")
    assert "nitrogen moves" in text and "the pull of" in text and "pair nitrogen/" in text
    frame = explained.to_frame()
    parts = frame.drop(columns=["phase", "component", "regime", "driving", "flux"]).sum(axis=1)
    assert np.abs(parts - frame["flux"]).max() < 1e-12 * np.abs(answer.N).max()
    with pytest.raises(InputError, match="name = 'argon': expected one of"):
        explained.sentence("argon")
