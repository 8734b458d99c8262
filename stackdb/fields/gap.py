"""The annular gap between a pad and neighbours that fill the rest of the plane.

The unknown is the radial field across the gap, Chebyshev polynomials over the inverse root that the two edges demand. The
homogeneous part of the kernel is integrated in real space, its logarithm in closed form.
"""

from __future__ import annotations

from math import log, pi
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.float64]

ORDER = 8
POINTS = 48


class GapSystem(NamedTuple):
    """Hankel transforms of the basis, shape (ORDER, nodes), the energy matrix, and each basis potential's area over 2 pi.

    Row 0 falls from one at the pad to nothing at the neighbours; the others vanish at both edges.
    """

    waves: Array
    energy: Array
    areas: Array


def _nodes(inner: float, width: float) -> tuple[Array, Array, Array]:
    """Chebyshev nodes x, radii r, and T_n(x) for all orders."""
    angle = (np.arange(POINTS) + 0.5) * pi / POINTS
    x = np.cos(angle)
    return x, inner + 0.5 * width * (1.0 + x), np.cos(np.outer(np.arange(POINTS), angle))


def _homogeneous(x: Array, r: Array, chebyshev: Array) -> Array:
    """Double integral of r r' int J1(kr) J1(kr') dk: (2/(pi r_<)) (K - E) of r_</r_> (Gradshteyn and Ryzhik 6.512, recalled)."""
    from scipy.special import ellipe, ellipk, ellipkm1

    small, large = np.minimum.outer(r, r), np.maximum.outer(r, r)
    root = np.sqrt(np.outer(r, r))
    apart = np.abs(np.subtract.outer(x, x))
    same = np.eye(POINTS, dtype=bool)
    m1 = np.where(same, 0.5, 1.0 - (small / large) ** 2)
    kernel = (2.0 / pi) * large * (np.where(m1 < 0.5, ellipkm1(m1), ellipk(1.0 - m1)) - ellipe(1.0 - m1))
    smooth = kernel + root / pi * np.log(np.where(same, 1.0, apart))
    width = (r.max() - r.min()) / (x.max() - x.min())  # dr/dx
    smooth[same] = (r / pi) * (log(8.0) + np.log(r / width) - 2.0)
    weights = chebyshev[:ORDER] / POINTS
    regular = weights @ smooth @ weights.T
    moments = (chebyshev[:ORDER] * np.sqrt(r)) @ chebyshev.T / POINTS
    series = np.concatenate([[log(2.0)], 2.0 / np.arange(1, POINTS)])
    total: Array = regular + (moments * series) @ moments.T / pi
    return total


def assemble(k: Array, weight: Array, admittance: Array, far: float, inner_m: float, width_m: float) -> GapSystem:
    """The gap's waves and energy matrix [F/(2 pi)] for an admittance [-] at nodes ``k`` [1/m] with limit ``far`` [-]."""
    from scipy.special import j1

    x, r, chebyshev = _nodes(inner_m, width_m)
    waves = (chebyshev[:ORDER] * r / POINTS) @ j1(np.outer(r, k))
    energy = (waves * (weight * (admittance - far))) @ waves.T + far * _homogeneous(x, r, chebyshev)
    areas = (chebyshev[:ORDER] @ (0.5 * r * r)) / POINTS
    return GapSystem(waves, EPS0 * energy, areas)


def uniform_charge(system: GapSystem, capacitance_per_area: float) -> float:
    """Charge [F] of the pad when it and its neighbours stand at unit potential against a plane of that capacitance [F/m2]."""
    inner = np.linalg.solve(system.energy[1:, 1:], system.areas[1:])
    return float(2.0 * pi * capacitance_per_area * (system.areas[0] - system.energy[0, 1:] @ inner))


def self_capacitance(system: GapSystem) -> float:
    """Capacitance [F] of the pad with its neighbours at ground and no finger."""
    e = system.energy
    inner = np.linalg.solve(e[1:, 1:], e[1:, 0])
    return float(2.0 * pi * (e[0, 0] - e[0, 1:] @ inner))


def terminals(system: GapSystem, link: Array, finger: Array) -> tuple[float, float, float, float]:
    """Capacitances [F] c11, c12, c22 of pad and finger, and of the pad alone in its gap, neighbours at ground.

    Unknowns: the gap's field beyond its first term, and the finger's charge. Rows: no charge in the gap; the finger's potential.
    """
    gaps, count = system.energy.shape[0] - 1, finger.shape[0]
    matrix = np.zeros((gaps + count, gaps + count))
    matrix[:gaps, :gaps] = system.energy[1:, 1:]
    matrix[:gaps, gaps:] = -link[1:]
    matrix[gaps:, :gaps] = link[1:].T
    matrix[gaps:, gaps:] = finger
    right = np.zeros((gaps + count, 2))
    right[:gaps, 0] = -system.energy[1:, 0]
    right[gaps:, 0] = -link[0]
    right[gaps, 1] = 1.0
    solved = np.linalg.solve(matrix, right)
    pad = system.energy[0, 1:] @ solved[:gaps] - link[0] @ solved[gaps:]
    c11 = 2.0 * pi * (system.energy[0, 0] + pad[0])
    return float(c11), float(2.0 * pi * pad[1]), float(2.0 * pi * solved[gaps, 1]), self_capacitance(system)
