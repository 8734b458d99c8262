"""The text of a stack: layers from the touched side down, parted by `` / `` or new lines, to a Stack.

Knows no materials. Every refusal names the layer, what is wrong and what would be right.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from typing import Any, NamedTuple, NoReturn

from stackdb.errors import InputError
from stackdb.quantities import (
    Span,
    parse_conductivity,
    parse_length,
    parse_number,
    parse_share,
    parse_sheet_resistance,
    shortened,
)
from stackdb.quantities.parsing import INCHES, LENGTH, NUMBER, parse_signed_length, split_number
from stackdb.stack.layers import MOST_LAYERS, Layer, Stack, Thickness

RULES = (
    "maxwell-garnett",
    "bruggeman",
    "bruggeman-hanai",
    "looyenga",
    "lichtenecker",
    "square-root",
    "series",
    "parallel",
)
CHOICE_WORDS = ("or", "by", "none")
LONGEST_TEXT = 200_000
LONGEST_NAME = 80
LENGTH_UNITS = (*LENGTH, *INCHES)
_SETTING = re.compile(r"(?:^|\s)([^\s=]+)\s?=\s?")
_PART = re.compile(r"(?:^|(?<=\s))/(?=\s|$)")
_COMMENT = re.compile(r"(?:^|(?<=\s))#.*")
_JOIN = re.compile(r"\s*(±|\+-|\.\.)\s*")
_NUMBERISH = re.compile(r"[+-]?\.?\d")
_NOT_FINITE = re.compile(r"[+-]?(nan|inf|infinity)(?![a-z-])|[+-]?(nan|inf)(nm|um|mm|cm|m)\b", re.IGNORECASE)


class Part(NamedTuple):
    """The text of one layer and where it starts and ends in the whole."""

    text: str
    start: int
    end: int


def _refuse(code: str, text: str, hint: str = "") -> NoReturn:
    raise InputError(code, text, hint)


def _lines(text: str) -> Iterator[Part]:
    """Lines without comments, with their place."""
    start = 0
    for raw in text.split("\n"):
        kept = _COMMENT.sub("", raw.rstrip("\r"))
        yield Part(kept, start, start + len(kept))
        start += len(raw) + 1


def _parts(text: str) -> list[Part]:
    """The texts of the layers, with their places; a ` / ` with nothing on one side is refused."""
    found: list[Part] = []
    for row in _lines(text):
        if not row.text.strip():
            continue
        cuts = [0, *(x for m in _PART.finditer(row.text) for x in (m.start(), m.end())), len(row.text)]
        for a, b in zip(cuts[::2], cuts[1::2], strict=True):
            piece = row.text[a:b]
            if not piece.strip():
                at = len(found) + 1
                raise InputError(
                    "layer-missing", 'a layer is missing beside " / "', "take the separator away", layer=at
                )
            lead = len(piece) - len(piece.lstrip())
            found.append(Part(piece.strip(), row.start + a + lead, row.start + a + lead + len(piece.strip())))
    return found


def _range_of(text: str, parse: Callable[[str], float], unit_of: Callable[[str], str]) -> Span:
    """A number with an uncertainty: ``a``, ``a±b``, ``a+-b`` or ``a..b``; a unit at the end serves both."""
    for sign in ("±", "+-"):
        if sign in text:
            centre, _, half_text = text.partition(sign)
            half, value = parse(half_text), parse(_with_unit(centre, half_text, unit_of))
            if half < 0.0:
                _refuse("out-of-range", f'"{shortened(text)}": the uncertainty is below 0')
            return Span(value, value - half, value + half)
    if ".." in text:
        low_text, _, high_text = text.partition("..")
        low, high = parse(_with_unit(low_text, high_text, unit_of)), parse(high_text)
        if low > high:
            _refuse("range-reversed", f'"{shortened(text)}" runs from high to low', "write the smaller end first")
        return Span(0.5 * (low + high), low, high)
    value = parse(text)
    return Span(value, value, value)


def _with_unit(number: str, other: str, unit_of: Callable[[str], str]) -> str:
    return number if unit_of(number) or not unit_of(other) else number + unit_of(other)


def _unit(text: str) -> str:
    return split_number(text)[1]


def _no_unit(text: str) -> str:
    return ""


def parse_thickness(text: str) -> Thickness:
    """A thickness with or without an uncertainty: ``1.8mm``, ``1.8±0.1mm``, ``1.7..1.9mm``."""
    for sign in ("±", "+-"):
        if sign in text:
            centre, _, half_text = text.partition(sign)
            half, value = parse_signed_length(half_text), parse_length(_with_unit(centre, half_text, _unit))
            if half < 0.0:
                _refuse("out-of-range", f'"{shortened(text)}": the uncertainty is below 0')
            return _limited(Thickness(value, half, half), text)
    span = _range_of(text, parse_length, _unit)
    if ".." not in text:
        return Thickness(span.value)
    return Thickness(span.value, span.value - span.low, span.high - span.value)


def _limited(thickness: Thickness, text: str) -> Thickness:
    if thickness.minus_m is not None and thickness.minus_m > thickness.nominal_m:
        _refuse("tolerance-too-large", f'the tolerance "{shortened(text)}" is larger than the layer')
    return thickness


def _tolerance(text: str, thickness: Thickness) -> Thickness:
    """Apply ``tol=``: a length, percent, or a lower and an upper deviation."""
    if thickness.minus_m is not None:
        _refuse("given-twice", "the thickness has its tolerance two ways", "keep the range or tol=")
    bare = text.removeprefix("±").removeprefix("+-")
    if ".." in bare:
        low_text, _, high_text = bare.partition("..")
        low = _deviation(_with_unit(low_text, high_text, _unit), thickness)
        high = _deviation(high_text, thickness)
        if low > 0.0 or high < 0.0:
            _refuse("tolerance-sign", f'tol="{shortened(text)}" should run from minus to plus', "write -0.10..+0.05mm")
        return _limited(Thickness(thickness.nominal_m, -low, high), text)
    half = _deviation(bare, thickness)
    if half < 0.0:
        _refuse("out-of-range", f'tol="{shortened(text)}" is below 0')
    return _limited(Thickness(thickness.nominal_m, half, half), text)


def _deviation(text: str, thickness: Thickness) -> float:
    number, unit = split_number(text)
    if unit == "%":
        return 0.01 * float(number) * thickness.nominal_m
    return parse_signed_length(text)


def _eps(text: str) -> Span:
    span = _range_of(text, parse_number, _no_unit)
    if span.low < 1.0:
        _refuse("eps-below-one", f"eps={shortened(text)} is below 1", "no passive layer has that")
    if span.high > 1e6:
        _refuse("out-of-range", f"eps={shortened(text)} is above 1000000")
    return span


def _loss(text: str) -> float:
    loss = parse_number(text)
    if not 0.0 <= loss <= 1e4:
        _refuse("out-of-range", f"tan={shortened(text)} is outside 0 to 10000")
    return loss


def _fill(text: str) -> float:
    fill = parse_share(text)
    if not 0.0 < fill <= 1.0:
        _refuse("out-of-range", f"fill={shortened(text)} is outside 0 to 1", "write a share such as 20%")
    return fill


def _rule(text: str) -> str:
    word = text.casefold().replace("_", "-").replace(" ", "-")
    if word not in RULES:
        _refuse("rule-unknown", f'no mixing rule "{shortened(text)}"', f"there is {', '.join(RULES)}")
    return word


def _named(text: str) -> str:
    return _checked_name(" ".join(text.split()))


SETTINGS: dict[str, tuple[str, Callable[[str], Any]]] = {
    "eps": ("eps", _eps),
    "tan": ("loss_tangent", _loss),
    "sigma": ("conductivity_s_per_m", parse_conductivity),
    "rs": ("sheet_resistance_ohm", parse_sheet_resistance),
    "fill": ("fill", _fill),
    "host": ("host", _named),
    "rule": ("rule", _rule),
}
SETTING_NAMES = ("tol", *SETTINGS)


def _settings(text: str) -> tuple[str, dict[str, str]]:
    """What stands before the settings, and the settings as typed."""
    marks = list(_SETTING.finditer(text))
    if not marks:
        return text, {}
    found: dict[str, str] = {}
    ends = [m.start() for m in marks[1:]] + [len(text)]
    for mark, end in zip(marks, ends, strict=True):
        key, value = mark.group(1), text[mark.end() : end].strip()
        if key not in SETTING_NAMES:
            _unknown_setting(key)
        if key in found:
            _refuse("setting-twice", f"{key}= is given twice", "keep one")
        if not value:
            _refuse("setting-empty", f"{key}= has no value")
        found[key] = value
    return text[: marks[0].start()], found


def _unknown_setting(key: str) -> NoReturn:
    from difflib import get_close_matches

    near = get_close_matches(key.casefold(), SETTING_NAMES, 1, 0.5)
    hint = f"nearest: {near[0]}=" if near else f"there is {' '.join(f'{s}=' for s in SETTING_NAMES)}"
    _refuse("setting-unknown", f'no setting "{shortened(key)}="', hint)


def _checked_name(name: str) -> str:
    """A name as typed, refused where it holds what no name holds."""
    if "/" in name:
        _refuse("slash-in-name", f'"{shortened(name)}": a "/" parts layers only with spaces', 'write " / "')
    for c in name:
        if not (c.isalnum() or c in " -_.+'&"):
            _refuse("character", f'"{shortened(name)}" holds {_spelled(c)}, which no name holds')
    if len(name) > LONGEST_NAME:
        _refuse("too-long", f"a name of {len(name)} characters", f"at most {LONGEST_NAME}")
    return name


def _spelled(c: str) -> str:
    return f'"{c}"' if c.isascii() and c.isprintable() else f"the character U+{ord(c):04X}"


def _tokens(head: str) -> tuple[list[str], list[str]]:
    """Words of the name, and texts of thicknesses, of what stands before the settings."""
    words, lengths = [], []
    tokens = _JOIN.sub(r"\1", head).split()
    i = 0
    while i < len(tokens):
        token = tokens[i]
        if not _NUMBERISH.match(token):
            words.append(token)
        elif re.fullmatch(rf".*{NUMBER}", token) and i + 1 < len(tokens) and _unit_like(tokens[i + 1]):
            lengths.append(token + tokens[i + 1])
            i += 1
        else:
            lengths.append(token)
        i += 1
    return words, lengths


def _unit_like(token: str) -> bool:
    return token.casefold() in {u.casefold() for u in LENGTH_UNITS}


def _choices(text: str) -> None:
    if any(word in CHOICE_WORDS for word in text.casefold().split()):
        _refuse("choice-outside-sweep", "choices (or, by, none) stand only in sweep", "write one layer")


def parse_layer(text: str) -> Layer:
    """One layer: a name and a thickness in either order, then settings. InputError without a place."""
    _choices(text)
    head, settings = _settings(text)
    if _NOT_FINITE.search(head):
        _refuse("not-finite", f'"{shortened(head.strip())}" has a thickness that is not a finite number')
    words, lengths = _tokens(head)
    doubled = [w for w in words if w in LENGTH_UNITS]
    if doubled and lengths:
        _refuse("unit-twice", f'the unit "{doubled[0]}" stands apart or twice in "{shortened(head.strip())}"')
    if len(lengths) > 1:
        _refuse("thickness-twice", f"two thicknesses, {shortened(lengths[0])} and {shortened(lengths[1])}", "keep one")
    name = _checked_name(" ".join(words))
    if not lengths:
        what = f'"{shortened(name)}" has no thickness' if name else f'"{shortened(text)}" is no layer'
        _refuse("no-thickness", what, "write a name and a thickness, such as pet-film 125um")
    if not name:
        _refuse("no-name", f'"{shortened(lengths[0])}" has no material', "write a name beside the thickness")
    return _layer(name, parse_thickness(lengths[0]), settings)


def _layer(name: str, thickness: Thickness, settings: dict[str, str]) -> Layer:
    if "tol" in settings:
        thickness = _tolerance(settings.pop("tol"), thickness)
    values = {}
    for key, text in settings.items():
        field, parse = SETTINGS[key]
        values[field] = parse(text)
    layer = Layer(name, thickness, **values)
    if layer.loss_tangent is not None and layer.conductivity_s_per_m is not None:
        _refuse("loss-twice", "tan= and sigma= are two ways to give one loss", "keep one")
    if layer.sheet_resistance_ohm is not None and layer.conductivity_s_per_m is not None:
        _refuse("conduction-twice", "sigma= and rs= are two ways to give one conduction", "keep one")
    if layer.fill is None and (layer.host is not None or layer.rule is not None):
        _refuse("fill-missing", "host= and rule= need fill=", "add the solid volume fraction, such as fill=20%")
    return layer


def parse_stack(text: str) -> Stack:
    """A stack from its text. InputError names the layer (from 1 at the touched side) and the characters.

    >>> [layer.name for layer in parse_stack("soda-lime-glass 1.8mm / 125um PET film").layers]
    ['soda-lime-glass', 'PET film']
    """
    text = text.removeprefix("\ufeff")
    if len(text) > LONGEST_TEXT:
        _refuse("too-long", f"a stack of {len(text)} characters", f"at most {LONGEST_TEXT}")
    parts = _parts(text)
    if not parts:
        _refuse("empty", "the stack is empty", 'write layers such as "soda-lime-glass 1.8mm / acrylic-oca 150um"')
    if len(parts) > MOST_LAYERS:
        _refuse("too-many-layers", f"{len(parts)} layers", f"at most {MOST_LAYERS}")
    layers = []
    for number, part in enumerate(parts, 1):
        try:
            layers.append(parse_layer(part.text)._replace(text_span=(part.start, part.end)))
        except InputError as error:
            raise error.at_layer(number, (part.start, part.end)) from None
    return Stack(tuple(layers))
