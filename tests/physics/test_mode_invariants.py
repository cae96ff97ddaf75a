"""What must hold for the modes of every layered earth, on earths drawn by hypothesis."""

import warnings

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from surfdisp.core import LayeredEarth
from surfdisp.earth import mode_count, phase_velocity, sensitivity

PLENTY = settings(
    max_examples=60,
    deadline=None,
    derandomize=True,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)


@st.composite
def earths(draw, least=2, most=8):
    n = draw(st.integers(least, most))

    def numbers(low, high):
        return np.array(draw(st.lists(st.floats(low, high), min_size=n, max_size=n)))

    vs = numbers(80.0, 800.0)
    thickness = numbers(0.3, 12.0)
    thickness[-1] = np.inf
    return LayeredEarth(
        thickness=thickness, vp=vs * numbers(1.2, 10.0), vs=vs, density=numbers(1400.0, 2600.0)
    )


frequencies = st.floats(1.0, 100.0)


def split(earth, pieces):
    """The same earth with every layer cut into equal pieces, and the half-space continued by layers."""
    thickness = np.repeat(earth.thickness[:-1] / pieces, pieces)
    thickness = np.concatenate([thickness, np.full(pieces, 1.7), [np.inf]])

    def repeated(values):
        return np.concatenate([np.repeat(values[:-1], pieces), np.full(pieces + 1, values[-1])])

    return LayeredEarth(
        thickness=thickness, vp=repeated(earth.vp), vs=repeated(earth.vs), density=repeated(earth.density)
    )


@PLENTY
@given(earths(), frequencies, st.integers(0, 3))
def test_splitting_layers_changes_nothing(earth, frequency, mode):
    whole = phase_velocity(earth, frequency, mode=mode)
    np.testing.assert_allclose(phase_velocity(split(earth, 3), frequency, mode=mode), whole, rtol=1e-10)


@pytest.mark.parametrize("frequency", [1.0, 5.0, 12.0, 30.0, 80.0])
@pytest.mark.parametrize("mode", [0, 1, 2])
def test_splitting_into_400_pieces_moves_no_root(frequency, mode):
    earth = LayeredEarth(
        thickness=[2.0, 4.0, 6.0, 8.0, np.inf],
        vp=[300.0, 500.0, 1500.0, 1600.0, 2000.0],
        vs=[150.0, 110.0, 260.0, 320.0, 600.0],
        density=[1800.0, 1750.0, 1900.0, 2000.0, 2100.0],
    )
    whole = phase_velocity(earth, frequency, mode=mode)
    np.testing.assert_allclose(phase_velocity(split(earth, 80), frequency, mode=mode), whole, rtol=1e-10)


@PLENTY
@given(earths(), frequencies, st.integers(0, 2), st.floats(0.3, 3.0), st.floats(0.1, 10.0))
def test_scaling_velocities_by_a_and_lengths_by_b_scales_frequency_by_a_over_b(earth, frequency, mode, a, b):
    scaled = LayeredEarth(
        thickness=earth.thickness * b, vp=earth.vp * a, vs=earth.vs * a, density=earth.density
    )
    found = phase_velocity(scaled, frequency * a / b, mode=mode)
    np.testing.assert_allclose(found, a * phase_velocity(earth, frequency, mode=mode), rtol=1e-10)


@PLENTY
@given(earths(), frequencies, st.integers(0, 2), st.floats(0.1, 10.0))
def test_scaling_all_densities_changes_nothing(earth, frequency, mode, factor):
    scaled = LayeredEarth(thickness=earth.thickness, vp=earth.vp, vs=earth.vs, density=earth.density * factor)
    whole = phase_velocity(earth, frequency, mode=mode)
    np.testing.assert_allclose(phase_velocity(scaled, frequency, mode=mode), whole, rtol=1e-10)
    rows = sensitivity(earth, frequency, mode=mode).density @ earth.density
    np.testing.assert_allclose(rows, 0.0 * whole, atol=1e-6 * earth.vs.max())


def over_fast_half_space(earth):
    """The same layers over a half-space that is faster than all of them, so that the fundamental exists."""
    vs = np.append(earth.vs[:-1], 1.2 * earth.vs.max())
    vp = np.append(earth.vp[:-1], 2.0 * vs[-1])
    return LayeredEarth(thickness=earth.thickness, vp=vp, vs=vs, density=earth.density)


def rayleigh(vp, vs):
    """Speed on a half-space, from the cubic of Rayleigh (1885) in (c/vs)^2."""
    g = (vs / vp) ** 2
    roots = np.roots([1.0, -8.0, 24.0 - 16.0 * g, -16.0 * (1.0 - g)])
    real = roots.real[np.abs(roots.imag) < 1e-9]
    return vs * np.sqrt(real[(real > 0.0) & (real < 1.0)].min())


@PLENTY
@given(earths())
def test_long_waves_see_the_half_space(earth):
    expected = rayleigh(earth.vp[-1], earth.vs[-1])
    depth = earth.depth[-1]
    slow = 1e-7 * earth.vs.min() / depth
    assert phase_velocity(earth, slow)[0] == pytest.approx(expected, rel=1e-3)


@PLENTY
@given(earths())
def test_short_waves_tend_to_the_slowest_guided_speed(earth):
    """Surface wave of the top layer, shear wave of the slowest layer, or a slower wave along an interface."""
    earth = over_fast_half_space(earth)
    frequency = 40.0 * earth.vs.max() / earth.thickness[:-1].min()
    velocity = phase_velocity(earth, frequency)[0]
    bound = min(rayleigh(earth.vp[0], earth.vs[0]), earth.vs.min())
    assert velocity <= bound * (1.0 + 1e-2)
    slower = min(rayleigh(p, s) for p, s in zip(earth.vp, earth.vs, strict=True))
    assert velocity >= slower * (1.0 - 1e-9)


@PLENTY
@given(earths(), frequencies)
def test_no_mode_that_the_count_sees_is_missing(earth, frequency):
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        top = earth.vs[-1] * (1.0 - 1e-6)
        count = int(mode_count(earth, frequency, top)[0])
        velocities = np.array([phase_velocity(earth, frequency, mode=mode)[0] for mode in range(count)])
        assert not np.isnan(velocities).any()
        assert (np.diff(velocities) > 0.0).all()  # the slowest roots of the branches follow in order
        for mode, velocity in enumerate(velocities):
            if velocity < top:
                below, above = mode_count(earth, frequency, [velocity * (1 - 1e-9), velocity * (1 + 1e-9)])
                assert below <= mode < above


@PLENTY
@given(earths(), st.integers(0, 2))
def test_a_curve_is_the_same_in_any_order_and_one_by_one(earth, mode):
    frequency = np.geomspace(2.0, 80.0, 25)
    curve = phase_velocity(earth, frequency, mode=mode)
    shuffled = np.random.default_rng(0).permutation(25)
    np.testing.assert_array_equal(phase_velocity(earth, frequency[shuffled], mode=mode), curve[shuffled])
    single = [phase_velocity(earth, f, mode=mode)[0] for f in frequency]
    np.testing.assert_allclose(curve, single, rtol=2e-10)


def test_no_overflow_at_500_hz():
    rng = np.random.default_rng(1)
    for _ in range(20):
        n = int(rng.integers(2, 16))
        thickness = np.append(rng.uniform(1.0, 30.0, n - 1), np.inf)
        vs = rng.uniform(60.0, 3000.0, n)
        vs[-1] = 1.1 * vs.max()
        earth = LayeredEarth(thickness=thickness, vp=vs * 2.0, vs=vs, density=np.full(n, 2000.0))
        velocity = phase_velocity(earth, 500.0)[0]
        assert rayleigh(2.0, 1.0) * vs.min() * (1.0 - 1e-9) <= velocity < vs[-1]
        rows = sensitivity(earth, 500.0)
        for field in ("vs", "vp", "density", "thickness"):
            assert np.isfinite(getattr(rows, field)).all()
