"""The PDF: three to six pages that say what was found, whatever the texts in the file headers."""

import dataclasses
import hashlib
import re

import numpy as np
import pypdf
import pytest

from surfdisp.core import StepError
from surfdisp.report import pdf, write_figures, write_report
from surfdisp.site.notes import CAUTION, CLASS_CAUTION

from .conftest import survey_of, without_picks


@pytest.fixture(scope="module")
def figures(survey, tmp_path_factory):
    folder = tmp_path_factory.mktemp("figures")
    write_figures(folder, survey)
    return folder


def pages(path):
    return [page.extract_text() for page in pypdf.PdfReader(path).pages]


def squeezed(text):
    """Without what typesetting adds or takes: spaces, line ends, permitted breaks."""
    return re.sub(r"[\s\u200b\u00ad]", "", text)


def test_the_report_says_what_was_found_in_three_to_six_pages(tmp_path, survey, figures):
    write_report(tmp_path / "report.pdf", survey, figures=figures)
    made = pages(tmp_path / "report.pdf")
    assert 3 <= len(made) <= 6
    text = " ".join(" ".join(made).split())
    vs30 = survey.site.vs30
    for phrase in (
        "Terrace by the river",
        f"Vs30 is {vs30.median:.0f} m/s ({vs30.low:.0f} to {vs30.high:.0f})",
        "Field files used: 6 of 7.",
        "the file ends in trace 7 of 24",
        "1010101010",  # digest of the first file
        "1001.dat: trace 9 has reversed polarity",
        "24 vertical receivers from 0 to 46 m",
        "minimum_frequency_hz = 4.0",
        "what is not listed was chosen by the program",
        "153 frequencies from 4 to 80 Hz and 181 velocities from 60 to 600 m/s",
        "below 0.5 wavelengths",
        "beyond 1.5 spread lengths",
        "8 bins per octave",
        "more than 3 robust standard deviations",
        "ASCE 7-22: D",
        "23 of 24",
        "ln(f/f0)/(pi Q)",
        CAUTION,
        CLASS_CAUTION,
        "28 points from 8 to 55 Hz",
        "signal-to-noise below 2 (50)",
        "fundamental mode",
        "Mean squared misfit 0.93",
        "ratio 1.3: 8 layers",
        "resolve the ground to 16.9 m",
        "Vs30 is extended",
        "ASCE 7-22",
        "EN 1998-1:2004",
        "velocity criterion only",
        "forward and reverse shots differ by 4 %",
        "licensed practice prevail",
        "Park, Miller & Xia 1998",
        "Wittrick & Williams 1971",
        "Checked by",
    ):
        assert phrase in text
    images = sum(len(page.images) for page in pypdf.PdfReader(tmp_path / "report.pdf").pages)
    assert images == 6
    assert (tmp_path / "report.pdf").stat().st_size < 3_000_000


def test_the_same_result_gives_the_same_bytes(tmp_path, survey, figures):
    digests = set()
    for name in ("one.pdf", "two.pdf"):
        write_report(tmp_path / name, survey, figures=figures)
        digests.add(hashlib.sha256((tmp_path / name).read_bytes()).hexdigest())
    assert len(digests) == 1


HOSTILE = (
    '#panic("x") $a^2$ *bold* _it_ @ref <b>html</b> "quoted" \\#u{41} // no comment /* */ = head',
    "#include \"/etc/passwd\" [#] {`} ~ -- --- ... 'x' `code`",
)


@pytest.mark.parametrize("hostile", HOSTILE)
def test_texts_of_others_appear_as_they_are(tmp_path, survey, figures, hostile):
    record = dataclasses.replace(survey.records[-1], file=hostile[:20], reason=hostile)
    spoiled = dataclasses.replace(
        survey,
        title=hostile,
        records=(*survey.records[:-1], record),
        warnings=(hostile + "?",),
        settings=f"title = '{hostile}'",
        curve=dataclasses.replace(survey.curve, notes=(hostile + "!",)),
    )
    write_report(tmp_path / "report.pdf", spoiled, figures=figures)
    text = squeezed("".join(pages(tmp_path / "report.pdf")))
    assert squeezed(f"title = '{hostile}'") in text
    assert text.count(squeezed(hostile)) >= 5  # title, reason, setting, both warnings
    assert squeezed(hostile[:20]) in text


def test_control_characters_are_spelt_out(tmp_path, survey, figures):
    spoiled = dataclasses.replace(survey, title="a\x1b[31m\u202eb\x00", warnings=("\udce9",))
    write_report(tmp_path / "report.pdf", spoiled, figures=figures)
    text = squeezed("".join(pages(tmp_path / "report.pdf")))
    assert "a\\x1b[31m\\u202eb\\x00" in text
    assert "\\udce9" in text


def test_long_words_stay_within_their_column(tmp_path, survey, figures):
    word = "x" * 400
    spoiled = dataclasses.replace(survey, warnings=(word,), title=word)
    write_report(tmp_path / "report.pdf", spoiled, figures=figures)
    right_ends = []

    def note(text, current, matrix, font, size):
        right_ends.append(matrix[4] + len(text.strip()) * 0.2 * (size or 0.0))

    for page in pypdf.PdfReader(tmp_path / "report.pdf").pages:
        page.extract_text(visitor_text=note)
        assert max(right_ends) < page.mediabox.width
    assert len(right_ends) > 50


@pytest.mark.parametrize("shots", [1, 6])
def test_where_nothing_could_be_picked_the_report_says_why(tmp_path, shots):
    unpicked = without_picks(survey_of(shots))
    write_report(tmp_path / "report.pdf", unpicked)
    made = pages(tmp_path / "report.pdf")
    text = " ".join(" ".join(made).split())
    assert 3 <= len(made) <= 6
    for phrase in (
        "No profile is given. Nothing could be picked: no ridge is continuous",
        "1001.dat",
        "not stated",
    ):
        assert phrase in text
    images = sum(len(page.images) for page in pypdf.PdfReader(tmp_path / "report.pdf").pages)
    assert images == (2 if shots == 1 else 3)


@pytest.mark.slow
def test_a_large_survey_stays_within_six_pages(tmp_path):
    survey = survey_of(10)
    gathers = [dataclasses.replace(gather, spread=index // 4) for index, gather in enumerate(survey.gathers)]
    flags = tuple(
        f"trace {index} is noisy: its amplitude is unlike that of its neighbours" for index in range(12)
    )
    large = dataclasses.replace(
        survey,
        gathers=tuple(gathers),
        stacked_images=survey.stacked_images * 3,
        records=tuple(dataclasses.replace(record, flags=flags) for record in survey.records * 4),
        warnings=tuple(
            f"warning {index}: " + "the shots differ by more than their uncertainty " * 4
            for index in range(40)
        ),
        settings="\n".join(f"setting_{index} = {index}" for index in range(300)),
    )
    write_report(tmp_path / "report.pdf", large)
    made = pages(tmp_path / "report.pdf")
    assert 3 <= len(made) <= 6
    text = " ".join(" ".join(made).split())
    for phrase in (
        "24 more records are listed",
        "more: see summary.json",
        "the rest: see project.h5",
        "more of this kind",
    ):
        assert phrase in text
    assert (tmp_path / "report.pdf").stat().st_size < 3_000_000


def test_what_cannot_be_typeset_is_an_error_of_ours(tmp_path, survey, monkeypatch):
    broken = tmp_path / "report.typ"
    broken.write_text("#let = ")
    monkeypatch.setattr(pdf, "TEMPLATE", broken)
    with pytest.raises(StepError, match="cannot be typeset"):
        write_report(tmp_path / "report.pdf", survey, figures=tmp_path)
    assert not (tmp_path / "report.pdf").exists()


def test_gaps_in_the_numbers_are_dashes(tmp_path, survey, figures):
    profile = dataclasses.replace(survey.site.profile, median=np.full(len(survey.site.profile.depth), np.nan))
    gaps = dataclasses.replace(survey, site=dataclasses.replace(survey.site, profile=profile))
    write_report(tmp_path / "report.pdf", gaps, figures=figures)
    text = " ".join(pages(tmp_path / "report.pdf"))
    assert "nan" not in text.lower()
    assert "0 – 148 to 162" in text
