"""The characters and words of a layer's text, with their places, before they mean anything."""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import Any, NamedTuple, NoReturn

from stackdb.errors import InputError
from stackdb.quantities.printing import escaped, shortened, visible
from stackdb.quantities.units import TOLERANCE

_FOLDED_UNITS = {unit.casefold() for unit in TOLERANCE.units}
_WORD = re.compile(r"\S+")
_JOINTS = ("±", "+-", "..")
_PLAIN = frozenset("ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789 -_.+'&=/%,")
_OTHER = "±°Ω\u2126\u00b5\u03bc²³\u25a1\u2103，．"
_NAMES = {'"': "a quotation mark"}
_HINTS = {
    "–": "write .. for a range, - in a name",
    "—": "write .. for a range, - in a name",
    "…": "write .. for a range",
    "#": "put a space before a comment",
    ";": 'write " / " between layers',
    "|": 'write " / " between layers',
    "\\": 'write " / " between layers',
}


class Piece(NamedTuple):
    """Some characters of a layer's text, blanks inside taken out, and where they stood."""

    text: str
    start: int
    end: int


def refuse_at(piece: Piece, code: str, text: str, hint: str = "") -> NoReturn:
    """Raise an InputError with the place of a piece."""
    raise InputError(code, text, hint, span=(piece.start, piece.end))


def placed(piece: Piece, parse: Callable[[str], Any]) -> Any:
    """What a parser makes of a piece; its error is given the piece's place."""
    try:
        return parse(piece.text)
    except InputError as error:
        raise InputError(error.code, error.text, error.hint, span=(piece.start, piece.end)) from None


def check_characters(text: str) -> None:
    """InputError for a character that no layer holds: control, direction-changing, brackets, quotes."""
    if _PLAIN.issuperset(text):
        return
    for word in _WORD.finditer(text) if text.isprintable() else re.finditer(r"[^ ]+", text):
        piece = Piece(word.group(), word.start(), word.end())
        for c in piece.text:
            if not visible(c):
                kind = "control" if ord(c) < 0xA0 else "invisible or direction-changing"
                text = f'"{shortened(piece.text)}" holds the {kind} character {escaped(c)}'
                refuse_at(piece, "control-character", text, "take it away")
            if not _allowed(c):
                text = f'"{shortened(piece.text)}" holds {_NAMES.get(c, c)}, which no name or number holds'
                refuse_at(piece, "character", text, _HINTS.get(c, "take it away"))


def _allowed(c: str) -> bool:
    return c in _PLAIN or c in _OTHER or c.isalpha() or c.isdecimal() or is_mark(c)


def is_mark(c: str) -> bool:
    """Whether a character is an accent or vowel sign that joins the letter before it."""
    from unicodedata import category

    return not c.isascii() and category(c).startswith("M")


def words_of(text: str, start: int = 0) -> list[Piece]:
    """The words of a text with their places; ``start`` is where the text begins."""
    return [Piece(m.group(), start + m.start(), start + m.end()) for m in _WORD.finditer(text)]


def numberish(text: str) -> bool:
    """Whether a word begins as a number does."""
    return text.lstrip("+-±.,")[:1].isdecimal()


def _ends_bare(text: str) -> bool:
    """Whether a word ends in a number that has no unit."""
    if not (text[-1].isdecimal() or text[-1] == "."):
        return False
    for joint in _JOINTS:
        text = text.rpartition(joint)[2]
    return all(c.isdecimal() or c in ".,eE+-" for c in text)


def joined(words: list[Piece], unit: Callable[[str], bool]) -> list[Piece]:
    """Words with number, ± and unit drawn together: ``1.8 ± 0.1 mm`` becomes one piece."""
    found: list[Piece] = []
    for word in words:
        last = found[-1] if found else None
        if last and numberish(last.text) and (
            last.text.endswith(_JOINTS)
            or word.text.startswith(_JOINTS)
            or (_ends_bare(last.text) and unit(word.text))
        ):  # fmt: skip
            found[-1] = Piece(last.text + word.text, last.start, word.end)
        else:
            found.append(word)
    return found


def unit_like(text: str) -> bool:
    """Whether a word is a unit of length or %, in any case."""
    return text.casefold() in _FOLDED_UNITS


def check_slash(piece: Piece) -> None:
    """InputError for a / inside a word."""
    if "/" not in piece.text:
        return
    hint = 'write " / " between layers'
    if "+/-" in piece.text:
        hint = f"write +- for an uncertainty, {hint[6:]}"
    refuse_at(piece, "slash", f'"{shortened(piece.text)}" has a "/" without a space on both sides', hint)


def lacks_unit(piece: Piece) -> bool:
    """Whether a piece is a number other than 0 without a unit."""
    return _ends_bare(piece.text) and any(c.isdecimal() and c != "0" for c in piece.text)
