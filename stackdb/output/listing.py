"""The screens of ``find`` and ``sources``."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, line, wrapped
from stackdb.output.numbers import value_and_range
from stackdb.quantities import format_frequency, printable

if TYPE_CHECKING:
    from stackdb.catalogue import Source
    from stackdb.evidence.report import FindResult, FoundMaterial, SourcesResult


def _row(found: FoundMaterial, room: int) -> list[str]:
    value, limits = (
        value_and_range(found.permittivity)
        if found.permittivity
        else ("-", "no usable figure" if found.material.conducts == "no" else "conducts")
    )
    also = ", ".join(found.also[:3])
    also = also if len(also) <= room else also[: room - 2] + ".."
    kind = found.material.kind.replace("-", " ")
    return [found.material.key, kind, value, limits, found.confidence or "-", also]


def draw_find(result: FindResult, columns: int) -> list[Line]:
    """The hits as a table."""
    c = result.conditions
    n = len(result.found)
    what = f' match "{printable(result.text)}"' if result.text else ""
    noun = "material" if n == 1 else "materials"
    head = f"Permittivity at {format_frequency(c.frequency_hz)}, {c.temperature_c:g} °C. {n} {noun}{what}."
    if not n:
        return [line(INDENT, head), line(INDENT, "stackdb find without a word lists all.")]
    titles = ["name", "kind", "value", "range", "grade", "also called"]
    short = aligned([titles[:5], *(_row(f, 0)[:5] for f in result.found)], "<<>><")
    inner = max(len(s) for s in short)
    room = max(0, columns - inner - 4)
    rows = [titles, *(_row(f, room) for f in result.found)] if room >= 8 else []
    texts = aligned(rows, "<<>><<") if rows else short
    drawn = [line(INDENT, head), BLANK, line(INDENT, Piece(texts[0], "dim"))]
    drawn += [line(INDENT, t) for t in texts[1:]]
    return [
        *drawn,
        BLANK,
        line(INDENT, Piece("stackdb show NAME prints the records and sources behind a value.", "dim")),
    ]


def _reference(source: Source, columns: int) -> list[Line]:
    parts = [
        source.authors,
        source.title,
        source.publisher,
        str(source.year) if source.year else None,
        source.identifier,
    ]
    text = ". ".join(printable(p) for p in parts if p)
    made = wrapped(f"{source.kind}: {text}", columns - 1, INDENT + "   ", INDENT + "   ")
    return [line(INDENT, Piece(source.key, "bold")), *(line(m) for m in made)]


def draw_sources(result: SourcesResult, columns: int) -> list[Line]:
    """The bibliography, or one source with what rests on it."""
    drawn = [x for s in result.sources for x in _reference(s, columns)]
    if not result.single:
        return [*drawn, BLANK, line(INDENT, Piece(f"{len(result.sources)} sources", "dim"))]
    drawn += [BLANK, line(INDENT, Piece("rests on it", "dim"))]
    rows = [[r.material, r.table, str(r.rows)] for r in result.rests]
    return drawn + [line(INDENT, t) for t in aligned(rows, "<<>")] if rows else drawn
