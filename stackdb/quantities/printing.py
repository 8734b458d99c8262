"""Numbers and foreign text as people can read them."""

from __future__ import annotations

from math import floor, isfinite, log10


def printed(value: float, half_width: float) -> str:
    """A value to the place of the second digit of its half-width, so that no digit claims more than is known.

    Value and half-width are in one unit, whichever it is. Without a half-width: four digits.

    >>> printed(0.33812, 0.025), printed(7.104, 0.5), printed(1234.5, 230.0)
    ('0.338', '7.10', '1230')
    """
    if half_width <= 0.0 or not isfinite(half_width):
        return _plain(value)
    exponent = floor(log10(half_width))
    if round(half_width / 10.0**exponent, 1) >= 10.0:  # 0.0996 has the two digits 0.10
        exponent += 1
    place = exponent - 1
    if place >= 0:
        return f"{round(value, -place) + 0.0:.0f}"
    text = f"{value:.{min(-place, 12)}f}"
    return text.removeprefix("-") if not text.strip("-0.") else text


def _plain(value: float, digits: int = 4) -> str:
    """At most so many digits, no exponent for the sizes people meet."""
    if value == 0.0:
        return "0"
    text = f"{value:.{digits}g}"
    if "e" not in text:
        return text
    return f"{float(text):.0f}" if 1.0 <= abs(value) < 1e9 else text


def format_length(metres: float, *, ascii_only: bool = False) -> str:
    """A length [m] in nm, µm (``um`` for ASCII) or mm, four digits at the most.

    >>> format_length(1.5e-4), format_length(0.0018), format_length(0.0)
    ('150 µm', '1.8 mm', '0 mm')
    >>> format_length(1.5e-4, ascii_only=True)
    '150 um'
    """
    size = abs(metres)
    if 0.0 < size < 0.99995e-6:
        return f"{_plain(1e9 * metres)} nm"
    if 0.0 < size < 0.99995e-3:
        return f"{_plain(1e6 * metres)} {'um' if ascii_only else 'µm'}"
    return f"{_plain(1e3 * metres)} mm"


def format_frequency(hertz: float) -> str:
    """A frequency [Hz] in Hz, kHz, MHz or GHz, four digits at the most.

    >>> format_frequency(2.5e5), format_frequency(60.0)
    ('250 kHz', '60 Hz')
    """
    for scale, unit in ((1e9, "GHz"), (1e6, "MHz"), (1e3, "kHz")):
        if abs(hertz) >= scale * 0.99995:
            return f"{_plain(hertz / scale)} {unit}"
    return f"{_plain(hertz)} Hz"


def visible(character: str) -> bool:
    """Whether a character shows as itself: not a control, direction-changing, private or unassigned one."""
    if character.isascii():
        return character.isprintable()
    from unicodedata import category

    return category(character) not in ("Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp")


def escaped(character: str) -> str:
    r"""A character as a visible escape.

    >>> escaped("\x1b"), escaped("\u202e")
    ('\\x1b', '\\u202e')
    """
    return character.encode("unicode_escape").decode("ascii")


def printable(text: str) -> str:
    r"""The text with every control and direction-changing character as a visible escape.

    >>> printable("a\x1b[31m")
    'a\\x1b[31m'
    """
    if text.isascii() and text.isprintable():
        return text
    return "".join(c if visible(c) else escaped(c) for c in text)


def shortened(text: str, most: int = 40) -> str:
    """Foreign text for a message: no longer than ``most`` characters, its odd characters visible.

    >>> shortened("9" * 5000, 8)
    '99999999... (5000 characters)'
    """
    shown = printable(text[: most + 1])
    if len(shown) <= most:
        return shown
    kept = ""
    for c in text[:most]:
        kept += printable(c)
        if len(kept) >= most:
            break
    return f"{kept}... ({len(text)} characters)"
