"""Circular pad and circular finger on a layered cover: the true change of capacitance by a touch.

Spectral-domain Galerkin. The charge of a disc of radius a is a sum of functions whose Hankel transforms are j_2n(ka): each has
the edge singularity of a thin disc, and all are orthogonal for the homogeneous part of the kernel, which is therefore
integrated in closed form. Method: T. Itoh (editor), Numerical Techniques for Microwave and Millimeter-Wave Passive Structures
(1989), spectral domain; disc functions after E. R. Love, Quart. J. Mech. Appl. Math. 2 (1949) 428 (recalled).
"""

from __future__ import annotations

from collections.abc import Sequence
from math import pi
from typing import TYPE_CHECKING, Any, NamedTuple

import numpy as np

from stackdb.errors import InputError
from stackdb.fields import gap
from stackdb.fields.kernel import INFINITE, FieldLayer, look, series_gap_limit
from stackdb.fields.quadrature import Grid, grid
from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.float64]

ORDERS = (6, 10, 16, 24, 36, 54, 80, 120)
DEFAULT_TOLERANCE = 1e-5
DECAY = 11.0  # the rest of the kernel beyond exp(-2 * 11) is below 3e-10 of it
MOST_REACH = 60_000.0  # panels times radius; a thinner layer is refused


class FieldResult(NamedTuple):
    """The field solution of a pad and a finger. Capacitances [F]; ``error`` relative [-]; None where it does not exist.

    Potentials are measured against ground at infinity and below. ``change_farad`` is self touched less untouched;
    ``pad_finger_farad`` and ``finger_total_farad`` with the finger at unit potential and all else at ground.
    """

    model: str
    around: str
    clearance_m: float | None
    below: str
    self_untouched_farad: float | None
    self_touched_farad: float | None
    change_farad: float
    change_low_farad: float
    change_high_farad: float
    pad_finger_farad: float
    finger_total_farad: float
    pair_farad: float | None
    parallel_plate_farad: float
    edge_factor: float
    error: float

    def to_dict(self) -> dict[str, Any]:
        """As the JSON contract writes it."""
        return dict(self._asdict())


class Problem(NamedTuple):
    """Geometry in real numbers: cover from the electrode up, layers below the plane, radii, neighbours."""

    cover: tuple[FieldLayer, ...]
    below: tuple[FieldLayer, ...]
    below_ending: str
    pad_m: float
    finger_m: float
    around: str
    clearance_m: float


class Kernel(NamedTuple):
    """The kernel at the nodes: admittance at the electrode plane, impedances, transfer, and their limits at large k."""

    grid: Grid
    admittance: Array
    admittance_far: float
    pad: Array
    pad_far: float
    finger: Array
    finger_far: float
    transfer: Array
    mutual: Array


class Terminals(NamedTuple):
    """Capacitance matrix [F] of pad (1) and finger (2), everything else at ground, and the pad without the finger."""

    c11: float
    c12: float
    c22: float
    untouched: float


def _real(layers: Sequence[FieldLayer]) -> tuple[FieldLayer, ...]:
    kept = []
    for x in layers:
        in_plane = None if x.in_plane is None else complex(x.in_plane).real
        eps = complex(x.permittivity).real
        if x.thickness_m > 0.0:
            kept.append(FieldLayer(x.thickness_m, eps, in_plane))
    return tuple(kept)


def _reach(problem: Problem) -> float:
    """Wavenumber [1/m] beyond which the kernel is its own limit."""
    nearest = [problem.cover[0], problem.cover[-1], *problem.below[:1]]
    thin = min(x.thickness_m * abs(x.stretch) for x in nearest)
    # what couples pad and finger falls by the whole cover once, what reflects from a layer by its thickness twice
    whole = sum(x.thickness_m * abs(x.stretch) for x in problem.cover)
    reach = max(DECAY / thin, 2.0 * DECAY / whole)
    if reach * max(problem.pad_m, problem.finger_m) > MOST_REACH:
        raise InputError(
            "layer-too-thin", f"a layer of {thin * 1e6:.3g} um is too thin against the pad for the field solution"
        )
    return reach


def _ending(word: str) -> float:
    return 1.0 if word == "open" else INFINITE


def kernel(problem: Problem) -> Kernel:
    """The kernel of a problem at its quadrature nodes; neighbours set the electrode plane or leave it free."""
    radius = max(problem.pad_m, problem.finger_m, problem.pad_m + problem.clearance_m)
    nodes = grid(radius, _reach(problem))
    k = nodes.k
    up = look(problem.cover, 1.0, k)
    down = look(problem.below, _ending(problem.below_ending), k)
    admittance = np.real(up.admittance + down.admittance)
    floor = down.admittance if problem.around == "alone" else INFINITE
    top = look(tuple(reversed(problem.cover)), floor, k)
    near_up = problem.cover[0].mean.real
    near_down = problem.below[0].mean.real if problem.below else 1.0
    transfer = np.real(up.transfer)
    return Kernel(
        grid=nodes,
        admittance=admittance,
        admittance_far=near_up + near_down,
        pad=1.0 / admittance,
        pad_far=1.0 / (near_up + near_down),
        finger=1.0 / (1.0 + np.real(top.admittance)),
        finger_far=1.0 / (1.0 + problem.cover[-1].mean.real),
        transfer=transfer,
        mutual=transfer / admittance,
    )


def _gram(bessel: Array, values: Array, far: float, weight: Array, radius: float) -> Array:
    """Galerkin matrix of a disc: the limit in closed form (orthogonal), the rest by quadrature."""
    count = bessel.shape[0]
    matrix = (bessel * (weight * (values - far))) @ bessel.T
    matrix[np.diag_indices(count)] += far * pi / (2.0 * radius * (4.0 * np.arange(count) + 1.0))
    return matrix / EPS0


def _alone(problem: Problem, kern: Kernel, count: int) -> Terminals:
    pad, finger = (kern.grid.waves(count, r) for r in (problem.pad_m, problem.finger_m))
    p11 = _gram(pad, kern.pad, kern.pad_far, kern.grid.weight, problem.pad_m)
    p22 = _gram(finger, kern.finger, kern.finger_far, kern.grid.weight, problem.finger_m)
    p12 = (pad * (kern.grid.weight * kern.mutual)) @ finger.T / EPS0
    whole = np.block([[p11, p12], [p12.T, p22]])
    right = np.zeros((2 * count, 2))
    right[0, 0] = right[count, 1] = 1.0
    charge = 2.0 * pi * np.linalg.solve(whole, right)
    untouched = 2.0 * pi * np.linalg.solve(p11, right[:count, 0])[0]
    return Terminals(charge[0, 0], 0.5 * (charge[count, 0] + charge[0, 1]), charge[count, 1], float(untouched))


def _touching(problem: Problem, kern: Kernel, count: int) -> Terminals:
    """All of the electrode plane at given potentials: the finger's charge is the only unknown; c11 is then a change."""
    from scipy.special import j1

    finger = kern.grid.waves(count, problem.finger_m)
    matrix = _gram(finger, kern.finger, kern.finger_far, kern.grid.weight, problem.finger_m)
    pad = problem.pad_m * j1(kern.grid.k * problem.pad_m)
    reach = finger @ (kern.grid.weight * kern.transfer * pad)
    right = np.column_stack([reach, np.eye(count, 1)[:, 0]])
    solved = np.linalg.solve(matrix, right)
    return Terminals(
        2.0 * pi * float(reach @ solved[:, 0]),
        -2.0 * pi * float(reach @ solved[:, 1]),
        2.0 * pi * float(solved[0, 1]),
        0.0,
    )


def _with_gap(problem: Problem, kern: Kernel, count: int) -> Terminals:
    """Neighbours beyond a clearance: the field across the annular gap is unknown beside the finger's charge."""
    system = gap.assemble(
        kern.grid.k, kern.grid.weight, kern.admittance, kern.admittance_far, problem.pad_m, problem.clearance_m
    )
    finger = kern.grid.waves(count, problem.finger_m)
    p22 = _gram(finger, kern.finger, kern.finger_far, kern.grid.weight, problem.finger_m)
    link = (system.waves * (kern.grid.weight * kern.transfer)) @ finger.T
    return Terminals(*gap.terminals(system, link, p22))


def _terminals(problem: Problem, kern: Kernel, count: int) -> Terminals:
    if problem.around == "alone":
        return _alone(problem, kern, count)
    if problem.clearance_m > 0.0:
        return _with_gap(problem, kern, count)
    return _touching(problem, kern, count)


def change_by(problem: Problem, found: Terminals) -> float:
    """Change [F] of the pad's own charge by a finger at ground. Among driven neighbours, or over a driven shield alone,
    it is the pad's share of the finger's charge.
    """
    driven = problem.around == "driven" or (problem.around == "alone" and problem.below_ending == "driven")
    return -found.c12 if driven else found.c11 - found.untouched


def _converged(problem: Problem, kern: Kernel, tolerance: float) -> tuple[Terminals, float]:
    """Raise the order until the change stands still; the last step is the error estimate."""
    before = _terminals(problem, kern, ORDERS[0])
    error = 1.0
    for count in ORDERS[1:]:
        found = _terminals(problem, kern, count)
        error = abs(change_by(problem, found) / change_by(problem, before) - 1.0)
        before = found
        if error < tolerance:
            break
    return before, error


def plane_change(problem: Problem) -> float:
    """Change [F] by a grounded plane on the whole cover: the upper bound of any finger with that contact."""
    from scipy.special import j1

    plate = EPS0 / series_gap_limit(problem.cover).real
    if problem.around == "driven" and problem.clearance_m == 0.0:
        return plate * pi * problem.pad_m**2
    nodes = grid(problem.pad_m + problem.clearance_m, _reach(problem))
    k, weight = nodes.k, nodes.weight
    near = np.real(look(problem.cover, INFINITE, k).admittance)
    away = np.real(look(problem.cover, 1.0, k).admittance)
    down = np.real(look(problem.below, _ending(problem.below_ending), k).admittance)
    if problem.around == "grounded" and problem.clearance_m == 0.0:
        return 2.0 * pi * EPS0 * problem.pad_m**2 * float(weight @ ((near - away) * j1(k * problem.pad_m) ** 2))
    far = problem.cover[0].mean.real + (problem.below[0].mean.real if problem.below else 1.0)
    if problem.around == "driven":
        system = gap.assemble(k, weight, near + down, far, problem.pad_m, problem.clearance_m)
        return gap.uniform_charge(system, plate)
    if problem.around == "grounded":
        selves = [
            gap.self_capacitance(gap.assemble(k, weight, y + down, far, problem.pad_m, problem.clearance_m))
            for y in (near, away)
        ]
        return selves[0] - selves[1]
    bessel = nodes.waves(36, problem.pad_m)
    grams = [_gram(bessel, 1.0 / (y + down), 1.0 / far, weight, problem.pad_m) for y in (near, away)]
    one = np.eye(36, 1)[:, 0]
    with_plane, without = (2.0 * pi * float(np.linalg.solve(g, one)[0]) for g in grams)
    if problem.below_ending == "driven":
        # The free plane floats between shield and ground; the pad carries what it lacks to the shield's potential.
        up_gap, down_gap = series_gap_limit(problem.cover).real, series_gap_limit(problem.below).real
        return with_plane * down_gap / (up_gap + down_gap)
    return with_plane - without


def square_plane_change(*, cover: Sequence[FieldLayer], side_m: float, angles: int = 48) -> float:
    """Change [F] of a square pad among grounded neighbours by a grounded plane on the cover: one integral, exact.

    eps0 int int k [Y1 - Y0] abs(P)^2 d2k/(2 pi)^2 with P the transform of the outline, sinc by sinc; ``side_m`` [m].
    """
    layers = tuple(reversed(_real(cover)))
    reach = max(DECAY / layers[0].thickness_m, 2.0 * DECAY / sum(x.thickness_m for x in layers))
    nodes = grid(side_m, reach)
    difference = np.real(look(layers, INFINITE, nodes.k).admittance - look(layers, 1.0, nodes.k).admittance)
    x, w = np.polynomial.legendre.leggauss(angles)
    angle = 0.125 * pi * (x + 1.0)  # an eighth of the circle is enough by symmetry
    half = 0.5 * side_m * nodes.k[:, None]
    outline = np.sinc(half * np.cos(angle) / pi) * np.sinc(half * np.sin(angle) / pi)
    mean_square = (outline**2 @ w) * 0.5
    return EPS0 * side_m**4 / (2.0 * pi) * float(nodes.weight @ (nodes.k**2 * difference * mean_square))


def equal_disc_diameter(side_m: float) -> float:
    """Diameter [m] of the disc of a square pad's area, side [m]: it stands for the square under a finger disc.

    Checked against values of two equal square plates: up to 2 % low for covers to a fifth of the side, 3 % to twice the side.
    """
    return float(2.0 * side_m / pi**0.5)


def _checked(problem: Problem) -> Problem:
    if problem.pad_m <= 0.0 or problem.finger_m <= 0.0:
        raise InputError("out-of-range", "pad and finger need a diameter above 0")
    if not problem.cover:
        raise InputError("no-thickness", "the cover has no thickness")
    if problem.clearance_m < 0.0:
        raise InputError("out-of-range", "the clearance is below 0")
    if problem.below_ending not in ("open", "ground", "driven"):
        raise InputError("word-unknown", f'"{problem.below_ending}" is none of open, ground, driven')
    if problem.below_ending != "open" and not problem.below:
        raise InputError("below-empty", "a plane under the electrodes needs a layer between", "add it before the word")
    if problem.around == "grounded" and problem.clearance_m > 0.0 and problem.below_ending == "driven":
        raise InputError("not-solved", "grounded neighbours with a clearance over a driven shield are not solved")
    return problem


def _base_charge(problem: Problem) -> float:
    """Own charge [F] of a pad with all driven at unit potential and no finger: what the ground below holds."""
    if problem.below_ending != "ground":
        return 0.0
    plate = EPS0 / series_gap_limit(problem.below).real
    if problem.clearance_m == 0.0:
        return plate * pi * problem.pad_m**2
    kern = kernel(problem)
    system = gap.assemble(
        kern.grid.k, kern.grid.weight, kern.admittance, kern.admittance_far, problem.pad_m, problem.clearance_m
    )
    return gap.uniform_charge(system, plate)


def _selves(problem: Problem, found: Terminals, change: float) -> tuple[float | None, float | None]:
    if problem.around == "grounded" and problem.clearance_m == 0.0:
        return None, None
    if problem.around == "driven":
        base = _base_charge(problem)
        return base, base + change
    if problem.around == "alone" and problem.below_ending == "driven":
        return 0.0, change
    return found.untouched, found.c11


def solve(
    *,
    cover: Sequence[FieldLayer],
    below: Sequence[FieldLayer] = (),
    below_ending: str = "open",
    pad_diameter_m: float,
    finger_diameter_m: float,
    around: str,
    clearance_m: float | None = None,
    tolerance: float = DEFAULT_TOLERANCE,
) -> FieldResult:
    """The field solution for a circular pad [m] under a circular finger contact [m].

    ``cover`` from the touched side down to the electrode, ``below`` from the electrode plane down, ending ``open``, ``ground`` or
    ``driven``; ``around``: the pad alone, or among ``grounded`` or ``driven`` neighbours that fill the plane beyond the
    clearance [m]. Raises InputError for what cannot be solved; ``error`` [-] is the last step of the order.
    """
    problem = _checked(
        Problem(
            cover=tuple(reversed(_real(cover))),
            below=_real(below),
            below_ending=below_ending,
            pad_m=0.5 * pad_diameter_m,
            finger_m=0.5 * finger_diameter_m,
            around=around,
            clearance_m=0.0 if around == "alone" else (clearance_m or 0.0),
        )
    )
    found, error = _converged(problem, kernel(problem), tolerance)
    change = change_by(problem, found)
    untouched, touched = _selves(problem, found, change)
    pair = None
    if around == "alone" and below_ending == "open":
        pair = (found.c11 * found.c22 - found.c12**2) / (found.c11 + found.c22 + 2.0 * found.c12)
    plate = EPS0 * pi * min(problem.pad_m, problem.finger_m) ** 2 / series_gap_limit(problem.cover).real
    return FieldResult(
        model="discs",
        around=around,
        clearance_m=None if around == "alone" else clearance_m,
        below=below_ending,
        self_untouched_farad=untouched,
        self_touched_farad=touched,
        change_farad=change,
        change_low_farad=change,
        change_high_farad=plane_change(problem),
        pad_finger_farad=-found.c12,
        finger_total_farad=found.c22,
        pair_farad=pair,
        parallel_plate_farad=plate,
        edge_factor=change / plate,
        error=error,
    )
