"""Nouns are values: they compare by content, stay frozen, and refuse what breaks their invariants."""

import copy
import pickle

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from surfdisp.core import (
    DispersionCurve,
    DispersionImage,
    Ensemble,
    InputError,
    LayeredEarth,
    Picks,
    Profile,
)
from surfdisp.core.noun import axes_of, same, unit_of


def earth(layers=3, vs=200.0):
    return LayeredEarth(
        thickness=[2.0] * (layers - 1) + [np.inf],
        vp=[2.0 * vs] * layers,
        vs=[vs] * layers,
        density=[1800.0] * layers,
    )


def image(**changes):
    values = {
        "frequencies": [5.0, 6.0],
        "velocities": [100.0, 200.0],
        "power": np.zeros((2, 2)),
        "offsets": [2.0, 3.0],
        "spacing": 1.0,
    }
    return DispersionImage(**{**values, **changes})


def accepted_pick(velocity):
    values = {"frequency": [1.0], "velocity": [velocity], "sigma": [1.0], "half_width": [1.0]}
    return Picks(**values, accepted=[True], reason=[""], name="shot 7")


def test_equality_is_by_content_and_nan_equals_nan():
    values = {"frequency": [1.0], "velocity": [np.nan], "sigma": [np.nan], "half_width": [np.nan]}
    first = Picks(**values, accepted=[False], reason=["no ridge"])
    assert first == Picks(**values, accepted=[False], reason=["no ridge"])
    assert first != Picks(**values, accepted=[False], reason=["noise"])
    assert first != "something else"


@given(arrays(np.float64, 4, elements=st.floats(allow_nan=True)))
def test_same_agrees_with_itself_for_any_array_and_notices_one_changed_value(values):
    assert same(values, values.copy())
    changed = values.copy()
    changed[2] = 1.0 if values[2] != 1.0 else 2.0
    assert not same(values, changed)


@pytest.mark.parametrize("copied", [copy.deepcopy, lambda noun: pickle.loads(pickle.dumps(noun))])
def test_copies_of_nested_nouns_are_equal_and_read_only(copied):
    ensemble = Ensemble.of([earth(2), earth(3)], [1.0, 3.0])
    again = copied(ensemble)
    assert again == ensemble
    assert not again.vs.flags.writeable


def test_array_fields_carry_unit_and_axes():
    assert unit_of(LayeredEarth, "thickness") == "m"
    assert axes_of(DispersionImage, "power") == ("frequency", "velocity")


def test_an_earth_of_fewer_layers_is_filled_with_slices_of_its_own_half_space():
    ensemble = Ensemble.of([earth(2, vs=150.0), earth(4, vs=300.0)], [1.0, 3.0])
    assert ensemble.weights.tolist() == [0.25, 0.75]
    assert ensemble.vs[0].tolist() == [150.0] * 4
    assert np.isinf(ensemble.earth(0).thickness[-1])
    assert ensemble.earth(1) == earth(4, vs=300.0)


def test_depth_and_shear_modulus_of_layers():
    stack = LayeredEarth(
        thickness=[2.0, 3.0, np.inf], vp=[400.0, 800.0, 900.0], vs=[200.0, 300.0, 400.0], density=[1800.0] * 3
    )
    assert stack.depth.tolist() == [0.0, 2.0, 5.0]
    assert stack.shear_modulus.tolist() == [1800.0 * 200.0**2, 1800.0 * 300.0**2, 1800.0 * 400.0**2]


@pytest.mark.parametrize(
    ("changes", "demand"),
    [
        ({"thickness": [2.0, 2.0]}, "end with inf"),
        ({"thickness": [np.inf, np.inf]}, "thickness of the layers above"),
        ({"thickness": [-2.0, np.inf]}, "thickness must be positive"),
        ({"vs": [0.0, 200.0]}, "vs must be positive"),
        ({"vp": [230.0, 500.0]}, "layer 1 from the top"),
        ({"density": [1800.0]}, "as many entries"),
        ({"vs": [200.0, np.nan]}, "vs must be positive"),
    ],
)
def test_an_impossible_earth_is_refused_with_the_demand_by_name(changes, demand):
    values = {
        "thickness": [2.0, np.inf],
        "vp": [500.0, 500.0],
        "vs": [200.0, 200.0],
        "density": [1800.0, 1800.0],
    }
    with pytest.raises(InputError, match=demand):
        LayeredEarth(**{**values, **changes})


@pytest.mark.parametrize(
    ("make", "demand"),
    [
        (lambda: DispersionCurve(frequency=[2.0, 1.0], velocity=[1.0, 1.0], sigma=[1.0, 1.0]), "increase"),
        (lambda: DispersionCurve(frequency=[1.0], velocity=[1.0], sigma=[0.0]), "sigma must be positive"),
        (lambda: DispersionCurve(frequency=[1.0], velocity=[1.0], sigma=[1.0], wave="stoneley"), "wave must"),
        (lambda: Profile(depth=[0.0, 0.0], median=[1, 1], low=[1, 1], high=[1, 1]), "depth must increase"),
        (lambda: Ensemble.of([earth()], [-1.0]), "weights must be"),
        (lambda: Ensemble.of([earth(), earth()], [0.0, 0.0]), "weights must be"),
        (lambda: Ensemble.of([earth(), earth()], [1.0, np.inf]), "weights must be"),
        (lambda: image(signal_to_noise=[1.0, 2.0, 3.0]), "signal_to_noise must have as many"),
        (lambda: image(offsets=[]), "offsets must hold"),
        (lambda: image(offsets=[3.0, 2.0]), "offsets must hold"),
        (lambda: image(spacing=0.0), "spacing must be positive"),
        (lambda: accepted_pick(np.nan), "velocity of accepted picks of shot 7"),
        (lambda: DispersionCurve(frequency=3.0, velocity=[1.0], sigma=[1.0]), "frequency must have 1 axis"),
        (lambda: Profile(depth=[1.0], median=[1], low=[1], high=[1]), "depth must start at 0"),
        (
            lambda: DispersionImage(
                frequencies=[1.0], velocities=[1.0], power=[[1.5]], offsets=[1.0], spacing=1.0
            ),
            "power must lie in 0..1",
        ),
    ],
)
def test_other_nouns_refuse_what_breaks_their_contract(make, demand):
    with pytest.raises(InputError, match=demand):
        make()
