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
    """Tanh and sech of the layer's k t, from exp(-2kt) alone, true to the last digit also for small kt."""
    x = k * (layer.thickness_m * layer.stretch)
    decay, less = np.exp(-x), np.expm1(-2.0 * x)
    return -less / (2.0 + less), 2.0 * decay / (2.0 + less)


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


class TwoPort(NamedTuple):
    """Self admittances of the two faces and the admittance between them [-], the other face at ground; reciprocal."""

    near: Array
    far: Array
    between: Array


def two_port(layers: Sequence[FieldLayer], k: Array) -> TwoPort:
    """Charge on each face of a stack per potential: q1 = near v1 - between v2, q2 = far v2 - between v1.

    The nearest layer first. Every quantity decays or saturates with k [1/m]; q is in units of eps0 k.
    """
    port = _layer_port(layers[0], k)
    for layer in layers[1:]:
        beyond = _layer_port(layer, k)
        node = port.far + beyond.near
        port = TwoPort(
            port.near - port.between**2 / node,
            beyond.far - beyond.between**2 / node,
            port.between * beyond.between / node,
        )
    return port


def _layer_port(layer: FieldLayer, k: Array) -> TwoPort:
    t, s = tanh_sech(layer, k)
    own = layer.mean / t
    return TwoPort(own, own, own * s)


def series_gap_limit(layers: Sequence[FieldLayer]) -> complex:
    """Limit of 1/(k Y) [m] for k to 0 of a grounded stack: the series gap, sum of t/eps."""
    return sum((layer.thickness_m / complex(layer.permittivity) for layer in layers), 0j)
