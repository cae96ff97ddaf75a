"""Random layered earths that are hard on a root finder, and the comparison of two solvers on one of them."""

from itertools import pairwise

import numpy as np
from twins.depth_elements import FASTEST, DepthElements

from surfdisp.core import LayeredEarth
from surfdisp.earth import mode_count, phase_velocity

TOLERANCE = 1e-4  # relative, of velocities by finite elements
WAVELENGTHS = 6.0  # shear wavelengths in all layers together, at most: keeps the finite elements affordable


def random_earth(rng):
    """Return (earth, frequency): 2 to 15 layers, contrasts to 10, Vp/Vs 1.5 to 12, 1 to 100 Hz.

    Half of the earths are in any order, with velocity reversals throughout, half rise with depth but for one
    layer that is drawn anew.
    """
    n = int(rng.integers(2, 16))
    frequency = 10.0 ** rng.uniform(0.0, 2.0)
    vs = rng.uniform(60.0, 300.0) * 10.0 ** rng.uniform(0.0, 1.0, n)
    if rng.random() < 0.5:
        vs.sort()
        odd = rng.integers(n)
        vs[odd] = vs[0] * 10.0 ** rng.uniform(0.0, np.log10(vs[-1] / vs[0]))
    thickness = np.exp(rng.normal(np.log(3.0), 0.8, n))
    most = rng.uniform(0.2, WAVELENGTHS)
    thickness *= min(1.0, most / np.sum(thickness[:-1] * frequency / vs[:-1]))
    thickness[-1] = np.inf
    vp = vs * np.exp(rng.uniform(np.log(1.5), np.log(12.0), n))
    return LayeredEarth(thickness=thickness, vp=vp, vs=vs, density=rng.uniform(1400.0, 2600.0, n)), frequency


def disagreements(earth, frequency, fineness=0.6):
    """Return (faults, number of modes): what was lost, invented or misnumbered against finite elements."""
    elements = DepthElements(earth.thickness, earth.vp, earth.vs, earth.density, frequency, fineness)
    roots = elements.roots()
    slowest = {}
    for velocity, branch in roots:
        slowest.setdefault(branch, velocity)
    faults = []
    limit = FASTEST * earth.vs[-1]
    for branch in range(max(slowest, default=-1) + 3):
        found = phase_velocity(earth, frequency, mode=branch)[0]
        expected = slowest.get(branch)
        if expected is None:
            if found < limit * (1.0 - TOLERANCE):
                faults.append(f"mode {branch}: {found} m/s, by elements none")
        elif not abs(found - expected) <= TOLERANCE * expected and expected < limit * (1.0 - TOLERANCE):
            faults.append(f"mode {branch}: {found} m/s, by elements {expected}")
    edges = [0.5 * roots[0][0] if roots else 0.5 * limit, *(velocity for velocity, _ in roots), limit]
    for low, high in pairwise(edges):
        if high - low > 2.0 * TOLERANCE * high:  # counts half way between roots, where both are sure
            middle = 0.5 * (low + high)
            counts = mode_count(earth, frequency, middle)[0], elements.count(middle)
            if counts[0] != counts[1]:
                faults.append(f"count at {middle} m/s: {counts[0]}, by elements {counts[1]}")
    return faults, len(roots)
