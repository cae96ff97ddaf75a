"""Every figure: labelled, legible, without an empty panel, and drawn from the numbers it claims to show."""

import dataclasses
import itertools
import re
import subprocess
import sys

import matplotlib as mpl
import numpy as np
import pytest
from matplotlib.colors import to_rgb
from matplotlib.text import Text

from surfdisp.core import DispersionImage, Picks
from surfdisp.report import (
    curve_fit,
    image_with_picks,
    picks_over_curve,
    record_section,
    shear_velocity_profile,
    shot_images,
    write_figures,
)
from surfdisp.report.figures import figure_makers
from surfdisp.report.palette import ACCEPTED, REFUSED, TIDE

from .conftest import survey_of

UNIT = re.compile(r"\((m|s|Hz|m/s|%|sigma|1: \w+ \w+)\)$")
KINDS = ("records", "shots", "image", "curve", "fit", "profile")


def drawn(make):
    figure = make()
    figure.canvas.draw()
    return figure


@pytest.fixture(scope="module")
def figures(survey, unpicked):
    shown = {f"{name} of six shots": drawn(make) for name, make in figure_makers(survey)}
    shown |= {f"{name}, nothing picked": drawn(make) for name, make in figure_makers(unpicked)}
    shown |= {f"{name} of one shot": drawn(make) for name, make in figure_makers(survey_of(1))}
    return shown


def test_a_full_survey_has_one_figure_of_each_kind(survey):
    assert [name for name, _ in figure_makers(survey)] == [f"figure_{kind}" for kind in KINDS]


def test_every_axis_has_a_label_with_its_unit(figures):
    for name, figure in figures.items():
        x_labels = {axes.get_xlabel() for axes in figure.axes if axes.get_xlabel()}
        y_labels = {axes.get_ylabel() for axes in figure.axes if axes.get_ylabel()}
        assert x_labels, name
        assert y_labels, name
        assert all(UNIT.search(label) for label in x_labels | y_labels), (name, x_labels, y_labels)


def words_of(figure):
    """Text and place of all that is written; matplotlib keeps labels of ticks beyond the ends, unseen."""
    unseen = {label for axes in figure.axes for label in labels_beyond_the_ends(axes)}
    renderer = figure.canvas.get_renderer()
    for text in figure.findobj(Text):
        if text.get_visible() and text.get_text().strip() and text not in unseen:
            box = text.get_window_extent(renderer)
            if box.width > 0.0:
                yield text.get_text(), box


def labels_beyond_the_ends(axes):
    for axis, ends in ((axes.xaxis, axes.get_xlim()), (axes.yaxis, axes.get_ylim())):
        for tick in (*axis.get_major_ticks(), *axis.get_minor_ticks()):
            if not min(ends) <= tick.get_loc() <= max(ends):
                yield from (tick.label1, tick.label2)


def test_no_label_covers_another_or_leaves_the_sheet(figures):
    for name, figure in figures.items():
        sheet = figure.bbox
        words = list(words_of(figure))
        assert len(words) > 5
        for text, box in words:
            within = box.x0 >= -1 and box.y0 >= -1 and box.x1 <= sheet.x1 + 1 and box.y1 <= sheet.y1 + 1
            assert within, (name, text)
        for (one, a), (other, b) in itertools.combinations(words, 2):
            apart = a.x1 <= b.x0 + 1 or b.x1 <= a.x0 + 1 or a.y1 <= b.y0 + 1 or b.y1 <= a.y0 + 1
            assert apart, (name, one, other)


def test_no_panel_is_empty(figures):
    for name, figure in figures.items():
        for axes in figure.axes:
            assert axes.lines or axes.collections or axes.images or axes.patches, name


def test_drawing_leaves_the_users_settings_alone(survey):
    before = dict(mpl.rcParams)
    drawn(lambda: record_section(survey.gathers[:1]))
    assert dict(mpl.rcParams) == before


def test_the_report_never_loads_pyplot():
    code = "import sys, surfdisp.report; print('matplotlib.pyplot' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "False"


def lab(colours):
    """CIELAB of sRGB (n, 3), from IEC 61966-2-1 and CIE 15, written apart from the palette's own."""
    linear = np.where(colours <= 0.04045, colours / 12.92, ((colours + 0.055) / 1.055) ** 2.4)
    matrix = [
        [0.4124564, 0.3575761, 0.1804375],
        [0.2126729, 0.7151522, 0.072175],
        [0.0193339, 0.119192, 0.9503041],
    ]
    xyz = linear @ np.transpose(matrix) / [0.95047, 1.0, 1.08883]
    root = np.where(xyz > 216 / 24389, np.cbrt(xyz), (24389 / 27 * xyz + 16) / 116)
    return np.column_stack(
        [116 * root[:, 1] - 16, 500 * (root[:, 0] - root[:, 1]), 200 * (root[:, 1] - root[:, 2])]
    )


def test_the_colour_map_is_perceptually_even():
    colours = lab(np.array(TIDE.colors))
    lightness = colours[:, 0]
    assert np.all(np.diff(lightness) < 0.0)
    assert np.ptp(np.diff(lightness)) < 0.15 * abs(np.diff(lightness).mean())
    steps = np.linalg.norm(np.diff(colours, axis=0), axis=1)
    assert steps.max() < 2.0 * steps.min()
    marks = lab(np.array([to_rgb(ACCEPTED), to_rgb(REFUSED)]))
    assert np.linalg.norm(marks[:, None] - colours[None], axis=2).min() > 15.0  # marks stand out anywhere


def scattered(axes, label):
    return next(np.asarray(marks.get_offsets()) for marks in axes.collections if marks.get_label() == label)


def test_accepted_and_refused_picks_have_marks_of_their_own(survey):
    picks = survey.picks[2]
    axes = image_with_picks(survey.images[2], [picks]).axes[0]
    accepted = np.column_stack([picks.frequency, picks.velocity])[picks.accepted]
    refused = np.column_stack([picks.frequency, picks.velocity])[
        ~picks.accepted & np.isfinite(picks.velocity)
    ]
    flagged = picks.reason[picks.accepted] != ""
    assert flagged.any()
    assert np.array_equal(scattered(axes, "pick, accepted"), accepted[~flagged])
    assert np.array_equal(scattered(axes, "pick, accepted with a flag"), accepted[flagged])
    assert np.array_equal(scattered(axes, "ridge, refused"), refused)
    edges = [line.get_ydata() for line in axes.lines if line.get_label() == "half-width of the ridge"]
    assert np.allclose((edges[0] + edges[1])[picks.accepted] / 2, picks.velocity[picks.accepted])


def line(axes, label):
    return [np.column_stack(found.get_data()) for found in axes.lines if found.get_label() == label]


def test_limits_are_the_wavelengths_they_claim(survey):
    image = survey.images[0]
    axes = image_with_picks(image, survey.picks[:1]).axes[0]
    expected = {
        "near field: flagged above": 43.0,  # receivers 0 to 46 m seen from -20 m
        "near field: refused above": 86.0,
        "1.5 spread lengths: refused above": 69.0,
        "two spacings: flagged below": 4.0,
    }
    for label, wavelength in expected.items():
        ((frequency, velocity),) = [points[-1] for points in line(axes, label)]
        assert velocity / frequency == pytest.approx(wavelength)


def test_an_alias_is_drawn_where_the_array_cannot_tell_it_from_the_ridge():
    frequencies, velocities = np.arange(5.0, 80.0), np.linspace(50.0, 2000.0, 40)
    offsets = 20.0 + 4.0 * np.arange(24)
    image = DispersionImage(
        frequencies=frequencies, velocities=velocities, power=np.zeros((75, 40)), offsets=offsets, spacing=4.0
    )
    ridge = np.full(75, 170.0)
    picks = Picks(
        frequency=frequencies,
        velocity=ridge,
        sigma=ridge,
        half_width=ridge,
        accepted=ridge > 0,
        reason=np.full(75, ""),
    )
    aliases = line(image_with_picks(image, [picks]).axes[0], "alias of the ridge")
    assert len(aliases) == 2
    seen = 0
    for frequency, velocity in np.concatenate(aliases):
        if np.isfinite(velocity):
            wave = np.exp(-2j * np.pi * frequency * offsets / 170.0)
            agreement = abs(np.sum(wave * np.exp(2j * np.pi * frequency * offsets / velocity))) / 24
            assert agreement == pytest.approx(1.0, abs=1e-9)
            seen += 1
    assert seen > 75


def test_the_image_is_drawn_upright(survey):
    image = survey.images[0]
    power = np.zeros_like(image.power)
    power[30, 40] = 1.0  # one cell, at 19 Hz and 180 m/s
    axes = image_with_picks(dataclasses.replace(image, power=power)).axes[0]
    (shown,) = axes.images
    rows, columns = np.nonzero(np.asarray(shown.get_array()))
    size = np.array(shown.get_array().shape)
    place = np.array([(columns.mean() + 0.5) / size[1], (rows.mean() + 0.5) / size[0]])
    frequency, velocity = axes.transData.inverted().transform(axes.transAxes.transform(place))
    assert frequency == pytest.approx(19.0, rel=0.02)
    assert velocity == pytest.approx(180.0, rel=0.02)
    in_axes = (shown.get_transform() - axes.transAxes).transform(place)
    assert in_axes == pytest.approx(place)
    assert tuple(shown.get_extent()) == (0.0, 1.0, 0.0, 1.0)


def test_the_profile_draws_the_steps_of_median_and_best_earth(survey):
    axes = shear_velocity_profile(survey.site, survey.inversion, survey.logs).axes[0]
    profile, earth = survey.site.profile, survey.inversion.earth
    (median,) = line(axes, "median")
    assert np.array_equal(median[::2], np.column_stack([profile.median, profile.depth]))
    assert np.array_equal(median[1:-1:2, 1], profile.depth[1:])
    (best,) = line(axes, "best earth")
    assert np.array_equal(best[::2], np.column_stack([earth.vs, earth.depth]))
    assert axes.yaxis_inverted()
    assert survey.site.resolved_depth in [rule.get_ydata()[0] for rule in axes.lines]
    assert f"Vs30 {survey.site.vs30.median:.0f} m/s" in axes.get_title(loc="left")


def test_misfits_are_in_units_of_sigma(survey):
    inversion = survey.inversion
    above, below = curve_fit(inversion).axes
    assert above.get_title(loc="left") == "mean squared misfit in units of the variance: 0.93"
    assert below.get_ylabel().split() == ["measured", "minus", "predicted", "(sigma)"]
    residual = (inversion.curve.velocity - inversion.predicted) / inversion.curve.sigma
    assert any(np.array_equal(points.get_ydata(), residual) for points in below.lines)


def test_departures_of_shots_are_relative_to_the_curve(survey):
    curve = survey.curve
    on_it = Picks(
        frequency=curve.frequency, velocity=1.02 * curve.velocity, sigma=curve.sigma, half_width=curve.sigma,
        accepted=np.ones(len(curve.frequency)), reason=np.full(len(curve.frequency), ""), name="shot",
    )  # fmt: skip
    above, below = picks_over_curve([on_it], curve).axes[:2]
    assert np.allclose(np.asarray(below.collections[-1].get_offsets())[:, 1], 2.0)
    assert np.allclose(scattered(above, "shot")[:, 1], 1.02 * curve.velocity)


def test_traces_stand_at_their_receivers(survey):
    axes = record_section(survey.gathers[:1]).axes[0]
    (traces,) = axes.collections
    feet = [np.median(segment[:, 0]) for segment in traces.get_segments()]
    assert np.allclose(feet, survey.gathers[0].receivers, atol=0.2)


def test_names_of_others_are_no_formulas(survey):
    image = dataclasses.replace(survey.images[0], name=r"$\frac{1}{0}$ #_^.dat")
    figure = shot_images([image], survey.picks[:1])
    figure.canvas.draw()
    assert figure.axes[0].get_title(loc="left") == r"$\frac{1}{0}$ #_^.dat"


def test_ten_shots_take_two_sheets_of_five():
    makers = dict(figure_makers(survey_of(10)))
    wanted = ("records", "records_2", "shots", "shots_2", "image", "curve", "fit", "profile")
    assert list(makers) == [f"figure_{kind}" for kind in wanted]
    assert [len(makers[f"figure_records{part}"].args[0]) for part in ("", "_2")] == [5, 5]


def test_the_same_result_gives_the_same_bytes(tmp_path):
    survey = survey_of(1)
    for folder in ("one", "two"):
        (tmp_path / folder).mkdir()
        names = write_figures(tmp_path / folder, survey)
    assert names == [f"figure_{kind}.png" for kind in ("records", "image", "curve", "fit", "profile")]
    for name in names:
        assert (tmp_path / "one" / name).read_bytes() == (tmp_path / "two" / name).read_bytes()


def test_a_single_point_and_a_single_trace_can_be_drawn(survey):
    gather = dataclasses.replace(
        survey.gathers[0], data=survey.gathers[0].data[:1], receivers=[0.0], elevations=[0.0]
    )
    curve = dataclasses.replace(
        survey.curve, frequency=[10.0], velocity=[200.0], sigma=[4.0], shots=[1], flags=[""]
    )
    for make in (lambda: record_section([gather], curve), lambda: picks_over_curve(survey.picks, curve)):
        assert drawn(make).axes
