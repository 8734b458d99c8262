"""Building blocks of a screen: pieces of text with a style, aligned columns, wrapped paragraphs, bars."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

INDENT = " "


class Piece(NamedTuple):
    """A run of text and the style it has on a colour terminal."""

    text: str
    style: str = ""


Line = tuple[Piece, ...]


def line(*parts: Piece | str) -> Line:
    """A line from pieces and plain strings."""
    return tuple(p if isinstance(p, Piece) else Piece(p) for p in parts)


def plain(line_: Line) -> str:
    """A line without styles or trailing blanks."""
    return "".join(p.text for p in line_).rstrip()


BLANK: Line = ()


def heading(text: str) -> Line:
    """A column heading or a title."""
    return line(INDENT, Piece(text, "dim"))


def aligned(rows: Sequence[Sequence[str]], aligns: str, gap: int = 2) -> list[str]:
    """Rows of cells as lines: each column as wide as its widest cell, ``<`` left and ``>`` right."""
    widths = [max(len(row[i]) for row in rows) for i in range(len(aligns))]
    joined = []
    for row in rows:
        cells = [f"{cell:{align}{width}}" for cell, align, width in zip(row, aligns, widths, strict=True)]
        joined.append((" " * gap).join(cells).rstrip())
    return joined


def wrapped(text: str, width: int, first: str = "", rest: str | None = None) -> list[str]:
    """A paragraph broken at blanks to ``width`` characters, its first line begun with ``first``, the others with ``rest``."""
    indent = " " * len(first) if rest is None else rest
    lines, current = [], first
    empty = True
    for word in text.split():
        if not empty and len(current) + 1 + len(word) > width:
            lines.append(current)
            current, empty = indent, True
        current += word if empty else f" {word}"
        empty = False
    return [*lines, current]


def paragraph(label: str, text: str, width: int, column: int = 16) -> list[Line]:
    """A labelled paragraph, hanging in a column."""
    made = wrapped(text, width, f"{INDENT}{label:<{column - 1}}", " " * column)
    cut = len(INDENT) + len(label)
    return [line(Piece(made[0][:cut], "bold"), made[0][cut:]), *(line(m) for m in made[1:])]


def bar(share: float, width: int, fill: str = "█") -> str:
    """A bar of ``share`` (0 to 1) of a width; anything above nothing shows one mark."""
    n = round(max(0.0, min(1.0, share)) * width)
    return fill * max(n, 1 if share > 0.0 else 0)
