"""Runs of picks that are one smooth branch."""

import numpy as np
import pytest

from surfdisp.dispersion.continuity import smooth_runs, steep_below

F = np.arange(10.0, 60.0, 0.25)
LOBE = 1.0 / 48.0


def lengths(frequency, velocity):
    return [len(run) for run in smooth_runs(frequency, velocity, np.full(len(frequency), 0.8), LOBE)]


@pytest.mark.parametrize(
    "branch",
    [
        lambda f: np.full(len(f), 200.0),
        lambda f: 140.0 + 200.0 / (1.0 + np.square(f / 15.0)),
        lambda f: 130.0 + 0.06 * f,  # inverse dispersion
    ],
    ids=["constant", "normal", "inverse"],
)
def test_a_smooth_branch_is_one_run_with_noise_too(branch):
    noise = 1.0 + 0.005 * np.random.default_rng(1).standard_normal(len(F))
    assert lengths(F, branch(F) * noise) == [len(F)]


def test_a_jump_to_a_faster_mode_cuts():
    velocity = np.where(F < 20.0, 330.0, 180.0)
    runs = smooth_runs(F, velocity, np.full(len(F), 0.8), LOBE)
    assert len(runs) >= 2
    for run in runs:  # the cut lies within one cell, a twelfth of an octave, of the jump
        clear = run[np.abs(np.log2(F[run] / 20.0)) > 1.0 / 12.0]
        assert clear.size == 0 or np.ptp(velocity[clear]) == 0.0


def test_a_ridge_that_rises_through_a_dip_in_power_is_cut_at_the_dip():
    rising = np.where(F < 25.0, 150.0, 150.0 * np.minimum((F / 25.0) ** 0.2, 1.07))
    dipped = 0.9 - 0.4 * np.exp(-np.square((F - 27.0) / 2.0))
    _, high = smooth_runs(F, rising, dipped, LOBE)
    assert F[high[0]] == pytest.approx(27.0, rel=0.06)
    assert len(smooth_runs(F, rising, np.full(len(F), 0.9), LOBE)) == 1
    assert len(smooth_runs(F, np.where(F < 25.0, 150.0, 6.0 * F), np.full(len(F), 0.9), LOBE)) > 1


def test_the_published_rise_of_a_fundamental_over_a_soft_layer_is_kept():
    # Tokimatsu, Tamura & Kojima (1992), case 2 (checks.md B2): 130.889 m/s at 15 Hz, 137.109 at 30
    published = np.interp(F, [10.0, 15.0, 20.0, 30.0, 50.0], [136.876, 130.889, 133.452, 137.109, 126.675])
    assert lengths(F, published) == [len(F)]


def test_steep_is_judged_by_slope_and_wavelength():
    steep, gentle = 4000.0 * (F / 10.0) ** -2.0, 400.0 * (F / 10.0) ** -1.0
    at = steep_below(F, steep, 40.0)
    assert 4000.0 * (at / 10.0) ** -2.0 / at == pytest.approx(40.0, rel=0.05)
    assert steep_below(F, gentle, 10.0) == 0.0


def test_a_narrow_gap_is_bridged_and_a_wide_one_cuts():
    velocity = np.full(len(F), 180.0)
    narrow, wide = (F < 30.0) | (F > 33.0), (F < 30.0) | (F > 40.0)
    assert lengths(F[narrow], velocity[narrow]) == [narrow.sum()]
    assert lengths(F[wide], velocity[wide]) == [(F < 30.0).sum(), (F > 40.0).sum()]


def test_a_step_across_a_narrow_gap_cuts():
    keep = (F < 18.0) | (F > 20.0)
    velocity = np.where(F < 19.0, 400.0, 200.0)[keep]
    assert lengths(F[keep], velocity)[0] == (F < 18.0).sum()


def test_nothing_gives_no_run():
    assert smooth_runs(*3 * [np.array([])], LOBE) == []


def test_a_step_of_the_wavenumber_beyond_the_resolution_cuts_where_slopes_are_plausible():
    # as in a field record: 400 m/s, a narrow gap, and two thirds of it beyond
    f = np.arange(8.0, 30.0, 0.125)
    f = f[(f < 12.0) | (f > 13.0)]
    low = f < 12.5
    velocity = np.where(low, 400.0 * (f / 12.0) ** -0.4, 260.0 * (f / 13.0) ** -0.3)
    runs = smooth_runs(f, velocity, np.full(len(f), 0.8), LOBE / 2.0)
    assert [len(run) for run in runs] == [low.sum(), (~low).sum()]
