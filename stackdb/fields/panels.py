"""Charge of a thin disc in pieces: Legendre polynomials on panels graded towards the radii where the field is abrupt.

A disc's charge is written as sigma~(k) = int_0^R f(t) cos(kt) dt (Hankel transform): every f gives the edge
singularity of a thin disc by itself. f bends only near the disc's own edge and opposite the other disc's edge, over the
thickness between them, so panels graded towards these radii hold it with few terms however thin the cover is.
The representation is that of E. R. Love, Quart. J. Mech. Appl. Math. 2 (1949) 428 (recalled); refinement by panels and
order together is common practice.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache
from itertools import pairwise
from math import floor, log, pi
from typing import TYPE_CHECKING, Any, NamedTuple

import numpy as np

from stackdb.fields.quadrature import Grid, even_spherical_bessel, spherical_bessel, unit_nodes
from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.float64]
    Index = NDArray[np.bool_]

FIRST = 1.0  # the panel at an abrupt radius, in units of the scale there
GROWTH = 3.0
COARSE = 1.5  # scales are rounded down to powers of this, so that like discs share their panels
MOST_REMEMBERED = 100_000  # numbers in one remembered basis
CLOSE = 0.3  # two break points nearer than this part of the scale are one


class Abrupt(NamedTuple):
    """A radius [m] where the charge bends, and over what length [m]."""

    radius_m: float
    scale_m: float


class DiscBasis(NamedTuple):
    """Cosine transforms [-], shape (terms, nodes), squared norms [1/m], charges [-], values at the edge [1/m].

    ``lower`` marks the terms of the order below.
    """

    waves: Array
    norms: Array
    charges: Array
    edge: Array
    lower: Index


def breaks(radius_m: float, abrupt: Sequence[Abrupt]) -> Array:
    """Break points [m] of the panels on 0 to the radius [m], graded towards the abrupt radii."""
    inside = [x for x in abrupt if 0.0 < x.radius_m <= radius_m]
    points = {0.0: 0.0, radius_m: 0.0}
    for spot in inside:
        points[spot.radius_m] = 0.0
        others = [x.radius_m for x in inside if x is not spot]
        for side in (-1.0, 1.0):
            step = FIRST * _rounded(spot.scale_m / radius_m) * radius_m
            while 0.0 < spot.radius_m + side * step < radius_m:
                at = spot.radius_m + side * step
                if all(step <= abs(at - other) for other in others):
                    points[at] = CLOSE * step
                step *= GROWTH
    return _thinned(points, radius_m)


def _rounded(scale: float) -> float:
    return float(COARSE ** floor(log(scale) / log(COARSE)))


def _thinned(points: dict[float, float], radius_m: float) -> Array:
    """Sorted break points without those that crowd a neighbour; the ends and the abrupt radii stay."""
    kept = [0.0]
    for at in sorted(points)[1:-1]:
        room = points[at]
        if at - kept[-1] > max(room, CLOSE * points[kept[-1]]) and radius_m - at > room:
            kept.append(at)
        elif room == 0.0 and len(kept) > 1 and points[kept[-1]] > 0.0:
            kept[-1] = at
    return np.array([*kept, radius_m])


def basis(grid: Grid, edges: Array, order: int) -> DiscBasis:
    """The functions of one disc at the nodes: even polynomials next to the centre, ``order`` of all degrees beyond.

    A disc of like shape on like nodes is remembered.
    """
    unit = tuple((edges / grid.radius_m).tolist())
    terms = order * (len(unit) - 1)
    make = _unit_basis if terms * grid.k.size <= MOST_REMEMBERED else _unit_basis.__wrapped__
    found = make(grid.panels, unit, order)
    return found._replace(norms=found.norms / grid.radius_m, edge=found.edge / grid.radius_m)


@lru_cache(maxsize=48)
def _unit_basis(panels: int, edges: tuple[float, ...], order: int) -> DiscBasis:
    x = unit_nodes(panels)[0]
    inner, first = order // 2 + 2, edges[1]
    signs = np.where(np.arange(inner) % 2, -1.0, 1.0)
    even = 2.0 * np.arange(inner)
    waves = [first * signs[:, None] * even_spherical_bessel(inner, x * first)]
    norms, charges = [first / (2.0 * even + 1.0)], [np.where(even == 0.0, first, 0.0)]
    lower = [np.arange(inner) < inner - 2]
    degree = np.arange(order)
    for left, right in pairwise(edges[1:]):
        half, middle = 0.5 * (right - left), 0.5 * (right + left)
        waves.append(2.0 * half * spherical_bessel(order, x * half) * _turned(x * middle, order))
        norms.append(2.0 * half / (2.0 * degree + 1.0))
        charges.append(np.where(degree == 0, 2.0 * half, 0.0))
        lower.append(degree < order - 2)
    edge = np.concatenate([*(np.zeros(x.size) for x in norms[:-1]), np.ones(norms[-1].size)])
    return DiscBasis(
        waves=np.concatenate(waves),
        norms=np.concatenate(norms),
        charges=np.concatenate(charges),
        edge=edge,
        lower=np.concatenate(lower),
    )


def _turned(phase: Array, order: int) -> Array:
    """cos(phase + n pi/2) for n below the order."""
    cosine, sine = np.cos(phase), np.sin(phase)
    return np.stack([(cosine, -sine, -cosine, sine)[n % 4] for n in range(order)])


def gram(disc: DiscBasis, weighted: Array, far: float, rest: float) -> Array:
    """Galerkin matrix [1/F] of a disc: the kernel's limit ``far`` [-] in closed form, the rest by quadrature.

    ``weighted`` [1/m]: the kernel less its limit times the node weights; ``rest`` [m]: the integral of that difference
    over k^2 beyond the last node.
    """
    matrix = (disc.waves * weighted) @ disc.waves.T
    matrix[np.diag_indices(matrix.shape[0])] += 0.5 * pi * far * disc.norms
    if rest:
        matrix += 0.5 * rest * np.outer(disc.edge, disc.edge)
    scaled: Array = matrix / (2.0 * pi * EPS0)
    return scaled


def disc_capacitance(disc: DiscBasis, weight: Array, admittance: Any, far: complex) -> complex:
    """Capacitance [F] of a disc alone in a plane of that admittance [-], real or complex, with limit ``far`` [-]."""
    matrix = (disc.waves * (weight * (1.0 / admittance - 1.0 / far))) @ disc.waves.T
    matrix[np.diag_indices(matrix.shape[0])] += 0.5 * pi / far * disc.norms
    return complex(2.0 * pi * EPS0 * (disc.charges @ np.linalg.solve(matrix, disc.charges)))
