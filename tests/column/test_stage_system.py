"""The public stage equations: derivatives against differences, and a column of them solved by a general root-finder."""
from __future__ import annotations

import runpy
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from columns import absorber, absorber_mixture, absorber_trays, ternary, trays

from ratebased.column import Entering, StageUnknowns, solve_ratebased, stage_residuals
from ratebased.equipment import contact_state


def stage(theta: float, heat: float | None = None) -> dict[str, object]:
    """Two stages of the ternary column away from a solution."""
    model = ternary()
    rng = np.random.default_rng(3)
    shape = (2, 3)
    v, l = 30 + 20 * rng.random(shape), 25 + 20 * rng.random(shape)
    T_V, T_L, P = np.array([352.0, 358.0]), np.array([349.0, 351.0]), np.array([1.01e5, 1.02e5])
    y, x = v / v.sum(1, keepdims=True), l / l.sum(1, keepdims=True)
    x_I = x * (1 + 0.1 * rng.random(shape))
    unknowns = StageUnknowns(v, T_V, l, T_L, 0.1 * rng.standard_normal(shape), x_I / x_I.sum(1, keepdims=True),
                             np.array([350.0, 354.0]))
    state = contact_state(model, v.sum(1), l.sum(1), T_V, T_L, P, y, x)
    vapor = Entering(v + 2.0 * rng.standard_normal(shape), T_V + 3.0, 5e5 + 1e4 * rng.random(2))
    liquid = Entering(l + 2.0 * rng.standard_normal(shape), T_L - 2.0, -1e4 * rng.random(2))
    return {"state": unknowns, "vapor_in": vapor, "liquid_in": liquid, "properties": model, "P": P,
            "coefficients": trays().transfer(state), "c_vapor": np.full(2, 35.0), "c_liquid": np.full(2, 9e3),
            "duty": np.array([1e3, -2e3]), "vapor_weight": np.full(2, theta), "liquid_weight": np.full(2, theta),
            "vapor_temperature_weight": None if heat is None else np.full(2, heat), "flow_scale": 100.0,
            "energy_scale": 3e6}


@pytest.mark.parametrize("theta, heat", [(0.0, None), (0.5, None), (0.3, 0.1), (0.0, 0.4)])
def test_jacobian_blocks(theta: float, heat: float | None) -> None:
    """Central differences of every unknown and of what enters."""
    arguments = stage(theta, heat)
    blocks = stage_residuals(**arguments)  # type: ignore[arg-type]
    state: StageUnknowns = arguments["state"]  # type: ignore[assignment]
    packed = state.packed()

    def difference(change: object, step: float) -> np.ndarray:
        assert callable(change)
        up, down = (stage_residuals(**{**arguments, **change(s)}).residual for s in (step,
                                                                                     -step))  # type: ignore[arg-type]
        return (up - down) / (2 * step)

    own, M = blocks.by_own, packed.shape[-1]
    for k in range(M):
        step = 1e-5 * max(1.0, abs(packed[0, k]))
        found = difference(lambda s, k=k: {"state": StageUnknowns.unpacked(packed + s * np.eye(M)[k])}, step)
        rows = slice(0, M - 1) if k in (3, 7) else slice(None)     # the last row's scale follows T_V and T_L
        np.testing.assert_allclose(own[..., rows, k], found[..., rows], atol=2e-6 * max(1.0, np.abs(found).max()))
    for name, block in (("vapor_in", blocks.by_vapor_in), ("liquid_in", blocks.by_liquid_in)):
        stream: Entering = arguments[name]  # type: ignore[assignment]
        for k in range(3):
            found = difference(lambda s, k=k, name=name, stream=stream: {
                name: replace(stream, flows=stream.flows + s * np.eye(3)[k])}, 1e-4)
            np.testing.assert_allclose(block[..., k], found, atol=1e-7)
        for k, part in ((3, "temperature"), (4, "enthalpy")):
            found = difference(lambda s, name=name, stream=stream, part=part: {
                name: replace(stream, **{part: getattr(stream, part) + s})}, 1e-2)
            np.testing.assert_allclose(block[..., :-1, k], found[..., :-1], atol=1e-7)


def test_a_solved_column_leaves_no_residual() -> None:
    profile = solve_ratebased(absorber(), absorber_mixture(), absorber_trays())
    model = absorber_mixture()
    r = profile.contact
    v, l = profile.V[:, None] * profile.y, profile.L[:, None] * profile.x
    u = np.where(model.condensable, r.x_I, r.y_I)
    state = StageUnknowns(v, profile.T_V, l, profile.T_L, r.N, u, r.T_I)
    feeds = profile.feeds
    HV, HL = (v * model.vapor_enthalpy(profile.T_V, profile.P, profile.y)).sum(1), \
        (l * model.liquid_enthalpy(profile.T_L, profile.P, profile.x)).sum(1)
    hv, hl = feeds.vapor_enthalpy.copy(), feeds.liquid_enthalpy.copy()
    hv[:-1] += HV[1:]
    hl[1:] += HL[:-1]
    contact = contact_state(model, profile.V, profile.L, profile.T_V, profile.T_L, profile.P, profile.y, profile.x)
    blocks = stage_residuals(state, Entering(profile.entering_vapor(), profile.T_V, hv),
                             Entering(profile.entering_liquid(), profile.T_L, hl), model, profile.P,
                             absorber_trays().transfer(contact), contact.vapor.molar_density,
                             contact.liquid.molar_density, flow_scale=160.0, energy_scale=160.0 * 3e4)
    assert np.abs(blocks.residual).max() < 1e-9


def test_packing_and_unpacking() -> None:
    state: StageUnknowns = stage(0.0)["state"]  # type: ignore[assignment]
    again = StageUnknowns.unpacked(state.packed())
    for name in ("v", "T_V", "l", "T_L", "N", "u", "T_I"):
        np.testing.assert_array_equal(getattr(again, name), getattr(state, name))


def test_example_for_a_column_script_of_ones_own() -> None:
    """The script in examples/ solves an absorber with scipy.optimize.root and finds what `solve_ratebased` finds."""
    script = Path(__file__).parents[2] / "examples" / "own_column_script" / "own_column.py"
    found = runpy.run_path(str(script))
    assert found["solution"].success
    assert found["difference"] < 1e-8
