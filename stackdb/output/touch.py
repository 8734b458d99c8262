"""The screen of ``touch``: one row for every way of touching, a bar each, one closing line of insight."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.output.compose import verdict_line
from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, bar, line, paragraph, wrapped
from stackdb.output.numbers import length_and_range, value_and_range
from stackdb.quantities import format_frequency, format_length
from stackdb.studies.touch import GLOVE_CAUTION
from stackdb.touch.verdicts import percent

if TYPE_CHECKING:
    from stackdb.studies.touch import CaseResult, TouchResult


LEAST_BAR = 5


def _title(result: TouchResult) -> Line:
    c = result.asked.conditions
    name = " ".join(
        x for x in (result.read.name, f"revision {result.read.revision}" if result.read.revision else None) if x
    )
    least = result.asked.limits.min_ratio
    limit = f" Limit: {percent(least)} of {result.reference}." if least is not None else f" Against {result.reference}."
    return line(
        INDENT,
        Piece(f"{name}. " if name else "", "bold"),
        f"{format_frequency(c.frequency_hz)}, {c.temperature_c:g} °C.{limit}",
    )


def _row(r: CaseResult, with_counts: bool) -> list[str]:
    if r.gap is None or r.ratio is None:
        return []
    ratio, limits = value_and_range(r.ratio, 100.0)
    signal = f"{r.signal_farad.value * 1e15:.3g} fF" if r.signal_farad else ""
    counts = f"{r.counts:.3g}" if with_counts and r.counts is not None else ""
    snr = f"{r.snr:.1f}:1" if with_counts and r.snr is not None else ""
    return [
        r.case.name,
        length_and_range(r.gap)[0],
        f"{ratio} %",
        limits,
        signal,
        " ".join(x for x in (counts, snr) if x),
    ]


def _columns(rows: list[list[str]], keep: list[int]) -> list[str]:
    return aligned([[row[i] for i in keep] for row in rows], "".join("<>>>>>"[i] for i in keep))


def _touches(result: TouchResult, columns: int) -> list[Line]:
    with_counts = any(r.counts is not None for r in result.cases)
    rows = [(r, row) for r in result.cases if (row := _row(r, with_counts))]
    if not rows:
        return []
    head = [
        "touched by",
        "gap",
        "signal",
        "range",
        "change" if any(x[4] for _, x in rows) else "",
        "counts" if with_counts else "",
    ]
    keep = [i for i in range(6) if i < 4 or any(x[i] for _, x in rows)]
    texts = _columns([head, *(x for _, x in rows)], keep)
    if max(len(t) for t in texts) + LEAST_BAR + 11 > columns and len(keep) > 4:
        texts = _columns(
            [head, *(x for _, x in rows)], [i for i in keep if i != 3]
        )  # the range gives way to signal and counts
    inner = max(len(t) for t in texts)
    room = max(0, columns - inner - 11)
    drawn = [line(INDENT, Piece(texts[0], "dim"))]
    for (r, _), text in zip(rows, texts[1:], strict=True):
        missed = [x.name for x in r.limits if not x.met]
        share = min(1.0, r.ratio.value if r.ratio else 0.0)
        tail = Piece(" misses" if missed else "", "bold red")
        drawn.append(line(INDENT, f"{text:<{inner}}  ", bar(share, room) if room >= LEAST_BAR else "", tail))
    return drawn


def _films(result: TouchResult, columns: int) -> list[Line]:
    drawn = []
    for r in result.cases:
        if r.gap is not None:
            continue
        text = r.verdicts.conduction.text
        if r.film is not None and r.film.apparent_touch_real is None:
            length = format_length(float(f"{r.film.smear_length_m:.2g}"))
            text = f"no gap: conductor, smears the touch over {length}"
        drawn += [line(m) for m in wrapped(text, columns - 1, f"{INDENT}{r.case.name:<19} ")]
    return drawn


def _matrix(result: TouchResult, columns: int) -> list[Line]:
    """Hands by surfaces; where the names are too wide, letters stand for the surfaces and are told underneath."""
    hands = list(dict.fromkeys(m.hand for m in result.matrix))
    surfaces = list(dict.fromkeys(m.surface for m in result.matrix))
    cells = {(m.hand, m.surface): m.text.replace(" remains", "") for m in result.matrix}
    body = [[h, *(cells[h, s] for s in surfaces)] for h in hands]
    letters = [chr(ord("a") + n) for n in range(len(surfaces))]
    wide = aligned([["", *surfaces], *body], "<" + ">" * len(surfaces))
    fits = max(len(t) for t in wide) < columns - 1
    short = [[row[0], *(c.replace("conducts", "film") for c in row[1:])] for row in body]
    texts = wide if fits else aligned([["", *letters], *short], "<" + ">" * len(surfaces))
    drawn = [line(INDENT, Piece(texts[0], "dim")), *(line(INDENT, t) for t in texts[1:])]
    if not fits:
        told = ", ".join(f"{a} {s}" for a, s in zip(letters, surfaces, strict=True))
        told += '; "film" conducts: give --pad for the share of a touch that remains on it'
        drawn += [BLANK, *(line(Piece(m, "dim")) for m in wrapped(told, columns - 1, INDENT))]
    return drawn


def draw_touch(result: TouchResult, columns: int, *, matrix: bool = False) -> list[Line]:
    """The whole screen, or the matrix of hands and surfaces."""
    drawn = [_title(result), BLANK]
    drawn += _matrix(result, columns) if matrix else _touches(result, columns) + _films(result, columns)
    drawn.append(BLANK)
    validity = next((r.verdicts.validity for r in result.cases if r.gap is not None), None)
    if validity is not None:
        drawn += verdict_line("validity", validity, columns)
    missed = [
        f"{r.case.name} ({percent(r.ratio.value) if r.ratio else 'no number'})"
        for r in result.cases
        if any(not x.met for x in r.limits)
    ]
    if missed:
        drawn += paragraph("Not met", ", ".join(missed), columns - 1, 25)
    for w in result.warnings:
        if w.code != "recalled":
            drawn += paragraph("Warning", w.text, columns - 1, 25)
    drawn.append(BLANK)
    if result.insight:
        drawn += [line(m) for m in wrapped(result.insight, columns - 1, INDENT)]
    return [*drawn, *(line(Piece(m, "dim")) for m in wrapped(GLOVE_CAUTION, columns - 1, INDENT))]
