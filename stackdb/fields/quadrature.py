"""Nodes in lateral wavenumber, and the spherical Bessel functions that discs need."""

from __future__ import annotations

from functools import lru_cache
from math import ceil, log
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.float64]

POINTS = 12
PANEL = 6.0  # in units of 1/(largest radius): two waves turn by 6 rad over half of it, 12 nodes hold that to 1e-11
DOUBLINGS = 26
SMALL = 1e-4  # below, j_n falls as x^n to 1e-9
STEP = 1.15  # panel counts are rounded up to powers of this, so that few sets of nodes serve all


class Grid(NamedTuple):
    """Nodes in wavenumber: ``k`` [1/m] and weights [1/m], fit for waves up to a radius [m]."""

    panels: int
    radius_m: float
    k: Array
    weight: Array


@lru_cache(maxsize=64)
def unit_nodes(panels: int) -> tuple[Array, Array]:
    """Gauss nodes and weights [-] on 0 to ``panels`` panels, halved again and again towards 0."""
    x, w = np.polynomial.legendre.leggauss(POINTS)
    small = [0.0, *(2.0**n for n in range(-DOUBLINGS, 0))]
    edges = PANEL * np.concatenate([small, np.arange(1.0, panels + 1.0)])
    middle, half = 0.5 * (edges[1:] + edges[:-1]), 0.5 * (edges[1:] - edges[:-1])
    return (middle[:, None] + half[:, None] * x).ravel(), (half[:, None] * w).ravel()


def grid(largest_radius_m: float, reach_per_m: float) -> Grid:
    """Nodes up to at least ``reach_per_m`` [1/m], fit for waves up to a radius [m]."""
    wanted = max(1.0, reach_per_m * largest_radius_m / PANEL)
    panels = ceil(STEP ** ceil(log(wanted) / log(STEP)))
    x, w = unit_nodes(panels)
    return Grid(panels, largest_radius_m, x / largest_radius_m, w / largest_radius_m)


def beyond(nodes: Grid, reach_per_m: float) -> Grid:
    """Nodes from the last of a grid to the reach [1/m] on a logarithmic scale, for what is smooth there."""
    last = float(nodes.k[-1])
    x, w = np.polynomial.legendre.leggauss(32)
    half = 0.5 * log(reach_per_m / last)
    k = last * np.exp(half * (1.0 + x))
    return Grid(0, nodes.radius_m, k, half * w * k)


def even_spherical_bessel(count: int, x: Array) -> Array:
    """j_0, j_2, .. j_(2 count - 2) [-] at ``x`` [-], shape (count, len(x)); ``x`` must rise."""
    return spherical_bessel(2 * count - 1, x)[::2]


def spherical_bessel(count: int, x: Array) -> Array:
    """j_0 .. j_(count - 1) [-] at ``x`` [-], shape (count, len(x)); ``x`` must rise, ``count`` at most 50.

    Upward recurrence where x exceeds the order, Miller's downward recurrence elsewhere (Abramowitz and Stegun 10.1.19).

    >>> import numpy as np
    >>> spherical_bessel(3, np.array([0.5, 30.0])).round(6).tolist()
    [[0.958851, -0.032934], [0.162537, -0.00624], [0.016371, 0.03231]]
    """
    out = np.empty((count, x.size))
    split = int(np.searchsorted(x, count + 2.0))
    _upward(out[:, split:], x[split:])
    _downward(out[:, :split], np.maximum(x[:split], SMALL))
    tiny = int(np.searchsorted(x, SMALL))
    out[:, :tiny] *= (x[:tiny] / SMALL) ** np.arange(count)[:, None]
    out[0, :tiny] = np.sinc(x[:tiny] / np.pi)
    return out


def _upward(out: Array, x: Array) -> None:
    inverse = 1.0 / x
    out[0] = np.sin(x) * inverse
    if out.shape[0] > 1:
        out[1] = (out[0] - np.cos(x)) * inverse
    for n in range(1, out.shape[0] - 1):
        out[n + 1] = (2 * n + 1) * inverse * out[n] - out[n - 1]


def _downward(out: Array, x: Array) -> None:
    """From far above the order down; starts so small that the growth to order 0 cannot overflow for x from SMALL on."""
    count = out.shape[0]
    inverse = 1.0 / x
    after, now = np.zeros_like(x), np.full_like(x, 1e-300)
    for n in range(count + 20 + int(2.0 * count**0.5), 0, -1):
        after, now = now, (2 * n + 1) * inverse * now - after
        if n <= count:
            out[n - 1] = now
    if x.size:
        # j_0 or j_1 may vanish, never both: the larger sets the scale
        j0, j1 = np.sinc(x / np.pi), (np.sinc(x / np.pi) - np.cos(x)) * inverse
        one = min(1, count - 1)
        by_first = (np.abs(j0) >= np.abs(j1)) | (count == 1)
        out *= np.where(by_first, j0, j1) / np.where(by_first, out[0], out[one])
