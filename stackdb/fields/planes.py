"""A grounded plane or a film over all of the cover, every point of the electrode plane at a given potential.

Then the change is one integral over the transform of the pad's outline, exact for any shape:
int int eps0 k [Y_1(k) - Y_0(k)] |P(k)|^2 d2k/(2 pi)^2, written here as 2 pi eps0 int [Y_1 - Y_0] W(k) dk.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import isfinite, pi, sqrt
from typing import TYPE_CHECKING

import numpy as np
from scipy.special import j0, j1

from stackdb.errors import InputError
from stackdb.fields.kernel import FieldLayer, series_gap_limit, two_port
from stackdb.fields.problem import real_layers
from stackdb.fields.quadrature import Grid, grid
from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.float64]

SPAN = 14.0  # exp(-2 * 14): what a plane beyond the cover adds after the last node
MOST_SPREAD = 400.0  # side over thickness
SQUARE_ERROR = 0.027  # two equal squares hold up to this more than the discs of their area, d/L 0.02 to 10


def disc_weight(k: Array, radius_m: float, driven_radius_m: float | None = None) -> Array:
    """W [m2] of a round pad, its neighbours driven with it out to a radius [m] (None: none are)."""
    outer = radius_m if driven_radius_m is None else driven_radius_m
    weight: Array = radius_m * j1(k * radius_m) * outer * j1(k * outer)
    return weight


def square_weight(k: Array, side_m: float) -> Array:
    """W [m2] of a square pad: (k/2 pi)^2 times the mean of |P|^2 over all directions.

    As the Hankel transform of the overlap of two squares moved apart by r, over all directions in closed form.
    """
    count = 24 + int(0.7 * float(k[-1]) * side_m)
    x, w = np.polynomial.legendre.leggauss(count)
    s, weight = 0.5 * side_m * (1.0 + x), 0.5 * side_m * w
    near = 2.0 * pi * side_m**2 - 8.0 * side_m * s + 2.0 * s**2
    r = np.sqrt(side_m**2 + s**2)
    corner = pi / 2.0 - 2.0 * np.arctan(s / side_m) - 1.0
    far = 4.0 * (side_m**2 * corner + 2.0 * side_m * s - 0.5 * r**2)
    mean = (weight * s) * near @ j0(np.outer(s, k)) + (weight * s) * far @ j0(np.outer(r, k))
    result: Array = (k / (2.0 * pi)) ** 2 * mean
    return result


def equal_disc_diameter(side_m: float) -> float:
    """Diameter [m] of the disc with a square's area, from its side [m].

    Under a finger it stands for the square to ``SQUARE_ERROR``.
    """
    return 2.0 * side_m / sqrt(pi)


def plane_change(
    *, cover: Sequence[FieldLayer], pad_diameter_m: float | None = None, pad_side_m: float | None = None, around: str
) -> complex:
    """Change [F] by a grounded plane on the whole cover, of a round pad (diameter [m]) or a square one (side [m]).

    ``cover`` from the touched side down, permittivities [-] real or complex; neighbours without clearance, ``grounded``
    or ``driven`` with the pad (then exactly eps0 A/g). Complex: the real part is capacitance.
    """
    if around not in ("grounded", "driven"):
        raise InputError("word-unknown", f'"{around}" is none of grounded, driven')
    if (pad_diameter_m is None) == (pad_side_m is None):
        raise InputError("pad-missing", "a pad has either a diameter or a side")
    size = pad_diameter_m if pad_side_m is None else pad_side_m
    if size is None or not (isfinite(size) and size > 0.0):
        raise InputError("out-of-range", f"a pad of {size!r} m has no size")
    layers = tuple(x for x in reversed(cover) if x.thickness_m > 0.0)
    if around == "driven":
        area = pi * size**2 / 4.0 if pad_side_m is None else size**2
        return complex(EPS0 * area / series_gap_limit(layers))
    nodes = plane_nodes(layers, size)
    k, weight = nodes.k, nodes.weight
    outline = disc_weight(k, 0.5 * size) if pad_side_m is None else square_weight(k, size)
    port = two_port(layers, k)
    return complex(2.0 * pi * EPS0 * ((weight * outline) @ (port.between**2 / (port.far + 1.0))))


def square_plane_change(*, cover: Sequence[FieldLayer], side_m: float) -> float:
    """Change [F] of a square pad, side [m], among grounded neighbours by a grounded plane on the cover: exact.

    ``cover`` from the touched side down; permittivities [-] count with their real part.
    """
    return plane_change(cover=real_layers(cover), pad_side_m=side_m, around="grounded").real


def plane_nodes(layers: Sequence[FieldLayer], size_m: float) -> Grid:
    """Nodes for what lies beyond these layers, under a pad of this size [m]."""
    across = sum(x.thickness_m * abs(x.stretch) for x in layers)
    if across <= 0.0 or size_m / across > MOST_SPREAD:
        raise InputError(
            "cover-too-thin",
            f"a cover of {across * 1e6:.3g} µm is too thin for the layered solution"
            f" against a size of {size_m * 1e3:.3g} mm",
            "the parallel-plate number holds there",
        )
    return grid(size_m, SPAN / across)
