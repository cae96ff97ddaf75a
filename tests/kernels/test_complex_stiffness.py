"""Surface compliance against 60-digit integration of the equations of motion, which shares no formula."""

import mpmath as mp
import numpy as np
import pytest

from surfdisp.kernels.wavefield import vertical_compliance

SOFT_OVER_STIFF = (
    [3.0, 5.0, np.inf],
    [400.0, 1500.0, 3500.0],
    [150.0, 200.0, 1800.0],
    [1800.0, 1950.0, 2300.0],
)
REVERSED = ([2.0, 4.0, np.inf], [900.0, 400.0, 1600.0], [450.0, 120.0, 380.0], [1900.0, 1700.0, 2000.0])
THIN = ([0.003, 0.4, np.inf], [300.0, 500.0, 800.0], [150.0, 250.0, 400.0], [1700.0, 1800.0, 1900.0])
HALF_SPACE = ([np.inf], [1500.0], [150.0], [1900.0])
EARTHS = {"soft over stiff": SOFT_OVER_STIFF, "reversed": REVERSED, "thin": THIN, "half-space": HALF_SPACE}


def compliance(omega, k, earth, loss=1.0):
    thickness, vp, vs, density = (np.array(values) for values in earth)
    vp2, vs2 = vp**2 * loss, vs**2 * loss
    return vertical_compliance(
        complex(omega), np.atleast_1d(float(k)), thickness, vp2 + 0j, vs2 + 0j, density * vs2 + 0j
    )[0]


def integrated(omega, k, earth, loss=1.0):
    """Displacement over traction at the surface, from the first-order equations in (ux, uz, txz, tzz)."""
    omega, k = mp.mpc(omega), mp.mpf(k)

    def system(vp, vs, density):
        mu = mp.mpf(density) * mp.mpf(vs) ** 2 * mp.mpc(loss)
        stiff = mp.mpf(density) * mp.mpf(vp) ** 2 * mp.mpc(loss)  # lambda + 2 mu
        lam, inertia, ik = stiff - 2 * mu, density * omega**2, mp.mpc(0, 1) * k
        return mp.matrix(
            [
                [0, ik, 1 / mu, 0],
                [ik * lam / stiff, 0, 0, 1 / stiff],
                [k * k * (stiff - lam * lam / stiff) - inertia, 0, 0, ik * lam / stiff],
                [0, -inertia, ik, 0],
            ]
        )

    layers = list(zip(*earth, strict=True))
    values, vectors = mp.eig(system(*layers[-1][1:]))
    down = [i for i in range(4) if mp.re(values[i]) < 0]  # decay or leave downwards
    motion = mp.matrix([[vectors[row, i] for i in down] for row in range(4)])
    for thickness, *properties in reversed(layers[:-1]):
        motion = mp.expm(-system(*properties) * mp.mpf(thickness)) * motion
    # Combine the two solutions so that the shear traction vanishes; the load is -tzz.
    a, b = motion[2, 1], -motion[2, 0]
    return complex((a * motion[1, 0] + b * motion[1, 1]) / -(a * motion[3, 0] + b * motion[3, 1]))


@pytest.mark.parametrize("name", EARTHS)
@pytest.mark.parametrize("omega", [-7j, 3.0 - 0.5j, 125.0 - 12.0j, 600.0 - 12.0j])
@pytest.mark.parametrize("k", [1e-3, 0.05, 0.8, 12.0])
def test_compliance_is_that_of_the_equations_of_motion(name, omega, k):
    with mp.workdps(60):
        expected = integrated(omega, k, EARTHS[name])
    assert abs(compliance(omega, k, EARTHS[name]) / expected - 1.0) < 1e-9


def test_compliance_with_loss_is_that_of_the_equations_of_motion():
    with mp.workdps(60):
        expected = integrated(100.0 - 5.0j, 0.4, REVERSED, loss=1.0 + 0.05j)
    assert abs(compliance(100.0 - 5.0j, 0.4, REVERSED, loss=1.0 + 0.05j) / expected - 1.0) < 1e-11


def test_splitting_a_layer_into_many_changes_nothing():
    thickness, vp, vs, density = SOFT_OVER_STIFF
    pieces = 400
    split = (
        [thickness[0]] + [thickness[1] / pieces] * pieces + [np.inf],
        *([values[0]] + [values[1]] * pieces + [values[2]] for values in (vp, vs, density)),
    )
    for omega in (-7j, 40.0 - 7.0j, 500.0 - 12.0j):
        for k in (0.01, 0.3, 3.0, 30.0):
            assert abs(compliance(omega, k, split) / compliance(omega, k, SOFT_OVER_STIFF) - 1.0) < 1e-9


def test_short_waves_feel_the_top_layer_at_rest():
    _, vp, vs, density = SOFT_OVER_STIFF
    g = (vs[0] / vp[0]) ** 2
    static = 1.0 / (2.0 * (1.0 - g) * density[0] * vs[0] ** 2)  # (1 - nu)/mu
    assert 200.0 * compliance(10.0 - 7.0j, 200.0, SOFT_OVER_STIFF) == pytest.approx(static, rel=1e-6)
    assert np.isfinite(compliance(3000.0 - 12.0j, 1e4, SOFT_OVER_STIFF))
