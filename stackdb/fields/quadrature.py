"""Nodes in lateral wavenumber, and the spherical Bessel functions that discs need."""

from __future__ import annotations

from functools import lru_cache
from math import ceil, log2
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.float64]

POINTS = 10
PANEL = 2.0  # in units of 1/(largest radius): a product of two Bessel functions turns once in about 3
SMALLEST = 2.0**-24


@lru_cache(maxsize=16)
def _unit_nodes(doublings: int) -> tuple[Array, Array]:
    """Gauss nodes and weights on 0 to 2^doublings panels, graded towards 0."""
    x, w = np.polynomial.legendre.leggauss(POINTS)
    small = PANEL * np.array([0.0, *(2.0**n for n in range(-24, 0))])
    edges = np.concatenate([small, PANEL * np.arange(1, 2**doublings + 1)])
    middle, half = 0.5 * (edges[1:] + edges[:-1]), 0.5 * (edges[1:] - edges[:-1])
    nodes = (middle[:, None] + half[:, None] * x).ravel()
    weights = (half[:, None] * w).ravel()
    return nodes, weights


class Grid(NamedTuple):
    """Nodes in wavenumber: ``k`` [1/m] and weights [1/m], fit for Bessel functions up to a radius [m]."""

    doublings: int
    radius_m: float
    k: Array
    weight: Array

    def waves(self, count: int, radius_m: float) -> Array:
        """j_0, j_2, .. of k times a disc's radius [m], shape (count, nodes); remembered for discs of like size."""
        return _disc_waves(count, self.doublings, radius_m / self.radius_m)


def grid(largest_radius_m: float, reach_per_m: float) -> Grid:
    """Nodes up to at least ``reach_per_m`` [1/m], fit for Bessel functions up to a radius [m]."""
    panels = max(8.0, reach_per_m * largest_radius_m / PANEL)
    doublings = ceil(log2(panels))
    x, w = _unit_nodes(doublings)
    return Grid(doublings, largest_radius_m, x / largest_radius_m, w / largest_radius_m)


@lru_cache(maxsize=48)
def _disc_waves(count: int, doublings: int, ratio: float) -> Array:
    found = even_spherical_bessel(count, _unit_nodes(doublings)[0] * ratio)
    found.flags.writeable = False
    return found


def even_spherical_bessel(count: int, x: Array) -> Array:
    """j_0, j_2, .. j_(2 count - 2) [-] at ``x`` [-], shape (count, len(x)).

    Upward recurrence where x exceeds the order, Miller's downward recurrence elsewhere (Abramowitz and Stegun 10.1.19).
    """
    last = 2 * count
    out = np.empty((count, x.size))
    split = int(np.searchsorted(x, last + 2.0))
    _upward(out[:, split:], x[split:])
    if split:
        _downward(out[:, :split], x[:split])
    return out


def _upward(out: Array, x: Array) -> None:
    if not x.size:
        return
    inverse = 1.0 / x
    before = np.sin(x) * inverse
    now = (before - np.cos(x)) * inverse
    out[0] = before
    for n in range(1, 2 * out.shape[0] - 1):
        before, now = now, (2 * n + 1) * inverse * now - before
        if n % 2:
            out[(n + 1) // 2] = now


def _downward(out: Array, x: Array) -> None:
    last = 2 * out.shape[0]
    start = last + 30 + int(2.0 * last**0.5)
    inverse = 1.0 / x
    after, now = np.zeros_like(x), np.full_like(x, 1e-200)
    for n in range(start, 0, -1):
        after, now = now, (2 * n + 1) * inverse * now - after
        # rescale before it overflows: for small x the functions fall by 1/x at each order
        large = np.abs(now) > 1e150
        if large.any():
            scale = np.where(large, 1e-150, 1.0)
            now, after = now * scale, after * scale
            for m in range((n + 1) // 2, out.shape[0]):
                out[m] *= scale
        if (n - 1) % 2 == 0 and (n - 1) // 2 < out.shape[0]:
            out[(n - 1) // 2] = now
    out *= np.sinc(x / np.pi) / out[0]
