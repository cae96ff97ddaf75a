"""Elements of the layer stiffness against the matrix exponential of the equations of motion, 40 digits."""

import math

import mpmath
import numpy as np
import pytest

from surfdisp.kernels.layer_stiffness import SMALL, even_functions, half_space_stiffness, layer_stiffness

THICKNESSES = [1e-4, 1e-3, 0.01, 0.1, 0.3, 0.5, 0.69, 0.71, 0.75, 1.0, 1.5, 3.0, 6.0, 20.0, 100.0]
VP_OVER_VS = [1.16, 1.5, 2.0, 5.0, 12.0]


def velocities(ratio):
    """C over vs: far below, beside and above vs and vp, and equal to each of them."""
    return [0.01, 0.1, 0.5, 0.7, 0.72, 0.9, 1 - 1e-6, 1.0, 1 + 1e-6, 1.2, ratio * 0.999, ratio, ratio * 1.001]


def motion(e_p, e_s):
    """Matrix of d/dz (phi, psi, tau, sigma) for k = mu = 1; tau and sigma are the tractions on z = const."""
    e_p, e_s = mpmath.mpf(e_p), mpmath.mpf(e_s)
    axial = e_s / e_p  # lambda + 2 mu
    lame = axial - 2
    return mpmath.matrix(
        [
            [0, 1, 1, 0],
            [-lame / axial, 0, 0, 1 / axial],
            [axial - lame**2 / axial - e_s, 0, 0, lame / axial],
            [0, -e_s, -1, 0],
        ]
    )


def exact(thickness, e_p, e_s, *, rigid=False):
    """Return the 4x4 stiffness from the transfer matrix exp(motion * thickness), with 40 digits or more."""
    with mpmath.workdps(40 + int(thickness)):
        transfer = mpmath.expm(motion(e_p, e_s) * mpmath.mpf(thickness))
        inverse = transfer[0:2, 2:4] ** -1
        top = inverse * transfer[0:2, 0:2]  # the force on the upper face is minus the traction there
        bottom = transfer[2:4, 2:4] * inverse
        if rigid:
            return float(top[0, 0] - inverse[0, 0]), float(top[1, 1] - inverse[1, 1])
        full = np.zeros((4, 4))
        for i in range(2):
            for j in range(2):
                full[i, j] = top[i, j]
                full[i, 2 + j] = -inverse[i, j]
                full[2 + i, j] = -inverse[j, i]
                full[2 + i, 2 + j] = bottom[i, j]
        return full


def computed(thickness, e_p, e_s):
    xx, xz, zz, cxx, cxz, czz, _, _ = layer_stiffness(1.0, thickness, 1.0, e_p, e_s)
    return np.array([[xx, xz, cxx, cxz], [xz, zz, -cxz, czz], [cxx, -cxz, xx, -xz], [cxz, czz, -xz, zz]])


@pytest.mark.parametrize("ratio", VP_OVER_VS)
@pytest.mark.parametrize("thickness", THICKNESSES)
def test_elements_have_at_least_12_digits(thickness, ratio):
    for velocity in velocities(ratio):
        e_s = velocity**2
        if thickness * math.sqrt(max(e_s - 1.0, 0.0)) >= math.pi:
            continue  # thicker than a piece that the mode count admits: near a pole
        expected = exact(thickness, e_s / ratio**2, e_s)
        error = np.abs(computed(thickness, e_s / ratio**2, e_s) - expected).max()
        assert error <= 1e-12 * np.abs(expected).max(), f"c/vs {velocity}"


@pytest.mark.parametrize("ratio", VP_OVER_VS)
@pytest.mark.parametrize("thickness", [1e-4, 1e-2, 0.3, 0.69])
def test_forces_against_a_shift_of_a_thin_layer(thickness, ratio):
    """Sums of large elements of opposite sign: as exact as the layer's own mass and tension."""
    for velocity in velocities(ratio):
        e_s = velocity**2
        expected = exact(thickness, e_s / ratio**2, e_s, rigid=True)
        sums = layer_stiffness(1.0, thickness, 1.0, e_s / ratio**2, e_s)[6:]
        assert sums == pytest.approx(expected, rel=1e-11, abs=1e-14 * thickness * ratio**2), (
            f"c/vs {velocity}"
        )


def test_thick_layers_do_not_overflow():
    elements = layer_stiffness(1.0, 1e5, 1.0, 0.1, 0.4)
    assert elements[:3] == pytest.approx(half_space_stiffness(1.0, 1.0, 0.1, 0.4), rel=1e-14)
    assert elements[3:6] == (0.0, 0.0, 0.0)


@pytest.mark.parametrize("e_s", [1e-6, 0.3, 0.98])
def test_half_space_is_the_limit_of_a_thick_layer(e_s):
    decay = math.sqrt(1.0 - e_s)  # of the slowest wave per unit of thickness
    expected = exact(30.0 / decay, e_s / 4, e_s)
    found = half_space_stiffness(1.0, 1.0, e_s / 4, e_s)
    assert found == pytest.approx((expected[0, 0], expected[0, 1], expected[1, 1]), rel=1e-11)


@pytest.mark.parametrize("x", [0.0, 1e-9, SMALL * 0.9999, SMALL * 1.0001, 3.0, 60.0])
def test_even_functions(x):
    even, odd, decay = even_functions(x * x)
    assert even == pytest.approx(math.cosh(x) * decay, rel=1e-15)
    assert odd == pytest.approx((math.sinh(x) / x if x else 1.0) * decay, rel=1e-15)
    even, odd, decay = even_functions(-x * x)
    assert even == pytest.approx(math.cos(x), abs=1e-15)
    assert odd == pytest.approx(math.sin(x) / x if x else 1.0, abs=1e-15)
    assert decay == 1.0
