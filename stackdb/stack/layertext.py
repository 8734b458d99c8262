"""The text of one layer: a name and a thickness in either order, then settings, to a Layer.

Knows no materials and no place in the stack: errors carry the characters within this text.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import NoReturn

from stackdb.quantities.exact import Exact
from stackdb.quantities.parsing import NUMBER, refuse
from stackdb.quantities.printing import shortened
from stackdb.quantities.uncertain import Spread, read_thickness, read_tolerance
from stackdb.quantities.units import LENGTH
from stackdb.stack.layers import Layer, Thickness
from stackdb.stack.settings import SETTING_NAMES, SETTINGS, checked_name, split_settings
from stackdb.stack.tokens import (
    Piece,
    check_characters,
    check_slash,
    joined,
    lacks_unit,
    numberish,
    placed,
    refuse_at,
    unit_like,
    words_of,
)

_NAME_WITH_DIGIT = r"\d+[a-z]*-[a-z][\w-]*\Z"  # 2k-epoxy


def _is_length(piece: Piece) -> bool:
    if not numberish(piece.text):
        return False
    return "-" not in piece.text or not re.match(_NAME_WITH_DIGIT, piece.text, re.IGNORECASE)


def _is_not_finite(word: str) -> bool:
    folded = word.lstrip("+-").casefold()
    return folded.startswith(("nan", "inf")) and (
        folded in ("nan", "inf", "infinity") or any(folded in (f"nan{u}", f"inf{u}") for u in LENGTH.units)
    )


def _head(text: str) -> tuple[Piece, Piece]:
    """Name and thickness of what stands before the settings; InputError where either is missing or doubled."""
    pieces = joined(words_of(text), unit_like)
    for piece in pieces:
        check_slash(piece)
        if piece.text.endswith(","):
            refuse_at(piece, "character", f'"{shortened(piece.text)}" ends in a comma', 'write " / " between layers')
        if _is_not_finite(piece.text):
            hint = "write a number and a unit, 125um"
            refuse_at(piece, "not-finite", f'"{shortened(piece.text)}" is not a finite thickness', hint)
    sizes = [i for i, piece in enumerate(pieces) if _is_length(piece)]
    if len(sizes) > 1:
        _refuse_second(pieces[sizes[0]], pieces[sizes[1]])
    if not sizes:
        _refuse_sizeless(pieces, text)
    size = pieces[sizes[0]]
    before, after = pieces[: sizes[0]], pieces[sizes[0] + 1 :]
    for piece in (*before, *after):
        if unit_like(piece.text):
            refuse_at(piece, "unit-twice", f'"{piece.text}" stands beside {shortened(size.text)}', "write one unit")
    if before and after:
        what = f'"{shortened(after[0].text)}" stands after the thickness, "{shortened(before[0].text)}" before it'
        setting = after[0].text in SETTING_NAMES
        hint = f"write {after[0].text}= and its value" if setting else 'part layers with " / "'
        refuse_at(after[0], "name-split", what, hint)
    named = before or after
    if not named:
        placed(size, read_thickness)
        refuse_at(size, "no-name", f'"{shortened(size.text)}" has no material', "write a name beside the thickness")
    return (Piece(" ".join(p.text for p in named), named[0].start, named[-1].end), size)


def _refuse_second(first: Piece, second: Piece) -> NoReturn:
    if lacks_unit(first) and re.match(r"\d{3}(?!\d)", second.text):
        whole = first.text + second.text
        refuse_at(first, "missing-unit", f'"{first.text}" has no unit', f"write {shortened(whole)} without a blank")
    for piece in (first, second):
        if lacks_unit(piece):
            number = shortened(piece.text, 20)
            hint = f"write {number}um or {number}mm, or a hyphen before it where it belongs to the name"
            refuse_at(piece, "missing-unit", f'"{number}" has no unit', hint)
    text = f"two thicknesses, {shortened(first.text)} and {shortened(second.text)}"
    refuse_at(second, "thickness-twice", text, 'keep one, or part layers with " / "')


def _refuse_sizeless(pieces: list[Piece], text: str) -> NoReturn:
    if not pieces:
        what = f'"{shortened(text.strip())}" names no layer' if text.strip() else "no name before the settings"
        refuse("no-name", what, "write a name and a thickness, such as pet-film 125um")
    name = " ".join(p.text for p in pieces)
    whole = Piece(name, pieces[0].start, pieces[-1].end)
    unit = next((p for p in pieces if unit_like(p.text)), None)
    if unit is not None:
        refuse_at(unit, "no-thickness", f'the unit "{unit.text}" has no number before it', f"write 1{unit.text}")
    placed(whole, checked_name)
    units = "|".join(sorted(LENGTH.units, key=len, reverse=True))
    glued = re.match(rf"(.*[^\d.])({NUMBER}(?:{units}))\Z", name)
    hint = f"write {shortened(f'{glued[1]} {glued[2]}')}" if glued else f"write {shortened(name)} 125um"
    refuse_at(whole, "no-thickness", f'"{shortened(name)}" has no thickness', hint)


def _thickness(spread: Spread, text: str) -> Thickness:
    return Thickness(*spread.span(text)) if spread.given else Thickness(spread.span(text).value)


def _toleranced(spread: Spread, tol: Piece | None, text: str) -> Thickness:
    if tol is None:
        return _thickness(spread, text)
    if spread.given:
        refuse_at(tol, "thickness-twice", f'"{shortened(text)}" has its tolerance, and tol= is another', "keep one")
    return _thickness(placed(tol, lambda t: read_tolerance(t, spread.value)), text)


def _check_together(layer: Layer) -> None:
    """InputError for settings that contradict or lack each other."""
    if layer.loss_tangent is not None and layer.conductivity_s_per_m is not None:
        refuse("loss-twice", "tan= and sigma= are two ways to give one loss", "keep one")
    if layer.sheet_resistance_ohm is not None and layer.conductivity_s_per_m is not None:
        refuse("conduction-twice", "sigma= and rs= are two ways to give one conduction", "keep one")
    if layer.fill is None and (layer.host is not None or layer.rule is not None):
        refuse("fill-missing", "host= and rule= need fill=", "add the solid volume fraction, such as fill=20%")


def read_layers(text: str, sizes: Callable[[Spread], list[Spread]]) -> tuple[Layer, ...]:
    """The layers that a layer's text stands for; ``sizes`` turns the typed thickness into those to try."""
    check_characters(text)
    head_text, settings = split_settings(text)
    named, size = _head(head_text)
    name = placed(named, checked_name)
    spread = placed(size, read_thickness)
    tol = settings.pop("tol", None)
    values = {SETTINGS[key][0]: placed(piece, SETTINGS[key][1]) for key, piece in settings.items()}
    found = tuple(Layer(name, _toleranced(s, tol, size.text), **values) for s in sizes(spread))
    _check_together(found[0])
    return found


def parse_layer(text: str) -> Layer:
    """One layer. InputError with the characters at fault.

    >>> parse_layer("pmma 1.8 mm tol=5%").thickness
    Thickness(nominal_m=0.0018, low_m=0.00171, high_m=0.00189)
    """
    return read_layers(text, lambda spread: [spread])[0]


def steps_of(spread: Spread, step: Exact, most: int) -> list[Spread]:
    """The thicknesses of a range by a step, both ends included where the step meets them."""
    width = spread.high.minus(spread.low)
    if step.digits <= 0 or not spread.given:
        refuse("step", "steps need a range and a step above 0", "write 1.1..3.0mm by 0.1mm")
    power = min(width.power, step.power)
    count = width.digits * 10 ** (width.power - power) // (step.digits * 10 ** (step.power - power)) + 1
    if count > most:
        refuse("too-many-steps", f"{count} steps in one layer", f"at most {most}")
    values = [spread.low.plus(Exact(step.digits * i, step.power)) for i in range(count)]
    return [Spread(v, v, v, False) for v in values]
