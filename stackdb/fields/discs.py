"""Circular pad and circular finger on a layered cover: the true change of capacitance by a touch.

Spectral-domain Galerkin. Each disc's charge is a sum of functions that carry the edge singularity of a thin disc
(``panels``); the homogeneous part of the kernel is integrated in closed form. Every case comes down to the finger's own
matrix S, to what the pad at unit potential lets the finger feel, h, and to what it feels while the sensor drives, d:
the change is h S^-1 d. Method: T. Itoh (editor), Numerical Techniques for Microwave and Millimeter-Wave Passive
Structures (1989), spectral domain; for two discs after E. R. Love, Quart. J. Mech. Appl. Math. 2 (1949) 428 (both
recalled).
"""

from __future__ import annotations

from collections.abc import Sequence
from math import pi
from typing import TYPE_CHECKING, Any, NamedTuple

import numpy as np
from scipy.special import j1

from stackdb.errors import InputError
from stackdb.fields import gap
from stackdb.fields.kernel import INFINITE, FieldLayer
from stackdb.fields.panels import Abrupt, DiscBasis, basis, breaks, gram
from stackdb.fields.planes import equal_disc_diameter as equal_disc_diameter
from stackdb.fields.planes import square_plane_change as square_plane_change
from stackdb.fields.problem import Far, Kernel, Problem, checked, kernel, own_thickness, real_layers
from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    Array = NDArray[np.float64]

ORDERS = (8, 12, 16, 22)
DEFAULT_TOLERANCE = 1e-5


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


class Response(NamedTuple):
    """What is asked of one order [F]; ``ground`` is the change of a pad at unit potential with all else at ground."""

    change: float
    pad_finger: float
    finger_total: float
    untouched: float | None
    high: float
    ground: float


def _disc(problem: Problem, kern: Kernel, order: int, at_pad: bool) -> DiscBasis:
    """Panels of pad or finger, graded to its own edge and to the edge opposite."""
    own, other = (problem.pad_m, problem.finger_m) if at_pad else (problem.finger_m, problem.pad_m)
    across = sum(x.thickness_m for x in problem.cover)
    finest = 4.0 / float(kern.grid.k[-1])
    scale = max(min(across, own_thickness(problem, at_pad)), finest)
    spots = [Abrupt(own, scale)]
    rims = [other] if at_pad or not problem.clearance_m else [other, other + problem.clearance_m]
    spots += [Abrupt(rim, across) for rim in rims if rim < own - 0.1 * scale]
    return basis(kern.grid, breaks(own, spots), order)


def _finger_matrix(kern: Kernel, far: Far, finger: DiscBasis) -> Array:
    limit = 1.0 / far.finger
    return gram(finger, kern.grid.weight * (1.0 / kern.finger - limit), limit, far.finger_rest)


def _finger_response(matrix: Array, feels: Array, driven: Array, charges: Array) -> tuple[float, float, float, float]:
    """Change in the drive state, pad to finger, the finger's total, and the change with all else at ground [F]."""
    solved = np.linalg.solve(matrix, np.column_stack([driven, charges, feels]))
    by_pad = feels @ solved
    return float(by_pad[0]), float(by_pad[1]), float(charges @ solved[:, 1]), float(by_pad[2])


def _alone(problem: Problem, kern: Kernel, far: Far, order: int) -> Callable[[bool], Response]:
    """Charges of both discs unknown."""
    pad, finger = (_disc(problem, kern, order, at_pad=side) for side in (True, False))
    limit = 1.0 / far.pad
    p11 = gram(pad, kern.grid.weight * (1.0 / kern.open - limit), limit, far.pad_rest)
    plane = gram(pad, kern.grid.weight * (1.0 / kern.plane - limit), limit, far.plane_rest)
    p22 = _finger_matrix(kern, far, finger)
    p12 = (pad.waves * (kern.grid.weight * kern.transfer / kern.open)) @ finger.waves.T / (2.0 * pi * EPS0)

    def respond(lower: bool) -> Response:
        a = pad.lower if lower else np.ones_like(pad.lower)
        b = finger.lower if lower else np.ones_like(finger.lower)
        q1, q2, cross = pad.charges[a], finger.charges[b], p12[np.ix_(a, b)]
        solved = np.linalg.solve(p11[np.ix_(a, a)], np.column_stack([q1, cross]))
        untouched = float(q1 @ solved[:, 0])
        under = float(q1 @ np.linalg.solve(plane[np.ix_(a, a)], q1))
        feels = cross.T @ solved[:, 0]
        matrix = p22[np.ix_(b, b)] - cross.T @ solved[:, 1:]
        if problem.below_ending == "driven":
            # the driven plane lifts everything; between it and a grounded cover the free plane stands at up/(up + down)
            share = problem.down_gap_m / (problem.up_gap_m + problem.down_gap_m)
            change, mutual, total, ground = _finger_response(matrix, feels, q2, q2)
            return Response(change, mutual, total, 0.0, under * share, ground)
        change, mutual, total, ground = _finger_response(matrix, feels, feels, q2)
        return Response(change, mutual, total, untouched, under - untouched, ground)

    return respond


def _whole_plane(problem: Problem, kern: Kernel, far: Far, order: int) -> Callable[[bool], Response]:
    """All of the electrode plane at given potentials: the finger's charge is the only unknown."""
    finger = _disc(problem, kern, order, at_pad=False)
    p22 = _finger_matrix(kern, far, finger)
    wave = problem.pad_m * j1(kern.grid.k * problem.pad_m)
    feels = finger.waves @ (kern.grid.weight * kern.transfer * wave)
    area = pi * problem.pad_m**2
    if problem.around == "driven":
        untouched = EPS0 * area / problem.down_gap_m if problem.below_ending == "ground" else 0.0
        high = EPS0 * area / problem.up_gap_m
    else:
        untouched, high = None, 2.0 * pi * EPS0 * float(kern.grid.weight @ (kern.added * wave**2))

    def respond(lower: bool) -> Response:
        b = finger.lower if lower else np.ones_like(finger.lower)
        charges = finger.charges[b]
        driven = charges if problem.around == "driven" else feels[b]
        change, mutual, total, ground = _finger_response(p22[np.ix_(b, b)], feels[b], driven, charges)
        return Response(change, mutual, total, untouched, high, ground)

    return respond


def _with_gap(problem: Problem, kern: Kernel, far: Far, order: int) -> Callable[[bool], Response]:
    """Neighbours beyond a clearance: the field across the annular gap is unknown beside the finger's charge."""
    inner, width = problem.pad_m, problem.clearance_m
    finger = _disc(problem, kern, order, at_pad=False)
    scale = max(
        min(own_thickness(problem, at_pad=True), own_thickness(problem, at_pad=False)), 4.0 / float(kern.grid.k[-1])
    )
    terms = gap.basis(kern.grid.k, inner, width, gap.order_for(width, scale) * order // ORDERS[0])
    p22 = _finger_matrix(kern, far, finger)
    bare = gap.energy(terms, kern.grid.weight * (kern.open - far.pad), far.pad, far.open_rest, inner, width)
    under = gap.energy(terms, kern.grid.weight * (kern.plane - far.pad), far.pad, far.high_rest, inner, width)
    link = (terms.waves * (kern.grid.weight * kern.transfer)) @ finger.waves.T
    driven = problem.around == "driven"
    voltage = 0.0 if driven else 1.0
    # charge density of the plane if it were whole: the neighbours' potential against the planes below and above
    sign = {"open": 0.0, "ground": 1.0 if driven else 0.0, "driven": 0.0 if driven else -1.0}[problem.below_ending]
    from_below = sign * EPS0 / problem.down_gap_m
    from_above = EPS0 / problem.up_gap_m if driven else 0.0

    def respond(lower: bool) -> Response:
        b = finger.lower if lower else np.ones_like(finger.lower)
        m = terms.areas.size - terms.areas.size // 5 if lower else terms.areas.size
        charges, areas, energy, coupling = finger.charges[b], terms.areas[:m], bare[:m, :m], link[:m][:, b]
        feels = coupling.T @ gap.state(energy, areas, 1.0, 0.0)[1]
        untouched, drive = gap.state(energy, areas, voltage, from_below)
        high = gap.state(under[:m, :m], areas, voltage, from_below + from_above)[0] - untouched
        matrix = p22[np.ix_(b, b)] + coupling[1:].T @ np.linalg.solve(energy[1:, 1:], coupling[1:])
        felt = coupling.T @ drive + (charges if driven else 0.0)
        change, mutual, total, ground = _finger_response(matrix, feels, felt, charges)
        return Response(change, mutual, total, untouched, high, ground)

    return respond


def _method(problem: Problem) -> Callable[[Problem, Kernel, Far, int], Callable[[bool], Response]]:
    if problem.around == "alone":
        return _alone
    return _whole_plane if problem.whole_plane else _with_gap


def plane_change(problem: Problem) -> float:
    """Change [F] by a grounded plane on the whole cover: the upper bound of any finger with that contact."""
    return _method(problem)(problem, *kernel(problem), ORDERS[-2])(False).high


def _converged(problem: Problem, tolerance: float) -> tuple[Response, float]:
    """The response and the largest relative step from the order below; raises the order until that is small enough."""
    kern, far = kernel(problem)
    method = _method(problem)
    error = INFINITE
    for order in ORDERS:
        respond = method(problem, kern, far, order)
        found, rough = respond(False), respond(True)
        steps = (abs(x - y) / abs(x) for x, y in zip(found, rough, strict=True) if x and y is not None)
        error = max(steps)
        if error <= tolerance:
            return found, error
    raise InputError(
        "field-not-converged",
        f"the field solution reaches a relative error of {error:.1g}, not {tolerance:.1g}",
        "ask for a looser tolerance, or simplify the stack",
    )


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

    ``cover`` from the touched side down to the electrode, ``below`` from the electrode plane down, ending ``open``,
    ``ground`` or ``driven``; ``around``: the pad alone, or among ``grounded`` or ``driven`` neighbours that fill the
    plane beyond the clearance [m] (None: 0; of no meaning for a pad alone). Permittivities [-] count with their real
    part. Raises InputError for what cannot be solved to the relative ``tolerance`` [-]; ``error`` [-] is the last step
    of the order.
    """
    problem = checked(
        Problem(
            cover=tuple(reversed(real_layers(cover))),
            below=real_layers(below),
            below_ending=below_ending,
            pad_m=0.5 * pad_diameter_m,
            finger_m=0.5 * finger_diameter_m,
            around=around,
            clearance_m=0.0 if around == "alone" else (clearance_m or 0.0),
        ),
        tolerance,
    )
    found, error = _converged(problem, tolerance)
    return _result(problem, found, error, clearance_m)


def _result(problem: Problem, found: Response, error: float, clearance_m: float | None) -> FieldResult:
    alone = problem.around == "alone"
    plate = EPS0 * pi * min(problem.pad_m, problem.finger_m) ** 2 / problem.up_gap_m
    pair = None
    if alone and problem.below_ending == "open" and found.untouched is not None:
        c11, c12, c22 = found.untouched + found.ground, -found.pad_finger, found.finger_total
        pair = (c11 * c22 - c12**2) / (c11 + c22 + 2.0 * c12)
    return FieldResult(
        model="discs",
        around=problem.around,
        clearance_m=None if alone else clearance_m,
        below=problem.below_ending,
        self_untouched_farad=found.untouched,
        self_touched_farad=None if found.untouched is None else found.untouched + found.change,
        change_farad=found.change,
        change_low_farad=found.change,
        change_high_farad=found.high,
        pad_finger_farad=found.pad_finger,
        finger_total_farad=found.finger_total,
        pair_farad=pair,
        parallel_plate_farad=plate,
        edge_factor=found.change / plate,
        error=error,
    )
