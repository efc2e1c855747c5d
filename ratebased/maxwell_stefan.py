"""Maxwell-Stefan relations at a point: matrices, driving forces, conversions, effective diffusivities, dissipation.

The friction law, with the general driving force d_i (1/m) and any set of molar fluxes (mol/(m2 s)) measured against
one common velocity,

    d_i = sum_j (x_i N_j - x_j N_i)/(c_t D_ij),

does not depend on which velocity that is. Written as c_t d = -[M] N the (n, n) matrix [M] has columns that sum to zero
and [M] x = 0; with one component eliminated it becomes [B] (or [R], with mass-transfer coefficients in place of
diffusivities). The last component is the one eliminated; relations between fluxes and gradients of all n components do
not depend on that choice. Sources: Taylor and Krishna (1993) ch. 2 and 3; Bird, Stewart and Lightfoot (2002) sec. 24.2;
both from memory.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from correlations.constants import GAS_CONSTANT as GAS_CONSTANT

from .arguments import (
    batch_shape,
    component_array,
    component_index,
    finite_array,
    mole_fractions,
    pair_matrix,
    positive_array,
)
from .errors import InputError

Array = NDArray[np.float64]

RECIPROCITY_TOLERANCE = 1e-6
"""Relative departure from symmetry, from zero row sums or below zero that a matrix given by the user may show."""


# --- kernels ----------------------------------------------------------------------------------------------------------

def resistances(kappa: ArrayLike, c_t: ArrayLike) -> Array:
    """K_ij = 1/(c_t kappa_ij), m2 s/mol, (..., n, n), zero on the diagonal (whatever the diagonal of kappa holds)."""
    kappa = np.asarray(kappa, dtype=float)
    off = ~np.eye(kappa.shape[-1], dtype=bool)
    product = np.where(off, kappa, 1.0) * np.asarray(c_t, dtype=float)[..., None, None]
    return np.where(off, 1.0 / product, 0.0)


def film_matrix(N: Array, K: Array) -> Array:
    """A(N), A_ij = -N_i K_ij, A_ii = sum_j K_ij N_j, (..., n, n): across a film dx/deta = A(N) x."""
    A = N[..., None] * K
    np.negative(A, out=A)
    np.einsum("...ii->...i", A)[...] = (K @ N[..., None])[..., 0]
    return A


def composition_matrix(x: Array, K: Array) -> Array:
    """M(x), M_ij = -x_i K_ij, M_ii = sum_j K_ij x_j, (..., n, n): M(x) N = -dx/deta = -A(N) x."""
    return film_matrix(x, K)


def reduced(A: Array) -> Array:
    """The (n-1, n-1) form of an (n, n) matrix acting on vectors that sum to zero, the last component eliminated."""
    return A[..., :-1, :-1] - A[..., :-1, -1:]


def solve(matrix: Array, right: Array) -> Array:
    """np.linalg.solve of float64."""
    return np.asarray(np.linalg.solve(matrix, right), dtype=np.float64)


# --- matrices of the theory -------------------------------------------------------------------------------------------

def resistance_matrix(x: ArrayLike, kappa: ArrayLike) -> Array:
    """[R] of a mixture: R_ii = x_i/kappa_in + sum_{k != i} x_k/kappa_ik, R_ij = -x_i (1/kappa_ij - 1/kappa_in).

    x mole fractions (..., n); kappa pair coefficients, m/s, (..., n, n). Returns (..., n-1, n-1), s/m, so that
    J = c_t [R]^-1 (x_0 - x_delta) at low flux. With diffusivities in place of kappa it is [B], s/m2.
    Raises InputError. Source: Krishna and Standart (1976).
    """
    x = mole_fractions("x", x)
    kappa = pair_matrix("kappa", kappa, x.shape[-1])
    batch_shape(x=x.shape[:-1], kappa=kappa.shape[:-2])
    return reduced(film_matrix(x, resistances(kappa, 1.0)))


def rate_factor_matrix(N: ArrayLike, c_t: ArrayLike, kappa: ArrayLike) -> Array:
    """[Phi] of a film: Phi_ii = N_i/(c_t kappa_in) + sum_{k != i} N_k/(c_t kappa_ik), Phi_ij = -N_i (1/(c_t kappa_ij) -
    1/(c_t kappa_in)).

    N mol/(m2 s), (..., n), positive from face 0 to face delta; c_t mol/m3, (...); kappa m/s, (..., n, n). Returns
    (..., n-1, n-1), dimensionless. Raises InputError. Source: Krishna and Standart (1976).
    """
    N = finite_array("N", N)
    if N.ndim < 1:
        raise InputError(f"N = {N}: expected components on the last axis")
    return reduced(film_matrix(N, _checked_resistances("kappa", kappa, c_t, N.shape[-1], N=N.shape[:-1])))


def _checked_resistances(name: str, pairs: ArrayLike, c_t: ArrayLike, n: int, **others: tuple[int, ...]) -> Array:
    """1/(c_t kappa) of pair quantities given by the user; `others`: batch shapes it must broadcast with."""
    pairs, c_t = pair_matrix(name, pairs, n), positive_array("c_t", c_t)
    batch_shape(**others, **{name: pairs.shape[:-2], "c_t": c_t.shape})
    return resistances(pairs, c_t)


def thermodynamic_factor(x: ArrayLike, dlngamma_dx: ArrayLike) -> Array:
    """[Gamma]: Gamma_ij = delta_ij + x_i dln(gamma_i)/dx_j at sum x = 1; (..., n-1, n-1).

    x mole fractions (..., n). dlngamma_dx : either (..., n-1, n-1), taken with the last mole fraction making up the
    sum, or (..., n, n), every x_j moved by itself (the last column is then subtracted). Raises InputError.
    """
    x = mole_fractions("x", x)
    n = x.shape[-1]
    slope = finite_array("dlngamma_dx", dlngamma_dx)
    if slope.shape[-2:] == (n, n):
        slope = reduced(slope)
    if slope.shape[-2:] != (n - 1, n - 1):
        raise InputError(f"dlngamma_dx: expected shape (..., {n - 1}, {n - 1}) or (..., {n}, {n}), got {slope.shape}")
    batch_shape(x=x.shape[:-1], dlngamma_dx=slope.shape[:-2])
    return np.eye(n - 1) + x[..., :-1, None] * slope


def fick_matrix(x: ArrayLike, D: ArrayLike, gamma: ArrayLike | None = None) -> Array:
    """Fick matrix [D] = [B]^-1 [Gamma], J = -c_t [D] grad x against the molar-average velocity; m2/s, (..., n-1, n-1).

    x mole fractions (..., n); D Maxwell-Stefan pair diffusivities, m2/s, (..., n, n); gamma (..., n-1, n-1), identity
    if left out. Raises InputError. Source: Taylor and Krishna (1993) eq. 3.2.5 (from memory).
    """
    x = mole_fractions("x", x)
    B, gamma = resistance_matrix(x, D), _gamma(gamma, x.shape[-1])
    batch_shape(x_D=B.shape[:-2], gamma=gamma.shape[:-2])
    return solve(B, gamma)


def _gamma(gamma: ArrayLike | None, n: int) -> Array:
    if gamma is None:
        return np.eye(n - 1)
    gamma = finite_array("gamma", gamma)
    if gamma.shape[-2:] != (n - 1, n - 1):
        raise InputError(f"gamma: expected shape (..., {n - 1}, {n - 1}), got {gamma.shape}")
    return gamma


# --- conversions ------------------------------------------------------------------------------------------------------

def _extend(block: Array) -> Array:
    """An (n, n) matrix with zero row and column sums from its (n-1, n-1) block."""
    rows = np.concatenate((block, -block.sum(-2, keepdims=True)), axis=-2)
    return np.concatenate((rows, -rows.sum(-1, keepdims=True)), axis=-1)


def _mixing_block(x: Array) -> Array:
    """delta_ij x_i - x_i x_j of the first n-1 components."""
    z = x[..., :-1]
    return z[..., None] * (np.eye(z.shape[-1]) - z[..., None, :])


def _interior(x: ArrayLike) -> Array:
    x = mole_fractions("x", x)
    if not (x > 0).all():
        where = [int(i) for i in np.argwhere(~(x > 0))[0]]
        raise InputError(f"x{where} = 0: pair coefficients of an absent component cannot be recovered")
    return x


def onsager_matrix(x: ArrayLike, D: ArrayLike, c_t: ArrayLike) -> Array:
    """Onsager coefficients L of molar fluxes against the molar-average velocity, J_i = -(1/RT) sum_j L_ij grad mu_j.

    x mole fractions (..., n); D Maxwell-Stefan pair diffusivities, m2/s, (..., n, n); c_t mol/m3, (...). Returns
    mol/(m s), (..., n, n): symmetric (reciprocal relations), rows sum to zero, positive semi-definite; binary:
    L_11 = c_t x_1 x_2 D_12. Raises InputError. Source: Onsager (1931); Taylor and Krishna (1993) sec. 2.3 (from
    memory).
    """
    x = mole_fractions("x", x)
    c_t = positive_array("c_t", c_t)
    R = resistance_matrix(x, D)
    batch_shape(x_D=R.shape[:-2], c_t=c_t.shape)
    L = _extend(solve(R, _mixing_block(x))) * c_t[..., None, None]
    return 0.5 * (L + np.swapaxes(L, -1, -2))             # the two differ by rounding


def _checked_onsager(L: ArrayLike, n: int) -> Array:
    """L after a check of reciprocity, row sums and sign."""
    L = finite_array("L", L)
    if L.shape[-2:] != (n, n):
        raise InputError(f"L: expected shape (..., {n}, {n}), got {L.shape}")
    limit = RECIPROCITY_TOLERANCE * np.abs(L).max((-1, -2))
    _refuse("L", np.abs(L - np.swapaxes(L, -1, -2)).max((-1, -2)) > limit, "not symmetric (reciprocal relations)")
    _refuse("L", np.abs(L.sum(-1)).max(-1) > limit, "rows do not sum to zero")
    eigenvalues = np.linalg.eigvalsh(L)
    _refuse("L", eigenvalues[..., 0] < -limit, "not positive semi-definite")
    _refuse("L", eigenvalues[..., 1:].min(-1, initial=np.inf) <= 0, "a mixture that does not diffuse: singular beyond "
            "its zero row sums")
    return L


def _refuse(name: str, bad: NDArray[np.bool_], why: str) -> None:
    if np.any(bad):
        where = [int(i) for i in np.argwhere(bad)[0]]
        raise InputError(f"{name}{where if where else ''}: {why}")


def diffusivities_from_onsager(x: ArrayLike, L: ArrayLike, c_t: ArrayLike) -> Array:
    """Maxwell-Stefan pair diffusivities, m2/s, (..., n, n), diagonal zero, of given Onsager coefficients.

    The inverse of `onsager_matrix`; every x_i must be positive. Raises InputError where L breaks the reciprocal
    relations, its rows do not sum to zero, or it is not positive semi-definite.
    """
    x = _interior(x)
    L = _checked_onsager(L, x.shape[-1])
    c_t = positive_array("c_t", c_t)
    B = solve(np.swapaxes(L[..., :-1, :-1], -1, -2), np.swapaxes(_mixing_block(x), -1, -2))
    return _pairs(x, np.swapaxes(B, -1, -2) * c_t[..., None, None])


def diffusivities_from_fick(x: ArrayLike, fick: ArrayLike, gamma: ArrayLike | None = None) -> Array:
    """Maxwell-Stefan pair diffusivities, m2/s, (..., n, n), diagonal zero, of a given Fick matrix.

    The inverse of `fick_matrix`; every x_i must be positive. [D] has (n-1)^2 entries and there are n(n-1)/2 pairs:
    raises InputError where [Gamma][D]^-1 belongs to no symmetric set of pairs (reciprocal relations broken), or where
    diffusion would consume entropy (an eigenvalue of [Gamma][D]^-1 that is not positive).
    """
    x = _interior(x)
    n = x.shape[-1]
    fick = finite_array("fick", fick)
    if fick.shape[-2:] != (n - 1, n - 1):
        raise InputError(f"fick: expected shape (..., {n - 1}, {n - 1}), got {fick.shape}")
    gamma = _gamma(gamma, n)
    batch_shape(x=x.shape[:-1], fick=fick.shape[:-2], gamma=gamma.shape[:-2])
    singular = np.linalg.svd(fick, compute_uv=False)
    _refuse("fick", singular[..., -1] <= 1e-14 * singular[..., 0], "a singular matrix, a mixture that does not diffuse")
    B = np.swapaxes(solve(np.swapaxes(fick, -1, -2), np.swapaxes(gamma, -1, -2)), -1, -2)
    pairs = _pairs(x, B)
    _refuse("fick", np.linalg.eigvals(B).real.min(-1) <= 0, "diffusion would consume entropy: an eigenvalue of "
            "[Gamma][D]^-1 is not positive")
    return pairs


def _pairs(x: Array, B: Array) -> Array:
    """Pair diffusivities from [B]: row i gives 1/D_in = B_ii + sum_k x_k B_ik/x_i and 1/D_ij = 1/D_in - B_ij/x_i."""
    n = x.shape[-1]
    z = x[..., :-1]
    off = B * ~np.eye(n - 1, dtype=bool)
    with_last = np.einsum("...ii->...i", B) + (off @ z[..., None])[..., 0] / z
    inverse = np.zeros((*B.shape[:-2], n, n))
    inverse[..., :-1, :-1] = (with_last[..., None] - off / z[..., None]) * ~np.eye(n - 1, dtype=bool)
    inverse[..., :-1, -1] = with_last
    inverse[..., -1, :-1] = with_last
    largest = np.abs(inverse).max((-1, -2))
    _refuse("x, matrix", np.abs(inverse - np.swapaxes(inverse, -1, -2)).max((-1, -2)) > RECIPROCITY_TOLERANCE * largest,
            "the two rows of a pair give different diffusivities (reciprocal relations broken)")
    off_diagonal = ~np.eye(n, dtype=bool)
    _refuse("x, matrix", (inverse[..., off_diagonal] == 0).any(-1), "a pair has no friction")
    inverse = 0.5 * (inverse + np.swapaxes(inverse, -1, -2))
    return np.where(off_diagonal, 1.0 / np.where(off_diagonal, inverse, 1.0), 0.0)


def fick_from_onsager(x: ArrayLike, L: ArrayLike, c_t: ArrayLike, gamma: ArrayLike | None = None) -> Array:
    """Fick matrix, m2/s, (..., n-1, n-1), of given Onsager coefficients; see `diffusivities_from_onsager`."""
    return fick_matrix(x, _filled(diffusivities_from_onsager(x, L, c_t)), gamma)


def onsager_from_fick(x: ArrayLike, fick: ArrayLike, c_t: ArrayLike, gamma: ArrayLike | None = None) -> Array:
    """Onsager coefficients, mol/(m s), (..., n, n), of a given Fick matrix; see `diffusivities_from_fick`."""
    return onsager_matrix(x, _filled(diffusivities_from_fick(x, fick, gamma)), c_t)


def _filled(D: Array) -> Array:
    return np.where(np.eye(D.shape[-1], dtype=bool), 1.0, D)


# --- driving forces and fluxes ----------------------------------------------------------------------------------------

@dataclass(frozen=True)
class DrivingForce:
    """The generalised driving force d_i, 1/m, (..., n), and its three parts; each sums to zero over the components."""

    chemical: Array
    pressure: Array
    body: Array

    @property
    def total(self) -> Array:
        """d_i = chemical + pressure + body."""
        return self.chemical + self.pressure + self.body


def driving_force(x: ArrayLike, T: ArrayLike, c_t: ArrayLike, *, grad_x: ArrayLike | None = None,
                  gamma: ArrayLike | None = None, grad_mu: ArrayLike | None = None, grad_P: ArrayLike = 0.0,
                  partial_molar_volume: ArrayLike | None = None, molar_mass: ArrayLike | None = None,
                  body_force: ArrayLike | None = None) -> DrivingForce:
    """d_i = x_i/(RT) grad_TP mu_i + (phi_i - omega_i) grad P/(c_t RT) - rho_i (g_i - sum_k omega_k g_k)/(c_t RT).

    phi volume fractions, omega mass fractions, rho_i = c_i M_i. One direction of space.

    Parameters
    ----------
    x : mole fractions, (..., n). T : K, (...). c_t : mol/m3, (...).
    grad_x : mole-fraction gradients, 1/m, (..., n), summing to zero; with `gamma` (..., n-1, n-1), identity if left
        out, the chemical part is Gamma grad x.
    grad_mu : instead of `grad_x`, chemical-potential gradients at constant T and P, J/(mol m), (..., n); they must
        obey Gibbs and Duhem, sum x_i grad mu_i = 0.
    grad_P : Pa/m, (...). Needs `partial_molar_volume` (m3/mol, (..., n)) and `molar_mass` (kg/mol, (..., n)).
    body_force : per unit mass, N/kg, (..., n) (equal entries, such as gravity, give no part). Needs `molar_mass`.

    Raises InputError. Source: Bird, Stewart and Lightfoot (2002) eq. 24.1-8 (from memory).
    """
    x = mole_fractions("x", x)
    n = x.shape[-1]
    RT = GAS_CONSTANT * positive_array("T", T)[..., None]
    c = positive_array("c_t", c_t)[..., None]
    if (grad_x is None) == (grad_mu is None):
        raise InputError("grad_x, grad_mu: give one of the two")
    shapes = {"x": x.shape[:-1], "T": RT.shape[:-1], "c_t": c.shape[:-1]}

    def component(name: str, value: ArrayLike, one_for_all: bool = True) -> Array:
        array = component_array(name, value, n, one_for_all=one_for_all)
        shapes[name] = array.shape[:-1]
        batch_shape(**shapes)
        return array

    if grad_x is not None:
        slope = component("grad_x", grad_x, False)
        _refuse("grad_x", np.abs(slope.sum(-1)) > 1e-9 * np.abs(slope).max(-1), "gradients do not sum to zero")
        factor = _gamma(gamma, n)
        batch_shape(**shapes, gamma=factor.shape[:-2])
        part = (factor @ slope[..., :-1, None])[..., 0]
        chemical = np.concatenate((part, -part.sum(-1, keepdims=True)), axis=-1)
    else:
        if gamma is not None:
            raise InputError("gamma: belongs to grad_x, not to grad_mu")
        terms = x * component("grad_mu", grad_mu if grad_mu is not None else 0.0, False) / RT
        _refuse("grad_mu", np.abs(terms.sum(-1)) > 1e-9 * np.abs(terms).max(-1),
                "sum x_i grad mu_i is not zero (Gibbs and Duhem)")
        chemical = terms
    pressure = body = np.zeros_like(chemical)
    gradient = finite_array("grad_P", grad_P)[..., None]
    shapes["grad_P"] = gradient.shape[:-1]
    batch_shape(**shapes)
    if molar_mass is not None:
        mass = x * positive_array("molar_mass", component("molar_mass", molar_mass))
        omega = mass / mass.sum(-1, keepdims=True)
    elif gradient.any() or body_force is not None:
        raise InputError("molar_mass: needed for the pressure and body-force parts")
    if gradient.any():
        if partial_molar_volume is None:
            raise InputError("partial_molar_volume: needed for the pressure part")
        volume = x * component("partial_molar_volume", partial_molar_volume)
        total = volume.sum(-1, keepdims=True)
        _refuse("partial_molar_volume", total[..., 0] <= 0, "the volume of the mixture is not above zero")
        pressure = (volume / total - omega) * gradient / (c * RT)
    if body_force is not None:
        force = component("body_force", body_force)
        body = -mass * (force - (omega * force).sum(-1, keepdims=True)) / RT
    return DrivingForce(*np.broadcast_arrays(chemical, pressure, body))


def friction(x: ArrayLike, N: ArrayLike, D: ArrayLike, c_t: ArrayLike) -> Array:
    """d_i = sum_j (x_i N_j - x_j N_i)/(c_t D_ij), 1/m, (..., n): the driving forces that balance given fluxes.

    N mol/(m2 s), (..., n), against any one common velocity; D m2/s, (..., n, n). Raises InputError.
    """
    x = mole_fractions("x", x)
    N = component_array("N", N, x.shape[-1])
    K = _checked_resistances("D", D, c_t, x.shape[-1], x=x.shape[:-1], N=N.shape[:-1])
    return (film_matrix(N, K) @ x[..., None])[..., 0]


def relative_fluxes(N: ArrayLike, x: ArrayLike, weight: ArrayLike) -> Array:
    """Molar fluxes against another velocity, N_i - x_i sum_k (a_k/x_k) N_k, a_k = w_k x_k/sum w x; (..., n).

    weight w_k: 1 for the molar-average velocity, molar masses for the mass-average, partial molar volumes for the
    volume-average, one at a single component for that component's own velocity. sum_k w_k J_k = 0. Raises InputError.
    """
    x = mole_fractions("x", x)
    N = component_array("N", N, x.shape[-1])
    w = component_array("weight", weight, x.shape[-1], one_for_all=True)
    batch_shape(N=N.shape[:-1], x=x.shape[:-1], weight=w.shape[:-1])
    mean = (w * x).sum(-1, keepdims=True)
    _refuse("weight", mean[..., 0] == 0, "sum of weight times x is zero: no velocity is defined")
    relative: Array = N - x * (w * N).sum(-1, keepdims=True) / mean
    return relative


# --- effective diffusivities ------------------------------------------------------------------------------------------

def effective_diffusivity_wilke(x: ArrayLike, D: ArrayLike) -> Array:
    """D_i,eff = (1 - x_i)/sum_{j != i} x_j/D_ij, m2/s, (..., n): i alone diffuses through the others at rest.

    x mole fractions (..., n); D m2/s, (..., n, n). For a pure component the value is that of equal amounts of the
    others. Raises InputError. Source: Wilke (1950).
    """
    x = mole_fractions("x", x)
    return 1.0 / wilke_resistance(x, _checked_resistances("D", D, 1.0, x.shape[-1], x=x.shape[:-1]))


def wilke_resistance(x: Array, K: Array) -> Array:
    """sum_{j != i} x_j K_ij/(1 - x_i), (..., n), the kernel of Wilke's rule (1 - x_i summed, not subtracted)."""
    n = x.shape[-1]
    others = np.maximum(x, 1e-300)                        # a pure component: equal weights for the rest
    return (K @ others[..., None])[..., 0] / ((1.0 - np.eye(n)) @ others[..., None])[..., 0]


def effective_diffusivity_stefan(x: ArrayLike, N: ArrayLike, D: ArrayLike) -> Array:
    """D_i,eff = (N_i - x_i N_t)/sum_j (x_j N_i - x_i N_j)/D_ij, m2/s, (..., n), for given flux ratios.

    It makes J_i = -c_t D_i,eff grad x_i exact at the point; it can be negative, zero or infinite (an InputError) in
    mixtures of three or more. x (..., n); N mol/(m2 s), (..., n), only its direction matters; D m2/s, (..., n, n).
    Source: Stefan (1871), as in Taylor and Krishna (1993) sec. 6.1 (from memory).
    """
    x = mole_fractions("x", x)
    N = component_array("N", N, x.shape[-1])
    friction_terms = -friction(x, N, D, 1.0)
    K = resistances(pair_matrix("D", D, x.shape[-1]), 1.0)
    size = np.abs(N) * (K @ x[..., None])[..., 0] + x * (K @ np.abs(N)[..., None])[..., 0]
    _refuse("N", np.abs(friction_terms) <= 1e-14 * size,
            "no gradient goes with these fluxes: the effective diffusivity is infinite")
    D_effective: Array = (N - x * N.sum(-1, keepdims=True)) / friction_terms
    return D_effective


def effective_diffusivity_dilute(D: ArrayLike, solvent: int) -> Array:
    """D_i,eff = D_is, m2/s, (..., n): every component dilute in one solvent; NaN-free, the solvent's own entry is zero.

    D m2/s, (..., n, n); solvent: index of the solvent. The limit of Wilke's rule. Raises InputError.
    """
    try:
        n = np.shape(D)[-1]
    except (ValueError, IndexError) as error:
        raise InputError(f"D: expected shape (..., n, n), got {D!r}") from error
    D = pair_matrix("D", D, n)
    solvent = component_index("solvent", solvent, n)
    column: Array = D[..., solvent]
    return np.where(np.arange(n) == solvent % n, 0.0, column)


# --- second law -------------------------------------------------------------------------------------------------------

def dissipation(x: ArrayLike, N: ArrayLike, kappa: ArrayLike, c_t: ArrayLike) -> Array:
    """Entropy production at a point of a film, W/(m2 K) per unit of eta, (...).

    R/2 sum_ij K_ij (x_j N_i - x_i N_j)^2/(x_i x_j), K_ij = 1/(c_t kappa_ij). Never negative; infinite where an absent
    component moves. Raises InputError.
    """
    x = mole_fractions("x", x)
    N = component_array("N", N, x.shape[-1])
    K = _checked_resistances("kappa", kappa, c_t, x.shape[-1], x=x.shape[:-1], N=N.shape[:-1])
    return pair_dissipation(x, N, K)


def pair_dissipation(x: Array, N: Array, K: Array) -> Array:
    """The kernel of `dissipation`."""
    relative = x[..., None, :] * N[..., :, None] - x[..., :, None] * N[..., None, :]
    both = x[..., None, :] * x[..., :, None]
    terms = np.where(relative == 0, 0.0, K * relative**2 / np.where(both > 0, both, 1.0))
    terms = np.where((both > 0) | (relative == 0), terms, np.where(K > 0, np.inf, 0.0))
    result: Array = 0.5 * GAS_CONSTANT * terms.sum((-1, -2))
    return result


def entropy_production(N: ArrayLike, x0: ArrayLike, xd: ArrayLike, *, ln_gamma0: ArrayLike = 0.0,
                       ln_gammad: ArrayLike = 0.0) -> Array:
    """Entropy production of an isothermal film, R sum_i N_i ln(a_i,0/a_i,delta), W/(m2 K), (...).

    N mol/(m2 s) from face 0 to face delta, (..., n); x0, xd mole fractions at the faces; ln_gamma0, ln_gammad
    logarithms of the activity coefficients there. Equal to the integral of `dissipation` over the film when N solves
    the film equations; then never negative for a stable mixture, zero at equilibrium. Infinite where a component that
    moves is absent at one face. Raises InputError. Source: Bird, Stewart and Lightfoot (2002) sec. 24.1 (from memory).
    """
    x0 = mole_fractions("x0", x0)
    n = x0.shape[-1]
    xd, N = mole_fractions("xd", xd, n), component_array("N", N, n)
    at0 = component_array("ln_gamma0", ln_gamma0, n, one_for_all=True)
    atd = component_array("ln_gammad", ln_gammad, n, one_for_all=True)
    batch_shape(N=N.shape[:-1], x0=x0.shape[:-1], xd=xd.shape[:-1], ln_gamma0=at0.shape[:-1], ln_gammad=atd.shape[:-1])
    return face_entropy(N, x0, xd, at0 - atd)


def face_entropy(N: Array, x0: Array, xd: Array, ln_gamma_difference: Array | float = 0.0) -> Array:
    """The kernel of `entropy_production`."""
    present = (x0 > 0) & (xd > 0)
    ratio = np.log(np.where(present, x0, 1.0) / np.where(present, xd, 1.0)) + ln_gamma_difference
    vanishes = ((x0 > 0) != (xd > 0)) & (np.abs(N) > 1e-12 * np.abs(N).max(-1, keepdims=True))
    total: Array = GAS_CONSTANT * np.where(present, N * ratio, 0.0).sum(-1)
    return np.where(vanishes.any(-1), np.inf, total)
