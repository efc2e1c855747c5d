"""Interfaces by construction: the answer (N, x_I, T_I) is drawn, the bulks follow by walking back through both films.

Twelve kinds of cases. The liquid may be ideal or a two-suffix Margules mixture, in the equilibrium and in the film.
Only physical cases are kept (all fractions positive, temperatures within reason, film matrices up to a 1-norm).
"""
from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np
from interface_models import BatchVolatility, DifferentiatedMargules
from scipy.linalg import expm

from ratebased.film.blocks import film_matrix, resistances
from ratebased.interface import Bulk
from ratebased.interface.energy import bernoulli
from ratebased.properties.protocol import GAS_CONSTANT

KINDS = ("ordinary", "near-equimolar", "condensation", "evaporation", "noncondensing", "nonvolatile", "both-inert",
         "trace", "subcooled-superheated", "high-flux", "wide-diffusivity", "extreme-volatility")

AT_LEAST_TERNARY = ("both-inert", "trace", "wide-diffusivity", "extreme-volatility")


@dataclass(frozen=True)
class Constructed:
    vapor: Bulk
    liquid: Bulk
    model: DifferentiatedMargules
    P: np.ndarray
    N: np.ndarray
    x_I: np.ndarray
    T_I: np.ndarray


def masks(rng, kind, n):
    """Condensable and volatile, one choice for a batch (a property model is one mixture)."""
    condensable, volatile = np.ones(n, bool), np.ones(n, bool)
    order = rng.permutation(n)
    if kind in ("noncondensing", "both-inert"):
        condensable[order[0]] = False
        if n > 4 and kind == "noncondensing":
            condensable[order[1]] = False
    if kind in ("nonvolatile", "both-inert"):
        volatile[order[-1]] = False
    return condensable, volatile


def kappas(rng, shape, n, low, high, ratio):
    base = 10.0 ** rng.uniform(low, high, shape)
    k = np.triu(base[..., None, None] * ratio ** (rng.random((*shape, n, n)) - 0.5), 1)
    return k + np.swapaxes(k, -1, -2)


def construct(rng, kind, n, count, *, limit=25.0, interaction=0.0, floor=0.15, lean=False):
    """`count` cases of one kind.

    interaction: bound of the Margules parameters; floor: of the eigenvalues of [Gamma]; lean: a model of constant
    volatility, without activity coefficients.
    """
    condensable, volatile = masks(rng, kind, n)
    parts, have = [], 0
    while have < count:
        part = _draw(rng, kind, n, max(64, 4 * count), condensable, volatile, limit, interaction, floor)
        parts.append(part)
        have += len(part["P"])
    d = {k: np.concatenate([p[k] for p in parts])[:count] for k in parts[0]}
    parameters = (tuple("abcdefgh"[:n]), d["alpha"], d["a"], d["b"], d["latent"], d["cp_V"], d["cp_L"], d["T_ref"],
                  condensable, volatile)
    model = BatchVolatility(*parameters) if lean else DifferentiatedMargules(
        *parameters, d["A"], np.zeros((n, n)), np.zeros((n, n)))
    return Constructed(Bulk(d["y"], d["T_V"], d["kappa_V"], d["h_V"], d["c_V"]),
                       Bulk(d["x"], d["T_L"], d["kappa_L"], d["h_L"], d["c_L"]), model, d["P"], d["N"], d["x_I"],
                       d["T_I"])


def merged(cases, rng):
    """Several constructed sets of one mixture size as one, shuffled."""
    order = rng.permutation(sum(len(c.P) for c in cases))

    def together(values):
        return np.concatenate(values)[order]

    def bulk(bulks):
        return Bulk(*(together([getattr(b, f.name) for b in bulks]) for f in fields(Bulk)))

    first = cases[0].model
    model = replace(first, **{k: together([getattr(c.model, k) for c in cases]) for k in
                              ("alpha", "a", "b", "latent", "vapor_cp", "liquid_cp", "reference_temperature")})
    return Constructed(bulk([c.vapor for c in cases]), bulk([c.liquid for c in cases]), model,
                       *(together([getattr(c, k) for c in cases]) for k in ("P", "N", "x_I", "T_I")))


def _draw(rng, kind, n, B, condensable, volatile, limit, interaction, floor):
    ordinary = condensable & volatile
    rows = np.arange(B)
    alpha = 10.0 ** rng.uniform(-1, 1, (B, n))
    gas = rng.integers(0, n, B)
    if kind == "extreme-volatility":
        alpha[rows, gas] = 10.0 ** rng.uniform(3, 5, B)
        alpha[rows, (gas + 1) % n] = 10.0 ** rng.uniform(-6, -3, B)
    T_I, b, P = rng.uniform(290, 430, B), rng.uniform(3000, 5500, B), 10.0 ** rng.uniform(4.5, 6, B)
    x_I = rng.gamma(1.0, 1.0, (B, n)) * condensable
    if kind == "trace":
        x_I[rows, rng.integers(0, n, B)] *= 1e-8
    if kind == "extreme-volatility":
        x_I[rows, gas] *= 3e-5
    x_I /= x_I.sum(1, keepdims=True)
    inert = rng.gamma(1.0, 1.0, (B, n)) * ~condensable
    total = inert.sum(1, keepdims=True)
    inert = inert / np.where(total > 0, total, 1.0) * rng.uniform(0.02, 0.9, (B, 1))
    A = np.triu(rng.uniform(-interaction, interaction, (B, n, n)), 1)
    A = A + np.swapaxes(A, 1, 2)
    part = np.where(ordinary, alpha * x_I, 0.0)
    a = np.log(P * (1.0 - inert.sum(1)) / part.sum(1)) + b / T_I
    K = alpha * np.exp(a - b / T_I)[:, None] / P[:, None]
    y_I = np.where(condensable, np.where(ordinary, K * x_I, 0.0), inert)
    alpha = alpha / _gamma(A, x_I)                           # the model's K at the interface is K again

    ratio = 1000.0 if kind == "wide-diffusivity" else 10.0
    kappa_V, kappa_L = kappas(rng, (B,), n, -2.3, -1.3, ratio), kappas(rng, (B,), n, -4.3, -3.3, ratio)
    c_V, c_L = P / (GAS_CONSTANT * T_I), 10.0 ** rng.uniform(3.7, 4.7, B)
    typical = np.exp(np.log(kappa_V + np.eye(n)).sum((1, 2)) / (n * (n - 1)))
    latent = rng.uniform(2e4, 4.5e4, (B, n))
    cp_V, cp_L = rng.uniform(30, 150, (B, n)), rng.uniform(70, 250, (B, n))
    T_ref = 10.0 * np.round(T_I / 10.0)
    latent_I = latent + (cp_V - cp_L) * (T_I - T_ref)[:, None]
    h_V, h_L = 10.0 ** rng.uniform(1.3, 2.3, B), 10.0 ** rng.uniform(2.7, 4.0, B)

    g = rng.normal(size=(B, n))
    if kind == "condensation":
        g = np.abs(g) + 0.05
    elif kind == "evaporation":
        g = -np.abs(g) - 0.05
    elif kind == "high-flux":
        sign = rng.choice([-1, 1], (B, 1))
        near = np.where(sign > 0, x_I, y_I) * np.exp(0.35 * g) + 0.02
        g = sign * near / near.sum(1, keepdims=True)
    elif kind == "trace":
        g = np.where(x_I == x_I.min(1, keepdims=True), g * x_I * (1.0 + K), g)
    elif kind == "extreme-volatility":
        g = g * np.minimum(1.0, 3.0 * np.minimum(x_I, y_I) + 1e-9)
    elif kind == "near-equimolar":
        g = g - (g * latent_I).sum(1, keepdims=True) / latent_I.sum(1, keepdims=True)
    exponent = rng.uniform(np.log10(3), np.log10(8), B) if kind == "high-flux" else rng.uniform(-2, 0.3, B)
    N = np.where(ordinary, g, 0.0) * (c_V * typical * 10.0 ** exponent)[:, None]

    superheat = {"subcooled-superheated": (20, 120), "near-equimolar": (-1, 2), "evaporation": (5, 150)}
    T_V = T_I + rng.uniform(*superheat.get(kind, (-3, 25)), B)
    q_V = h_V * bernoulli(-(N * cp_V).sum(1) / h_V) * (T_V - T_I)
    q_L = q_V + (N * latent_I).sum(1)
    h_L = np.maximum(h_L, np.abs(q_L) / (60.0 if kind == "subcooled-superheated" else 40.0))
    T_L = T_I - q_L / (h_L * bernoulli((N * cp_L).sum(1) / h_L))

    A_V, A_L = film_matrix(N, resistances(kappa_V, c_V)), film_matrix(N, resistances(kappa_L, c_L))
    fine = (_norm(A_V) < limit) & (_norm(A_L) < limit)
    A_V[~fine], A_L[~fine] = 0.0, 0.0
    y = (expm(-A_V) @ y_I[..., None])[..., 0]
    if interaction:
        x, good = _walk_back(A, A_L, x_I, limit, floor)
        fine &= good
    else:
        x = (expm(A_L) @ x_I[..., None])[..., 0]
    tiny = 1e-9 if kind in ("trace", "extreme-volatility") else 1e-6
    y, x = np.where(volatile, y, 0.0), np.where(condensable, x, 0.0)
    fine &= (np.where(volatile, y, 1.0) >= tiny).all(1) & (np.where(condensable, x, 1.0) >= tiny).all(1)
    fine &= np.isfinite(T_L) & (np.abs(T_L - T_I) < 90) & (T_L > 240)
    if kind == "high-flux":
        fine &= np.abs(N.sum(1)) > 2.0 * c_V * typical
    out = {"y": y, "x": x, "T_V": T_V, "T_L": T_L, "P": P, "kappa_V": kappa_V, "kappa_L": kappa_L, "c_V": c_V,
           "c_L": c_L, "h_V": h_V, "h_L": h_L, "cp_V": cp_V, "cp_L": cp_L, "latent": latent, "T_ref": T_ref,
           "alpha": alpha, "a": a, "b": b, "A": A, "N": N, "x_I": x_I, "T_I": T_I}
    out = {k: v[fine] for k, v in out.items()}
    for k in ("y", "x"):
        out[k] /= out[k].sum(1, keepdims=True)
    return out


def _norm(A):
    return np.abs(A).sum(-2).max(-1)


def _gamma(A, x):
    Ax = (A @ x[..., None])[..., 0]
    return np.exp(Ax - 0.5 * (x * Ax).sum(-1, keepdims=True))


def _factor(A, x):
    slope = A - (A @ x[..., None])[..., 0][..., None, :]
    return np.eye(x.shape[-1] - 1) + x[..., :-1, None] * (slope - slope[..., -1:])[..., :-1, :-1]


def _smallest(gamma):
    finite = np.isfinite(gamma).all((-1, -2))
    return np.where(finite, np.linalg.eigvals(np.where(finite[:, None, None], gamma, 0.0)).real.min(-1), -1.0)


def _walk_back(A, A_L, x_I, limit, floor):
    """Bulk liquid behind a film with [Gamma] at the mean of x_I and x: fixed point; which entries are usable."""
    B, n = x_I.shape
    good = _smallest(_factor(A, x_I)) > floor
    x = x_I.copy()
    for _ in range(150):
        gamma = _factor(A, 0.5 * (x + x_I))
        usable = np.isfinite(gamma).all((-1, -2)) & (np.abs(np.linalg.det(np.nan_to_num(gamma))) > 1e-6)
        inverse = np.linalg.inv(np.where(usable[:, None, None], gamma, np.eye(n - 1)))
        Z = np.concatenate((inverse @ A_L[:, :-1], -(inverse @ A_L[:, :-1]).sum(1, keepdims=True)), 1)
        usable &= _norm(Z) < limit
        new = (expm(np.where(usable[:, None, None], Z, 0.0)) @ x_I[..., None])[..., 0]
        new = np.clip(np.where(np.isfinite(new), new, 0.5), -3, 3)
        moved = np.abs(new - x).max(1)
        x = new
        if moved[good & usable].max(initial=0.0) < 1e-15:
            break
    good &= usable & (moved < 1e-13) & (np.abs(x).max(1) <= 1)
    x_safe = np.clip(x, 0, 1)
    return x, good & (_smallest(_factor(A, x_safe)) > floor) & (_smallest(_factor(A, 0.5 * (x_safe + x_I))) > floor)
