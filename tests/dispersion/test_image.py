"""The phase-shift image: where a known wave peaks, how wide, its aliases, and what leaves it alone."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from surfdisp.core import Gather, InputError
from surfdisp.dispersion import (
    TRANSFORMS,
    common_axes,
    default_frequencies,
    default_velocities,
    dispersion_image,
)

LINE = np.arange(24) * 2.0
METHODS = pytest.mark.parametrize("method", sorted(TRANSFORMS))


def peak(image, index):
    """Velocity of the largest power at one frequency, refined by a parabola in wavenumber."""
    power = image.power[index]
    top = int(np.argmax(power))
    k = 1.0 / image.velocities[top - 1 : top + 2]
    a, b, _ = np.polyfit(k - k[1], power[top - 1 : top + 2], 2)
    return 1.0 / (k[1] - b / (2.0 * a))


@METHODS
@settings(max_examples=25, deadline=None)
@given(
    velocity=st.floats(110.0, 600.0),
    source=st.floats(-30.0, -1.0),
    seed=st.integers(0, 999),
)
def test_plane_wave_peaks_at_its_velocity_on_uneven_receivers(make_wave, method, velocity, source, seed):
    receivers = np.sort(np.random.default_rng(seed).uniform(0.0, 46.0, 20)) + np.arange(20) * 0.01
    gather = make_wave(velocity, receivers, source)
    image = dispersion_image(gather, [21.7, 30.0, 44.1], np.geomspace(80.0, 900.0, 300), method=method)
    np.testing.assert_allclose([peak(image, i) for i in range(3)], velocity, rtol=1e-3)
    assert image.power.max() == pytest.approx(1.0, abs=6e-3)  # the grid misses the very top


@METHODS
def test_mirrored_spread_and_source_leave_the_image_unchanged(make_wave, method):
    gather = make_wave(lambda f: 150.0 + 900.0 / f, LINE, -6.0, noise=0.02)
    mirrored = Gather(
        data=gather.data[::-1], interval=gather.interval, receivers=-gather.receivers[::-1], source=6.0
    )
    a, b = dispersion_image(gather, method=method), dispersion_image(mirrored, method=method)
    np.testing.assert_allclose(a.power, b.power, atol=1e-10)
    np.testing.assert_allclose(a.offsets, b.offsets)


@METHODS
def test_neither_gains_nor_the_blow_time_change_the_phase_shift_image(make_wave, method):
    gather = make_wave(200.0, LINE, -6.0, noise=0.02)
    gains = np.random.default_rng(1).uniform(0.1, 10.0, 24)
    louder = Gather(
        data=gather.data * gains[:, None],
        interval=gather.interval,
        receivers=LINE,
        source=-6.0,
        delay=-0.037,
    )
    a, b = (dispersion_image(g, [15.0, 30.0], method=method) for g in (gather, louder))
    np.testing.assert_allclose(a.power, b.power, atol=1e-10)


def test_half_power_width_in_wavenumber_is_that_of_an_even_array(make_wave):
    # checks.md C: half-power full width 0.886 * 2 pi / (N dx); N = 24, dx = 2 m gives 0.11605009 rad/m
    image = dispersion_image(make_wave(200.0, LINE, -6.0), [30.0], np.linspace(120.0, 600.0, 20001))
    k = 2.0 * np.pi * 30.0 / image.velocities
    above = k[image.power[0] >= 0.5]
    assert above.max() - above.min() == pytest.approx(0.11605009, rel=3e-3)


def test_aliases_lie_at_wavenumbers_shifted_by_multiples_of_the_inverse_spacing(make_wave):
    # even spacing dx: power is periodic in k with 1/dx cycles per metre
    spacing, f, c = 2.0, 60.0, 110.0
    replicas = [f / (f / c + shift / spacing) for shift in (-1, 1)]
    wanted = np.sort([*replicas, c])
    image = dispersion_image(make_wave(c, LINE, -6.0), [f], wanted)
    np.testing.assert_allclose(image.power[0], 1.0, atol=2e-3)
    assert wanted[2] > 600.0 > 110.0 > wanted[0] > 50.0


def test_true_slant_distances_are_used_for_a_source_beside_the_line(make_wave):
    along = make_wave(180.0, LINE, 0.0)
    beside = 10.0
    slant = np.hypot(LINE, beside)
    gather = make_wave(180.0, slant, 0.0)  # the wave as it arrives after the slant distances
    there = Gather(
        data=gather.data, interval=gather.interval, receivers=LINE, source=0.0, source_off_line=beside
    )
    image = dispersion_image(there, [30.0], np.geomspace(80.0, 900.0, 300))
    assert peak(image, 0) == pytest.approx(180.0, rel=1e-3)
    naive = Gather(data=gather.data, interval=along.interval, receivers=LINE, source=0.0)
    assert peak(dispersion_image(naive, [30.0], np.geomspace(80.0, 900.0, 300)), 0) > 190.0


def test_random_phases_of_n_traces_have_power_one_over_n():
    noise = np.random.default_rng(5).standard_normal((24, 4000))
    gather = Gather(data=noise, interval=0.001, receivers=LINE, source=-6.0)
    image = dispersion_image(gather, np.linspace(20.0, 100.0, 300), np.geomspace(60.0, 200.0, 60))
    assert image.power.mean() == pytest.approx(1.0 / 24.0, rel=0.05)


def test_signal_to_noise_is_that_of_the_known_noise(make_wave):
    clean = make_wave(200.0, LINE, -6.0, duration=1.6)
    f = np.arange(20.0, 60.0, 1.0)
    noisy = make_wave(200.0, LINE, -6.0, duration=1.6, noise=0.05)
    image = dispersion_image(noisy, f)
    spectrum = np.abs(np.exp(-2j * np.pi * np.outer(f, clean.times)) @ clean.data[0])
    expected = spectrum / (0.05 * np.sqrt(clean.data.shape[1]))  # white noise: variance n sigma^2
    ratio = image.signal_to_noise / expected
    assert np.median(ratio) == pytest.approx(1.0, abs=0.15)
    assert np.all((ratio > 0.6) & (ratio < 1.7))


def test_signal_to_noise_is_unknown_without_noise_and_near_zero_without_signal():
    dead_quiet = np.zeros((24, 1000))
    dead_quiet[:, 500:520] = 1.0
    quiet = Gather(data=dead_quiet, interval=0.001, receivers=LINE, source=-6.0)
    assert np.all(np.isnan(dispersion_image(quiet, [20.0, 30.0]).signal_to_noise))
    noise = np.random.default_rng(6).standard_normal((24, 4000))
    pure = Gather(data=noise, interval=0.001, receivers=LINE, source=-6.0)
    assert np.median(dispersion_image(pure, np.linspace(20.0, 60.0, 50)).signal_to_noise) < 0.5


@pytest.mark.parametrize(
    ("spacing", "interval", "count"), [(0.2, 1e-4, 3000), (2.0, 1e-3, 500), (4.0, 1.25e-4, 16000)]
)
def test_default_axes_fit_record_and_spread(spacing, interval, count):
    gather = Gather(
        data=np.ones((24, count)), interval=interval, receivers=np.arange(24) * spacing, source=-spacing
    )
    f, c = default_frequencies(gather), default_velocities(gather)
    duration = count * interval
    assert f[0] >= min(1.5 / duration, 2.0)
    assert f[-1] <= 0.4 / interval + 1e-9
    assert np.diff(f).max() <= max(0.51 / duration, 0.11)
    assert c[0] >= 50.0
    assert c[-1] <= 2000.0
    np.testing.assert_allclose(c[1:] / c[:-1], c[1] / c[0])


def test_common_axes_suit_the_coarsest_sampling_and_the_longest_record():
    def of(interval, count):
        return Gather(data=np.ones((24, count)), interval=interval, receivers=LINE, source=-2.0)

    f, c = common_axes([of(0.0005, 4000), of(0.008, 100)])
    assert f[-1] <= 0.4 / 0.008 + 1e-9
    assert np.diff(f)[0] == pytest.approx(0.25, rel=0.05)
    assert c[0] <= default_velocities(of(0.0005, 4000))[0]


@pytest.mark.parametrize(
    ("arguments", "demand"),
    [
        ({"frequencies": [10.0, 10.0]}, "frequencies must increase"),
        ({"frequencies": [10.0, 600.0]}, "Nyquist frequency 500 Hz; got 600"),
        ({"frequencies": []}, "frequencies must hold"),
        ({"velocities": [0.0, 100.0]}, "velocities must be positive"),
        ({"method": "guess"}, "method must be one of"),
    ],
)
def test_wrong_axes_are_refused_by_name(make_wave, arguments, demand):
    with pytest.raises(InputError, match=demand):
        dispersion_image(make_wave(200.0, LINE, -6.0), **arguments)


def test_receivers_at_one_distance_are_refused():
    two = Gather(data=np.ones((2, 100)), interval=0.001, receivers=[-5.0, 5.0], source=0.0)
    with pytest.raises(InputError, match="two or more distances"):
        dispersion_image(two)
