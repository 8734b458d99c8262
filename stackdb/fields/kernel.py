"""The layered kernel: surface admittance and transfer of a stack at a lateral wavenumber.

Normalised so that the charge on a plane is eps0 k Y phi. Nothing grows with k: a layer enters by tanh(kt) and
exp(-kt) alone. The recursion is that of a transmission line (N. Marcuvitz, Waveguide Handbook, 1951; recalled).
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any, NamedTuple

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[Any]

INFINITE = float("inf")


class FieldLayer(NamedTuple):
    """A layer: thickness [m], permittivity through it and in its plane [-] (None: isotropic), real or complex."""

    thickness_m: float
    permittivity: complex
    in_plane: complex | None = None

    @property
    def mean(self) -> complex:
        """sqrt(eps_x eps_y) [-]: what a uniaxial layer looks like from outside."""
        if self.in_plane is None:
            return self.permittivity
        return complex(np.sqrt(complex(self.in_plane) * complex(self.permittivity)))

    @property
    def stretch(self) -> complex:
        """sqrt(eps_x/eps_y) [-]: by how much thicker it looks to a lateral wave."""
        if self.in_plane is None:
            return 1.0
        return complex(np.sqrt(complex(self.in_plane) / complex(self.permittivity)))


class Sheet(NamedTuple):
    """A conductive film on a face: sheet admittance [S/sq] (siemens per square) at an angular frequency [rad/s]."""

    admittance: complex
    angular_frequency: float


def tanh_sech(layer: FieldLayer, k: Array) -> tuple[Array, Array]:
    """Tanh and sech of the layer's k t, from exp(-kt) alone."""
    decay = np.exp(-k * (layer.thickness_m * layer.stretch))
    square = decay * decay
    return (1.0 - square) / (1.0 + square), 2.0 * decay / (1.0 + square)


def through(layer: FieldLayer, beyond: Array | float, k: Array) -> tuple[Array, Array]:
    """Admittance of a layer backed by ``beyond`` [-], and the voltage that passes through it [-]."""
    t, s = tanh_sech(layer, k)
    e = layer.mean
    if isinstance(beyond, float) and np.isinf(beyond):
        return e / t, np.zeros_like(t)
    lower = e + beyond * t
    return e * (beyond + e * t) / lower, e * s / lower


def sheet_term(sheet: Sheet, k: Array) -> Array:
    """What a conductive film adds to the admittance at its face [-]: Y k/(j w eps0)."""
    from stackdb.quantities import EPS0

    return sheet.admittance * k / (1j * sheet.angular_frequency * EPS0)


class Seen(NamedTuple):
    """Admittance [-] seen from the near face of a stack, and the voltage share [-] that reaches its far face."""

    admittance: Array
    transfer: Array


def look(layers: Sequence[FieldLayer], ending: Array | float, k: Array) -> Seen:
    """Look through layers, the nearest first, to an ending: an admittance [-] (1 is open air), or infinity (ground)."""
    seen: Array | float = ending
    transfer: Array = np.ones_like(k)
    for layer in reversed(layers):
        seen, passed = through(layer, seen, k)
        transfer = transfer * passed
    if isinstance(seen, float):
        seen = np.full_like(k, seen)
    return Seen(seen, transfer)


def series_gap_limit(layers: Sequence[FieldLayer]) -> complex:
    """Limit of 1/(k Y) [m] for k to 0 of a grounded stack: the series gap, sum of t/eps."""
    return sum((layer.thickness_m / complex(layer.permittivity) for layer in layers), 0j)
