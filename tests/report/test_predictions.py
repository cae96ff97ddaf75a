"""Members of the ensemble and what they predict."""

import dataclasses

import numpy as np
import pytest

from surfdisp.core import DispersionCurve, Ensemble, InversionResult, LayeredEarth
from surfdisp.report.predictions import CURVES_SHOWN, ensemble_curves, representative


def half_spaces(weights):
    speeds = 200.0 + 10.0 * np.arange(len(weights))
    earths = [
        LayeredEarth(thickness=[np.inf], vp=[np.sqrt(3.0) * vs], vs=[vs], density=[1800.0]) for vs in speeds
    ]
    return Ensemble.of(earths, weights)


def test_members_are_shown_by_their_weight():
    assert representative(half_spaces([0.5, 0.0, 0.25, 0.25]), 4) == [0, 2, 3]
    assert representative(half_spaces(np.ones(200)), 60)[:4] == [1, 4, 8, 11]
    assert len(representative(half_spaces(np.ones(200)), 60)) == 60


def inversion(weights):
    ensemble = half_spaces(weights)
    curve = DispersionCurve(frequency=[10.0, 20.0], velocity=[190.0, 185.0], sigma=[2.0, 2.0])
    return InversionResult(
        curve=curve, earth=ensemble.earth(0), ensemble=ensemble, predicted=[184.0, 184.0], chi_square=1.0,
        resolution=[1.0], resolved_depth=9.0,
    )  # fmt: skip


def test_half_spaces_predict_the_rayleigh_speed():
    """Rayleigh 1885: c / vs = sqrt(2 - 2 / sqrt(3)) at Poisson's ratio 1/4 (checks A1)."""
    curves = ensemble_curves(inversion([0.2, 0.8]))
    expected = np.sqrt(2.0 - 2.0 / np.sqrt(3.0)) * np.array([[200.0], [210.0]]) * np.ones(2)
    assert np.allclose(curves, expected, rtol=1e-9)
    assert len(ensemble_curves(inversion(np.ones(500)))) == CURVES_SHOWN


@pytest.mark.parametrize("change", [{"mode": None}, {"kind": "group"}, {"wave": "love"}])
def test_what_is_not_predicted_yet_is_left_out(change):
    found = inversion([1.0])
    other = dataclasses.replace(found, curve=dataclasses.replace(found.curve, **change))
    assert ensemble_curves(other).shape == (0, 2)
