"""Numbers with units, as people type them, to exact decimals; every refusal says what would be right."""

from __future__ import annotations

import re
from math import isfinite
from typing import NoReturn

from stackdb.errors import InputError
from stackdb.quantities.exact import Exact, exact
from stackdb.quantities.printing import shortened
from stackdb.quantities.units import (
    AREAL_MASS,
    CAPACITANCE,
    CONDUCTIVITY,
    DENSITY,
    FREQUENCY,
    LENGTH,
    ONE,
    PERCENT,
    PURE,
    SHARE,
    SHEET_RESISTANCE,
    TEMPERATURE,
    Quantity,
)

NUMBER = r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
LONGEST_NUMBER = 400
_NUMBER = re.compile(NUMBER)
_COMMA = r"([0-9]),([0-9]+)"
# Typographic minus signs mean what they look like.
_MINUS = str.maketrans("\u2212\uff0d", "--")


def refuse(code: str, text: str, hint: str = "") -> NoReturn:
    """Raise an InputError."""
    raise InputError(code, text, hint)


def _check_digits(text: str) -> None:
    odd = next((c for c in text if not c.isascii() and c.isdecimal()), None)
    if odd is None:
        return
    from unicodedata import name, normalize

    plain = "".join(str(int(c)) if c.isdecimal() else normalize("NFKC", c) for c in text[:60])
    hint = f"write {plain}" if plain.isascii() and len(text) <= 40 else "write the digits 0 to 9"
    refuse("foreign-digit", f'"{shortened(text)}" has the {name(odd, "digit").lower()} (U+{ord(odd):04X})', hint)


def _check_comma(text: str) -> None:
    found = re.search(_COMMA, text) if "," in text else None
    if found is None:
        return
    point = re.sub(_COMMA, r"\1.\2", text, count=1)
    # A comma before three digits may have parted thousands.
    joined = re.sub(_COMMA, r"\1\2", text, count=1)
    whole = f" or {joined}" if len(found.group(2)) == 3 else ""
    fixed = f", {point}{whole}" if len(text) <= 20 and text.isprintable() else ""
    refuse("decimal-comma", f'"{shortened(text)}" has a decimal comma', f"write a decimal point{fixed}")


def split_number(text: str) -> tuple[str, str]:
    """A text as its number and what follows; InputError with the reason when no number stands first."""
    stripped = text.strip().translate(_MINUS)
    if not stripped:
        refuse("not-a-number", "a number is missing")
    if not stripped.isascii():
        _check_digits(stripped)
    _check_comma(stripped)
    match = _NUMBER.match(stripped)
    if match is None:
        if stripped.lstrip("+-").casefold().startswith(("nan", "inf")):
            refuse("not-finite", f'"{shortened(text)}" is not a finite number', "write a number")
        refuse("not-a-number", f'"{shortened(text)}" is not a number', "write a number such as 1.8")
    number, rest = match.group(), stripped[match.end() :].strip()
    if len(number) > LONGEST_NUMBER:
        refuse("too-long", f"a number of {len(number)} characters, {number[:8]}...", "a few digits are enough")
    if rest and (rest[0] in "+-." or rest[0].isdecimal()):
        refuse("not-a-number", f'"{shortened(text)}" is not one number', "write 1.8mm, or 1.7..1.9mm for a range")
    return number, rest


def _doubled(unit: str, units: dict[str, Exact]) -> str | None:
    """The first of several units run together or apart, as in ``mm mm``."""
    joined = unit.replace(" ", "")
    for first in sorted(units, key=len, reverse=True):
        rest = joined.removeprefix(first)
        if rest != joined and (rest in units or _doubled(rest, units)):
            return first
    return None


def _refuse_unit(number: str, unit: str, kind: Quantity, text: str) -> NoReturn:
    quoted = f'"{shortened(text)}"'
    brief = number if len(number) <= 20 else "1.8"
    if not kind.units:
        brief = exact(number).times(PERCENT).text() if unit == "%" else brief
        refuse("unit-unwanted", f"{quoted} should be {kind.name}", f"write {brief}")
    if not unit:
        refuse("missing-unit", f"{quoted} has no unit", f"write {' or '.join(brief + u for u in kind.examples)}")
    right = [u for u in kind.units if u.casefold() == unit.casefold()]
    if right:
        hint = f"write {brief}{next((u for u in right if u.isascii()), right[0])}"
        refuse("unit-case", f"{quoted} has its unit in the wrong case", hint)
    first = _doubled(unit, kind.units) if len(unit) <= 24 else None
    if first:
        refuse("unit-twice", f"{quoted} has more than one unit", f"write {brief}{first}")
    refuse("unknown-unit", f'{quoted}: "{shortened(unit, 20)}" is no unit of {kind.name}', f"there is {kind.shown}")


def read(text: str, kind: Quantity) -> tuple[Exact, str]:
    """The exact SI number of a text and the unit it was typed in. A bare 0 needs no unit, save for temperatures."""
    number, unit = split_number(text)
    found = exact(number)
    if not unit and (not kind.units or kind is SHARE or (found.digits == 0 and kind is not TEMPERATURE)):
        return found, unit
    if unit not in kind.units:
        _refuse_unit(number, unit, kind, text)
    return found.times(kind.units[unit]), unit


def as_float(number: Exact, text: str) -> float:
    """The float nearest to a number; InputError where no float is near."""
    value = number.value
    if not isfinite(value) or (value == 0.0 and number.digits):
        refuse(
            "not-finite",
            f'"{shortened(text)}" is beyond what a number can be',
            "write fewer digits or a smaller exponent",
        )
    return value


def _at_least_zero(text: str, kind: Quantity, unit: str) -> float:
    value = as_float(read(text, kind)[0], text)
    if value < 0.0:
        refuse("out-of-range", f'"{shortened(text)}" is below 0{unit}', "write 0 or more")
    return value


def _above_zero(text: str, kind: Quantity, unit: str) -> float:
    value = as_float(read(text, kind)[0], text)
    if value <= 0.0:
        refuse("out-of-range", f'"{shortened(text)}" is not above 0{unit}', "write more than 0")
    return value


def parse_number(text: str) -> float:
    """A pure number [-].

    >>> parse_number("3.5")
    3.5
    """
    return as_float(read(text, PURE)[0], text)


def parse_share(text: str) -> float:
    """A fraction [-], typed as such or in percent.

    >>> parse_share("20%"), parse_share("0.2")
    (0.2, 0.2)
    """
    return as_float(read(text, SHARE)[0], text)


def parse_percent(text: str) -> float:
    """A number in percent [%], its sign optional.

    >>> parse_percent("50%"), parse_percent("50")
    (50.0, 50.0)
    """
    number, unit = read(text, SHARE)
    return as_float(number.shifted(2) if unit else number, text)


def parse_length(text: str) -> float:
    """A length [m] from 0 to 1 m; a bare 0 needs no unit.

    >>> parse_length("1.8mm"), parse_length("150 um")
    (0.0018, 0.00015)
    """
    return as_float(check_length(read(text, LENGTH)[0], text), text)


def check_length(metres: Exact, text: str) -> Exact:
    """The length [m], refused below 0 and above 1 m."""
    if metres.digits < 0:
        refuse("out-of-range", f'"{shortened(text)}" is below 0', "write a length from 0 to 1 m")
    if metres.minus(ONE).digits > 0:
        refuse("out-of-range", f'"{shortened(text)}" is above 1 m', "write a length from 0 to 1 m")
    return metres


def parse_signed_length(text: str) -> float:
    """A length [m] with a sign, as in a tolerance."""
    return as_float(read(text, LENGTH)[0], text)


def parse_frequency(text: str) -> float:
    """A frequency [Hz], above 0.

    >>> parse_frequency("250kHz")
    250000.0
    """
    return _above_zero(text, FREQUENCY, " Hz")


def parse_temperature(text: str) -> float:
    """A temperature [°C], typed in C, °C or K.

    >>> parse_temperature("23 °C"), parse_temperature("296.15K")
    (23.0, 23.0)
    """
    number, unit = read(text, TEMPERATURE)
    celsius = number.minus(Exact(27315, -2)) if unit == "K" else number
    if celsius.plus(Exact(27315, -2)).digits < 0:
        refuse("out-of-range", f'"{shortened(text)}" is below absolute zero', "write 23C, or 296K")
    return as_float(celsius, text)


def parse_capacitance(text: str) -> float:
    """A capacitance [F], 0 or above.

    >>> parse_capacitance("100pF")
    1e-10
    """
    return _at_least_zero(text, CAPACITANCE, " F")


def parse_conductivity(text: str) -> float:
    """A conductivity [S/m], 0 or above.

    >>> parse_conductivity("53 mS/cm")
    5.3
    """
    return _at_least_zero(text, CONDUCTIVITY, " S/m")


def parse_sheet_resistance(text: str) -> float:
    """A sheet resistance [ohm/sq], above 0.

    >>> parse_sheet_resistance("1.5kohm/sq"), parse_sheet_resistance("100 Ω")
    (1500.0, 100.0)
    """
    return _above_zero(text, SHEET_RESISTANCE, " ohm")


def parse_areal_mass(text: str) -> float:
    """A mass per area [kg/m2], 0 or above.

    >>> parse_areal_mass("180g/m2")
    0.18
    """
    return _at_least_zero(text, AREAL_MASS, " g/m2")


def parse_density(text: str) -> float:
    """A density [kg/m3], above 0.

    >>> parse_density("1.54 g/cm3")
    1540.0
    """
    return _above_zero(text, DENSITY, " g/cm3")
