"""Site classes against the tables of the standards, boundaries included.

Limits in ft/s of ASCE 7-22 Table 20.2-1 and ASCE 7-16 Table 20.3-1, and in m/s of ASCE 7-16 and
EN 1998-1:2004 Table 3.1, were read in secondary sources. The rounded m/s limits of ASCE 7-22 are from
memory [M]; they are checked against the exact conversion of the ft/s ones as well.
"""

import numpy as np
import pytest

from surfdisp.core import InputError
from surfdisp.site import site_class
from surfdisp.site.classes import standard

FOOT = 0.3048
ABOVE, BELOW = 1.0 + 1e-9, 1.0 - 1e-9

ASCE_22_FEET = [("E", 500), ("DE", 700), ("D", 1000), ("CD", 1450), ("C", 2100), ("BC", 3000), ("B", 5000)]
ASCE_22_SI = [("E", 150), ("DE", 210), ("D", 300), ("CD", 440), ("C", 640), ("BC", 900), ("B", 1500)]  # [M]
STIFFER_22 = {"E": "DE", "DE": "D", "D": "CD", "CD": "C", "C": "BC", "BC": "B", "B": "A"}


@pytest.mark.parametrize(("name", "upper"), ASCE_22_FEET)
def test_asce_7_22_in_feet_takes_the_upper_limit_in_and_leaves_the_lower_out(name, upper):
    limit = upper * FOOT
    assert site_class(limit, "ASCE 7-22", units="ft/s") == name
    assert site_class(limit * ABOVE, "ASCE 7-22", units="ft/s") == STIFFER_22[name]


@pytest.mark.parametrize(("name", "upper"), ASCE_22_SI)
def test_asce_7_22_in_metres_takes_the_upper_limit_in_and_leaves_the_lower_out(name, upper):
    assert site_class(float(upper), "ASCE 7-22") == name
    assert site_class(upper * ABOVE, "ASCE 7-22") == STIFFER_22[name]


def test_rounded_metric_limits_lie_within_two_percent_of_the_feet():
    metric = np.array(standard("ASCE 7-22").limits)
    feet = np.array(standard("ASCE 7-22", "ft/s").limits) * FOOT
    np.testing.assert_allclose(metric, feet, rtol=0.02)


def test_304_metres_per_second_is_d_in_feet_and_cd_in_metres():
    # 304 m/s = 997.4 ft/s: below 1000 ft/s, above 300 m/s
    assert site_class(304.0, "ASCE 7-22", units="ft/s") == "D"
    assert site_class(304.0, "ASCE 7-22", units="SI") == "CD"


@pytest.mark.parametrize("units", ["SI", "ft/s"])
def test_asce_7_16_class_d_owns_both_its_ends(units):
    unit = 1.0 if units == "SI" else FOOT
    lower, upper = (180.0, 360.0) if units == "SI" else (600.0, 1200.0)
    found = [
        site_class(velocity * unit, "ASCE 7-16", units=units)
        for velocity in (lower * BELOW, lower, upper, upper * ABOVE)
    ]
    assert found == ["E", "D", "D", "C"]


@pytest.mark.parametrize(("velocity", "name"), [(760.0, "C"), (760.1, "B"), (1500.0, "B"), (1500.1, "A")])
def test_asce_7_16_rock_classes(velocity, name):
    assert site_class(velocity, "ASCE 7-16") == name


@pytest.mark.parametrize(
    ("velocity", "name"),
    [(179.9, "D"), (180.0, "C"), (360.0, "C"), (360.1, "B"), (800.0, "B"), (800.1, "A")],
)
def test_en_1998_classes(velocity, name):
    assert site_class(velocity, "EN 1998-1:2004") == name


def test_bounds_in_words_carry_unit_depth_and_every_class():
    text = standard("ASCE 7-22", "ft/s").bounds
    assert "ft/s" in text
    assert "30.48 m" in text
    assert "D > 700 and <= 1000" in text
    assert "D >= 180 and <= 360" in standard("ASCE 7-16").bounds


@pytest.mark.parametrize(("name", "units"), [("ASCE 7-10", "SI"), ("ASCE 7-22", "feet")])
def test_unknown_standard_or_unit_is_refused_with_the_choices(name, units):
    with pytest.raises(InputError, match="must be one of"):
        site_class(300.0, name, units=units)
