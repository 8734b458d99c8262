"""One recommended permittivity for a material at the conditions asked: value, range, grade and why."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from math import exp, log
from typing import TYPE_CHECKING, NamedTuple

from stackdb.errors import InputError
from stackdb.evidence import settings
from stackdb.evidence.judge import Conditions, Judged, in_band, index_floor, judge_records
from stackdb.evidence.pool import Figure, Pooled, between_sources, within_source
from stackdb.quantities import Span

if TYPE_CHECKING:
    from stackdb.catalogue import Catalogue, Material, PermittivityRecord, Source

DEFAULT_LEVEL = 0.9
MEMORY_KINDS = ("practice",)


class Weighed(NamedTuple):
    """A source as the estimator saw it: its value at the conditions asked and its robust weight."""

    source: str
    value: float
    uncertainty: float
    weight: float


class Recommended(NamedTuple):
    """What the records of a material come to.

    ``value, low, high`` permittivity [-] with the range that holds the next lot or supplier at ``level`` [-];
    ``loss_tangent`` [-] or None; ``confidence`` strong, fair, weak or guess; ``why`` one line.
    """

    permittivity: Span
    level: float
    loss_tangent: float | None
    confidence: str
    why: str
    judged: tuple[Judged, ...]
    weighed: tuple[Weighed, ...]
    floor: float

    @property
    def sources(self) -> tuple[str, ...]:
        """Keys of the sources used, the weightiest first."""
        return tuple(w.source for w in self.weighed)

    @property
    def disagreements(self) -> tuple[Weighed, ...]:
        """Sources that the robust weights nearly silenced, or either of two that cannot both be right."""
        if len(self.weighed) == 2:
            one, two = self.weighed
            apart = abs(log(one.value / two.value))
            if apart > 2.0 * (one.uncertainty**2 + two.uncertainty**2) ** 0.5:
                return self.weighed
            return ()
        return tuple(w for w in self.weighed if w.weight < settings.DISAGREES_BELOW)


def _by_source(judged: Sequence[Judged]) -> dict[str, Figure]:
    figures: dict[str, list[Figure]] = {}
    for j in judged:
        if j.used and j.y is not None and j.u is not None:
            figures.setdefault(j.record.source, []).append(Figure(j.y, j.u))
    return {source: within_source(parts) for source, parts in figures.items()}


def _weigh(figures: Mapping[str, Figure], pooled: Pooled) -> tuple[Weighed, ...]:
    rows = [
        (weight / (figure.u**2 + pooled.spread**2), Weighed(source, exp(figure.y), figure.u, weight))
        for (source, figure), weight in zip(figures.items(), pooled.weights, strict=True)
    ]
    return tuple(w for _, w in sorted(rows, key=lambda row: (-row[0], row[1].source)))


def loss_at(judged: Sequence[Judged], frequency_hz: float) -> float | None:
    """Loss tangent [-] at ``frequency_hz`` [Hz]: geometric mean over sources of each source's nearest figure.

    Between two figures of one source it is interpolated straight in log-log; nothing is extrapolated by slope.
    """
    points: dict[str, list[tuple[float, float]]] = {}
    for j in judged:
        r = j.record
        usable = j.used or j.why_not == "only a loss tangent"
        if usable and r.loss_tangent and r.frequency_hz and in_band(r):
            points.setdefault(r.source, []).append((log(r.frequency_hz), log(r.loss_tangent)))
    if not points:
        return None
    x = log(frequency_hz)
    total = weight = 0.0
    for knots in points.values():
        y, distance = _interpolated(sorted(knots), x)
        share = 1.0 / (0.5 + distance) ** 2
        total, weight = total + share * y, weight + share
    return exp(total / weight)


def _interpolated(knots: Sequence[tuple[float, float]], x: float) -> tuple[float, float]:
    """Ln tan d at ``x`` and how far, in ln f, the nearest knot lies."""
    nearest = min(abs(x - k) for k, _ in knots)
    if x <= knots[0][0] or x >= knots[-1][0]:
        y = [y for k, y in knots if abs(x - k) == nearest]
        return sum(y) / len(y), nearest
    for (x1, y1), (x2, y2) in zip(knots, knots[1:], strict=False):
        if x1 <= x <= x2 and x2 > x1:
            return y1 + (y2 - y1) * (x - x1) / (x2 - x1), nearest
    return knots[-1][1], nearest


def _read_sources(judged: Sequence[Judged], sources: Mapping[str, Source]) -> int:
    """Independent sources read at first hand with a frequency inside the band, anonymous tables not counted."""
    found = {
        j.record.source
        for j in judged
        if j.used and j.record.checked == "read" and j.record.frequency_hz and in_band(j.record)
    }
    return sum(not sources[key].anonymous for key in found)


def grade(read_sources: int, half_width: float) -> str:
    """The first rule of ``settings.GRADES`` that is met; the table is the whole rule."""
    for rule in settings.GRADES:
        if read_sources >= rule.read_sources and half_width <= rule.half_width:
            return rule.grade
    return settings.GRADES[-1].grade


def _moved(judged: Sequence[Judged], conditions: Conditions) -> str:
    """What the weightiest record's move was, in words."""
    from stackdb.quantities import format_frequency

    used = [j for j in judged if j.used and j.u is not None]
    nearest = min(used, key=lambda j: j.u or 0.0)
    if nearest.record.frequency_hz is None:
        return "no record states its frequency"
    if nearest.record.frequency_hz == conditions.frequency_hz:
        return f"recorded at {format_frequency(conditions.frequency_hz)}"
    percent = 100.0 * (exp(nearest.move.shift) - 1.0)
    cost = 100.0 * nearest.move.uncertainty
    return (
        f"nearest record at {format_frequency(nearest.record.frequency_hz)}, moved by {nearest.move.basis or 'nothing'}"
        f" {percent:+.1f} % (costs {cost:.1f} %)"
    )


def _why(judged: Sequence[Judged], sources: Mapping[str, Source], conditions: Conditions, count: int, read: int) -> str:
    plural = "source" if count == 1 else "sources"
    seen = "all read" if read == count else f"{read} read with a frequency" if read else "none read with a frequency"
    used = {j.record.source for j in judged if j.used}
    memory = all(sources[key].kind in MEMORY_KINDS for key in used)
    out = not any(j.used and in_band(j.record) for j in judged)
    parts = [f"{count} {plural}, " + ("memory alone" if memory else seen)]
    if out:
        parts.append("none inside 50 Hz to 20 MHz")
    parts.append(_moved(judged, conditions))
    return "; ".join(parts)


def recommend_from(
    material: Material,
    records: Sequence[PermittivityRecord],
    sources: Mapping[str, Source],
    conditions: Conditions,
    *,
    level: float = DEFAULT_LEVEL,
    leave_out: Iterable[str] = (),
) -> Recommended | None:
    """Pool a material's records at the conditions asked; None when no record is usable.

    Judging, moving and pooling follow ``judge``, ``moves`` and ``pool``. The range [-] is a prediction for the next lot or
    supplier at ``level`` [-], its low end not below the index floor.
    """
    judged = judge_records(material, records, sources, conditions, leave_out=leave_out)
    figures = _by_source(judged)
    if not figures:
        return None
    pooled = between_sources(list(figures.values()), settings.SPREAD[material.fixity], level)
    floor = index_floor(material)
    value = max(exp(pooled.mean), floor)
    low, high = max(exp(pooled.mean - pooled.half_width), floor), exp(pooled.mean + pooled.half_width)
    read = _read_sources(judged, sources)
    return Recommended(
        permittivity=Span(value, min(low, value), max(high, value)),
        level=level,
        loss_tangent=loss_at(judged, conditions.frequency_hz),
        confidence=grade(read, exp(pooled.half_width) - 1.0),
        why=_why(judged, sources, conditions, len(figures), read),
        judged=judged,
        weighed=_weigh(figures, pooled),
        floor=floor,
    )


def recommend(
    catalogue: Catalogue,
    material: Material,
    conditions: Conditions,
    *,
    level: float = DEFAULT_LEVEL,
    source: str | None = None,
) -> Recommended | None:
    """The recommended permittivity of a catalogue material; ``source`` lets one source alone speak.

    Raises InputError when the source named has no record of the material.
    """
    records = catalogue.permittivities(material.key)
    if source is not None:
        records = tuple(r for r in records if r.source == source)
        if not records:
            raise InputError("source-without-record", f'no record of {material.key} from source "{source}"')
    sources = {s.key: s for s in catalogue.sources({r.source for r in records})}
    return recommend_from(material, records, sources, conditions, level=level)
