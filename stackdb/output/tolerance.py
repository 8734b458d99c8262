"""The screen of ``tolerance``."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.output.compose import limit_lines
from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, bar, line, paragraph
from stackdb.output.numbers import cases, half, length_unit
from stackdb.quantities import format_frequency, format_length, printed
from stackdb.touch.verdicts import percent

if TYPE_CHECKING:
    from stackdb.studies.tolerance import Quantity, ToleranceResult

MOST_CONTRIBUTIONS = 6


def _row(name: str, q: Quantity, scale: float, unit: str) -> list[str]:
    h = half(q.span) * scale

    def pair(low: float, high: float) -> str:
        return f"{printed(low * scale, h)} .. {printed(high * scale, h)}" if h else ""

    return [
        name,
        f"{printed(q.span.value * scale, h)} {unit}".strip(),
        pair(q.span.low, q.span.high),
        pair(q.drawn.low, q.drawn.high),
        pair(q.corners.low, q.corners.high),
    ]


def _contributions(result: ToleranceResult, columns: int) -> list[Line]:
    names = {x.number: x.name for x in result.stack.layers}
    rows = [
        [f"layer {c.layer}", names[c.layer], c.input, percent(c.share)]
        for c in result.gap.first_order.contributions[:MOST_CONTRIBUTIONS]
    ]
    if not rows:
        return [line(INDENT, "nothing varies: every layer stands without tolerance")]
    texts = aligned(rows, "<<<>")
    room = max(6, columns - max(len(t) for t in texts) - 4)
    shares = [c.share for c in result.gap.first_order.contributions[:MOST_CONTRIBUTIONS]]
    head = line(INDENT, Piece("what owns the variance of the gap: spend here first", "dim"))
    return [head, *(line(INDENT, f"{t}  ", bar(s, room)) for t, s in zip(texts, shares, strict=True))]


def draw_tolerance(result: ToleranceResult, columns: int) -> list[Line]:
    """The whole screen."""
    c, drawn_samples = result.asked.conditions, result.monte_carlo
    title = (
        f"{format_frequency(c.frequency_hz)}, {c.temperature_c:g} °C. Ranges hold in {cases(result.asked.level)} cases."
    )
    scale, unit = length_unit(result.gap.span.value)
    rows = [
        ["", "nominal", "first order", "Monte Carlo", "corners"],
        _row("Gap", result.gap, scale, unit),
        _row("Capacitance", result.areal, 1e9, "fF/mm²"),
        _row("Permittivity", result.effective, 1.0, ""),
    ]
    texts = aligned(rows, "<>>>>")
    drawn = [line(INDENT, title), BLANK, line(INDENT, Piece(texts[0], "dim"))]
    drawn += [line(INDENT, t) for t in texts[1:]]
    drawn += [BLANK, *_contributions(result, columns), BLANK]
    if drawn_samples.within_limits is not None:
        drawn += paragraph("Yield", f"{100 * drawn_samples.within_limits:.2f} % inside the limits", columns - 1)
    climate = ", ".join(
        f"{x.name} ({x.temperature_c:g} °C, {x.humidity_pct:g} %) {format_length(x.gap_m)}" for x in result.climate
    )
    drawn += paragraph("Climate", climate, columns - 1)
    drawn += limit_lines(result.limits, columns)
    for w in result.warnings:
        drawn += paragraph("Warning", w.text, columns - 1)
    note = f"{drawn_samples.samples} samples, seed {drawn_samples.seed}"
    return [*drawn, line(INDENT, Piece(note, "dim"))]
