"""Rayleigh phase velocities against tables: half-space, layered models, and a branch that turns back."""

import csv
import tomllib
from pathlib import Path

import numpy as np
import pytest

from surfdisp.core import LayeredEarth
from surfdisp.earth import mode_count, phase_velocity

HERE = Path(__file__).parent
MODELS = {
    name: LayeredEarth(**m) for name, m in tomllib.loads((HERE / "rayleigh_models.toml").read_text()).items()
}
TABLE = list(csv.DictReader((HERE / "rayleigh_modes.csv").read_text().splitlines()))

# Rayleigh (1885), Proc. Lond. Math. Soc. 17, 4-11: Poisson's ratio and c/vs, roots of his cubic with 40
# digits
HALF_SPACE = [
    (0.0, 0.874032048898),
    (0.1, 0.893106005025),
    (0.2, 0.910995890975),
    (0.25, 0.919401686762),
    (0.3, 0.927412709703),
    (1 / 3, 0.932525905931),
    (0.35, 0.935013127535),
    (0.4, 0.942195433116),
    (0.45, 0.948959697872),
    (0.48, 0.952820099960),
    (0.49, 0.954074354140),
]


@pytest.mark.parametrize(("poisson", "ratio"), HALF_SPACE)
def test_half_space_alone(poisson, ratio):
    vp = 300.0 * np.sqrt(2.0 * (1.0 - poisson) / (1.0 - 2.0 * poisson))
    earth = LayeredEarth(thickness=[np.inf], vp=[vp], vs=[300.0], density=[1900.0])
    assert phase_velocity(earth, [1.0, 80.0]) / 300.0 == pytest.approx(ratio, abs=5e-13)
    assert np.isnan(phase_velocity(earth, [1.0, 80.0], mode=1)).all()


@pytest.mark.parametrize("row", TABLE, ids=lambda r: f"{r['model']}-{r['frequency_hz']}Hz-mode{r['mode']}")
def test_layered_model(row):
    found = phase_velocity(MODELS[row["model"]], float(row["frequency_hz"]), mode=int(row["mode"]))[0]
    if row["velocity_m_s"]:
        assert abs(found - float(row["velocity_m_s"])) <= 0.5e-3
    else:
        assert np.isnan(found)


# Model NGV-A of the collected theory values, computed with 40 digits: at 6.5 Hz branch 1 has three
# velocities, the middle one with negative group velocity. The branch turns back at 6.33495 Hz, c = 348.549
# m/s.
BACKWARD = LayeredEarth(
    thickness=[10.0, np.inf], vp=[300.0, 3500.0], vs=[100.0, 2000.0], density=[1800.0, 2400.0]
)


def test_counts_around_a_backward_branch():
    roots = np.array([104.439393, 273.182387, 553.882503, 1643.83938])
    between = [100.0, *np.sqrt(roots[1:] * roots[:-1]), 1900.0]
    assert mode_count(BACKWARD, 6.5, between).tolist() == [0, 1, 2, 1, 2]


def test_slowest_roots_around_a_backward_branch():
    assert phase_velocity(BACKWARD, 6.5, mode=0) == pytest.approx(104.439393, abs=5e-7)
    assert phase_velocity(BACKWARD, 6.5, mode=1) == pytest.approx(273.182387, abs=5e-7)
    assert np.isnan(phase_velocity(BACKWARD, 6.5, mode=2)).all()


def test_the_turning_point_is_found_from_both_sides():
    above, below = phase_velocity(BACKWARD, [6.3350, 6.3349], mode=1)
    assert above == pytest.approx(348.5, abs=3.0)
    assert below > 1600.0
