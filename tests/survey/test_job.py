"""The steps of the job use the settings, and bad records are told by name."""

import math
from dataclasses import replace

import numpy as np
import pytest

import surfdisp.survey.job as job
from surfdisp.core import DispersionCurve, Gather, InputError, Record
from surfdisp.records import write_seg2
from surfdisp.survey import Settings, read_records, run_survey, settings_for_files
from surfdisp.survey.axes import image_axes
from surfdisp.survey.geometry import geometry_of
from surfdisp.survey.settings import ConditioningSettings, ImageSettings, InversionSettings


def gather(velocity=200.0):
    receivers = np.arange(0.0, 48.0, 2.0)
    times = np.arange(800) * 0.001
    phase = (times[None, :] - (receivers[:, None] + 5.0) / velocity) / 0.01
    return Gather(
        data=(1.0 - phase**2) * np.exp(-0.5 * phase**2), interval=0.001, receivers=receivers, source=-5.0
    )


def survey(folder, **records):
    clean = gather()
    write_seg2(folder / "a.sg2", clean.data, clean.interval, receivers=clean.receivers, source=clean.source)
    return Settings(records={"files": (str(folder / "a.sg2"),), **records})


def test_positions_in_the_configuration_win_over_the_header(tmp_path):
    settings = survey(
        tmp_path, receivers={"first_m": 10.0, "spacing_m": 3.0}, shots=[{"file": "a.sg2", "source_m": 4.0}]
    )
    records, gathers = read_records(settings)
    assert records[0].used
    assert gathers[0].source == 4.0
    np.testing.assert_allclose(gathers[0].receivers, 10.0 + 3.0 * np.arange(24))


def test_a_table_beside_the_records_wins_over_the_header_and_loses_to_the_configuration(tmp_path):
    (tmp_path / "shots.csv").write_text("file,source_m\na.sg2,-6.5\n")
    assert read_records(survey(tmp_path))[1][0].source == -6.5
    given = survey(tmp_path, shots=[{"file": "a.sg2", "source_m": -7.5}])
    assert read_records(given)[1][0].source == -7.5


def test_what_each_table_says_wins_field_by_field_over_the_one_below(tmp_path):
    (tmp_path / "shots.csv").write_text("file,source_m,source_elevation_m\na.sg2,-6.5,2.0\n")
    named = tmp_path / "notes.csv"
    named.write_text("file,source_off_line_m\na.sg2,1.5\n")
    settings = survey(tmp_path, geometry_tables=(str(named),), shots=[{"file": "a.sg2", "source_m": -7.5}])
    gather = read_records(settings)[1][0]
    assert (gather.source, gather.source_off_line, gather.source_elevation) == (-7.5, 1.5, 2.0)


def test_a_shot_of_the_configuration_that_is_no_record_is_refused_by_name(tmp_path):
    with pytest.raises(InputError, match=r"records\.shots: file 'nosuch\.sg2' is not among the records"):
        read_records(survey(tmp_path, shots=[{"file": "nosuch.sg2", "source_m": 1.0}]))


def test_without_tables_only_the_headers_know(tmp_path):
    assert geometry_of(survey(tmp_path).records) is None


def test_image_axes_are_left_to_the_default_unless_a_limit_is_given():
    assert image_axes([gather()], ImageSettings()) == (None, None)
    frequencies, velocities = image_axes([gather()], ImageSettings(minimum_frequency_hz=7.0))
    assert frequencies[0] == 7.0
    assert velocities is None
    with pytest.raises(InputError, match=r"image\.minimum_velocity_m_s must be below"):
        image_axes([gather()], ImageSettings(minimum_velocity_m_s=900.0, maximum_velocity_m_s=100.0))


def test_a_high_cut_takes_energy_away_above_it_and_leaves_what_lies_below():
    def energy(settings):
        data = job.condition_gathers([gather()], settings)[0].data
        spectrum = np.abs(np.fft.rfft(data, n=2048, axis=1)) ** 2
        frequency = np.fft.rfftfreq(2048, 0.001)
        return spectrum[:, frequency < 15.0].sum(), spectrum[:, frequency > 35.0].sum()

    below, above = energy(ConditioningSettings())
    low_passed_below, low_passed_above = energy(
        ConditioningSettings(minimum_frequency_hz=1.0, maximum_frequency_hz=20.0)
    )
    assert low_passed_above < 0.02 * above
    assert low_passed_below == pytest.approx(below, rel=0.1)


def test_inversion_settings_reach_the_inversion_in_si_and_the_rest_stays_at_its_default(monkeypatch):
    seen = {}
    monkeypatch.setattr(job, "invert", lambda curve, **options: seen.update(options))
    curve = DispersionCurve(frequency=[5.0, 10.0], velocity=[300.0, 200.0], sigma=[5.0, 3.0])
    job.invert_curve(curve, InversionSettings(dry=True, minimum_vs_m_s=80.0, maximum_vs_m_s=900.0, seed=7))
    assert seen["water_table_depth"] == math.inf
    assert seen["vs_bounds"] == (80.0, 900.0)
    assert seen["seed"] == 7
    assert "poisson_ratio" not in seen


def test_doubts_shared_by_many_files_are_told_once_with_their_files():
    records = [Record(file=f"{i}.sg2", used=True, flags=("channel 9 set aside: dead",)) for i in range(5)]
    assert job._record_warnings(records) == ["0.sg2, 1.sg2, 2.sg2 and 2 more: channel 9 set aside: dead"]


def test_a_survey_without_a_usable_record_is_refused_with_file_and_reason(tmp_path):
    bad = tmp_path / "notes.sg2"
    bad.write_text("a field note")
    with pytest.raises(InputError, match=r"^notes\.sg2: "):
        run_survey(settings_for_files([bad]))


def test_a_curve_too_short_to_invert_keeps_records_images_and_curve_and_says_so(tmp_path, monkeypatch):
    curve = DispersionCurve(frequency=[10.0, 12.0], velocity=[200.0, 190.0], sigma=[4.0, 4.0])
    real = job.see

    def short(*args, **options):
        return real(*args, **options)._replace(curve=curve)

    monkeypatch.setattr(job, "see", short)
    result = run_survey(survey(tmp_path))
    assert result.curve == curve
    assert len(result.images) == 1
    assert result.inversion is None
    assert result.site is None
    assert any("No profile" in warning and "at least 4 points" in warning for warning in result.warnings)


def test_records_of_a_spread_left_out_of_the_curve_are_not_called_used():
    records = [Record(file=f"{name}.sg2", used=True) for name in ("a", "b", "c")]
    gathers = [
        replace(gather(), name="a.sg2 + b.sg2", spread=0),
        replace(gather(), name="c.sg2, low side", spread=1),
    ]
    marked = job._without_spreads(records, gathers, (1,))
    assert [record.used for record in marked] == [True, True, False]
    assert "left out of the curve" in marked[2].reason
    assert job._without_spreads(records, gathers, ()) == tuple(records)
