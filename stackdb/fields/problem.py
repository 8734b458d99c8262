"""A pad under a finger in numbers, checked, and the layered kernel at its quadrature nodes."""

from __future__ import annotations

from collections.abc import Sequence
from math import isfinite
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from stackdb.errors import InputError
from stackdb.fields.kernel import INFINITE, FieldLayer, look, series_gap_limit, two_port
from stackdb.fields.quadrature import Grid, beyond, grid

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.float64]

CROSS = 24.0  # exp(-24): what couples pad and finger beyond the last node
CROSS_LEAST = 14.0  # the same where the cover is so thin that nodes are dear; the waves' own decay helps there
OWN = 11.0  # exp(-2 * 11): what a disc's nearest layer leaves of its own kernel there
EASY_REACH = 3000.0  # last node times largest radius up to which nodes are cheap: 6000 of them
MOST_REACH = 9000.0
AROUND = ("alone", "grounded", "driven")
ENDINGS = ("open", "ground", "driven")


class Problem(NamedTuple):
    """Geometry in real numbers: cover from the electrode up, layers below the plane, radii, neighbours."""

    cover: tuple[FieldLayer, ...]
    below: tuple[FieldLayer, ...]
    below_ending: str
    pad_m: float
    finger_m: float
    around: str
    clearance_m: float

    @property
    def up_gap_m(self) -> float:
        """Series gap of the cover [m]."""
        return series_gap_limit(self.cover).real

    @property
    def down_gap_m(self) -> float:
        """Series gap to the plane below [m], infinite where there is none."""
        return INFINITE if self.below_ending == "open" else series_gap_limit(self.below).real

    @property
    def whole_plane(self) -> bool:
        """Whether every point of the electrode plane is at a given potential."""
        return self.around != "alone" and self.clearance_m == 0.0

    @property
    def outer_m(self) -> float:
        """The largest radius that matters [m]."""
        return max(self.pad_m + self.clearance_m, self.finger_m)


class Kernel(NamedTuple):
    """Admittances [-] at the nodes: of the electrode plane, cover open or grounded, and of the touched surface.

    ``transfer``: what of a potential in the electrode plane arrives there; ``added``: what a grounded cover adds.
    """

    grid: Grid
    open: Array
    plane: Array
    finger: Array
    transfer: Array
    added: Array


class Far(NamedTuple):
    """Limits of the kernel at large k [-], and what is left of it beyond the nodes, integrated over k^2 [m]."""

    pad: float
    finger: float
    pad_rest: float
    plane_rest: float
    finger_rest: float
    open_rest: float
    high_rest: float


def real_layers(layers: Sequence[FieldLayer]) -> tuple[FieldLayer, ...]:
    """Layers with the real part of their permittivities [-], without those of no thickness [m]."""
    kept = []
    for x in layers:
        in_plane = None if x.in_plane is None else complex(x.in_plane).real
        if x.thickness_m != 0.0:
            kept.append(FieldLayer(x.thickness_m, complex(x.permittivity).real, in_plane))
    return tuple(kept)


def own_thickness(problem: Problem, at_pad: bool) -> float:
    """Thickness [m] as a lateral wave sees it of the layer next to a disc."""
    nearest = (problem.cover[0], *problem.below[:1]) if at_pad else problem.cover[-1:]
    return min(x.thickness_m * abs(x.stretch) for x in nearest)


def _reach(problem: Problem) -> float:
    """Wavenumber [1/m] of the last node."""
    across = sum(x.thickness_m * abs(x.stretch) for x in problem.cover)
    most = MOST_REACH / problem.outer_m
    if most * across < CROSS_LEAST:
        raise InputError(
            "cover-too-thin",
            f"a cover of {across * 1e6:.3g} µm is too thin for the field solution"
            f" against a radius of {problem.outer_m * 1e3:.3g} mm",
            "the parallel-plate number holds there; or reduce finger and clearance to what lies over the pad",
        )
    own = min(own_thickness(problem, at_pad=side) for side in (True, False))
    return min(max(CROSS / across, OWN / own), max(CROSS_LEAST / across, EASY_REACH / problem.outer_m))


def _kernel_at(problem: Problem, nodes: Grid) -> Kernel:
    cover, below, k = problem.cover, problem.below, nodes.k
    up, port = look(cover, 1.0, k), two_port(cover, k)
    down = look(below, 1.0 if problem.below_ending == "open" else INFINITE, k).admittance
    floor = INFINITE if problem.around != "alone" else down
    top = look(cover[::-1], floor, k).admittance
    added = np.real(port.between**2 / (port.far + 1.0))
    open_ = np.real(up.admittance + down)
    return Kernel(nodes, open_, open_ + added, np.real(1.0 + top), np.real(up.transfer), added)


def kernel(problem: Problem) -> tuple[Kernel, Far]:
    """The kernel of a problem at its quadrature nodes, and its limits."""
    reach = _reach(problem)
    kern = _kernel_at(problem, grid(problem.outer_m, reach))
    pad = problem.cover[0].mean.real + (problem.below[0].mean.real if problem.below else 1.0)
    finger = problem.cover[-1].mean.real + 1.0
    own = min(own_thickness(problem, at_pad=side) for side in (True, False))
    if float(kern.grid.k[-1]) * own > OWN:
        return kern, Far(pad, finger, 0.0, 0.0, 0.0, 0.0, 0.0)
    tail = _kernel_at(problem, beyond(kern.grid, 2.0 * OWN / own))
    over = tail.grid.weight / tail.grid.k**2
    return kern, Far(
        pad=pad,
        finger=finger,
        pad_rest=float(over @ (1.0 / tail.open - 1.0 / pad)),
        plane_rest=float(over @ (1.0 / tail.plane - 1.0 / pad)),
        finger_rest=float(over @ (1.0 / tail.finger - 1.0 / finger)),
        open_rest=float(over @ (tail.open - pad)),
        high_rest=float(over @ (tail.plane - pad)),
    )


def _positive(name: str, value: float) -> None:
    if not (isfinite(value) and value > 0.0):
        raise InputError("out-of-range", f"{name} of {value!r} is not a length above 0")


def _check_layers(layers: Sequence[FieldLayer], where: str) -> None:
    for number, layer in enumerate(layers, 1):
        values = (
            layer.thickness_m,
            layer.permittivity,
            layer.permittivity if layer.in_plane is None else layer.in_plane,
        )
        if not (isfinite(values[0]) and values[0] > 0.0 and all(isfinite(x.real) and x.real > 0.0 for x in values[1:])):
            raise InputError(
                "out-of-range", f"layer {number} {where}: thickness {values[0]!r} m, permittivity {values[1]!r}"
            )


def checked(problem: Problem, tolerance: float) -> Problem:
    """The problem itself, or InputError for what has no solution; tolerance [-]."""
    _positive("a pad radius", problem.pad_m)
    _positive("a finger radius", problem.finger_m)
    _positive("a tolerance", tolerance)
    if problem.around not in AROUND:
        raise InputError("word-unknown", f'"{problem.around}" is none of {", ".join(AROUND)}')
    if problem.below_ending not in ENDINGS:
        raise InputError("word-unknown", f'"{problem.below_ending}" is none of {", ".join(ENDINGS)}')
    if not problem.cover:
        raise InputError("no-thickness", "the cover has no thickness")
    if not (isfinite(problem.clearance_m) and problem.clearance_m >= 0.0):
        raise InputError("out-of-range", f"a clearance of {problem.clearance_m!r} m is not 0 or more")
    if problem.below_ending != "open" and not problem.below:
        raise InputError("below-empty", "a plane under the electrodes needs a layer between", "add it before the word")
    _check_layers(problem.cover, "above the electrode plane, counted from it")
    _check_layers(problem.below, "below the electrode plane")
    return problem
