"""Calibration, demonstrated: leave one source out, predict its figure at its own conditions, count how often it falls inside.

Settings are fixed before the count. A row is left out only by rules that do not look at other sources (flags, index floor, band).
Counted by source: each source speaks once for a material, by its figure nearest the asked band's middle.
"""

from __future__ import annotations

from math import exp, log
from typing import TYPE_CHECKING, NamedTuple

from stackdb.evidence import settings
from stackdb.evidence.judge import Conditions, in_band, state_humidity, why_unused
from stackdb.evidence.recommend import recommend_from

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from stackdb.catalogue import Catalogue, Material, PermittivityRecord

MIDDLE_HZ = 1e5
UNSTATED_HZ = 7e3  # the middle, in ln f, of the span a record without frequency is taken from


class LeftOut(NamedTuple):
    """One source left out of one material: its figure [-], the range predicted without it [-], and who else there was."""

    material: str
    fixity: str
    source: str
    anonymous: bool
    value: float
    low: float
    high: float
    predicted: float
    others: int
    grade: str

    @property
    def hit(self) -> bool:
        """Whether the figure lies in the range, with no allowance for its own error."""
        return self.low <= self.value <= self.high

    @property
    def half_width(self) -> float:
        """Relative half-width [-] of the range, in its logarithm."""
        return exp(0.5 * log(self.high / self.low)) - 1.0


class Group(NamedTuple):
    """A group of left-out figures: how many, hits, the binomial 95 % interval of the coverage [-], width, score."""

    name: str
    figures: int
    hits: int
    coverage: float
    coverage_low: float
    coverage_high: float
    median_half_width: float
    interval_score: float


def speaker(material: Material, records: Sequence[PermittivityRecord]) -> PermittivityRecord | None:
    """The figure by which a source is counted: usable, in band, nearest to 100 kHz; one without frequency comes last."""
    sound = [r for r in records if not why_unused(material, r, any_in_band=False) and in_band(r)]

    def distance(r: PermittivityRecord) -> tuple[float, float]:
        temperature = abs((r.temperature_c if r.temperature_c is not None else 23.0) - 23.0)
        return (abs(log(r.frequency_hz / MIDDLE_HZ)) if r.frequency_hz else 99.0, temperature)

    return min(sound, key=distance, default=None)


def _own_conditions(record: PermittivityRecord) -> Conditions:
    humidity = state_humidity(record)
    return Conditions(
        frequency_hz=record.frequency_hz or UNSTATED_HZ,
        temperature_c=settings.ROOM_C if record.temperature_c is None else record.temperature_c,
        humidity_pct=settings.DEFAULT_HUMIDITY_PCT if humidity is None else humidity,
        direction=record.direction if record.direction in ("through", "in-plane") else "unknown",
    )


def leave_one_out(
    catalogue: Catalogue,
    material: Material,
    records: Sequence[PermittivityRecord],
    *,
    level: float = 0.9,
) -> list[LeftOut]:
    """Every source of a material left out once; nothing where fewer than two can speak."""
    sources = {s.key: s for s in catalogue.sources({r.source for r in records})}
    by_source: dict[str, list[PermittivityRecord]] = {}
    for r in records:
        by_source.setdefault(r.source, []).append(r)
    speakers = {key: s for key, rows in by_source.items() if (s := speaker(material, rows)) is not None}
    found = []
    for key, record in speakers.items():
        if len(speakers) < 2 or record.value is None:
            continue
        without = recommend_from(material, records, sources, _own_conditions(record), level=level, leave_out={key})
        if without is None:
            continue
        eps = without.permittivity
        found.append(
            LeftOut(
                material=material.key,
                fixity=material.fixity,
                source=key,
                anonymous=bool(sources[key].anonymous),
                value=record.value,
                low=eps.low,
                high=eps.high,
                predicted=eps.value,
                others=len(without.weighed),
                grade=without.confidence,
            )
        )
    return found


def calibrate(catalogue: Catalogue, *, level: float = 0.9) -> tuple[LeftOut, ...]:
    """Leave one source out of every material; forms speak through their general material, so that none counts twice."""
    found: list[LeftOut] = []
    for material in catalogue.materials():
        if material.substance is None and material.conducts != "yes":
            found += leave_one_out(catalogue, material, catalogue.permittivities(material.key), level=level)
    return tuple(found)


def interval_score(row: LeftOut, level: float) -> float:
    """Width plus 2/alpha times the miss, in ln (Gneiting and Raftery, J. Am. Stat. Assoc. 102 (2007) 359, recalled); small is good."""
    low, high, y = log(row.low), log(row.high), log(row.value)
    penalty = 2.0 / (1.0 - level)
    return high - low + penalty * (max(0.0, low - y) + max(0.0, y - high))


def binomial_interval(hits: int, count: int, confidence: float = 0.95) -> tuple[float, float]:
    """The exact interval of a proportion [-] (Clopper and Pearson, Biometrika 26 (1934) 404)."""
    from scipy.stats import beta

    tail = 0.5 * (1.0 - confidence)
    low = float(beta.ppf(tail, hits, count - hits + 1)) if hits else 0.0
    high = float(beta.ppf(1.0 - tail, hits + 1, count - hits)) if hits < count else 1.0
    return low, high


def summarise(name: str, rows: Sequence[LeftOut], level: float) -> Group | None:
    """The figures of a group; None when it is empty."""
    if not rows:
        return None
    hits = sum(r.hit for r in rows)
    widths = sorted(r.half_width for r in rows)
    low, high = binomial_interval(hits, len(rows))
    score = sum(interval_score(r, level) for r in rows) / len(rows)
    return Group(name, len(rows), hits, hits / len(rows), low, high, widths[len(widths) // 2], score)


def groups(rows: Sequence[LeftOut], level: float) -> tuple[Group, ...]:
    """The count in all, apart for two and for three or more sources, without anonymous tables, by class and by grade."""
    wanted: list[tuple[str, Callable[[LeftOut], bool]]] = [
        ("all", lambda _: True),
        ("three or more sources", lambda r: r.others >= 2),
        ("two sources", lambda r: r.others == 1),
        ("without anonymous tables", lambda r: not r.anonymous),
        ("three or more, no anonymous", lambda r: r.others >= 2 and not r.anonymous),
    ]
    wanted += [(f"class {word}", lambda r, w=word: r.fixity == w) for word in settings.SPREAD]  # type: ignore[misc]
    wanted += [(f"grade {rule.grade}", lambda r, g=rule.grade: r.grade == g) for rule in settings.GRADES]  # type: ignore[misc]
    found = (summarise(name, [r for r in rows if keep(r)], level) for name, keep in wanted)
    return tuple(g for g in found if g is not None)


def worst_misses(rows: Sequence[LeftOut], count: int = 8) -> tuple[LeftOut, ...]:
    """The misses farthest outside their range."""
    missed = [r for r in rows if not r.hit]
    return tuple(sorted(missed, key=lambda r: -max(log(r.low / r.value), log(r.value / r.high)))[:count])
