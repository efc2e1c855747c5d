"""Residual and Jacobian blocks of the interface: derivatives, masks, energy at both faces."""
from __future__ import annotations

from dataclasses import replace

import mpmath
import numpy as np
import pytest
from interface_models import DifferentiatedMargules, Margules, constant_volatility, margules, random_bulks

from ratebased.interface import interface_blocks, interface_start
from ratebased.interface.energy import bernoulli, bernoulli_slope

P = 1.0e5


def models(rng):
    return {
        "ideal": constant_volatility(rng, 4),
        "ideal, gas last": constant_volatility(rng, 4, condensable=[True, True, True, False]),
        "ideal, gas and salt": constant_volatility(rng, 4, condensable=[True, False, True, True],
                                                   volatile=[True, True, True, False]),
        "margules": margules(rng, 4, heat=150.0, cp_slope=4e-3),
        "margules, gas first": margules(rng, 4, heat=150.0, condensable=[False, True, True, True]),
        "margules, gas last": margules(rng, 4, condensable=[True, True, True, False]),
        "real vapor": margules(rng, 3, heat=100.0, virial=1e-3),
        "differences": margules(rng, 3, heat=100.0, virial=1e-3, model=Margules),
    }


NAMES = list(models(np.random.default_rng(0)))


def state(rng, vapor, liquid, model):
    """A point off the solution, on the planes sum x_I = 1 where the last fraction is eliminated."""
    z = interface_start(vapor, liquid, model, P)
    n = len(model.names)
    z[..., :n] = rng.normal(size=z[..., :n].shape) * 0.3 * (model.condensable & model.volatile)
    u = z[..., n:2 * n] * np.exp(0.3 * rng.normal(size=z[..., :n].shape))
    inside = np.where(model.condensable, u, 0.0)
    z[..., n:2 * n] = np.where(model.condensable, inside / inside.sum(-1, keepdims=True), u)
    z[..., 2 * n] += rng.normal(size=z.shape[:-1]) * 3
    return z


def simplex_directions(n):
    return [np.eye(n)[j] - np.eye(n)[n - 1] for j in range(n - 1)]


@pytest.mark.parametrize("name", NAMES)
def test_derivatives_by_unknowns(name):
    rng = np.random.default_rng(3)
    model = models(rng)[name]
    n = len(model.names)
    vapor, liquid = random_bulks(rng, (3,), model)
    z = state(rng, vapor, liquid, model)
    base = interface_blocks(vapor, liquid, model, P, z)
    for j in range(2 * n + 1):
        step = np.zeros(2 * n + 1)
        step[j] = 3e-5 if j < 2 * n else 3e-3
        up = interface_blocks(vapor, liquid, model, P, z + step, bulk_derivatives=False)
        down = interface_blocks(vapor, liquid, model, P, z - step, bulk_derivatives=False)
        for value, slope in (("residual", "dz"), ("E_V", "dE_V_dz"), ("E_L", "dE_L_dz")):
            central = (getattr(up, value) - getattr(down, value)) / (2 * step[j])
            analytic = getattr(base, slope)[..., j]
            assert np.abs(central - analytic).max() < 2e-7 * (1 + np.abs(analytic).max()), (value, j)


@pytest.mark.parametrize("name", NAMES)
def test_derivatives_by_bulks(name):
    rng = np.random.default_rng(4)
    model = models(rng)[name]
    n = len(model.names)
    vapor, liquid = random_bulks(rng, (3,), model)
    z = state(rng, vapor, liquid, model)
    base = interface_blocks(vapor, liquid, model, P, z)
    scale = interface_blocks(vapor, liquid, model, P, z)
    energy_scale = (scale.E_V - scale.E_L) / scale.residual[..., -1]

    def residual(vapor, liquid):
        b = interface_blocks(vapor, liquid, model, P, z, bulk_derivatives=False)
        r = b.residual.copy()
        r[..., -1] = (b.E_V - b.E_L) / energy_scale       # the scale is no part of the derivative
        return {"dw": r, "dE_V_dw": b.E_V, "dE_L_dw": b.E_L}

    def compare(up, down, h, column):
        for key in up:
            central = (up[key] - down[key]) / (2 * h)
            analytic = column(getattr(base, key))
            assert np.abs(central - analytic).max() < 2e-7 * (1 + np.abs(analytic).max()), key

    h = 1e-5
    for phase, first, mask in (("vapor", 0, model.volatile), ("liquid", n + 1, model.condensable)):
        present = np.flatnonzero(mask)
        k = present[-1]
        for j in present[:-1]:
            d = h * (np.eye(n)[j] - np.eye(n)[k])
            moved = [replace(b, composition=b.composition + s * d) for s in (1, -1)
                     for b in ((vapor,) if phase == "vapor" else (liquid,))]
            both = [residual(b, liquid) if phase == "vapor" else residual(vapor, b) for b in moved]
            compare(*both, h, lambda v, f=first, j=j, k=k: v[..., f + j] - v[..., f + k])
        t = 1e-3
        bulk = vapor if phase == "vapor" else liquid
        moved = [replace(bulk, temperature=bulk.temperature + s * t) for s in (1, -1)]
        both = [residual(b, liquid) if phase == "vapor" else residual(vapor, b) for b in moved]
        compare(*both, t, lambda v, f=first: v[..., f + n])


def test_energy_is_one_along_a_film():
    """Conduction + enthalpy at the bulk face equals the same at the interface, for heat capacities that vary with T."""
    rng = np.random.default_rng(5)
    model = margules(rng, 3, heat=200.0, cp_slope=6e-3)
    vapor, liquid = random_bulks(rng, (50,), model)
    z = state(rng, vapor, liquid, model)
    b = interface_blocks(vapor, liquid, model, P, z)
    N, T = z[..., :3], z[..., 6]
    E_V = b.q_vapor_interface + (N * model.vapor_enthalpy(T, P, vapor.composition)).sum(-1)
    E_L = b.q_liquid_interface + (N * model.liquid_enthalpy(T, P, liquid.composition)).sum(-1)
    assert np.abs(E_V - b.E_V).max() < 1e-12 * np.abs(N * 4e4).sum(-1).max()
    assert np.abs(E_L - b.E_L).max() < 1e-12 * np.abs(N * 4e4).sum(-1).max()


def test_batch_shapes_agree():
    rng = np.random.default_rng(6)
    model = margules(rng, 3, heat=100.0)
    vapor, liquid = random_bulks(rng, (2, 3), model)
    z = state(rng, vapor, liquid, model)
    whole = interface_blocks(vapor, liquid, model, P, z)
    one = [replace(b, composition=b.composition[1, 2], temperature=b.temperature[1, 2], kappa=b.kappa[1, 2],
                   heat_transfer=b.heat_transfer[1, 2], molar_density=b.molar_density[1, 2]) for b in (vapor, liquid)]
    single = interface_blocks(*one, model, P, z[1, 2])
    for field in ("E_V", "dE_L_dz", "size", "y_I", "K"):
        np.testing.assert_allclose(getattr(whole, field)[1, 2], getattr(single, field), rtol=1e-12, atol=1e-12)


def test_bernoulli():
    z = np.array([-800.0, -30.0, -1.0, -0.02, -1e-3, -1e-5, 0.0, 1e-5, 9.9e-3, 1.01e-2, 1.0, 30.0, 800.0])
    mpmath.mp.dps = 60
    for v, b, s in zip(z, bernoulli(z), bernoulli_slope(z)):
        w = mpmath.mpf(float(v)) if v else mpmath.mpf(10) ** -15
        e = mpmath.exp(w)
        assert abs(b - w / (e - 1)) < 1e-14 * (1 + abs(v))
        assert abs(s - (e - 1 - w * e) / (e - 1) ** 2) < 1e-12


def test_models_agree_on_derivatives():
    """The differenced model and the analytic one give one Jacobian."""
    rng = np.random.default_rng(7)
    analytic = margules(rng, 3, heat=100.0, virial=1e-3)
    differenced = Margules(**{f: getattr(analytic, f) for f in analytic.__dataclass_fields__})
    assert isinstance(analytic, DifferentiatedMargules)
    vapor, liquid = random_bulks(rng, (4,), analytic)
    z = state(rng, vapor, liquid, analytic)
    one, two = (interface_blocks(vapor, liquid, m, P, z) for m in (analytic, differenced))
    np.testing.assert_allclose(one.dz, two.dz, rtol=1e-7, atol=1e-7)
