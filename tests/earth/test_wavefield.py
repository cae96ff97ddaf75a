"""The synthetic wavefield: independent sums, invariants, modes, causality, loss."""

import numpy as np
import pytest
from scipy.special import erfc, j0

from surfdisp.core import InputError, LayeredEarth
from surfdisp.earth import half_space_rayleigh_speed, hammer_blow, phase_velocity, synthesize
from surfdisp.kernels.wavefield import vertical_compliance


def earth_of(thickness, vp, vs, density):
    return LayeredEarth(thickness=[*thickness, np.inf], vp=vp, vs=vs, density=density)


TERRACE = earth_of(
    [2.0, 3.0, 7.0],
    [320.0, 430.0, 1550.0, 1900.0],
    [150.0, 195.0, 260.0, 480.0],
    [1750.0, 1800.0, 2000.0, 2150.0],
)
HALF_SPACE = earth_of([], [400.0], [200.0], [1800.0])
# Checks.md A4, NGV-A: the first higher mode runs backward between its turning point and its cut-off.
BACKWARD = earth_of([10.0], [300.0, 3500.0], [100.0, 2000.0], [1800.0, 2400.0])
LID = earth_of([0.2, 6.0], [3500.0, 400.0, 900.0], [2000.0, 180.0, 400.0], [2300.0, 1800.0, 2000.0])
EARTHS = {"terrace": TERRACE, "half-space": HALF_SPACE, "backward mode": BACKWARD, "stiff lid": LID}


def largest_difference(data, expected):
    """Relative to the peak of each trace."""
    return np.max(np.abs(data - expected).max(axis=1) / np.abs(expected).max(axis=1))


def discrete_wavenumber_sum(earth, offsets, duration, interval):
    """Even sum over k: rings of sources too far to be heard (Bouchon & Aki 1977), load cut at 25 rad/m."""
    samples = round(duration / interval)
    times = interval * np.arange(samples)
    damping = np.log(1e5) / duration
    omega = 2.0 * np.pi * np.fft.rfftfreq(samples, interval) - 1j * damping
    force = interval * np.fft.rfft(hammer_blow(times) * np.exp(-damping * times))
    k = np.arange(0.5, 2e4) * 2.0 * np.pi / (max(offsets) + 1.5 * earth.vp.max() * duration)
    k = k[k < 42.0]
    weight = (k[1] - k[0]) * k / (2.0 * np.pi) * 0.5 * erfc((k - 25.0) / 4.0)
    bessel = j0(np.outer(k, offsets)) * weight[:, np.newaxis]
    thickness, vp2, vs2 = np.array(earth.thickness), earth.vp**2 + 0j, earth.vs**2 + 0j
    spectrum = np.zeros((len(omega), len(offsets)), dtype=complex)
    for i in np.flatnonzero(np.abs(omega) < 2.0 * np.pi * 200.0):
        compliance = vertical_compliance(complex(omega[i]), k, thickness, vp2, vs2, earth.density * vs2)
        spectrum[i] = 1j * omega[i] * force[i] * (compliance @ bessel)
    return (np.fft.irfft(spectrum, samples, axis=0) / interval).T * np.exp(damping * times)


@pytest.mark.parametrize("name", ["terrace", "backward mode", "stiff lid"])
def test_record_is_the_even_sum_over_wavenumbers(name):
    offsets = [4.0, 25.0]
    expected = discrete_wavenumber_sum(EARTHS[name], offsets, 0.3, 0.002)
    gather = synthesize(EARTHS[name], offsets, 0.3, 0.002)
    assert largest_difference(gather.data, expected) < 1e-3


def test_far_ridge_lies_on_the_fundamental_mode():
    receivers = np.arange(40.0, 140.0, 2.0)
    gather = synthesize(TERRACE, receivers, 1.4, 0.002)
    velocities = np.arange(120.0, 400.0, 0.1)
    for frequency in (18.0, 25.0, 35.0, 50.0):
        spectrum = gather.data @ np.exp(-2j * np.pi * frequency * gather.times)
        steering = np.exp(2j * np.pi * frequency * np.outer(1.0 / velocities, receivers))
        ridge = velocities[np.argmax(np.abs(steering @ (spectrum / np.abs(spectrum))))]
        assert ridge == pytest.approx(phase_velocity(TERRACE, frequency)[0], rel=3e-3)


def test_rayleigh_wave_of_a_half_space_spreads_as_a_cylinder_at_its_speed():
    gather = synthesize(HALF_SPACE, [100.0, 200.0], 1.4, 0.001)
    frequency = 40.0
    near, far = gather.data @ np.exp(-2j * np.pi * frequency * gather.times)
    assert abs(far / near) == pytest.approx(np.sqrt(0.5), rel=5e-3)
    cycles = frequency * 100.0 / half_space_rayleigh_speed(400.0, 200.0)
    lag = (-np.angle(far / near) / (2.0 * np.pi) - cycles) % 1.0
    assert min(lag, 1.0 - lag) < 2e-3 * cycles


def test_nothing_arrives_before_the_fastest_p_wave():
    gather = synthesize(TERRACE, [100.0, 190.0], 1.0, 0.001)
    for trace, offset in zip(gather.data, gather.receivers, strict=True):
        early = gather.times < offset / TERRACE.vp.max()
        assert np.abs(trace[early]).max() < 1e-4 * np.abs(trace).max()
        assert np.abs(trace[~early]).max() > 0.0


@pytest.mark.parametrize("name", EARTHS)
def test_a_tolerance_ten_times_tighter_changes_less_than_the_tolerance(name):
    offsets = [1.0, 10.0, 60.0]
    gather = synthesize(EARTHS[name], offsets, 0.5, 0.002)
    tighter = synthesize(EARTHS[name], offsets, 0.5, 0.002, tolerance=1e-4)
    assert largest_difference(gather.data, tighter.data) < 1e-3


def test_the_length_of_the_record_changes_nothing_within_it():
    short = synthesize(TERRACE, [5.0, 30.0], 0.25, 0.001)
    long = synthesize(TERRACE, [5.0, 30.0], 1.5, 0.001)
    # The short record ends within the wave train: the rest must not wrap into it.
    assert largest_difference(short.data, long.data[:, :250]) < 1e-3


def test_a_receiver_that_only_the_p_wave_reaches_in_time_is_as_accurate():
    short = synthesize(TERRACE, [300.0], 0.5, 0.002)  # surface waves, 200 times as large, come after 0.6 s
    long = synthesize(TERRACE, [300.0], 2.4, 0.002)
    assert largest_difference(short.data, long.data[:, :250]) < 1e-3


def test_splitting_a_layer_changes_nothing():
    split = earth_of(
        [2.0, 1.0, 2.0, 7.0],
        [320.0, 430.0, 430.0, 1550.0, 1900.0],
        [150.0, 195.0, 195.0, 260.0, 480.0],
        [1750.0, 1800.0, 1800.0, 2000.0, 2150.0],
    )
    data = synthesize(split, [5.0, 40.0], 0.4, 0.002).data
    assert largest_difference(data, synthesize(TERRACE, [5.0, 40.0], 0.4, 0.002).data) < 1e-8


def test_twice_the_density_moves_half_as_much():
    heavy = LayeredEarth(
        thickness=TERRACE.thickness, vp=TERRACE.vp, vs=TERRACE.vs, density=2.0 * TERRACE.density
    )
    light = synthesize(TERRACE, [7.0], 0.3, 0.002).data
    np.testing.assert_allclose(
        synthesize(heavy, [7.0], 0.3, 0.002).data, 0.5 * light, atol=1e-12 * light.max()
    )


def test_velocities_and_lengths_scaled_alike_leave_the_times():
    large = LayeredEarth(
        thickness=3.0 * TERRACE.thickness, vp=3.0 * TERRACE.vp, vs=3.0 * TERRACE.vs, density=TERRACE.density
    )
    data = synthesize(large, [24.0], 0.3, 0.002).data
    # Compliance per area: 1/(mu r) falls by 9 x 3.
    assert largest_difference(27.0 * data, synthesize(TERRACE, [8.0], 0.3, 0.002).data) < 1e-8


def test_a_record_that_starts_earlier_or_later_is_the_same_record_moved():
    plain = synthesize(TERRACE, [6.0], 0.4, 0.001).data[0]
    peak = np.abs(plain).max()
    early = synthesize(TERRACE, [6.0], 0.4, 0.001, delay=-0.05)
    late = synthesize(TERRACE, [6.0], 0.3, 0.001, delay=0.05)
    assert early.delay == -0.05
    assert not np.any(early.data[0, :50])
    np.testing.assert_allclose(early.data[0, 50:], plain[:350], atol=1e-3 * peak)
    np.testing.assert_allclose(late.data[0], plain[50:350], atol=1e-3 * peak)
    fine = synthesize(TERRACE, [6.0], 0.4, 0.0002).data[0]
    for delay, start in ((0.0004, 2), (-0.0006, 2)):
        between = synthesize(TERRACE, [6.0], 0.3, 0.001, delay=delay).data[0]
        skipped = 0 if delay > 0.0 else 1
        np.testing.assert_allclose(between[skipped:], fine[start::5][: 300 - skipped], atol=1e-3 * peak)


def test_receivers_on_both_sides_see_the_same_and_come_in_order_along_the_line():
    gather = synthesize(TERRACE, [12.0, -12.0, 5.0], 0.3, 0.002, source=50.0)
    assert gather.receivers.tolist() == [38.0, 55.0, 62.0]
    assert gather.source == 50.0
    np.testing.assert_array_equal(gather.data[0], gather.data[2])
    np.testing.assert_allclose(gather.offsets, [12.0, 5.0, 12.0])


def test_a_pulse_may_be_given_as_samples_and_acts_linearly():
    times = 0.002 * np.arange(150)
    plain = synthesize(TERRACE, [6.0], 0.3, 0.002).data
    sampled = synthesize(TERRACE, [6.0], 0.3, 0.002, pulse=-2.0 * hammer_blow(times)).data
    np.testing.assert_allclose(sampled, -2.0 * plain, atol=1e-4 * np.abs(plain).max())


def test_hammer_blow_peaks_at_its_central_frequency_in_far_rayleigh_velocity():
    times = 1e-3 * np.arange(4000)
    frequency = np.fft.rfftfreq(4000, 1e-3)
    velocity = np.abs(np.fft.rfft(hammer_blow(times, 40.0))) * frequency**1.5
    assert frequency[np.argmax(velocity)] == pytest.approx(40.0, abs=0.3)
    assert hammer_blow(times, 40.0).max() == pytest.approx(1.0, abs=1e-2)


def test_the_first_push_moves_the_near_ground_down():
    # A slowly rising push at 2 m: the ground follows it as a spring does, down being positive.
    gather = synthesize(TERRACE, [2.0], 0.5, 0.002, pulse=lambda time: hammer_blow(time, 2.0))
    displacement = np.cumsum(gather.data[0])
    assert displacement[np.argmax(np.abs(displacement))] > 0.0


def test_loss_takes_the_amplitude_that_its_quality_factor_says():
    quality, offset, frequency = 30.0, 120.0, 40.0
    plain, lossy = (
        synthesize(HALF_SPACE, [offset], 1.2, 0.001, qs=q, qp=q, reference_frequency=frequency)
        for q in (np.inf, quality)
    )
    spectra = [gather.data[0] @ np.exp(-2j * np.pi * frequency * gather.times) for gather in (plain, lossy)]
    decay = np.pi * frequency * offset / (quality * half_space_rayleigh_speed(400.0, 200.0))
    assert np.log(abs(spectra[0] / spectra[1])) == pytest.approx(decay, rel=0.01)


def test_each_quality_factor_takes_from_its_own_wave():
    frequency, offset, quality = 30.0, 150.0, 20.0
    plain, compression, shear = (
        synthesize(HALF_SPACE, [offset], 1.2, 0.001, reference_frequency=frequency, **loss)
        for loss in ({}, {"qp": quality}, {"qs": quality})
    )
    first = plain.times < 0.6  # P after 0.375 s, S after 0.75 s
    p, s = ([g.data[0, w] @ np.exp(-2j * np.pi * frequency * g.times[w]) for g in (plain, compression, shear)]
            for w in (first, ~first))  # fmt: skip
    decay = np.pi * frequency * offset / (quality * HALF_SPACE.vp[0])
    assert np.log(abs(p[0] / p[1])) == pytest.approx(decay, rel=0.1)
    assert abs(np.log(abs(p[0] / p[2]))) < 0.1 * decay
    assert np.log(abs(s[0] / s[2])) > 5.0 * np.log(abs(s[0] / s[1])) > 0.0


@pytest.mark.parametrize("frequency", [10.0, 20.0, 40.0])
def test_loss_disperses_causally(frequency):
    # Constant Q: velocity grows as frequency^(atan(1/Q)/pi) (checks.md E; Kjartansson 1979).
    quality = 20.0
    gather = synthesize(
        HALF_SPACE, [100.0, 200.0], 1.4, 0.001, qs=quality, qp=quality, reference_frequency=20.0
    )
    near, far = gather.data @ np.exp(-2j * np.pi * frequency * gather.times)
    speed = half_space_rayleigh_speed(400.0, 200.0) * (frequency / 20.0) ** (np.arctan(1.0 / quality) / np.pi)
    cycles = frequency * 100.0 / speed
    lag = (-np.angle(far / near) / (2.0 * np.pi) - cycles) % 1.0
    assert min(lag, 1.0 - lag) < 2.5e-3 * cycles  # without dispersion: 11e-3 at 10 and 40 Hz


@pytest.mark.parametrize(
    ("changes", "demand"),
    [
        ({"offsets": [0.0, 5.0]}, "none of them zero"),
        ({"offsets": []}, "at least one distance"),
        ({"offsets": [5.0, 5.0]}, "receivers must increase"),
        ({"duration": 0.0}, "duration must be positive"),
        ({"duration": 0.0004}, "at least one interval"),
        ({"interval": -0.001}, "interval must be positive"),
        ({"tolerance": 0.0}, "tolerance must lie between"),
        ({"qs": 0.0}, "qs must be positive"),
        ({"qp": [10.0, 20.0]}, "one per layer"),
        ({"pulse": np.zeros(10)}, "pulse must not be zero"),
        ({"pulse": [np.nan, 1.0]}, "pulse must be finite"),
        ({"delay": np.nan}, "delay must be finite"),
    ],
)
def test_broken_input_is_refused_with_the_demand_by_name(changes, demand):
    arguments = {"offsets": [5.0, 10.0], "duration": 0.1, "interval": 0.001, **changes}
    positional = [arguments.pop(name) for name in ("offsets", "duration", "interval")]
    with pytest.raises(InputError, match=demand):
        synthesize(TERRACE, *positional, **arguments)
