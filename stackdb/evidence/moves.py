"""Carrying a figure from the conditions it was recorded at to the conditions asked for.

Along an axis (ln frequency, temperature, humidity) the material's own measured slopes serve where they
reach; where they end, frequency is carried by the loss through the local Kramers-Kronig relation and the
other axes stand still. Every move costs certainty.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import exp, log, pi, sqrt
from typing import NamedTuple

LN10 = log(10.0)
LOSS_MOVE_LIMIT = 0.3  # no move beyond this by the loss rule
LOSSY = 0.1  # the local relation is for small loss
CONDUCTION_SLOPE = -0.8  # d ln(tan d) / d ln f steeper than this is a conduction tail


class Pair(NamedTuple):
    """Two figures of one source that differ along one axis: a measured slope between ``a`` and ``b``."""

    a: float
    b: float
    slope: float
    source: str


class Move(NamedTuple):
    """A shift of ln(permittivity) [-], its standard uncertainty [-] and what it rests on."""

    shift: float
    uncertainty: float
    basis: str  # "", "own slope", "slope of other sources", "loss", "class loss", "class"


STILL = Move(0.0, 0.0, "")


class Trust(NamedTuple):
    """What a unit of move costs: a share of its size, and a part per unit of the axis."""

    share: float
    flat: float


# ln f axis: flat parts are per decade (DESIGN's 0.006 for loss, 0.01 for the class's loss).
OWN = Trust(0.05, 0.002)
OTHERS = Trust(0.30, 0.006)
LOSS = Trust(0.5, 0.006)
CLASS_LOSS = Trust(0.7, 0.01)


def _covering(pairs: Sequence[Pair], source: str, middle: float) -> tuple[float, str] | None:
    """Slope at ``middle`` from this source's own pairs, else from the others', short spans weighing more."""
    here = [p for p in pairs if p.a <= middle <= p.b]
    own = [p for p in here if p.source == source]
    chosen = own or here
    if not chosen:
        return None
    weights = [1.0 / (p.b - p.a) for p in chosen]
    slope = sum(w * p.slope for w, p in zip(weights, chosen, strict=True)) / sum(weights)
    return slope, "own slope" if own else "slope of other sources"


def _cuts(pairs: Sequence[Pair], low: float, high: float) -> list[float]:
    inner = {x for p in pairs for x in (p.a, p.b) if low < x < high}
    return [low, *sorted(inner), high]


class LossCurve(NamedTuple):
    """Loss tangent against frequency: knots (ln f, ln tan d), straight between, level outside."""

    knots: tuple[tuple[float, float], ...]
    measured: bool

    def slope(self, x: float) -> float:
        """D ln(tan d)/d ln f [-] at ln f = ``x``."""
        for (x1, y1), (x2, y2) in zip(self.knots, self.knots[1:], strict=False):
            if x1 <= x <= x2:
                return (y2 - y1) / (x2 - x1)
        return 0.0

    def at(self, x: float) -> float:
        """Loss tangent [-] at ln f = ``x``."""
        if x <= self.knots[0][0]:
            return exp(self.knots[0][1])
        for (x1, y1), (x2, y2) in zip(self.knots, self.knots[1:], strict=False):
            if x <= x2:
                return exp(y1 + (y2 - y1) * (x - x1) / (x2 - x1))
        return exp(self.knots[-1][1])

    def integral(self, low: float, high: float) -> float:
        """Integral of tan d over ln f, exact on each straight piece in log-log."""
        cuts = [low, *(x for x, _ in self.knots if low < x < high), high]
        return sum(self._piece(x1, x2) for x1, x2 in zip(cuts, cuts[1:], strict=False))

    def _piece(self, x1: float, x2: float) -> float:
        t1, t2 = self.at(x1), self.at(x2)
        ratio = log(t2 / t1)
        return t1 * (x2 - x1) if abs(ratio) < 1e-9 else (t2 - t1) * (x2 - x1) / ratio


def _loss_piece(curve: LossCurve, low: float, high: float, class_loss: float) -> tuple[float, Trust, str]:
    """Ln eps(high) - ln eps(low) by the local Kramers-Kronig relation, or by the class's loss where it fails."""
    middle = 0.5 * (low + high)
    usable = curve.measured and curve.at(middle) < LOSSY and curve.slope(middle) > CONDUCTION_SLOPE
    if usable:
        return -(2.0 / pi) * curve.integral(low, high), LOSS, "loss"
    return -(2.0 / pi) * class_loss * (high - low), CLASS_LOSS, "class loss"


def frequency_move(
    pairs: Sequence[Pair], curve: LossCurve, class_loss: float, *, source: str, from_hz: float, to_hz: float
) -> Move:
    """Shift of ln(permittivity) from ``from_hz`` [Hz] to ``to_hz`` [Hz].

    ``pairs`` are measured slopes over ln f, ``curve`` the material's loss, ``class_loss`` [-] the loss supposed where
    none is known. Local relation between loss and slope: Jonscher, Dielectric Relaxation in Solids (1983), recalled;
    its residual on published pairs is what the uncertainty is set from.
    """
    if from_hz == to_hz:
        return STILL
    a, b = log(from_hz), log(to_hz)
    low, high = min(a, b), max(a, b)
    shift = by_loss = spent = flat = 0.0
    bases: dict[str, float] = {}
    for x1, x2 in zip(cuts := _cuts(pairs, low, high), cuts[1:], strict=False):
        found = _covering(pairs, source, 0.5 * (x1 + x2))
        if found:
            piece, basis = found[0] * (x2 - x1), found[1]
            trust = OWN if basis == "own slope" else OTHERS
        else:
            piece, trust, basis = _loss_piece(curve, x1, x2, class_loss)
            by_loss += piece
        shift += piece
        spent += trust.share * abs(piece)
        flat += trust.flat * (x2 - x1) / LN10
        bases[basis] = bases.get(basis, 0.0) + (x2 - x1)
    excess = max(0.0, abs(by_loss) - LOSS_MOVE_LIMIT)
    shift += excess if by_loss < 0 else -excess
    sign = 1.0 if b > a else -1.0
    return Move(sign * shift, sqrt(spent * spent + flat * flat) + excess, max(bases, key=lambda k: bases[k]))


def axis_move(pairs: Sequence[Pair], *, source: str, start: float, end: float, own: Trust, elsewhere: float) -> Move:
    """Shift of ln(permittivity) along temperature [degC] or humidity [%] from ``start`` to ``end``.

    Measured slopes serve where they reach; elsewhere the value stands still and pays ``elsewhere`` per unit.
    """
    if start == end:
        return STILL
    low, high = min(start, end), max(start, end)
    shift = spent = flat = 0.0
    basis = "class"
    for x1, x2 in zip(cuts := _cuts(pairs, low, high), cuts[1:], strict=False):
        found = _covering(pairs, source, 0.5 * (x1 + x2))
        if found is None:
            flat += elsewhere * (x2 - x1)
            continue
        basis = found[1]
        piece = found[0] * (x2 - x1)
        shift += piece
        spent += own.share * (1.0 if basis == "own slope" else 4.0) * abs(piece)
        flat += own.flat * (x2 - x1)
    sign = 1.0 if end > start else -1.0
    return Move(sign * shift, sqrt(spent * spent + flat * flat), basis)


def together(*moves: Move) -> Move:
    """Independent moves one after the other: shifts add, uncertainties add as variances."""
    largest = max(moves, key=lambda m: abs(m.shift) + m.uncertainty)
    return Move(sum(m.shift for m in moves), sqrt(sum(m.uncertainty**2 for m in moves)), largest.basis)
