"""Readers of the reference formats `interface` and `interface_multiplicity`.

The description inside each file defines every number. Tolerances as the files state them: N 1e-10 of the largest and 20
times the rounding sensitivity, T_I 1e-8 K, compositions 2e-10; with several solutions 1e-9 of the largest N and 1e-7 K.
"""
from __future__ import annotations

import warnings
from collections.abc import Iterator, Mapping
from typing import Any

import numpy as np
from reference_efficiency import Comparison

from ratebased.errors import HighFluxWarning, OtherSolutionWarning
from ratebased.interface import Bulk, interface_flux, solutions
from ratebased.properties import ConstantVolatility

Case = Mapping[str, Any]


def problem(case: Case) -> tuple[Bulk, Bulk, ConstantVolatility, float]:
    """The two bulks, the mixture and the pressure of a case."""
    given = case["inputs"]
    kinds = np.array(given["kind"])
    mixture = ConstantVolatility(
        [f"component {i + 1}" for i in range(given["n"])], [1.0 if v is None else v for v in given["alpha"]],
        given["latent"], a=given["a"], b=given["b"], vapor_heat_capacity=given["cp_V"],
        liquid_heat_capacity=given["cp_L"], reference_temperature=given["T_ref"],
        condensable=kinds != "noncondensing", volatile=kinds != "nonvolatile")
    vapor, liquid = (
        Bulk(*(np.array(given[key], dtype=float) for key in (fraction, f"T_{p}", f"kappa_{p}", f"h_{p}", f"c_{p}")))
        for fraction, p in (("y", "V"), ("x", "L")))
    return vapor, liquid, mixture, given["P"]


def numbers(strings: list[str]) -> np.ndarray:
    """Numbers kept as strings for their digits."""
    return np.array([float(text) for text in strings])


def compare_interface(case: Case) -> Iterator[Comparison]:
    """Fluxes, interface state and, where the file lists them, conduction at the four faces."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", HighFluxWarning)
        found = interface_flux(*problem(case))
    listed = case["outputs"]
    N = numbers(listed["N"])
    flux_tolerance = 1e-10 * np.abs(N).max() + 20 * case["rounding_sensitivity"]
    yield Comparison("N", found.N, N, flux_tolerance)
    yield Comparison("T_I", found.T_I, np.array(float(listed["T_I"])), 1e-8)
    for name in ("y_I", "x_I"):
        yield Comparison(name, getattr(found, name), numbers(listed[name]), 2e-10)
    for name, value in (("q_V_bulk", found.q_vapor_bulk), ("q_V_interface", found.q_vapor_interface),
                        ("q_L_interface", found.q_liquid_interface), ("q_L_bulk", found.q_liquid_bulk)):
        if name in listed:
            h = case["inputs"]["h_V" if "_V_" in name else "h_L"]
            listed_q = float(listed[name])
            rate = np.abs(N).sum() * max(case["inputs"]["cp_V" if "_V_" in name else "cp_L"]) / h
            # the file states no tolerance: what T_I to 1e-8 K leaves of h (T - T_I) with its Ackermann factor
            yield Comparison(name, value, np.array(listed_q), (1.0 + rate) * (1e-8 * h + 1e-9 * abs(listed_q)))


def compare_multiplicity(case: Case) -> Iterator[Comparison]:
    """One of the listed roots, the warning where its determinant has the other sign; all of them from the search."""
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        found = interface_flux(*problem(case))
    warned = any(issubclass(w.category, OtherSolutionWarning) for w in caught)
    roots = [(numbers(root["N"]), float(root["T_I"]), root["determinant_sign_as_at_zero_flux"])
             for root in case["roots"]]
    N, T, connected = min(roots, key=lambda root: float(np.abs(root[0] - found.N).max()))
    scale = 1e-9 * np.abs(N).max()
    yield Comparison("N of one root", found.N, N, scale)
    yield Comparison("T_I of one root", found.T_I, np.array(T), 1e-7)
    yield Comparison("warning", np.array(float(warned)), np.array(float(not connected)), 0.0)
    every = solutions(*problem(case))
    for k, (N, T, connected) in enumerate(roots):
        off = np.abs(every.N - N).max(-1) if len(every.N) else np.array([np.inf])
        nearest = int(off.argmin())
        yield Comparison(f"N of root {k} by search", np.array(off[nearest]), np.array(0.0), 1e-9 * np.abs(N).max())
        if len(every.N):
            yield Comparison(f"T_I of root {k} by search", every.T_I[nearest], np.array(T), 1e-7)
            yield Comparison(f"sign of root {k}", np.array(float(every.status[nearest] == 0)),
                             np.array(float(connected)), 0.0)
