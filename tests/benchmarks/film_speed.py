"""Films per second against the plain script and one batched `np.linalg.solve`, ratios in one run; memory of a batch.

    OPENBLAS_NUM_THREADS=1 python tests/benchmarks/film_speed.py [repeats] [memory]

Mixed compositions, diffusivity ratios up to 10; a mix of the five bootstraps, and equimolar films. The times are those
of the public function, its checks included. Processor time, the fastest of several repeats of each, taken in turn
because the load of a machine changes. With `memory`: peak resident memory of batches of ternary films to a million.
"""
from __future__ import annotations

import resource
import subprocess
import sys
import time
import warnings
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from plain_film import plain_film

from ratebased.bootstrap import Bootstrap, Equimolar, LinearBootstrap
from ratebased.film import krishna_standart

BATCHES = (1, 100, 10_000, 100_000)
SAMPLE = 200


def films(n: int, count: int, seed: int = 0) -> tuple[np.ndarray, ...]:
    """x0, xd, kappa, nu, s of a five-bootstrap mix with solutions."""
    rng = np.random.default_rng(seed)
    kappa = np.triu(np.exp(rng.uniform(0, np.log(10.0), (count, n, n))), 1)
    kappa += np.swapaxes(kappa, -1, -2) + np.eye(n)
    x0, xd = rng.dirichlet(np.ones(n), count), rng.dirichlet(np.ones(n), count)
    nu, s = np.ones((count, n)), np.zeros(count)
    kind, k, rows = rng.integers(0, 5, count), rng.integers(0, n, count), np.arange(count)
    nu[kind == 1] = np.eye(n)[k[kind == 1]]
    low, high = (f(x0[rows, k], xd[rows, k]) for f in (np.minimum, np.maximum))
    z = np.where(rng.random(count) < 0.5, high + rng.uniform(0.1, 2.0, count), low - rng.uniform(0.1, 2.0, count))
    nu[kind == 2] = (np.eye(n)[k] - z[:, None])[kind == 2]
    nu[kind == 3] = rng.uniform(2e4, 5e4, (count, n))[kind == 3]
    s[kind == 4] = 2.0 * rng.normal(size=count)[kind == 4]
    return x0, xd, kappa, nu, s


def compare(n: int, equimolar: bool, repeats: int) -> str:
    """One line of figures."""
    x0, xd, kappa, nu, s = films(n, max(BATCHES))
    if equimolar:
        nu, s = np.ones_like(nu), np.zeros_like(s)

    def closure(count: int) -> Bootstrap:
        return Equimolar() if equimolar else LinearBootstrap(nu[:count], s[:count])

    K = np.where(np.eye(n, dtype=bool), 0.0, 1.0 / kappa)
    systems = kappa[:, :-1, :-1] + 20.0 * np.eye(n - 1)
    runs = {"plain": lambda: [plain_film(x0[i], xd[i], K[i], nu[i], s[i]) for i in range(SAMPLE)],
            "solve": lambda: np.linalg.solve(systems, x0[:, :-1, None])}
    for count in BATCHES[1:]:
        runs[f"{count}"] = lambda m=count: krishna_standart(x0[:m], xd[:m], kappa[:m], 1.0, closure(m))
    one = [Equimolar() if equimolar else LinearBootstrap(nu[i], s[i]) for i in range(SAMPLE)]
    runs["1"] = lambda: [krishna_standart(x0[i], xd[i], kappa[i], 1.0, one[i]) for i in range(SAMPLE)]
    size = {"plain": SAMPLE, "1": SAMPLE, "solve": max(BATCHES)}
    times, answers = dict.fromkeys(runs, np.inf), {}
    for _ in range(repeats):
        for label, run in runs.items():
            again = 20 if label == "100" else 1
            start = time.process_time()
            for _ in range(again):
                answers[label] = run()
            each = (time.process_time() - start) / again / size.get(label, int(label) if label.isdigit() else 1)
            times[label] = min(times[label], each)
    found = answers[f"{max(BATCHES)}"].N
    right = sum(np.abs(N - found[i]).max() < 1e-6 * np.abs(found[i]).max() for i, (N, _) in enumerate(answers["plain"]))
    plain = times["plain"]
    line = f"n={n} {'equimolar' if equimolar else 'mix'}: plain script {1e6 * plain:.0f} us ({right} of {SAMPLE} right)"
    for count in BATCHES:
        t = times[f"{count}"]
        line += f"; {count}: {1e6 * t:.2f} us, {1 / t:,.0f}/s, {plain / t:.1f}x"
    return line + f"; at {max(BATCHES)} {times[f'{max(BATCHES)}'] / times['solve']:.1f} np.linalg.solve(n-1)"


def memory(count: int) -> None:
    """Peak resident memory of one batch, in a process of its own."""
    x0, xd, kappa, nu, s = films(3, count)
    before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    krishna_standart(x0, xd, kappa, 1.0, LinearBootstrap(nu, s))
    after = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    print(f"{count} ternary films: peak {after / 1024:.0f} MiB, {before / 1024:.0f} MiB of it before the call")


if __name__ == "__main__":
    warnings.simplefilter("ignore")
    if sys.argv[1:2] == ["one-batch"]:
        memory(int(sys.argv[2]))
    elif "memory" in sys.argv:
        for batch in (10_000, 100_000, 1_000_000):
            subprocess.run([sys.executable, __file__, "one-batch", str(batch)], check=True)
    else:
        for size in (3, 4, 6, 10):
            for only_equimolar in (False, True):
                print(compare(size, only_equimolar, int(sys.argv[1]) if len(sys.argv) > 1 else 5), flush=True)
