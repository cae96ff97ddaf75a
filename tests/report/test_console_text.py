"""What a run prints."""

import dataclasses

import pytest

from surfdisp.core import Record
from surfdisp.report import summary_text
from surfdisp.report.words import (
    metres,
    number,
    percent,
    printable,
    profile_at_legible_depths,
    traces_used,
)


def test_the_text_tells_the_whole_outcome(survey):
    text = summary_text(survey)
    vs30 = survey.site.vs30
    for phrase in (
        "Terrace by the river",
        "Records: 6 used, 1 not used",
        "broken.dat  the file ends in trace 7 of 24",
        "Scanned: 153 frequencies from 4 to 80 Hz and 181 velocities from 60 to 600 m/s",
        "1001.dat    23 of 24 traces",
        "1002.dat    24 traces",
        "Curve: 8 to 55 Hz, wavelengths 2.75 to 33.7 m, 28 points",
        "Rayleigh phase velocity, fundamental mode",
        "Resolved depth: 16.9 m",
        f"Vs30: {vs30.median:.0f} m/s ({vs30.low:.0f} to {vs30.high:.0f}), 90 % range",
        "Vs30 is extended",
        "ASCE 7-22          D   D 99 %, CD 1 %",
        "EN 1998-1:2004     C",
        "velocity criterion only",
        "forward and reverse shots differ by 4 %",
        "licensed practice prevail",
    ):
        assert phrase in text
    assert max(map(len, text.splitlines())) <= 100


def test_assumptions_and_remarks_stand_apart_from_warnings(survey):
    inversion = dataclasses.replace(survey.inversion, notes=("Vs may fall with depth.",))
    text = summary_text(dataclasses.replace(survey, inversion=inversion))
    warnings, rest = text.split("Assumptions and limits of the inversion: 1\n")
    assumptions, remarks = rest.split("Remarks on the site quantities:")
    assert "Warnings: 2\n" in warnings
    assert assumptions.strip() == "- Vs may fall with depth."
    assert "licensed practice prevail" in remarks


def test_a_reason_names_its_file_once(survey):
    record = Record(file="a.dat", reason="a.dat: no positions")
    text = summary_text(dataclasses.replace(survey, records=(record,)))
    assert "  not used  a.dat  no positions\n" in text


def test_the_check_against_the_curve_says_whether_it_agrees(survey):
    vs30 = survey.site.vs30
    near = dataclasses.replace(survey.site, wavelength_check=vs30)
    assert "36 m wavelength (Brown, Diehl & Nigbor 2000)" in summary_text(
        dataclasses.replace(survey, site=near)
    )
    assert ", agrees" in summary_text(dataclasses.replace(survey, site=near))
    away = dataclasses.replace(vs30, median=500.0, low=vs30.high + 1.0, high=600.0)
    far = dataclasses.replace(survey.site, wavelength_check=away)
    assert "does NOT agree" in summary_text(dataclasses.replace(survey, site=far))


def test_where_nothing_could_be_picked_the_text_says_so(unpicked):
    text = summary_text(unpicked)
    for phrase in ("Curve: none", "Vs30: not stated", "Site class: not stated", "no ridge is continuous"):
        assert phrase in text


@pytest.mark.parametrize("hostile", ["\x1b[31mred", "\u202egnp.exe", "a\x00b", "\udce9", "two\nlines"])
def test_texts_of_others_cannot_steer_the_terminal(survey, hostile):
    records = (Record(file=hostile, reason=hostile),)
    text = summary_text(dataclasses.replace(survey, title=hostile, records=records, warnings=(hostile,)))
    assert all(letter.isprintable() or letter == "\n" for letter in text)
    assert text.splitlines()[0] == f"{printable(hostile)} (surfdisp 0.1.0)"


def test_profiles_are_quoted_by_the_step_that_holds_at_the_depth(survey):
    profile = survey.site.profile
    for depth, median, low, high in profile_at_legible_depths(profile):
        step = max(index for index, top in enumerate(profile.depth) if top <= depth)
        assert (median, low, high) == (profile.median[step], profile.low[step], profile.high[step])
    assert profile_at_legible_depths(profile)[-1][0] == 30.0


def test_numbers_keep_three_digits_and_probabilities_never_round_to_certainty():
    shown = [number(value) for value in (271.34, 24.51, 9.0, 0.01234, -4.0, 1234.6, 0.0, float("nan"), None)]
    assert shown == ["271", "24.5", "9", "0.0123", "-4", "1235", "0", "–", "–"]
    assert [metres(value) for value in (100.5, -30.0, 1234.567, None)] == ["100.5", "-30", "1234.57", "–"]
    assert [percent(value) for value in (0.0, 0.001, 0.3, 0.999, 1.0)] == [
        "0 %",
        "< 1 %",
        "30 %",
        "> 99 %",
        "100 %",
    ]


def test_traces_set_aside_are_counted_once_each():
    flags = (
        "channel 4 set aside: dead: no signal",
        "a.dat: channel 4 set aside: noise",
        "channel 11 set aside: reversed polarity",
        "receiver at 6 m set aside: it is at the source",
        "5 usable traces on the low side of the source at 6 m set aside; expected at least 8",
    )
    assert traces_used(Record(file="a.dat", used=True, traces=24, flags=flags)) == "16 of 24"
    assert traces_used(Record(file="a.dat", used=True, traces=24)) == "24"
    assert traces_used(Record(file="a.dat", reason="no positions", traces=24, flags=flags)) == "24"
    assert traces_used(Record(file="a.dat")) == "–"
