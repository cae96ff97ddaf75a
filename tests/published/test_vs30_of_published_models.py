"""Vs30 of two published layered models.

The layer tables of both papers are from memory [M] (Xia, Miller & Park 1999, Geophysics 64:691-700, six
layers; Tokimatsu, Tamura & Kojima 1992, J. Geotech. Eng. 118:1529-1543); the averages follow from
them by the formula 30 / sum(h/v), worked out apart from this program.
"""

import numpy as np
import pytest

from surfdisp.core import LayeredEarth
from surfdisp.site import average_velocity, vs30

XIA = LayeredEarth(
    thickness=[2.0, 2.3, 2.5, 2.8, 3.2, np.inf],
    vs=[194.0, 270.0, 367.0, 485.0, 603.0, 740.0],
    vp=[650.0, 750.0, 1400.0, 1800.0, 2150.0, 2800.0],
    density=[1820.0, 1860.0, 1910.0, 1960.0, 2020.0, 2090.0],
)


def tokimatsu(*vs):
    return LayeredEarth(
        thickness=[2.0, 4.0, 8.0, np.inf], vs=vs, vp=[300.0, 1000.0, 1400.0, 1400.0], density=[1800.0] * 4
    )


def test_vs30_of_the_six_layers_of_xia_miller_and_park():
    assert vs30(XIA) == pytest.approx(500.3083, abs=5e-5)


def test_average_over_one_hundred_feet_of_the_six_layers():
    assert average_velocity(XIA, 30.48) == pytest.approx(502.87, abs=5e-3)


@pytest.mark.parametrize(
    ("vs", "expected"),
    [
        ((80.0, 120.0, 180.0, 360.0), 203.7736),
        ((180.0, 120.0, 180.0, 360.0), 225.0000),
        ((80.0, 180.0, 120.0, 360.0), 189.4737),
    ],
    ids=["case 1", "case 2", "case 3"],
)
def test_vs30_of_the_three_cases_of_tokimatsu_tamura_and_kojima(vs, expected):
    assert vs30(tokimatsu(*vs)) == pytest.approx(expected, abs=5e-5)
