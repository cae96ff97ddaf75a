"""An independent solver of the Rayleigh problem: spectral elements in depth. It imports nothing of surfdisp.

The motion is u_x = phi(z) sin(kx), u_z = psi(z) cos(kx), as polynomials on elements with Gauss-Lobatto nodes;
the half-space ends at a rigid base so deep that modes slower than `FASTEST` times its shear velocity do not
feel it. Virtual work gives (k^2 A + k B + C - omega^2 M) u = 0 with A and M diagonal and B joining phi to psi
only, so that

- at fixed k the squared frequencies are the eigenvalues of a symmetric matrix: they number the branches;
- at fixed omega, with psi' = k psi, the squared wavenumbers are the eigenvalues of a matrix of the same size
  (the thin-layer form of Kausel & Roësset 1981): all roots of all branches at once, backward ones included.
"""

import numpy as np
from scipy.linalg import eigh

DEGREE = 7
FASTEST = 0.97


def lobatto(degree):
    """Nodes, weights and differentiation matrix of Gauss-Lobatto-Legendre interpolation on (-1, 1)."""
    legendre = np.polynomial.legendre.Legendre.basis(degree)
    nodes = np.concatenate([[-1.0], np.sort(legendre.deriv().roots().real), [1.0]])
    values = legendre(nodes)
    weights = 2.0 / (degree * (degree + 1) * values**2)
    gaps = nodes[:, None] - nodes[None, :]
    np.fill_diagonal(gaps, 1.0)
    slopes = values[:, None] / values[None, :] / gaps
    np.fill_diagonal(slopes, 0.0)
    slopes[0, 0], slopes[-1, -1] = -degree * (degree + 1) / 4.0, degree * (degree + 1) / 4.0
    return nodes, weights, slopes


NODES, WEIGHTS, SLOPES = lobatto(DEGREE)


class DepthElements:
    """Matrices of one earth for frequencies near `frequency`; arrays as in a layered earth, top down."""

    def __init__(self, thickness, vp, vs, density, frequency, fineness=0.6):
        self.omega = 2.0 * np.pi * frequency
        sizes, layers = mesh(np.asarray(thickness), np.asarray(vs), frequency, fineness)
        nodes = DEGREE * len(sizes) + 1
        axial, shear, mass = (np.zeros(nodes) for _ in range(3))
        self.c_phi, self.c_psi, self.b = (np.zeros((nodes, nodes)) for _ in range(3))
        for i, (h, layer) in enumerate(zip(sizes, layers, strict=True)):
            at = slice(DEGREE * i, DEGREE * (i + 1) + 1)
            mu = density[layer] * vs[layer] ** 2
            stiff = density[layer] * vp[layer] ** 2
            w = WEIGHTS * h / 2.0
            d = SLOPES * 2.0 / h
            axial[at] += stiff * w
            shear[at] += mu * w
            mass[at] += density[layer] * w
            self.c_phi[at, at] += mu * d.T @ (w[:, None] * d)
            self.c_psi[at, at] += stiff * d.T @ (w[:, None] * d)
            # twice the energy: 2 lambda k phi psi' - 2 mu k phi' psi
            self.b[at, at] += (stiff - 2.0 * mu) * w[:, None] * d - mu * (w[:, None] * d).T
        free = slice(0, nodes - 1)
        self.axial, self.shear, self.mass = axial[free], shear[free], mass[free]
        self.c_phi, self.c_psi, self.b = self.c_phi[free, free], self.c_psi[free, free], self.b[free, free]
        self.limit = FASTEST * vs[-1]

    def frequencies_squared(self, k):
        """Return all omega_j(k)^2 in rising order."""
        scale = 1.0 / np.sqrt(np.concatenate([self.mass, self.mass]))
        matrix = np.block(
            [
                [k * k * np.diag(self.axial) + self.c_phi, k * self.b],
                [k * self.b.T, k * k * np.diag(self.shear) + self.c_psi],
            ]
        )
        return eigh(scale[:, None] * matrix * scale, eigvals_only=True, check_finite=False)

    def count(self, velocity):
        """Return the number of branches below omega at k = omega / velocity."""
        return int(np.sum(self.frequencies_squared(self.omega / velocity) < self.omega**2))

    def roots(self):
        """Return (velocity, branch) of all modes slower than the limit, slowest first."""
        g_phi = self.c_phi - self.omega**2 * np.diag(self.mass)
        g_psi = self.c_psi - self.omega**2 * np.diag(self.mass)
        # -k^2 [[A1, 0], [B^T, A2]] = [[G1, B], [0, G2]]
        upper = np.hstack([g_phi, self.b]) / self.axial[:, None]
        lower = (np.hstack([np.zeros_like(g_psi), g_psi]) - self.b.T @ upper) / self.shear[:, None]
        squares = -np.linalg.eigvals(np.vstack([upper, lower]))
        slow = (squares.real > (self.omega / self.limit) ** 2) & (
            np.abs(squares.imag) < 1e-7 * np.abs(squares)
        )
        wavenumbers = np.sqrt(squares[slow].real)
        found = []
        for k in np.sort(wavenumbers)[::-1]:
            branch = int(np.argmin(np.abs(self.frequencies_squared(k) - self.omega**2)))
            found.append((self.omega / k, branch))
        return found


def mesh(thickness, vs, frequency, fineness):
    """Return element sizes and their layers: fine where waves are short, growing away from slow layers."""
    last = len(vs) - 1
    base = 14.0 * vs[last] / (2.0 * np.pi * frequency) / np.sqrt(1.0 / FASTEST**2 - 1.0)
    edges = np.concatenate([[0.0], np.cumsum([*thickness[:last], base])])
    tops, bottoms = edges[:-1], edges[1:]
    local = fineness * vs / frequency
    sizes, layers = [], []
    for i in range(last + 1):
        z = tops[i]
        while z < bottoms[i] * (1.0 - 1e-12):
            distance = np.maximum(np.maximum(tops - z, z - bottoms), 0.0)
            if i == last:
                distance[last] = z - tops[last]  # nothing oscillates in the half-space
            size = min(np.min(local + 0.6 * distance), bottoms[i] - z)
            sizes.append(size)
            layers.append(i)
            z += size
    return sizes, layers
