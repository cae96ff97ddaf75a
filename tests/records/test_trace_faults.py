"""Each fault put into good traces is found with its reason, and nothing else is."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from surfdisp.core import Gather
from surfdisp.records import neighbour_coherence, trace_faults

LINE = 2.0 * np.arange(24)


def gather_of(data, source=-4.0, receivers=LINE):
    return Gather(data=data, interval=0.0005, receivers=receivers, source=source)


def kinds(gather):
    return {index: reason.split()[0].rstrip(":") for index, reason in trace_faults(gather).items()}


@pytest.mark.parametrize("source", [-20.0, -2.0, 23.0, 60.0])
@pytest.mark.parametrize("noise", [0.0, 0.02, 0.1])
def test_good_traces_have_no_fault_whatever_their_gains(make_shot, source, noise):
    data = make_shot(LINE, source, noise=noise, seed=1)
    gains = 10.0 ** np.random.default_rng(2).uniform(-1.0, 1.0, (24, 1))
    assert kinds(gather_of(data * gains, source)) == {}


@settings(max_examples=25, deadline=None)
@given(
    victim=st.integers(0, 23),
    fault=st.sampled_from(["dead", "reversed", "noise", "clipped"]),
    source=st.sampled_from([-10.0, -2.0, 48.0]),
    level=st.floats(0.2, 0.6),
    seed=st.integers(0, 1000),
)
def test_one_fault_anywhere_is_found_and_nothing_else(make_shot_ever, victim, fault, source, level, seed):
    data = make_shot_ever(LINE, source, noise=0.01, seed=seed)
    random = np.random.default_rng(seed)
    if fault == "dead":
        data[victim] = 1e-4 * level * data[victim].std() * random.normal(size=data.shape[1])
    elif fault == "reversed":
        data[victim] *= -1.0
    elif fault == "noise":
        data[victim] = data[victim].std() * random.normal(size=data.shape[1])
    else:
        data[victim] = np.minimum(data[victim], level * data[victim].max())
    assert kinds(gather_of(data, source)) == {victim: fault}


def test_faults_of_all_kinds_at_once(make_shot):
    data = make_shot(LINE, -4.0, noise=0.01)
    data[[2, 13]] *= -1.0
    data[6] = 0.25
    data[9] = data[9].std() * np.random.default_rng(3).normal(size=data.shape[1])
    data[17] = np.maximum(data[17], 0.6 * data[17].min())
    assert kinds(gather_of(data)) == {2: "reversed", 6: "dead", 9: "noise", 13: "reversed", 17: "clipped"}


@pytest.mark.parametrize("group", [[7, 8], [0, 1], [22, 23], [4, 5, 14, 15]])
def test_two_reversed_neighbours_are_told_from_the_good_ones_around_them(make_shot, group):
    data = make_shot(LINE, -4.0, noise=0.01)
    data[group] *= -1.0
    assert kinds(gather_of(data)) == dict.fromkeys(group, "reversed")


@pytest.mark.parametrize("group", [[5, 8, 9], [14, 15, 17, 20]])
def test_a_good_trace_turned_among_reversed_ones_is_turned_back(make_shot, group):
    data = make_shot(LINE, -4.0, noise=0.01)
    data[group] *= -1.0
    assert kinds(gather_of(data)) == dict.fromkeys(group, "reversed")


def test_where_turning_never_settles_nothing_is_said(make_shot):
    data = make_shot(LINE, -4.0, noise=0.01)
    data[[16, 17, 19, 20]] *= -1.0
    assert kinds(gather_of(data)) == {}


def test_a_lone_burst_is_not_called_noise(make_shot):
    data = make_shot(LINE, -4.0, noise=0.01)
    burst = np.random.default_rng(5).normal(size=data.shape[1])
    burst[(np.arange(data.shape[1]) < 300) | (np.arange(data.shape[1]) > 500)] = 0.0
    data[12] = burst * data[12].std() / burst.std()
    assert neighbour_coherence(gather_of(data))[12] < 0.25
    assert kinds(gather_of(data)) == {}


def test_traces_of_a_record_without_common_waves_are_not_judged_by_their_neighbours():
    random = np.random.default_rng(6)
    data = random.normal(size=(24, 2000)) * np.exp(-0.5 * ((np.arange(2000) - 600.0) / 150.0) ** 2)
    data[20:] = random.normal(size=(4, 2000))
    assert np.nanmedian(neighbour_coherence(gather_of(data))) < 0.3
    assert kinds(gather_of(data)) == {}


def test_a_coarsely_digitised_crest_is_not_clipped(make_shot):
    data = make_shot(LINE, -4.0, noise=0.0)
    steps = np.round(data / np.abs(data).max(axis=1, keepdims=True) * 40.0)  # five or six bits
    assert any(np.sum(row == row.max()) >= 3 for row in steps)
    assert kinds(gather_of(steps)) == {}


def test_a_dc_level_or_mains_hum_below_the_signal_is_no_fault(make_shot):
    data = make_shot(LINE, -4.0, noise=0.01)
    times = 0.0005 * np.arange(data.shape[1])
    peak = np.abs(data).max(axis=1, keepdims=True)
    assert kinds(gather_of(data + 0.5 * peak + 0.05 * peak * np.sin(2 * np.pi * 50.0 * times))) == {}


def test_a_record_of_noise_is_noise_throughout():
    data = np.random.default_rng(4).normal(size=(24, 2000))
    found = kinds(gather_of(data))
    assert set(found.values()) == {"noise"}
    assert len(found) > 16


def test_coherence_changes_sign_with_the_trace_and_forgets_gains(make_shot):
    data = make_shot(LINE, -4.0, noise=0.02)
    before = neighbour_coherence(gather_of(data))
    assert np.all(before > 0.5)
    data[7] *= -3.0
    after = neighbour_coherence(gather_of(data))
    assert after[7] == pytest.approx(-before[7], rel=1e-12)


def test_coherence_is_the_same_seen_from_the_other_end(make_shot):
    data = make_shot(LINE, -4.0, noise=0.02)
    mirrored = gather_of(data[::-1], source=50.0, receivers=46.0 - LINE[::-1])
    np.testing.assert_allclose(
        neighbour_coherence(mirrored)[::-1], neighbour_coherence(gather_of(data)), rtol=1e-9
    )


def test_each_side_of_the_source_is_judged_by_itself(make_shot):
    slow_side = 23.0 + 2.5 * (LINE[:12] - 23.0)  # the ground is 2.5 times slower there
    data = np.concatenate([make_shot(slow_side, 23.0, noise=0.01), make_shot(LINE[12:], 23.0, noise=0.01)])
    gather = gather_of(data, 23.0)
    assert np.all(neighbour_coherence(gather) > 0.8)
    assert kinds(gather) == {}


def test_too_few_neighbours_leave_the_question_open(make_shot):
    line = LINE[:3]
    gather = gather_of(make_shot(line, -4.0), receivers=line)
    assert np.all(np.isnan(neighbour_coherence(gather)))
    assert trace_faults(gather) == {}
