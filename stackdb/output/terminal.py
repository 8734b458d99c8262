"""The one place that writes: styled on a colour terminal, plain elsewhere, ASCII where the stream cannot do better."""

from __future__ import annotations

import os
import sys
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING, TextIO

from stackdb.output.lines import Line, plain

if TYPE_CHECKING:
    from rich.console import Console

ASCII = str.maketrans(
    {
        "░": "a",
        "▒": "b",
        "▓": "c",
        "█": "#",
        "▏": "|",
        "─": "-",
        "±": "+-",
        "µ": "u",
        "μ": "u",
        "°": "",
        "²": "2",
        "→": "->",
        "≥": ">=",
        "≤": "<=",
        "Ω": "ohm",
        "×": "x",
        "–": "-",
        "δ": "d",
    }
)
PIPED_WIDTH = 80


def width() -> int:
    """Columns to fill: the terminal's, or 80 in a pipe; COLUMNS decides where it is set."""
    asked = os.environ.get("COLUMNS", "")
    if asked.isdigit() and int(asked) >= 40:
        return min(int(asked), 200)
    if sys.stdout.isatty():
        return max(40, min(os.get_terminal_size(sys.stdout.fileno()).columns, 200))
    return PIPED_WIDTH


def encodable(text: str, encoding: str | None) -> str:
    """The text with what an encoding cannot hold drawn in ASCII."""
    if encoding is None:  # a stream of characters, not of bytes
        return text
    name = encoding
    try:
        text.encode(name)
    except UnicodeEncodeError:
        kept = "".join(c if _fits(c, name) else c.translate(ASCII) for c in text)
        return kept.encode(name, "backslashreplace").decode(name)
    return text


def _fits(character: str, encoding: str) -> bool:
    try:
        character.encode(encoding)
    except UnicodeEncodeError:
        return False
    return True


def _colours(stream: TextIO) -> bool:
    return stream.isatty() and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"


def _console(stream: TextIO) -> Console:
    from rich.console import Console

    return Console(file=stream, markup=False, emoji=False, highlight=False, soft_wrap=True)


def show(lines: Iterable[Line], *, ascii_only: bool = False, stream: TextIO | None = None) -> None:
    """Write lines to standard output."""
    out = sys.stdout if stream is None else stream
    if ascii_only or not _colours(out):
        text = "".join(plain(line_) + "\n" for line_ in lines)
        out.write(encodable(text.translate(ASCII) if ascii_only else text, out.encoding))
        return
    from rich.text import Text

    console = _console(out)
    for line_ in lines:
        console.print(Text.assemble(*((encodable(p.text, out.encoding), p.style) for p in line_)))


def to_plain(lines: Sequence[Line]) -> str:
    """Lines as one plain text."""
    return "\n".join(plain(line_) for line_ in lines)
