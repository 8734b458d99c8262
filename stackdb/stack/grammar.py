"""The text of a stack: layers from the touched side down, parted by `` / `` or new lines, to a Stack.

Knows no materials. Every refusal names the layer, the characters, what is wrong and what would be right.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from typing import NamedTuple, TypeVar

from stackdb.errors import InputError
from stackdb.quantities.exact import Exact
from stackdb.quantities.parsing import NUMBER, read, refuse
from stackdb.quantities.printing import escaped, visible
from stackdb.quantities.units import LENGTH
from stackdb.stack.layers import MOST_LAYERS, Below, Choice, Layer, Stack
from stackdb.stack.layertext import parse_layer, read_layers, steps_of
from stackdb.stack.settings import RULES
from stackdb.stack.tokens import words_of

__all__ = ["RULES", "parse_below", "parse_choices", "parse_layer", "parse_stack"]

LONGEST_TEXT = 200_000
MOST_STEPS = 100_000
CHOICE_WORDS = ("or", "by", "none")
ENDS = ("ground", "driven")
EXAMPLE = 'write layers such as "soda-lime-glass 1.8mm / acrylic-oca 150um"'
_OR = r"(?:^|(?<=\s))or(?=\s|\Z)"
_BY = rf"\sby\s+({NUMBER}(?:\s?[^\s\d]\S*)?)(?=\s|\Z)"
# Blanks and minus signs as documents have them, each to the one that is typed; the byte order mark to a blank.
_ALIKE = str.maketrans(
    dict.fromkeys("\t\u00a0\u1680\u202f\u205f\u3000", " ")
    | {chr(c): " " for c in range(0x2000, 0x200B)}
    | {"\u2212": "-"}
)

T = TypeVar("T")


class Part(NamedTuple):
    """The text of one layer and where it starts in the whole."""

    text: str
    start: int

    def shifted(self, span: tuple[int, int] | None) -> tuple[int, int]:
        """Characters of this part as characters of the whole; all of the part where none are told."""
        first, last = span or (0, len(self.text))
        return self.start + first, self.start + last


def _marks(line: str, mark: str) -> Iterator[int]:
    """Where a mark stands at the start of a line or after a blank."""
    at = line.find(mark)
    while at >= 0:
        if at == 0 or line[at - 1] == " ":
            yield at
        at = line.find(mark, at + 1)


def _lines(text: str) -> Iterator[Part]:
    """Lines without comments, with their place."""
    start = 0
    for raw in text.split("\n"):
        yield Part(raw.removesuffix("\r")[: next(_marks(raw, "#"), None)], start)
        start += len(raw) + 1


def _parts(text: str) -> list[Part]:
    """The texts of the layers, with their places; a ` / ` with nothing on one side is refused."""
    found: list[Part] = []
    for line in _lines(text):
        if not line.text.strip(" "):
            continue
        length = len(line.text)
        cuts = [at for at in _marks(line.text, "/") if at + 1 == length or line.text[at + 1] == " "]
        for first, last in zip([0, *(at + 1 for at in cuts)], [*cuts, length], strict=True):
            piece = line.text[first:last]
            if not piece.strip(" "):
                _refuse_gap(line, first, last, len(found) + 1)
            lead = len(piece) - len(piece.lstrip(" "))
            found.append(Part(piece.strip(" "), line.start + first + lead))
    return found


def _refuse_gap(line: Part, first: int, last: int, layer: int) -> None:
    where = "before the first" if first == 0 else "after the last" if last == len(line.text) else "between two"
    span = line.shifted((max(first - 1, 0), min(last + 1, len(line.text))))
    raise InputError("layer-missing", f'no layer {where} " / "', "write a layer there or take it away",
                     layer=layer, span=span)  # fmt: skip


def _layers(text: str, parse: Callable[[str], T]) -> list[tuple[T, tuple[int, int]]]:
    """What ``parse`` makes of each layer's text, with its place; errors are given the layer's number."""
    if len(text) > LONGEST_TEXT:
        refuse("too-long", f"a stack of {len(text)} characters", f"at most {LONGEST_TEXT}")
    plain = (" " + text[1:] if text.startswith("\ufeff") else text).translate(_ALIKE)
    parts = _parts(plain)
    if not parts:
        refuse("empty", "the stack is empty", EXAMPLE)
    if len(parts) > MOST_LAYERS:
        refuse("too-many-layers", f"{len(parts)} layers are too many", f"at most {MOST_LAYERS}")
    found = []
    for number, part in enumerate(parts, 1):
        try:
            found.append((parse(part.text), part.shifted(None)))
        except InputError as error:
            raise error.at_layer(number, part.shifted(error.span)) from None
    _check_comments(plain)
    return found


def _check_comments(text: str) -> None:
    """InputError for a control or direction-changing character in a comment, where it could hide a layer."""
    plain = text.replace("\r\n", " \n").removesuffix("\r")
    if plain.replace("\n", "").isprintable():
        return
    for i, c in enumerate(plain):
        if c != "\n" and not visible(c):
            raise InputError(
                "control-character", f"a comment holds the control or direction-changing character {escaped(c)}",
                "take it away", span=(i, i + 1),
            )  # fmt: skip


def _single(text: str) -> Layer:
    word = next((w for w in words_of(text) if w.text.casefold() in CHOICE_WORDS), None)
    if word is not None:
        raise InputError(
            "choice-outside-sweep", f'"{word.text}" is a choice; choices stand only in sweep', "write one layer",
            span=(word.start, word.end),
        )  # fmt: skip
    return parse_layer(text)


def parse_stack(text: str) -> Stack:
    """A stack from its text. InputError names the layer (from 1 at the touched side) and the characters.

    >>> [layer.name for layer in parse_stack("soda-lime-glass 1.8mm / 125um PET film").layers]
    ['soda-lime-glass', 'PET film']
    """
    return Stack(tuple(layer._replace(text_span=span) for layer, span in _layers(text, _single)))


def _step(text: str) -> Exact:
    return read(text, LENGTH)[0]


def _option(text: str) -> tuple[Layer | None, ...]:
    """One alternative of a slot: ``none``, a layer, or a range of thickness by steps."""
    if not text.strip():
        refuse("option-missing", 'a choice is missing beside "or"', "write a layer or none there")
    if text.strip().casefold() == "none":
        return (None,)
    by = re.search(_BY, text, re.IGNORECASE)
    if by is None:
        if "by" in text.casefold().split():
            refuse("step", '"by" has no step after it', "write 1.1..3.0mm by 0.1mm")
        return (_single(text),)
    step = _step(by.group(1))
    rest = text[: by.start()] + " " * (by.end() - by.start()) + text[by.end() :]
    return read_layers(rest, lambda spread: steps_of(spread, step, MOST_STEPS))


def _choice(text: str) -> Choice:
    found: list[Layer | None] = []
    start = 0
    for mark in [*re.finditer(_OR, text, re.IGNORECASE), None]:
        end = mark.start() if mark else len(text)
        try:
            found += _option(text[start:end])
        except InputError as error:
            first, last = error.span or (0, end - start)
            raise InputError(error.code, error.text, error.hint, span=(start + first, start + last)) from None
        start = mark.end() if mark else end
    return Choice(tuple(found))


def parse_choices(text: str) -> tuple[Choice, ...]:
    """The slots of a sweep from text with ``or``, ``none`` and ``by``: one Choice a slot, steps written out.

    >>> [len(choice.options) for choice in parse_choices("pmma 1..2mm by 0.5mm or pc 1mm or none / pet-film 125um")]
    [5, 1]
    """
    return tuple(choice for choice, _ in _layers(text, _choice))


def parse_below(text: str) -> Below:
    """Layers under the electrode plane; a last word ``ground`` or ``driven`` ends them, else they are open.

    >>> parse_below("fr-4 1.6mm / ground").end, parse_below("fr-4 1.6mm").end
    ('ground', 'open')
    """
    words = words_of(text)
    last = words[-1] if words else None
    if last is None or last.text.casefold() not in ENDS:
        return Below(parse_stack(text).layers, "open")
    rest = text[: last.start].rstrip()
    rest = rest[:-1] if rest.endswith((" /", "\n/")) else rest
    return Below(parse_stack(rest).layers if rest.strip() else (), last.text.casefold())
