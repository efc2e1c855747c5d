"""How many interfaces are solved: constructed ones of twelve kinds, and random pairs of bulks.

    OPENBLAS_NUM_THREADS=1 python tests/benchmarks/interface_sweep.py [ideal 20000] [non-ideal 6000] [random 10000]

A constructed interface has a solution, so every failure counts; some end on another physical solution than the one they
were drawn from. Of a random pair of bulks nobody knows whether it has one: those not solved carry a named status.
"""
from __future__ import annotations

import sys
import warnings
from dataclasses import replace
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from interface_cases import AT_LEAST_TERNARY, KINDS, construct
from interface_models import constant_volatility, margules, random_bulks

from ratebased.interface import InterfaceStatus, interface_flux

PARTS = 3
"""Batches a kind and size: each has its own places of the inert components."""


def counts(status):
    found = np.bincount(status, minlength=len(InterfaceStatus))
    return ", ".join(f"{InterfaceStatus(k).name.lower()} {v}" for k, v in enumerate(found) if v)


def constructed(rng, total, sizes, interaction):
    pairs = [(kind, n) for kind in KINDS for n in sizes if n > 2 or kind not in AT_LEAST_TERNARY]
    each = -(-total // (len(pairs) * PARTS))
    everything = []
    for kind in KINDS:
        status, iterations, far, residual = [], [], 0, 0.0
        for n in [n for k, n in pairs if k == kind]:
            for _ in range(PARTS):
                case = construct(rng, kind, n, each, interaction=interaction)
                r = interface_flux(case.vapor, case.liquid, case.model, case.P, throw=False)
                status.append(r.status)
                iterations.append(r.iterations)
                residual = max(residual, float(np.nanmax(r.residual)))
                off = np.abs(r.N - case.N).max(-1) > 1e-5 * np.abs(case.N).max(-1)
                far += int((off & r.solved).sum())
        status, iterations = np.concatenate(status), np.concatenate(iterations)
        everything.append((status, iterations, far))
        print(f"  {kind:22s} {len(status):5d}: {counts(status)}; iterations median {np.median(iterations):.0f}, 99 % "
              f"{np.percentile(iterations, 99):.0f}, worst {iterations.max()}; other root than drawn {far}; residual "
              f"{residual:.0e}", flush=True)
    status, iterations = (np.concatenate([e[k] for e in everything]) for k in (0, 1))
    far, solved = sum(e[2] for e in everything), int((status <= InterfaceStatus.OTHER_BRANCH).sum())
    print(f"  all {len(status)}: solved {solved}; {counts(status)}; iterations median {np.median(iterations):.0f}, "
          f"99 % {np.percentile(iterations, 99):.0f}, worst {iterations.max()}; other root than drawn {far} "
          f"({100 * far / len(status):.2f} %)", flush=True)


def random_pairs(rng, total):
    """Compositions anywhere in the simplex, bulk temperatures anywhere from 290 to 430 K, with and without a gas."""
    everything = []
    for n in (2, 3, 4, 5):
        for model in (constant_volatility(rng, n), margules(rng, n, heat=100.0),
                      constant_volatility(rng, n, condensable=np.arange(n) > 0)):
            shape = (-(-total // 12),)
            vapor, liquid = (replace(b, temperature=rng.uniform(290, 430, shape),
                                     composition=spread(rng, b.composition))
                             for b in random_bulks(rng, shape, model))
            everything.append(interface_flux(vapor, liquid, model, 1e5, throw=False).status)
    print(f"random pairs of bulks, {sum(map(len, everything))}: {counts(np.concatenate(everything))}")


def spread(rng, x):
    wide = rng.gamma(0.4, 1.0, x.shape) * (x > 0) + 1e-12 * (x > 0)
    return wide / wide.sum(-1, keepdims=True)


def main(ideal=20_000, nonideal=6_000, pairs=10_000):
    warnings.simplefilter("ignore")
    rng = np.random.default_rng(8)
    print("ideal, n = 2..6, |A|_1 <= 25")
    constructed(rng, ideal, range(2, 7), 0.0)
    print("two-suffix Margules in equilibrium and film, n = 2..5, |A_ij| <= 2.5, eigenvalues of [Gamma] > 0.15")
    constructed(rng, nonideal, range(2, 6), 2.5)
    random_pairs(rng, pairs)


if __name__ == "__main__":
    main(*(int(word) for word in sys.argv[1:]))
