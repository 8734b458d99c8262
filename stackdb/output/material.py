"""The screen of ``show``: the value and why, every record with its source, what is on the market."""

from __future__ import annotations

from math import exp, log
from typing import TYPE_CHECKING, Any

from stackdb.output.compose import checked_words
from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, bar, line, paragraph, wrapped
from stackdb.output.numbers import value_and_range
from stackdb.quantities import format_frequency, format_length, printable

if TYPE_CHECKING:
    from stackdb.catalogue import ThicknessRecord
    from stackdb.evidence.judge import Judged
    from stackdb.evidence.report import ShowResult

MOST_RECORDS = 14


def _title(result: ShowResult, columns: int) -> list[Line]:
    m = result.material
    kind = m.kind.replace("-", " ")
    left = f"{m.key}   {printable(m.description or '')}"
    room = columns - len(kind) - 4
    left = left if len(left) <= room else left[: room - 2] + ".."
    return [line(INDENT, Piece(f"{left:<{room}}", "bold"), f"  {kind}")]


def _value(result: ShowResult) -> list[Line]:
    eps, c = result.evidence, result.conditions
    if not eps.exists:
        return [
            line(INDENT, Piece("Permittivity  ", "bold"), "none recorded: it conducts, and is not summed as a layer")
        ]
    value, limits = value_and_range(eps.permittivity)
    at = f"{format_frequency(c.frequency_hz)}, {c.temperature_c:g} °C"
    at += f", {c.humidity_pct:g} % humidity" if c.humidity_pct != 50.0 else ""
    drawn = [line(INDENT, Piece(f"{'Permittivity':<15}", "bold"), f"{value}   {limits}   {eps.confidence}    {at}")]
    loss = "not known" if eps.loss_tangent is None else f"{eps.loss_tangent:.2g}"
    floor = eps.recommended.floor if eps.recommended else 1.0
    floor_text = f"index floor {floor:.2f}, kept" if floor > 1.0 else "no index recorded, floor 1"
    sigma = f"   conductivity {eps.conductivity_s_per_m:.2g} S/m" if eps.conductivity_s_per_m else ""
    drawn.append(line(INDENT, Piece(f"{'Loss tangent':<15}", "bold"), f"{loss}   {floor_text}{sigma}"))
    return drawn


def _record_row(judged: Judged, numbers: dict[str, int]) -> list[str]:
    r = judged.record
    moved = judged.moved_value
    if judged.used:
        percent = 100.0 * (exp(judged.move.shift) - 1.0)
        used = f"yes, {percent:+.1f} % ±{100 * judged.move.uncertainty:.1f}" if judged.move.basis else "yes"
    else:
        used = f"no: {judged.why_not}"
    state = {"dry": "dry", "wet": "wet", "conditioned": "cond"}.get(r.conditioning or "", "")
    way = {"through": "thr", "in-plane": "in-pl", "isotropic": "iso"}.get(r.direction or "", "")
    return [
        "-" if r.value is None else f"{r.value:g}",
        f"{moved:.3g}" if moved is not None and judged.used else "-",
        format_frequency(r.frequency_hz) if r.frequency_hz else "-",
        f"{r.temperature_c:g}" if r.temperature_c is not None else "-",
        " ".join(x for x in (way, state) if x),
        f"[{numbers[r.source]}] {r.checked}",
        used,
    ]


def _ordered(judged: tuple[Judged, ...], frequency_hz: float) -> list[Judged]:
    """Used ones first, by distance in frequency; then the unused."""

    def place(j: Judged) -> tuple[bool, float]:
        f = j.record.frequency_hz
        return (not j.used, abs(log(f / frequency_hz)) if f else 99.0)

    return sorted(judged, key=place)


def _records(result: ShowResult, numbers: dict[str, int], columns: int) -> list[Line]:
    judged = _ordered(result.judged, result.conditions.frequency_hz)
    if not judged:
        return []
    head = ["record", f"at {format_frequency(result.conditions.frequency_hz)}", "frequency", "°C", "", "source", "used"]
    rows = [head, *(_record_row(j, numbers) for j in judged[:MOST_RECORDS])]
    texts = aligned(rows, ">>>><<<")
    drawn = [line(INDENT, Piece(texts[0], "dim"))]
    drawn += [line(INDENT, t if len(t) < columns else t[: columns - 3] + "..") for t in texts[1:]]
    if len(judged) > MOST_RECORDS:
        drawn.append(line(INDENT, Piece(f"and {len(judged) - MOST_RECORDS} more: --json has every record", "dim")))
    return [*drawn, BLANK]


def _disagreements(result: ShowResult, numbers: dict[str, int], columns: int) -> list[Line]:
    found = result.evidence.recommended
    if found is None or not found.disagreements:
        return []
    if len(found.weighed) == 2:
        one, two = found.weighed
        apart = 100.0 * abs(exp(log(one.value / two.value)) - 1.0)
        text = f"[{numbers[one.source]}] and [{numbers[two.source]}] by {apart:.0f} %: two cannot choose, the range holds both"
    else:
        parts = [f"[{numbers[w.source]}] says {w.value:.3g}, weight {w.weight:.2f}" for w in found.disagreements]
        text = "; ".join(parts) + ": nearly silenced by the others"
    return paragraph("Disagree", text, columns - 1)


def _sizes(rows: list[ThicknessRecord]) -> str:
    small = sorted({r.nominal_m for r in rows if r.nominal_m is not None})
    if all(x >= 1e-3 for x in small):
        return " ".join(f"{1e3 * x:g}" for x in small) + " mm"
    if all(x < 1e-3 for x in small):
        return " ".join(f"{1e6 * x:g}" for x in small) + " µm"
    return ", ".join(format_length(x) for x in small)


def _rule(row: ThicknessRecord) -> str:
    parts = []
    for sign, length, share in (("-", row.minus_m, row.minus_share), ("+", row.plus_m, row.plus_share)):
        terms = ([format_length(length)] if length else []) + ([f"{100 * share:g} %"] if share else [])
        parts.append(sign + " and ".join(terms) if terms else "")
    tolerance = f"±{parts[0][1:]}" if parts[0][1:] == parts[1][1:] else " ".join(p for p in parts if p)
    low, high = row.from_m or 0.0, row.to_m
    span = f" from {format_length(low)}" if low else ""
    return f"{tolerance or 'no tolerance'}{span}" + (f" to below {format_length(high)}" if high else "")


def _market(result: ShowResult, columns: int) -> list[Line]:
    nominal = [t for t in result.thicknesses if t.nominal_m is not None]
    rules = [t for t in result.thicknesses if t.nominal_m is None]
    parts = ([_sizes(nominal)] if nominal else []) + [_rule(r) for r in rules]
    return paragraph("On the market", "; ".join(parts), columns - 1) if parts else []


def _conducts(result: ShowResult, columns: int) -> list[Line]:
    """Recorded conductivities and sheet resistances."""
    parts = []
    for c in result.conductivities[:4]:
        limits = f" ({c.low:g} .. {c.high:g})" if c.low is not None and c.high is not None else ""
        words = f", {printable(c.conditions)}" if c.conditions else ""
        parts.append(f"{c.value:g}{limits} {c.unit}{words}, {c.checked}")
    return paragraph("Conducts", "; ".join(parts), columns - 1) if parts else []


def _wet(result: ShowResult, columns: int) -> list[Line]:
    m = result.material
    if m.uptake_pct is None:
        return []
    wet = any(j.record.conditioning == "wet" or (j.record.humidity_pct or 0) >= 90 for j in result.judged)
    text = f"takes up {m.uptake_pct:g} % of water; " + (
        "wet records above" if wet else "no wet record, range not widened"
    )
    return paragraph("Wet", text, columns - 1)


def _by_frequency(result: ShowResult, columns: int) -> list[Line]:
    """A small table and its picture: value and range over the frequencies asked."""
    rows = result.by_frequency
    if len(rows) < 2:
        return []
    low = min(r.permittivity.low for r in rows)
    high = max(r.permittivity.high for r in rows)
    cells = [["frequency", "value", "range", "loss", "grade"]]
    for r in rows:
        value, limits = value_and_range(r.permittivity)
        loss = "-" if r.loss_tangent is None else f"{r.loss_tangent:.2g}"
        cells.append([format_frequency(r.frequency_hz), value, limits, loss, r.confidence])
    texts = aligned(cells, ">>>><")
    inner = max(len(t) for t in texts)
    room = max(10, columns - inner - 6)
    scale = (room - 1) / ((high - low) or 1.0)
    drawn = [line(INDENT, Piece(f"{texts[0]:<{inner}}   {low:<{room - 5}.3g}{high:>5.3g}", "dim"))]
    for text, r in zip(texts[1:], rows, strict=True):
        eps = r.permittivity
        before, span = round((eps.low - low) * scale), max(1, round((eps.high - eps.low) * scale) + 1)
        picture = list(" " * before + bar(1.0, span, "─"))
        picture[min(len(picture) - 1, round((eps.value - low) * scale))] = "█"
        drawn.append(line(INDENT, f"{text:<{inner}}   {''.join(picture)}"))
    return [*drawn, BLANK]


def source_list(numbers: dict[str, int], sources: dict[str, Any], columns: int) -> list[Line]:
    """The sources by number."""
    drawn = []
    for key, number in sorted(numbers.items(), key=lambda item: item[1]):
        s = sources[key]
        title = f": {printable(s['title'])}" if s["title"] and (s["authors"] or s["publisher"]) else ""
        made = wrapped(f"{checked_words(s)}{title}", columns - 1, f"{INDENT}[{number}] ", " " * 6)
        drawn += [line(m) for m in made[:2]]
    return drawn


def draw_show(result: ShowResult, columns: int) -> list[Line]:
    """The whole screen."""
    shown = _ordered(result.judged, result.conditions.frequency_hz)[:MOST_RECORDS]
    numbers: dict[str, int] = {}
    for key in [j.record.source for j in shown] + list(result.evidence.sources):
        numbers.setdefault(key, len(numbers) + 1)
    drawn = [*_title(result, columns), BLANK, *_value(result)]
    drawn += [*paragraph("Why", result.evidence.why, columns - 1), BLANK]
    drawn += _by_frequency(result, columns)
    drawn += _records(result, numbers, columns)
    closing = _disagreements(result, numbers, columns) + _market(result, columns)
    closing += _conducts(result, columns) + _wet(result, columns)
    drawn += [*closing, BLANK] if closing else []
    return drawn + source_list(numbers, result.sources, columns)
