"""The real records of ../shared/data against the phase velocities in its README.

Those values are maxima of plain images, measured once by others: a cross-check of 2 to 3 %, not a truth.
"""

import os
from pathlib import Path

import numpy as np
import pytest

from surfdisp.dispersion import curve_from_gathers
from surfdisp.dispersion.picking import NEAR_FIELD
from surfdisp.records import condition, prepare_records

DATA = Path(__file__).parents[3] / "shared" / "data"

pytestmark = pytest.mark.skipif(
    not DATA.is_dir() and os.environ.get("SURFDISP_REQUIRE_ALL") != "1", reason=f"no field records at {DATA}"
)

TABLE_4M = {14: 212, 16: 201, 18: 193, 20: 187, 22: 181, 25: 176, 30: 171, 35: 170, 45: 170}
"""Mean of the four off-end shots in the README."""
TABLE_1M = {16: 176, 20: 150, 30: 133, 40: 129, 50: 129}


def from_files(folder, *names):
    _, gathers = prepare_records([DATA / folder / f"{name}.dat" for name in names])
    return curve_from_gathers([condition(gather) for gather in gathers])


def at(curve, frequencies):
    return np.interp(np.log(frequencies), np.log(curve.frequency), curve.velocity, left=np.nan, right=np.nan)


@pytest.fixture(scope="module")
def off_end():
    return from_files("spread_4m", 2001, 2002, 2004, 2005)


@pytest.fixture(scope="module")
def short():
    return from_files("spread_1m", 206)


def test_curve_of_the_long_spread_is_within_3_percent_of_the_table(off_end):
    wanted = np.array(list(TABLE_4M.values()), dtype=float)
    np.testing.assert_allclose(at(off_end.curve, np.array(list(TABLE_4M))), wanted, rtol=0.03)


def test_nothing_is_claimed_below_9_hz_and_no_alias_is_picked(off_end):
    assert off_end.curve.frequency.min() > 9.0
    for picks in off_end.picks:
        used = picks.accepted & (picks.frequency > 20.0)
        assert picks.velocity[used].max() < 200.0
        assert picks.velocity[used].min() > 150.0


def test_the_four_shots_agree_within_the_stated_uncertainty(off_end):
    curve = off_end.curve
    for picks in off_end.picks:
        used = picks.accepted
        c, s = (np.interp(picks.frequency[used], curve.frequency, y) for y in (curve.velocity, curve.sigma))
        assert np.mean(np.abs(picks.velocity[used] - c) < 2.0 * np.hypot(s, picks.sigma[used])) > 0.9


def test_lateral_change_is_reported_with_its_size(off_end):
    (told,) = [note for note in off_end.curve.notes if "halves 0 to 44 m and 48 to 92 m" in note]
    assert "5 % at 35 to" in told


def test_the_shot_inside_the_spread_does_no_harm():
    curve = from_files("spread_4m", 2001, 2002, 2003, 2004, 2005).curve
    wanted = np.array(list(TABLE_4M.values()), dtype=float)
    np.testing.assert_allclose(at(curve, np.array(list(TABLE_4M))), wanted, rtol=0.03)
    assert curve.frequency.min() > 9.0


@pytest.mark.parametrize("name", [2001, 2002, 2004, 2005])
def test_each_shot_alone_gives_the_same_branch(name):
    curve = from_files("spread_4m", name).curve
    wanted = np.array(list(TABLE_4M.values()), dtype=float)
    got = at(curve, np.array(list(TABLE_4M)))
    np.testing.assert_allclose(got[1:], wanted[1:], rtol=0.03)
    assert curve.velocity.max() < 300.0


def test_curve_of_the_short_spread_is_within_3_percent_from_16_to_50_hz(short):
    wanted = np.array(list(TABLE_1M.values()), dtype=float)
    np.testing.assert_allclose(at(short.curve, np.array(list(TABLE_1M))), wanted, rtol=0.03)


def test_picks_of_the_short_spread_at_12_and_14_hz_are_flagged_near_field(short):
    (picks,) = short.picks
    for f in (12.0, 14.0):
        assert NEAR_FIELD in picks.reason[np.argmin(np.abs(picks.frequency - f))]
    assert not picks.reason[np.argmin(np.abs(picks.frequency - 17.0))]


def test_long_and_short_spread_are_different_ground_and_not_joined():
    files = [DATA / "spread_4m" / "2001.dat", DATA / "spread_4m" / "2002.dat", DATA / "spread_1m" / "206.dat"]
    _, gathers = prepare_records(files)
    curve = curve_from_gathers([condition(gather) for gather in gathers]).curve
    assert any("different ground" in note for note in curve.notes)
    assert np.abs(at(curve, np.array([30.0])) / 171.0 - 1.0) < 0.03


def test_nothing_is_picked_where_there_is_no_ridge():
    result = from_files("no_ridge", 102)
    assert result.curve is None
    assert not any(picks.accepted.any() for picks in result.picks)
