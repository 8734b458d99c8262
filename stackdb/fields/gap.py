"""The annular gap between a pad and neighbours that fill the rest of the plane.

The unknown is the radial field across the gap, Chebyshev polynomials over the inverse root that the two edges demand.
The homogeneous part of the kernel is integrated in real space, its logarithm in closed form.
"""

from __future__ import annotations

from math import ceil, log, pi, sqrt
from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from scipy.special import ellipe, ellipk, ellipkm1, j1

from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.float64]

LEAST_ORDER = 8
EXTRA_POINTS = 16


class GapBasis(NamedTuple):
    """Hankel transforms of the basis, shape (order, nodes), its homogeneous energy, each basis potential's area [m2].

    Row 0 falls from one at the pad to nothing at the neighbours; the others vanish at both edges.
    """

    waves: Array
    homogeneous: Array
    areas: Array


def order_for(width_m: float, scale_m: float) -> int:
    """Terms that resolve a gap of this width [m] when the field bends over the scale [m] at its edges."""
    return LEAST_ORDER + ceil(4.0 * sqrt(width_m / scale_m))


def basis(k: Array, inner_m: float, width_m: float, order: int) -> GapBasis:
    """The gap's functions at nodes ``k`` [1/m] between the radii ``inner_m`` and ``inner_m + width_m`` [m]."""
    points = 2 * order + EXTRA_POINTS + int(0.3 * float(k[-1]) * width_m)
    angle = (np.arange(points) + 0.5) * pi / points
    x = np.cos(angle)
    r = inner_m + 0.5 * width_m * (1.0 + x)
    chebyshev = np.cos(np.outer(np.arange(points), angle))
    waves = (chebyshev[:order] * r / points) @ j1(np.outer(r, k))
    areas = pi * (chebyshev[:order] @ (r * r)) / points
    return GapBasis(waves, _homogeneous(x, r, chebyshev, order), areas)


def _homogeneous(x: Array, r: Array, chebyshev: Array, order: int) -> Array:
    """Double integral of r r' int J1(kr) J1(kr') dk = (2 r_>/pi) (K - E) of modulus r_</r_>.

    Gradshteyn and Ryzhik 6.512 (recalled). Its logarithm is -(2 r_>/pi^2) E' ln|x - x'|, E' of the complementary
    modulus, and -ln|x - x'| = ln 2 + sum 2/n T_n(x) T_n(x').
    """
    points = x.size
    small, large = np.minimum.outer(r, r), np.maximum.outer(r, r)
    same = np.eye(points, dtype=bool)
    m1 = np.where(same, 0.5, 1.0 - (small / large) ** 2)
    first_kind = np.where(m1 < 0.5, ellipkm1(m1), ellipk(1.0 - m1))
    whole = (2.0 / pi) * large * (first_kind - ellipe(1.0 - m1))
    factor = (2.0 / pi**2) * large * ellipe(np.where(same, 0.0, m1))
    smooth = whole + factor * np.log(np.where(same, 1.0, np.abs(np.subtract.outer(x, x))))
    half_width = (r.max() - r.min()) / (x.max() - x.min())
    smooth[same] = (r / pi) * (np.log(8.0 * r / half_width) - 2.0)
    series = np.concatenate([[log(2.0)], 2.0 / np.arange(1, points)])
    logarithm = (chebyshev.T * series) @ chebyshev
    weights = chebyshev[:order] / points
    total: Array = weights @ (smooth + factor * logarithm) @ weights.T
    return total


def energy(gap: GapBasis, weighted: Array, far: float, rest: float, inner_m: float, width_m: float) -> Array:
    """Energy matrix [F] for an admittance that tends to ``far`` [-].

    ``weighted`` [1/m]: what it exceeds that by times the node weights; ``rest`` [m]: the integral of that excess over
    k^2 beyond the last node.
    """
    matrix = (gap.waves * weighted) @ gap.waves.T + far * gap.homogeneous
    if rest:
        # at large k the two edges, each an inverse root, wave independently: sin(k r)/k with these squares
        signs = np.where(np.arange(matrix.shape[0]) % 2, -1.0, 1.0)
        matrix += rest / (pi**2 * width_m) * (inner_m * np.outer(signs, signs) + inner_m + width_m)
    scaled: Array = 2.0 * pi * EPS0 * matrix
    return scaled


def state(matrix: Array, areas: Array, voltage: float, uniform: float) -> tuple[float, Array]:
    """Charge [F] of the pad, and the field's terms, when no charge is in the gap and no finger near.

    ``voltage`` [V] of the pad against its neighbours; ``uniform`` [F/m2]: charge density of the plane if it were whole.
    """
    inner = -np.linalg.solve(matrix[1:, 1:], voltage * matrix[1:, 0] + uniform * areas[1:])
    terms = np.concatenate([[voltage], inner])
    return float(matrix[0] @ terms + uniform * areas[0]), terms
