"""Near field and aliases: closed forms."""

import numpy as np
import pytest

from surfdisp.core import DispersionImage
from surfdisp.dispersion import limits

SPACING = 4.0


def image(slowest=50.0, fastest=2000.0, nearest=10.0):
    return DispersionImage(
        frequencies=[10.0, 20.0],
        velocities=[slowest, fastest],
        power=np.zeros((2, 2)),
        offsets=nearest + SPACING * np.arange(24),
        spacing=SPACING,
    )


def test_array_centre_distance_is_the_mean_offset_in_wavelengths():
    assert limits.centre_distance_in_wavelengths(image(), np.array([28.0]))[0] == pytest.approx(2.0)


def test_half_the_spacings_wavenumber_is_a_wavelength_of_two_spacings():
    assert limits.beyond_half_spacing(image(), np.array([7.9, 8.1])).tolist() == [True, False]


@pytest.mark.parametrize(
    ("f", "c", "slowest", "fastest", "visible"),
    [
        (20.0, 200.0, 50.0, 2000.0, True),  # k + 1/4: 20 / 0.35 = 57 m/s is scanned
        (20.0, 200.0, 60.0, 2000.0, False),
        (60.0, 170.0, 100.0, 2000.0, True),  # k - 1/4: 60 / 0.103 = 583 m/s is scanned
        (60.0, 170.0, 100.0, 500.0, False),
        (45.0, 200.0, 100.0, 2000.0, False),  # k - 1/4 is negative: waves towards the source
    ],
)
def test_an_alias_is_visible_where_its_velocity_is_scanned(f, c, slowest, fastest, visible):
    got = limits.has_visible_alias(image(slowest, fastest), np.array([f]), np.array([c]))
    assert got.tolist() == [visible]


@pytest.mark.parametrize("shift", [-1, 0, 1])
def test_of_a_ridge_and_its_replicas_the_fast_one_is_recognised(shift):
    f = np.linspace(55.0, 80.0, 40)
    ground = 160.0 + 500.0 / f
    replica = f / (f / ground + shift / SPACING)
    assert limits.is_fast_alias(image(20.0), f, replica) == (shift == -1)


def test_a_strongly_dispersive_ridge_is_no_alias():
    f = np.linspace(6.0, 12.0, 40)
    # Tokimatsu, Tamura & Kojima (1992), case 1, fundamental (checks.md B2)
    published = np.interp(f, [4.0, 6.0, 8.0, 10.0, 15.0], [301.612, 205.659, 145.624, 122.729, 99.225])
    assert not limits.is_fast_alias(image(20.0), f, published)


def test_near_field_error_falls_with_distance_and_ends():
    # Yoon & Rix (2009) [M]: up to 10 to 15 % at one wavelength, 5 % at two, as two standard deviations
    error = limits.near_field_error(np.array([0.1, 0.5, 1.0, 2.0, 6.0, 50.0]))
    assert error[0] == error[1]
    assert np.all(np.diff(error[1:5]) < 0.0)
    assert 0.05 <= error[2] <= 0.075
    assert 0.02 <= error[3] <= 0.025
    assert error[4] == error[5] == 0.0


@pytest.mark.parametrize(
    ("distance", "measured"), [(1.0, 6.0), (1.5, 5.7), (2.0, 2.4), (2.5, 1.6), (3.0, 0.9), (4.0, 0.7)]
)
def test_near_field_error_is_what_full_wavefields_gave(distance, measured):
    assert 100.0 * limits.near_field_error(np.array([distance]))[0] == pytest.approx(measured, abs=0.05)


def test_between_its_distances_the_near_field_error_is_linear():
    middle = limits.near_field_error(np.array([1.75]))[0]
    assert middle == pytest.approx(0.5 * (limits.NEAR_FIELD_ERROR[1.5] + limits.NEAR_FIELD_ERROR[2.0]))
