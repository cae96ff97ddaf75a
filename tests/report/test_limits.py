"""The limits that figures and text tell are those that were applied."""

import dataclasses

import numpy as np
import pytest

from surfdisp.dispersion import combining, pick, picking
from surfdisp.dispersion import limits as applied
from surfdisp.report import image_with_picks, limits
from surfdisp.report.limits import wavelength_limits


@pytest.mark.parametrize("name", ["NEAR_FIELD", "TOO_NEAR", "LONGEST_WAVELENGTH"])
def test_the_limits_told_are_those_of_the_picker(name):
    assert getattr(limits, name) == getattr(applied, name)


def test_the_rules_told_are_those_of_the_curve():
    assert limits.STEEP_WAVELENGTH == picking.STEEP_WAVELENGTH
    assert limits.OUTLIER == combining.OUTLIER
    assert limits.BINS_PER_OCTAVE == combining.BINS_PER_OCTAVE


def test_no_accepted_pick_lies_beyond_a_line_of_refusal(survey):
    for image in survey.images:
        picks = pick(image)
        assert picks.accepted.any()
        lines = {limit.label: limit.wavelength for limit in wavelength_limits(image)}
        refused = min(wavelength for label, wavelength in lines.items() if "refused above" in label)
        assert picks.wavelength[picks.accepted].max() <= refused
        near = np.array(["near field" in reason for reason in picks.reason[picks.accepted]])
        beyond = picks.wavelength[picks.accepted] > lines["near field: flagged above"]
        assert np.array_equal(near, beyond)


def test_the_lines_are_drawn_at_the_limits(survey):
    image = survey.images[0]
    axes = image_with_picks(image, survey.picks[:1]).axes[0]
    drawn = {line.get_label(): line.get_ydata() / line.get_xdata() for line in axes.lines}
    for limit in wavelength_limits(image):
        assert np.allclose(drawn[limit.label], limit.wavelength)


def test_a_stack_names_its_shots_and_counts_its_files(survey):
    names = "1.dat + 2.dat, 3.dat, low side, 3.dat, high side"
    stack = dataclasses.replace(survey.stacked_images[0], name=names)
    figure = image_with_picks(stack, survey.picks, survey.curve)
    assert figure.axes[0].get_title(loc="left") == "6 shots stacked (3 files)"
    assert any("nearest shot" in limit.label for limit in wavelength_limits(stack))
