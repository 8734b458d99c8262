"""The settings of a layer, ``key=value``: their names, what their values may be, and their text."""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import NoReturn

from stackdb.quantities import Span, parse_conductivity, parse_number, parse_share, parse_sheet_resistance
from stackdb.quantities.parsing import refuse
from stackdb.quantities.printing import shortened
from stackdb.quantities.uncertain import read_permittivity
from stackdb.quantities.units import CONDUCTIVITY, PURE, SHARE, SHEET_RESISTANCE, TOLERANCE, Quantity
from stackdb.stack.tokens import Piece, check_slash, is_mark, joined, numberish, refuse_at, unit_like, words_of

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
LONGEST_NAME = 80
_SETTING = r"(?:^|(?<=\s))([^\s=]*)\s?=\s?"
_OTHER_WORDS = {
    "er": "eps", "epsr": "eps", "dk": "eps", "permittivity": "eps", "df": "tan", "loss": "tan", "tand": "tan",
    "tolerance": "tol", "resistance": "rs", "conductivity": "sigma", "rho": "sigma", "porosity": "fill", "mix": "rule",
}  # fmt: skip


def checked_name(text: str) -> str:
    """A name as typed, blanks made one space; InputError where it holds what no name holds."""
    name = " ".join(text.split())
    odd = next((c for c in name if not (c.isalnum() or c in " -_.+'&" or is_mark(c))), None)
    if odd is not None:
        hint = 'write " / " between layers' if odd in "/," else "take it away"
        refuse("character", f'the name "{shortened(name)}" holds {odd}', hint)
    if len(name) > LONGEST_NAME:
        refuse("too-long", f'the name "{shortened(name, 20)}" is too long', f"at most {LONGEST_NAME} characters")
    if not any(c.isalnum() for c in name):
        refuse("no-name", f'"{shortened(name)}" is no name', "write a material and a thickness, such as pet-film 125um")
    return name


def _host(text: str) -> str:
    if any(numberish(word) for word in text.split()):
        refuse("setting-last", f'host="{shortened(text)}" holds a number', "thickness stands before the settings")
    return checked_name(text)


def _loss(text: str) -> float:
    loss = parse_number(text)
    if not 0.0 <= loss <= 1e4:
        refuse("out-of-range", f"tan={shortened(text)} is outside 0 to 10000", "write a loss tangent such as 0.02")
    return loss


def _fill(text: str) -> float:
    fill = parse_share(text)
    if not 0.0 <= fill <= 1.0:
        percent = f"write {text}%" if 1.0 < fill <= 100.0 and "%" not in text else "write a share such as 20%"
        refuse("out-of-range", f"fill={shortened(text)} is outside 0 to 1", percent)
    return fill


def _rule(text: str) -> str:
    word = "-".join(text.casefold().replace("_", " ").replace("-", " ").split())
    if word not in RULES:
        refuse("rule-unknown", f'no mixing rule "{shortened(text)}"', f"there is {', '.join(RULES)}")
    return word


# The field of a Layer that a setting fills, its parser, and what it measures (None for words).
Setting = tuple[str, Callable[[str], Span | float | str], Quantity | None]
SETTINGS: dict[str, Setting] = {
    "eps": ("eps", read_permittivity, PURE),
    "tan": ("loss_tangent", _loss, PURE),
    "sigma": ("conductivity_s_per_m", parse_conductivity, CONDUCTIVITY),
    "rs": ("sheet_resistance_ohm", parse_sheet_resistance, SHEET_RESISTANCE),
    "fill": ("fill", _fill, SHARE),
    "host": ("host", _host, None),
    "rule": ("rule", _rule, None),
}
SETTING_NAMES = ("tol", *SETTINGS)


def _unknown_setting(key: Piece) -> NoReturn:
    from difflib import get_close_matches

    folded = key.text.casefold()
    if folded in ("thickness", "thick", "t", "d", "h"):
        hint = "write the thickness beside the name, such as pet-film 125um"
        refuse_at(key, "setting-unknown", f'no setting "{key.text}="', hint)
    near = [_OTHER_WORDS[folded]] if folded in _OTHER_WORDS else get_close_matches(folded, SETTING_NAMES, 1, 0.5)
    hint = f"nearest: {near[0]}=" if near else f"there is {' '.join(f'{s}=' for s in SETTING_NAMES)}"
    refuse_at(key, "setting-unknown", f'no setting "{shortened(key.text)}="', hint)


def _value(key: str, text: str, start: int) -> Piece:
    """The value of a setting as one piece; InputError where more follows it."""
    words = words_of(text, start)
    if not words:
        refuse_at(Piece("", start, start), "setting-empty", f"{key}= has no value", f"write a value after {key}=")
    kind = TOLERANCE if key == "tol" else SETTINGS[key][2]
    if kind is None:
        return Piece(" ".join(w.text for w in words), words[0].start, words[-1].end)
    if kind is not CONDUCTIVITY and kind is not SHEET_RESISTANCE:
        for word in words:
            check_slash(word)
    takes = (lambda _: True) if kind.units else unit_like
    value, *more = joined(words, takes)
    if more and more[0].text.casefold() in {u.casefold() for u in kind.units}:
        refuse_at(
            more[0], "unit-twice", f'{key}={shortened(value.text)} has another unit, "{more[0].text}"', "keep one"
        )
    if more:
        text = f'"{shortened(more[0].text)}" stands after {key}={shortened(value.text)}'
        refuse_at(more[0], "setting-last", text, 'settings stand last in a layer; part layers with " / "')
    return value


def split_settings(text: str) -> tuple[str, dict[str, Piece]]:
    """What stands before the settings, and the settings as typed."""
    if "=" not in text:
        return text, {}
    marks = list(re.finditer(_SETTING, text))
    found: dict[str, Piece] = {}
    ends = [m.start() for m in marks[1:]] + [len(text)]
    for mark, end in zip(marks, ends, strict=True):
        key = Piece(mark.group(1), mark.start(1), mark.end(1))
        if key.text not in SETTING_NAMES:
            _unknown_setting(key)
        if key.text in found:
            refuse_at(key, "setting-twice", f"{key.text}= is given twice", 'keep one, or part layers with " / "')
        found[key.text] = _value(key.text, text[mark.end() : end], mark.end())
    return text[: marks[0].start()], found
