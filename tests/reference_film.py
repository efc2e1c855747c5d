"""Readers of the reference formats `film`, `film_nonideal` and `film_multiplicity`.

The description inside each file defines every number and the tolerance it states.
"""
from __future__ import annotations

import warnings
from collections.abc import Callable, Iterator, Mapping
from typing import Any

import numpy as np
from reference_efficiency import Comparison

from ratebased.bootstrap import Bootstrap, Equimolar, FluxRatio, LatentHeat, LinearBootstrap, Stagnant, TotalFlux
from ratebased.errors import HighFluxWarning, NoSolutionError, OtherSolutionWarning
from ratebased.film import FilmFlux, krishna_standart, numerical, solutions
from ratebased.film.blocks import coth_blocks, resistances

Case = Mapping[str, Any]


def bootstrap(case: Case) -> Bootstrap:
    """The closure of a case; a ratio of two fluxes has no class of its own and takes the general form."""
    given = case["bootstrap"]
    kinds: dict[str, Callable[[], Bootstrap]] = {
        "equimolar": Equimolar,
        "stagnant": lambda: Stagnant(given["k"]),
        "flux_ratio": lambda: FluxRatio(given["k"], given["z"]),
        "lambda": lambda: LatentHeat(given["lam"]),
        "total_flux": lambda: TotalFlux(given["Nt"]),
    }
    return kinds.get(given["type"], lambda: LinearBootstrap(case["nu"], case["s"]))()


def numbers(strings: list[str]) -> np.ndarray:
    """Numbers kept as strings for their digits."""
    return np.array([float(text) for text in strings])


def compare_film(case: Case) -> Iterator[Comparison]:
    """The fluxes of `krishna_standart`, to 1e-10 of the largest and 20 times the half-ulp sensitivity."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", HighFluxWarning)
        found = krishna_standart(case["x0"], case["xd"], np.array(case["D"]) / case["delta"], case["ct"],
                                 bootstrap(case))
    N = numbers(case["N"])
    yield Comparison("N", found.N, N, 1e-10 * np.abs(N).max() + 20 * np.array(case["N_half_ulp_sensitivity"]))


def ln_gamma(case: Case) -> Callable[[np.ndarray], np.ndarray]:
    """ln gamma of the model of a non-ideal case, for any (complex) mole fractions."""
    p = case["params"]
    if case["model"] == "margules":
        A, C = np.array(p["A"]), p["C"]

        def margules(x: np.ndarray) -> np.ndarray:
            excess = 0.5 * ((x @ A) * x).sum(-1) + C * x.prod(-1)
            slope = x @ A + C * np.stack((x[..., 1] * x[..., 2], x[..., 0] * x[..., 2], x[..., 0] * x[..., 1]), -1)
            return slope + (excess - (x * slope).sum(-1))[..., None]

        return margules
    tau = np.array(p["tau"])
    G = np.exp(-np.array(p["alpha"]) * tau)

    def nrtl(x: np.ndarray) -> np.ndarray:
        S, C = x @ G, x @ (tau * G)
        return C / S + np.einsum("...j,...ij->...i", x / S, G * (tau - (C / S)[..., None, :]))

    return nrtl


def thermodynamic_factor(case: Case) -> Callable[[np.ndarray], np.ndarray]:
    """[Gamma] of a case, by complex steps."""
    logarithm = ln_gamma(case)

    def factor(x: np.ndarray) -> np.ndarray:
        n = x.shape[-1]
        tangents = 1e-30j * (np.eye(n)[:-1] - np.eye(n)[-1])
        slope = np.stack([logarithm(x + e).imag / 1e-30 for e in tangents], axis=-1)
        return np.eye(n - 1) + x[..., :-1, None] * slope[..., :-1, :]

    return factor


def pair_coefficients(case: Case) -> np.ndarray | Callable[[np.ndarray], np.ndarray]:
    """kappa of a case: constant, or Vignes' logarithmic mean of the values at infinite dilution."""
    if case["diffusion"] == "constant":
        return np.array(case["D"]) / case["delta"]
    limits = np.array(case["D_inf"])
    logarithms = np.log(np.where(limits > 0, limits, 1.0))
    return lambda x: np.exp(np.einsum("ijk,...k->...ij", logarithms, x)) / case["delta"]


def compare_nonideal(case: Case) -> Iterator[Comparison]:
    """`numerical` to 1e-7 of the largest flux (the files hold about 1e-11); the frozen film as far off as listed."""
    kappa, gamma = pair_coefficients(case), thermodynamic_factor(case)
    x0, xd = np.array(case["x0"]), np.array(case["xd"])
    N = numbers(case["N"])
    size = np.abs(N).max()
    found = numerical(x0, xd, kappa, case["ct"], bootstrap(case), gamma=gamma)
    yield Comparison("N", found.N, N, 1e-7 * size)
    yield Comparison("x_mid", found.profile(0.5), np.array(case["x_mid"], float), 1e-7)
    mean = 0.5 * (x0 + xd)
    frozen = krishna_standart(x0, xd, kappa(mean) if callable(kappa) else kappa, case["ct"], bootstrap(case),
                              gamma=gamma(mean))
    listed = case["approx_rel_error"]["mean"]
    yield Comparison("error of the mean [Gamma]", np.abs(frozen.N - N).max() / size, np.array(listed),
                     1e-6 * listed + 1e-9)


def determinant_sign(film: FilmFlux, N: np.ndarray) -> float:
    """Sign of det(dF/dN) of the coth form with the bootstrap as its last row."""
    blocks = coth_blocks(N, resistances(film.kappa, film.c_t), film.x0, film.xd)
    return float(np.sign(np.linalg.det(np.vstack((blocks.dN, film.nu)))))


def compare_multiplicity(case: Case) -> Iterator[Comparison]:
    """One of the listed roots with the named warning where it is due, or the named error; the search finds them all."""
    problem = (case["x0"], case["xd"], case["kappa"], case["ct"], bootstrap(case))
    listed = [numbers(root["N"]) for root in case["solutions"]]

    def distance(N: np.ndarray, root: np.ndarray) -> float:
        return float(np.abs(N - root).max() / np.abs(root).max())

    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        try:
            one = krishna_standart(*problem)
        except NoSolutionError:
            one = None
    if case["nu_dot_signs"] == "opposite":
        yield Comparison("the named error", np.array(float(one is None)), np.array(1.0), 0)
    else:
        assert one is not None, "no solution where one is listed"
        nearest = min(distance(one.N, root) for root in listed)
        yield Comparison("one of the listed roots", np.array(nearest), np.array(0.0), 1e-9)
        warned = any(issubclass(w.category, OtherSolutionWarning) for w in caught)
        due = determinant_sign(one, one.N) != determinant_sign(one, 0.0 * one.N)
        yield Comparison("the named warning", np.array(float(warned)), np.array(float(due)), 0)
    found = solutions(*problem)
    for k, root in enumerate(listed):
        nearest = min((distance(N, root) for N in found.N), default=np.inf)
        yield Comparison(f"root {k} found", np.array(nearest), np.array(0.0), 1e-9)
