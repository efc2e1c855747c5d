"""Activity coefficients and [Gamma] from the excess Gibbs energy itself, differentiated numerically to 25 digits.

ln gamma_i = d(n G/RT)/dn_i and J_ij = d2(n G/RT)/dn_i dn_j with G written down once more from its definition, scalar
and independent of the kernels.
"""
import mpmath as mp
import numpy as np
import pytest

from ratebased.properties.activity import Nrtl, Unifac, Uniquac, Wilson

RNG = np.random.default_rng(11)
N, GROUPS, T = 3, 4, 331.0


def pair(n, low, high):
    matrix = RNG.uniform(low, high, (n, n))
    np.fill_diagonal(matrix, 0.0)
    return matrix


TAU, LAMBDA, U = pair(N, -200, 700), pair(N, -500, 300), pair(N, -300, 200)
R_, Q_ = RNG.uniform(1, 4, N), RNG.uniform(1, 4, N)
COUNTS = np.array([[1, 2, 0, 0], [0, 0, 3, 1], [1, 0, 1, 2]])
GROUP_R, GROUP_Q = RNG.uniform(0.5, 2, GROUPS), RNG.uniform(0.4, 2, GROUPS)
A, B, C = pair(GROUPS, -300, 800), pair(GROUPS, -1, 1), pair(GROUPS, -2e-3, 2e-3)


def total(values):
    return mp.fsum(values)


def nrtl(n):
    energy = 0
    for i in range(N):
        tau = [mp.mpf(TAU[j, i]) / T for j in range(N)]
        G = [mp.exp(-mp.mpf(0.3) * t) if j != i else mp.mpf(1) for j, t in enumerate(tau)]
        energy += n[i] * total(n[j] * tau[j] * G[j] for j in range(N)) / total(n[j] * G[j] for j in range(N))
    return energy


def wilson(n):
    whole = total(n)
    return -total(n[i] * mp.log(total(n[j] / whole * mp.exp(mp.mpf(LAMBDA[i, j]) / T) for j in range(N)))
                  for i in range(N))


def combinatorial(n, r, q, exponent):
    whole = total(n)
    sizes, areas = total(n[i] * r[i] for i in range(N)), total(n[i] * q[i] for i in range(N))
    powers = total(n[i] * r[i] ** exponent for i in range(N))
    return total(n[i] * mp.log(r[i] ** exponent * whole / powers)
                 - 5 * q[i] * n[i] * mp.log((r[i] / sizes) / (q[i] / areas)) for i in range(N))


def uniquac(n):
    r, q = [mp.mpf(v) for v in R_], [mp.mpf(v) for v in Q_]
    area = total(n[i] * q[i] for i in range(N))
    residual = -total(q[i] * n[i] * mp.log(total(n[j] * q[j] / area * mp.exp(mp.mpf(U[j, i]) / T) for j in range(N)))
                      for i in range(N))
    return combinatorial(n, r, q, 1) + residual


def unifac(n, exponent):
    Q = [mp.mpf(v) for v in GROUP_Q]
    r = [total(int(COUNTS[i, k]) * mp.mpf(GROUP_R[k]) for k in range(GROUPS)) for i in range(N)]
    q = [total(int(COUNTS[i, k]) * Q[k] for k in range(GROUPS)) for i in range(N)]
    psi = [[mp.exp(-(mp.mpf(A[m, k]) / T + mp.mpf(B[m, k]) + mp.mpf(C[m, k]) * T)) for k in range(GROUPS)]
           for m in range(GROUPS)]

    def residual(groups):
        area = total(groups[k] * Q[k] for k in range(GROUPS))
        return -total(groups[k] * Q[k] * mp.log(total(groups[m] * Q[m] / area * psi[m][k] for m in range(GROUPS)))
                      for k in range(GROUPS))

    mixture = residual([total(n[i] * int(COUNTS[i, k]) for i in range(N)) for k in range(GROUPS)])
    alone = total(n[i] * residual([mp.mpf(int(c)) for c in COUNTS[i]]) for i in range(N))
    return combinatorial(n, r, q, exponent) + mixture - alone


CASES = {
    "NRTL": (Nrtl(N, tau_b=TAU, alpha=0.3), nrtl),
    "Wilson": (Wilson(N, lambda_b=LAMBDA), wilson),
    "UNIQUAC": (Uniquac(R_, Q_, tau_b=U), uniquac),
    "UNIFAC": (Unifac(COUNTS, GROUP_R, GROUP_Q, A, B, C), lambda n: unifac(n, 1)),
    "modified UNIFAC": (Unifac(COUNTS, GROUP_R, GROUP_Q, A, B, C, r_exponent=0.75),
                        lambda n: unifac(n, mp.mpf(3) / 4)),
}


@pytest.mark.parametrize("name", CASES)
def test_from_the_excess_gibbs_energy(name):
    model, energy = CASES[name]
    x = np.array([0.21, 0.34, 0.45])
    with mp.workdps(40):
        n = [mp.mpf(v) for v in x]
        unit = [[int(i == j) for j in range(N)] for i in range(N)]
        ln_gamma = [mp.diff(lambda *m: energy(m), n, unit[i]) for i in range(N)]
        second = [[mp.diff(lambda *m: energy(m), n, [a + b for a, b in zip(unit[i], unit[j])]) for j in range(N)]
                  for i in range(N)]
    np.testing.assert_allclose(model.ln_gamma(np.array(T), x).value, np.array(ln_gamma, float), rtol=1e-12, atol=1e-13)
    np.testing.assert_allclose(model.mole_number_derivatives(np.array(T), x), np.array(second, float), rtol=1e-11,
                               atol=1e-12)
