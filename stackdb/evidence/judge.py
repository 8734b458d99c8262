"""Which records of a material may speak for it at the conditions asked, and with what uncertainty."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from math import exp, log, sqrt
from typing import TYPE_CHECKING, NamedTuple

from stackdb.evidence import settings
from stackdb.evidence.moves import (
    STILL,
    LossCurve,
    Move,
    Pair,
    Trust,
    axis_move,
    frequency_move,
    together,
)

if TYPE_CHECKING:
    from stackdb.catalogue import Material, PermittivityRecord, Source

UNUSED_FLAGS = {
    "upper-limit": "an upper limit, not a value",
    "lower-limit": "a lower limit, not a value",
    "misprint": "misprint",
    "other-substance": "another substance",
    "unfit": "unfit",
}
TEMPERATURE = Trust(0.15, 0.0003)
HUMIDITY = Trust(0.2, 0.0003)
HALF_DECADE = 0.5 * log(10.0)
MODELS_PERCENT = 0.29  # standard uncertainty of a rounded figure, in units of its last place


class Conditions(NamedTuple):
    """What is asked: frequency [Hz], temperature [degC], relative humidity [%], field direction."""

    frequency_hz: float = 1e5
    temperature_c: float = 23.0
    humidity_pct: float = settings.DEFAULT_HUMIDITY_PCT
    direction: str = "through"


class Judged(NamedTuple):
    """A record, whether it was used and why not, its ln value at the asked conditions and the move that took it there."""

    record: PermittivityRecord
    used: bool
    why_not: str
    y: float | None
    u: float | None
    move: Move

    @property
    def moved_value(self) -> float | None:
        """The record's permittivity [-] at the conditions asked."""
        return None if self.y is None else exp(self.y)


class Slopes(NamedTuple):
    """What a material's own records say of its change along each axis."""

    frequency: tuple[Pair, ...]
    temperature: tuple[Pair, ...]
    humidity: tuple[Pair, ...]
    loss: LossCurve
    class_loss: float
    per_kelvin: float
    per_pct: float
    by_direction: bool


def state_humidity(record: PermittivityRecord) -> float | None:
    """Relative humidity [%] that a record stands for: printed, or that of its stated condition, or unknown."""
    if record.humidity_pct is not None:
        return record.humidity_pct
    return settings.STATE_HUMIDITY_PCT.get(record.conditioning or "")


def in_band(record: PermittivityRecord) -> bool:
    """Whether a record's frequency lies where touch sensing data count; unknown counts as inside."""
    low, high = settings.BAND_HZ
    return record.frequency_hz is None or low <= record.frequency_hz <= high


def _pairs(records: Sequence[PermittivityRecord], axis: str, least: float, greatest: float) -> tuple[Pair, ...]:
    """Slopes between neighbouring figures of one source that differ along ``axis`` alone."""
    groups: dict[tuple[str | float | None, ...], list[tuple[float, float]]] = {}
    for r in records:
        place = {"frequency": r.frequency_hz, "temperature": r.temperature_c, "humidity": state_humidity(r)}
        x = place.pop(axis)
        if r.value is None or x is None:
            continue
        x = log(x) if axis == "frequency" else x
        key = (r.source, r.material, r.direction, r.method, *place.values())
        groups.setdefault(key, []).append((x, log(r.value)))
    found = []
    for key, points in groups.items():
        points.sort()
        a, y_a = points[0]
        for b, y_b in points[1:]:
            if least <= b - a <= greatest:
                found.append(Pair(a, b, (y_b - y_a) / (b - a), str(key[0])))
            if b - a >= least:
                a, y_a = b, y_b
    return tuple(found)


def _loss_curve(records: Sequence[PermittivityRecord], class_loss: float) -> LossCurve:
    """Geometric mean of the recorded loss at each frequency, knots at least a third of a decade apart."""
    points = sorted((log(r.frequency_hz), log(r.loss_tangent)) for r in records if r.frequency_hz and r.loss_tangent)
    if not points:
        return LossCurve(((0.0, log(class_loss)),), False)
    clusters: list[list[tuple[float, float]]] = []
    for point in points:
        if clusters and point[0] - clusters[-1][0][0] < log(10.0) / 3:
            clusters[-1].append(point)
        else:
            clusters.append([point])
    knots = tuple((sum(x for x, _ in c) / len(c), sum(y for _, y in c) / len(c)) for c in clusters)
    return LossCurve(knots, True)


def measured_slopes(material: Material, records: Sequence[PermittivityRecord]) -> Slopes:
    """Collect slopes, loss and class defaults for a material from its usable records."""
    usable = [r for r in records if not _flagged(r)]
    low, high = log(settings.BAND_HZ[0] / 5.1), log(settings.BAND_HZ[1] * 50.0)
    near = [r for r in usable if r.frequency_hz is None or low <= log(r.frequency_hz) <= high]
    class_loss = settings.CLASS_LOSS[material.fixity]
    return Slopes(
        frequency=_pairs(near, "frequency", HALF_DECADE, log(1e4)),
        temperature=_pairs(near, "temperature", 4.0, 200.0),
        humidity=_pairs(near, "humidity", 10.0, 100.0),
        loss=_loss_curve(near, class_loss),
        class_loss=class_loss,
        per_kelvin=settings.CLASS_PER_KELVIN[material.fixity],
        per_pct=settings.CLASS_PER_PCT[material.fixity],
        by_direction={"through", "in-plane"} <= {r.direction for r in usable},
    )


def _flagged(record: PermittivityRecord) -> str:
    for flag in (record.flags or "").split():
        if flag in UNUSED_FLAGS:
            return UNUSED_FLAGS[flag]
    return ""


def index_floor(material: Material) -> float:
    """Least permittivity [-] that the refractive index allows: 0.96 n^2 at the sodium line, 0.98 n^2 at long waves; 1 without.

    Maxwell's relation with every slower polarisation adding to the optical one (Kramers-Kronig; recalled).
    """
    if material.refractive_index is None:
        return 1.0
    return max(1.0, settings.INDEX_SHARE[material.index_band or "sodium"] * material.refractive_index**2)


def why_unused(material: Material, record: PermittivityRecord, *, any_in_band: bool) -> str:
    """The rule that keeps a record out, or an empty text. No rule looks at what other sources say."""
    if record.value is None:
        return "only a loss tangent"
    flagged = _flagged(record)
    if flagged:
        return flagged
    axis_fits = material.index_axis != "in-plane" or record.direction == "in-plane"
    if axis_fits and record.value < index_floor(material):
        return f"below the index floor {index_floor(material):.2f}"
    if any_in_band and not in_band(record):
        return "out of band"
    return ""


def _rounding(value: float) -> float:
    text = repr(value)
    decimals = len(text.split(".")[1]) if "." in text and "e" not in text else 0
    if text.endswith(".0"):
        decimals = 0
    decimals = max(decimals, 1 if value < 20 else 0)  # trailing zeros are lost in storage
    return MODELS_PERCENT * 10.0**-decimals / value


def _own_uncertainty(record: PermittivityRecord, source: Source) -> float:
    """Standard uncertainty of ln(value) as it stands in the source: kind, memory, rounding, printed range."""
    if record.value is None:
        return 0.0
    parts = [settings.KIND_U[source.kind], settings.CHECKED_U[record.checked], _rounding(record.value)]
    if source.anonymous:
        parts.append(settings.ANONYMOUS_U)
    if record.low and record.high:
        parts.append(log(record.high / record.low) / (2.0 * sqrt(3.0)))
    return sqrt(sum(p * p for p in parts))


def _no_frequency(slopes: Slopes, source: str, to_hz: float) -> Move:
    """A record without frequency: uniform in ln f over the span, so the mean move and its spread."""
    low, high = (log(f) for f in settings.NO_FREQUENCY_SPAN_HZ)
    n = 5
    moves = []
    for i in range(n):
        from_hz = exp(low + (high - low) * (i + 0.5) / n)
        moves.append(
            frequency_move(
                slopes.frequency, slopes.loss, slopes.class_loss, source=source, from_hz=from_hz, to_hz=to_hz
            )
        )
    mean = sum(m.shift for m in moves) / n
    spread = sum((m.shift - mean) ** 2 for m in moves) / n
    cost = sum(m.uncertainty**2 for m in moves) / n
    return Move(mean, sqrt(spread + cost + settings.NO_FREQUENCY_U**2), "no frequency")


def _humidity_move(slopes: Slopes, record: PermittivityRecord, to_pct: float) -> Move:
    start = state_humidity(record)
    if start is not None:
        return axis_move(
            slopes.humidity, source=record.source, start=start, end=to_pct, own=HUMIDITY, elsewhere=slopes.per_pct
        )
    if not slopes.humidity:
        return Move(0.0, 15.0 * slopes.per_pct, "")
    swing = axis_move(slopes.humidity, source="", start=0.0, end=60.0, own=HUMIDITY, elsewhere=slopes.per_pct)
    return Move(0.0, abs(swing.shift) / sqrt(12.0), "no humidity")


def move_of(slopes: Slopes, record: PermittivityRecord, to: Conditions) -> Move:
    """The whole move of a record to the conditions asked."""
    if record.frequency_hz is None:
        along_f = _no_frequency(slopes, record.source, to.frequency_hz)
    else:
        along_f = frequency_move(
            slopes.frequency,
            slopes.loss,
            slopes.class_loss,
            source=record.source,
            from_hz=record.frequency_hz,
            to_hz=to.frequency_hz,
        )
    start = settings.ROOM_C if record.temperature_c is None else record.temperature_c
    along_t = axis_move(
        slopes.temperature,
        source=record.source,
        start=start,
        end=to.temperature_c,
        own=TEMPERATURE,
        elsewhere=slopes.per_kelvin,
    )
    along_h = _humidity_move(slopes, record, to.humidity_pct)
    unknown_way = slopes.by_direction and record.direction == "unknown" and to.direction != "unknown"
    way = Move(0.0, settings.UNKNOWN_DIRECTION_U, "") if unknown_way else STILL
    moved = together(along_f, along_t, along_h, way)
    return moved._replace(basis=along_f.basis if record.frequency_hz is not None else "no frequency")


def _fits_direction(record: PermittivityRecord, asked: str) -> bool:
    return asked == "unknown" or record.direction in (asked, "isotropic", "unknown")


def judge_records(
    material: Material,
    records: Sequence[PermittivityRecord],
    sources: Mapping[str, Source],
    conditions: Conditions,
    *,
    leave_out: Iterable[str] = (),
) -> tuple[Judged, ...]:
    """Judge each record: used or the reason why not, and its ln value with uncertainty at the conditions asked.

    ``leave_out`` names sources that must not speak (for the calibration).
    """
    barred = set(leave_out)
    slopes = measured_slopes(material, [r for r in records if r.source not in barred])
    sound = [r for r in records if not why_unused(material, r, any_in_band=False) and r.source not in barred]
    any_in_band = any(in_band(r) for r in sound)
    any_fitting = any(_fits_direction(r, conditions.direction) for r in sound if in_band(r) or not any_in_band)
    judged = []
    for record in records:
        reason = why_unused(material, record, any_in_band=any_in_band)
        if not reason and record.source in barred:
            reason = "left out"
        if not reason and any_fitting and not _fits_direction(record, conditions.direction):
            reason = f"field {record.direction}, asked {conditions.direction}"
        judged.append(_judged(slopes, record, sources[record.source], conditions, reason))
    return tuple(judged)


def _judged(slopes: Slopes, record: PermittivityRecord, source: Source, conditions: Conditions, reason: str) -> Judged:
    if record.value is None or record.value <= 0.0:
        return Judged(record, False, reason, None, None, STILL)
    move = move_of(slopes, record, conditions)
    u = sqrt(_own_uncertainty(record, source) ** 2 + move.uncertainty**2)
    return Judged(record, not reason, reason, log(record.value) + move.shift, u, move)
