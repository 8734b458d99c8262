"""The screen of ``compose``: a cross-section from touch to electrode, three numbers, three verdicts, the sources."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, bar, line, paragraph, wrapped
from stackdb.output.numbers import cases, length_and_range, thickness, value_and_range
from stackdb.quantities import format_frequency, format_length
from stackdb.touch.verdicts import percent

if TYPE_CHECKING:
    from stackdb.results import Limit
    from stackdb.stack.resolve import ResolvedLayer
    from stackdb.studies.compose import ComposeResult
    from stackdb.touch.verdicts import Verdict, Verdicts

FILLS = "░▒▓"
STATE_STYLE = {"ok": "green", "caution": "yellow", "refused": "bold red", "open": "cyan"}
MOST_SOURCES = 6


def _title(result: ComposeResult) -> Line:
    c, read = result.asked.conditions, result.read
    name = " ".join(x for x in (read.name, f"revision {read.revision}" if read.revision else None) if x)
    text = f"{format_frequency(c.frequency_hz)}, {c.temperature_c:g} °C"
    text += f", {c.humidity_pct:g} % humidity" if c.humidity_pct != 50.0 else ""
    ranges = f"Ranges hold for the next lot in {cases(result.asked.level)} cases."
    return line(INDENT, Piece(f"{name}. " if name else "", "bold"), f"{text}. {ranges}")


def mark(layer: ResolvedLayer, numbers: dict[str, int]) -> str:
    """The source number of a layer, with ``r`` where it rests on memory, or the word given."""
    if layer.given:
        return "given"
    recalled = "r" if "recalled" in layer.flags else ""
    return "".join(f"[{numbers[key]}]" for key in layer.sources[:1]) + recalled


def source_numbers(layers: tuple[ResolvedLayer, ...]) -> dict[str, int]:
    """The leading source of each layer, numbered in the order of the stack."""
    numbers: dict[str, int] = {}
    for layer in layers:
        for key in layer.sources[:1]:
            numbers.setdefault(key, len(numbers) + 1)
    return numbers


def _row(layer: ResolvedLayer, share: float, numbers: dict[str, int]) -> list[str]:
    value, limits = value_and_range(layer.permittivity)
    return [
        str(layer.number),
        layer.name,
        thickness(layer.thickness) + ("  " if layer.thickness_typed else " d"),
        value,
        limits,
        mark(layer, numbers),
        percent(share),
    ]


def cross_section(
    layers: tuple[ResolvedLayer, ...], shares: tuple[float, ...], numbers: dict[str, int], columns: int
) -> list[Line]:
    """The layers between touch and electrode, each with its share of the gap as a bar."""
    head = ["", "layer", "thickness", "permittivity", "", "", "share of gap"]
    rows = [_row(x, s, numbers) for x, s in zip(layers, shares, strict=True)]
    body = aligned([["", "", "", "", "", "", ""], *rows], "><>><<>")[1:]
    inner = max(len(b) for b in body)
    room = max(6, columns - inner - 3)
    drawn = [line(INDENT, Piece(_titles(rows, head), "dim")), _rule("touch", columns)]
    for i, (text, share) in enumerate(zip(body, shares, strict=True)):
        drawn.append(line(f"{INDENT}{text:<{inner}} ", bar(share, room, FILLS[i % len(FILLS)])))
    return [*drawn, _rule("electrode", columns)]


def _titles(rows: list[list[str]], head: list[str]) -> str:
    widths = [max(len(r[i]) for r in rows) for i in range(len(head))]
    text, position = "", 0
    for i, (title, width) in enumerate(zip(head, widths, strict=True)):
        start = position if i in (1, 6) else position + max(0, width - len(title) - (2 if i == 2 else 0))
        if title:
            text = f"{text:<{max(start, len(text) + 1 if text else 0)}}{title}"
        position += width + 2
    return text


def _rule(word: str, columns: int) -> Line:
    text = f"    ── {word} "
    return line(Piece(text + "─" * max(0, columns - len(text) - 1), "dim"))


def _numbers(result: ComposeResult) -> list[Line]:
    gap, eps, area = result.air_equivalent_gap_m, result.effective_permittivity, result.capacitance_per_area
    if gap is None or eps is None or area is None:
        return [line(INDENT, Piece(f"{'Gap':<15}", "bold"), "none: see Conduction")]
    gap_value, gap_limits = length_and_range(gap)
    rows = [["Gap", f"{gap_value} of air", gap_limits, _cover(result)]]
    eps_value, eps_limits = value_and_range(eps)
    rows.append(["Permittivity", eps_value, eps_limits, f"of all {format_length(result.thickness_m.value)}"])
    area_value, area_limits = value_and_range(area, 1e9)  # F/m2 -> fF/mm2
    loss = "not known" if result.loss_tangent is None else f"{result.loss_tangent:.2g}"
    rows.append(["Capacitance", f"{area_value} fF/mm²", area_limits, f"loss tangent {loss}"])
    if result.gap_ratio is not None:
        value, limits = value_and_range(result.gap_ratio, 100.0)
        rows.append(["Ratio", f"{value} %", limits, "of the reference, by gap"])
    widths = [14, max(len(r[1]) for r in rows), max(len(r[2]) for r in rows)]
    return [
        line(INDENT, Piece(f"{a:<{widths[0]}}", "bold"), f"{b:<{widths[1]}}   {c:<{widths[2]}}   {d}")
        for a, b, c, d in rows
    ]


def _cover(result: ComposeResult) -> str:
    span = result.cover_equivalent_gap_m
    if span is None:
        return ""
    first = result.cover_name == result.stack.layers[0].name
    return f"like {length_and_range(span)[0]} of {'layer 1' if first else result.cover_name}"


def verdict_lines(verdicts: Verdicts, columns: int) -> list[Line]:
    """The three verdicts, in words, each with its text hanging beside it."""
    return [x for name in verdicts._fields for x in verdict_line(name, getattr(verdicts, name), columns)]


def verdict_line(name: str, verdict: Verdict, columns: int) -> list[Line]:
    """One verdict: its name, its state, its text."""
    head = f"{INDENT}{name.capitalize():<14}{verdict.state:<9} "
    made = wrapped(verdict.text, columns - 1, head)
    style = STATE_STYLE[verdict.state]
    first = line(Piece(made[0][:15], "bold"), Piece(made[0][15:24], style), made[0][24:])
    return [first, *(line(m) for m in made[1:])]


def limit_lines(limits: tuple[Limit, ...], columns: int) -> list[Line]:
    """What the user set as limits, met or not."""
    drawn = []
    for limit in limits:
        asked, got = _limit_text(limit.name, limit.limit), _limit_text(limit.name, limit.value)
        text = f"{limit.name} {asked}: {got}, {'met' if limit.met else 'NOT met'}"
        drawn += paragraph("Limit", text, columns - 1)
    return drawn


def _limit_text(name: str, value: float | None) -> str:
    if value is None:
        return "no number"
    if name == "min-ratio":
        return f"{100 * value:.3g} %"
    return f"{value * 1e15:.4g} fF" if name == "min-signal" else format_length(value)


def checked_words(source: dict[str, Any]) -> str:
    """A source in a few words: its kind, who, when."""
    who = source["authors"] or source["publisher"] or source["title"] or ""
    year = f" {source['year']}" if source["year"] else ""
    return f"{source['kind'].replace('-', ' ')}, {who}{year}"


def _footnotes(result: ComposeResult, numbers: dict[str, int], columns: int) -> list[Line]:
    drawn = []
    for layer in result.stack.layers:
        key = next(iter(layer.sources), None)
        if key is None or numbers.get(key) is None:
            continue
        number = numbers.pop(key)
        rest = len(layer.sources) - 1
        seen = _seen(layer, key)
        more = f", and {rest} more" if rest else ""
        text = f"[{number}] {layer.confidence}: {checked_words(result.sources[key])}, {seen}{more}"
        drawn.append(line(INDENT, _cut(text, columns - 2)))
    legend = []
    if any(not x.thickness_typed for x in result.stack.layers):
        legend.append("d  the market's tolerance")
    if any("recalled" in x.flags for x in result.stack.layers):
        legend.append("r  memory alone")
    legend.append("stackdb show NAME for the rest")
    return [*drawn, line(INDENT, Piece("    ".join(legend), "dim"))]


def _cut(text: str, columns: int) -> str:
    return text if len(text) <= columns else text[: columns - 2].rstrip() + ".."


def _seen(layer: ResolvedLayer, key: str) -> str:
    found = layer.evidence.recommended if layer.evidence else None
    if found is None:
        return "model"
    records = [j.record for j in found.judged if j.used and j.record.source == key]
    near = min(records, key=lambda r: abs((r.frequency_hz or 1e99) - layer.frequency_hz))
    at = f"{format_frequency(near.frequency_hz)}, " if near.frequency_hz else "no frequency, "
    return at + near.checked


def draw_compose(result: ComposeResult, columns: int) -> list[Line]:
    """The whole screen."""
    numbers = source_numbers(result.stack.layers)
    drawn = [_title(result), BLANK]
    drawn += cross_section(result.stack.layers, result.shares, numbers, columns)
    drawn += [BLANK, *_numbers(result), BLANK, *verdict_lines(result.verdicts, columns)]
    drawn += limit_lines(result.limits, columns)
    for claim in result.claims:
        drawn += paragraph("Constraint", f"{'kept' if claim.kept else 'NOT KEPT'}: {claim.text}", columns - 1)
    return [*drawn, BLANK, *_footnotes(result, numbers, columns)]
