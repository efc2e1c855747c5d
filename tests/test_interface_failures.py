"""Bad input, failures, warnings and shapes of `interface_flux`."""
from __future__ import annotations

from dataclasses import fields, replace

import numpy as np
import pytest
from interface_models import constant_volatility, margules, random_bulks

from ratebased.errors import (
    ConvergenceError,
    HighFluxWarning,
    InputError,
    PropertyRangeError,
    UnstableMixtureError,
)
from ratebased.interface import (
    Bulk,
    InterfaceStatus,
    interface_flux,
    solutions,
)
from ratebased.properties import ConstantVolatility

P = 1.0e5


# ------------------------------------------------------------------------------------------------------------ failures
@pytest.fixture
def one():
    rng = np.random.default_rng(20)
    model = constant_volatility(rng, 3, condensable=[True, True, False])
    return model, *random_bulks(rng, (), model)


def test_a_gas_in_the_liquid_is_an_error(one):
    model, vapor, liquid = one
    with pytest.raises(InputError, match=r"liquid.composition\[2\] = 0.1: c is not condensable"):
        interface_flux(vapor, replace(liquid, composition=np.array([0.4, 0.5, 0.1])), model, P)


def test_bad_input_names_argument_and_entry(one):
    model, vapor, liquid = one
    with pytest.raises(InputError, match="liquid.heat_transfer"):
        interface_flux(vapor, replace(liquid, heat_transfer=0.0), model, P)
    with pytest.raises(InputError, match=r"vapor.composition"):
        interface_flux(replace(vapor, composition=np.array([0.5, 0.2, 0.2])), liquid, model, P)
    with pytest.raises(InputError, match="P = -1"):
        interface_flux(vapor, liquid, model, -1.0)
    with pytest.raises(InputError, match="start: expected a result of batch shape"):
        first = interface_flux(vapor, liquid, model, P)
        interface_flux(replace(vapor, temperature=np.full(3, 350.0)), liquid, model, P, start=first)


@pytest.mark.parametrize("change, words", [
    (dict(vapor=np.ones(3)), "vapor: expected a `Bulk`"),
    (dict(liquid=None), "liquid: expected a `Bulk`"),
    (dict(properties=None), "properties: expected a property model, got None"),
    (dict(film="effective"), "film: expected a film method.*got 'effective'"),
    (dict(start=3), "start: expected an `InterfaceFlux`, got 3"),
    (dict(tolerance=0.0), "tolerance = 0.0: expected a number above zero"),
    (dict(tolerance=np.nan), "tolerance = nan"),
    (dict(P=[1e5, 1e5, 1e5, 1e5]), r"do not broadcast: P \(4,\), vapor.temperature \(3,\)"),
])
def test_things_of_another_kind(one, change, words):
    model, vapor, liquid = one
    vapor = replace(vapor, temperature=np.full(3, 350.0))
    arguments = dict(vapor=vapor, liquid=liquid, properties=model, P=P) | change
    with pytest.raises(InputError, match=words):
        interface_flux(**arguments)


def test_solutions_takes_one_interface(one):
    model, vapor, liquid = one
    with pytest.raises(InputError, match="takes one interface"):
        solutions(replace(vapor, temperature=np.full(3, 350.0)), liquid, model, P)
    with pytest.raises(InputError, match="starts = 1"):
        solutions(vapor, liquid, model, P, starts=1)
    with pytest.raises(InputError, match="starts = 2.5"):
        solutions(vapor, liquid, model, P, starts=2.5)
    with pytest.raises(InputError, match="tolerance = -1"):
        solutions(vapor, liquid, model, P, tolerance=-1.0)
    every = solutions(vapor, liquid, model, P, starts=60)
    r = interface_flux(vapor, liquid, model, P)
    assert every.N.shape == (1, 3)
    np.testing.assert_allclose(every.N[0], r.N, rtol=1e-9)


def test_one_component_is_an_error():
    model = ConstantVolatility(("a",), [1.0], 3e4, a=23.0, b=4025.0)
    one = np.ones((1, 1))
    with pytest.raises(InputError, match="two components or more"):
        interface_flux(Bulk(np.ones(1), 350.0, one, 50.0, 35.0), Bulk(np.ones(1), 350.0, one, 1e3, 1e4), model, P)


def test_nothing_that_can_pass_is_an_error():
    model = ConstantVolatility(("gas", "salt"), [1.0, 1.0], 3e4, a=23.0, b=4025.0, condensable=[False, True],
                               volatile=[True, False])
    with pytest.raises(InputError, match="no component is both condensable and volatile"):
        interface_flux(Bulk(np.array([1.0, 0.0]), 350.0, np.array(0.02), 50.0, 35.0),
                       Bulk(np.array([0.0, 1.0]), 350.0, np.array(1e-4), 1e3, 1e4), model, P)


@pytest.mark.parametrize("x", [0.5, 0.2])
def test_unstable_liquid_is_an_error(x):
    """|A| = 4 in a symmetric binary: x(1 - x) > 1/8, inside the spinodal from 0.146 to 0.854."""
    rng = np.random.default_rng(21)
    model = replace(margules(rng, 2), interaction=np.array([[0.0, 4.0], [4.0, 0.0]]), alpha=np.array([1.0, 1.0]))
    vapor, liquid = random_bulks(rng, (), model)
    liquid = replace(liquid, composition=np.array([x, 1.0 - x]))
    with pytest.raises(UnstableMixtureError, match="would split in two"):
        interface_flux(vapor, liquid, model, P)
    r = interface_flux(vapor, liquid, model, P, throw=False)
    assert r.status == InterfaceStatus.UNSTABLE_LIQUID and np.isnan(r.N).all()


def test_temperature_outside_the_property_range(one):
    class Ranged:
        T_range = (300.0, 345.0)

        def __init__(self, model):
            self.model = model

        def __getattr__(self, name):
            return getattr(self.model, name)

    model, vapor, liquid = one
    ranged = Ranged(model)
    with pytest.raises(PropertyRangeError, match="vapor.temperature"):
        interface_flux(replace(vapor, temperature=400.0), replace(liquid, temperature=340.0), ranged, P)
    vapor, liquid = replace(vapor, temperature=350.0), replace(liquid, temperature=350.0)
    free = interface_flux(vapor, liquid, model, P)
    ranged.T_range = (300.0, float(free.T_I) + 30.0)
    inside = interface_flux(vapor, liquid, ranged, P)
    assert inside.T_I == pytest.approx(float(free.T_I), rel=1e-10)
    middle = 0.5 * (350.0 + float(free.T_I))
    assert abs(free.T_I - 350.0) > 1.0
    ranged.T_range = (300.0, middle) if free.T_I > 350.0 else (middle, 400.0)
    with pytest.raises(PropertyRangeError, match="T_I runs out"):
        interface_flux(vapor, liquid, ranged, P)


def test_failed_entries_leave_the_others_alone():
    """One hopeless interface in a batch: NaN and its status there, the others as if alone."""
    rng = np.random.default_rng(22)
    model = margules(rng, 3)
    vapor, liquid = random_bulks(rng, (4,), model)
    bad = replace(model, interaction=np.stack([model.interaction] * 4))
    bad.interaction[2] = 6.0 * (1 - np.eye(3))
    r = interface_flux(vapor, liquid, bad, P, throw=False)
    alone = interface_flux(vapor, liquid, model, P)
    good = [0, 1, 3]
    np.testing.assert_allclose(r.N[good], alone.N[good], rtol=1e-8, atol=1e-12)
    assert r.status[2] > InterfaceStatus.OTHER_BRANCH and np.isnan(r.N[2]).all() and np.isnan(r.T_I[2])
    with pytest.raises((ConvergenceError, UnstableMixtureError)) as caught:
        interface_flux(vapor, liquid, bad, P)
    assert "interface[2]" in str(caught.value)


def test_high_flux_warns():
    model = ConstantVolatility(("a", "b"), [1.2, 1.0], 3.0e4, a=23.0, b=4025.0, vapor_heat_capacity=100.0)
    k = np.array([[0.0, 1.0], [1.0, 0.0]])
    with pytest.warns(HighFluxWarning, match="beyond 30"):
        interface_flux(Bulk(np.array([0.5, 0.5]), 420.0, k, 2.0, 35.0),
                       Bulk(np.array([0.5, 0.5]), 300.0, 0.01 * k, 2e4, 1e4), model, P)


def test_frame_and_shapes():
    rng = np.random.default_rng(23)
    model = constant_volatility(rng, 3)
    vapor, liquid = random_bulks(rng, (2, 3), model)
    r = interface_flux(vapor, liquid, model, P, derivatives=True)
    shapes = {"N": (2, 3, 3), "T_I": (2, 3), "status": (2, 3), "u": (2, 3, 3)}
    assert all(getattr(r, k).shape == s for k, s in shapes.items())
    assert r.derivatives.dN.shape == (2, 3, 3, 8) and r.derivatives.dT_I.shape == (2, 3, 8)
    frame = r.to_frame()
    assert len(frame) == 6 and frame["status"].eq("solved").all()
    assert frame["N_b_mol_m2_s"].iloc[4] == r.N[1, 1, 1]
    single = interface_flux(*(replace(b, **{f.name: np.asarray(getattr(b, f.name))[1, 2] for f in fields(b)})
                              for b in (vapor, liquid)), model, P)
    np.testing.assert_allclose(single.N, r.N[1, 2], rtol=1e-10)
    assert single.T_I.shape == ()
    nothing = interface_flux(*random_bulks(rng, (0,), model), model, P, derivatives=True)
    assert nothing.N.shape == (0, 3) and nothing.derivatives.dN.shape == (0, 3, 8) and len(nothing.to_frame()) == 0


def test_components_absent_from_a_phase():
    """Absent from both phases: no flux. Absent from one: the other feeds it. Two pure phases: still an interface."""
    rng = np.random.default_rng(29)
    model = constant_volatility(rng, 3)
    vapor, liquid = random_bulks(rng, (3,), model)
    vapor = replace(vapor, composition=np.array([[0.0, 0.5, 0.5], [0.0, 0.5, 0.5], [1.0, 0.0, 0.0]]))
    liquid = replace(liquid, composition=np.array([[0.0, 0.3, 0.7], [0.2, 0.3, 0.5], [0.0, 0.0, 1.0]]))
    r = interface_flux(vapor, liquid, model, P, derivatives=True)
    scale = np.abs(r.N).max(-1)
    assert abs(r.N[0, 0]) < 1e-14 * scale[0]
    assert r.N[1, 0] < 0                                      # evaporates
    assert r.N[2, 0] > 0 > r.N[2, 2] and abs(r.N[2, 1]) < 1e-14 * scale[2]
    assert np.isfinite(r.derivatives.dN).all()
    # a component that enters or leaves a film at zero concentration dissipates without limit there
    assert r.vapor_entropy_share[1] == 1.0 and 0 < r.vapor_entropy_share[0] < 1
