"""Numbers typed with their uncertainty: ``1.8±0.1mm``, ``1.8+-0.1mm``, ``1.7..1.9mm``, ``-0.10..+0.05mm``."""

from __future__ import annotations

from typing import NamedTuple

from stackdb.quantities.exact import Exact
from stackdb.quantities.parsing import as_float, check_length, read, refuse, split_number
from stackdb.quantities.printing import shortened
from stackdb.quantities.span import Span
from stackdb.quantities.units import LENGTH, ONE, PURE, SHARE, TOLERANCE, Quantity

SIGNS = ("±", "+-")
HIGHEST_PERMITTIVITY = Exact(1, 6)


class Spread(NamedTuple):
    """An exact number and its exact limits; ``given`` where an uncertainty was typed."""

    value: Exact
    low: Exact
    high: Exact
    given: bool

    def span(self, text: str) -> Span:
        """The three as floats."""
        return Span(as_float(self.value, text), as_float(self.low, text), as_float(self.high, text))


def _borrowed(first: str, second: str, *, percent: bool = False) -> str:
    """The first number with the unit of the second, where it has none of its own."""
    if split_number(first)[1]:
        return first
    unit = split_number(second)[1]
    return first if unit == "%" and not percent else first + unit


def _cut(text: str) -> tuple[str, str, str]:
    """A text as centre, sign and half-width, or low, ``..`` and high, or itself and two empty texts."""
    for sign in (*SIGNS, ".."):
        first, found, second = text.partition(sign)
        if found:
            return first, found, second
    return text, "", ""


def _sides(text: str, first: str, sign: str, second: str) -> None:
    if not first.strip() or not second.strip():
        what = "a centre and a half-width, 1.8+-0.1mm" if sign in SIGNS else "both ends, 1.7..1.9mm"
        refuse("range-open", f'"{shortened(text)}" lacks one side of {sign}', f"write {what}")


def _deviation(text: str, centre: Exact, kind: Quantity) -> Exact:
    """A half-width as typed: in the unit of the number, or in percent of it."""
    number, unit = read(text, SHARE if text.rstrip().endswith("%") else kind)
    return number.times(centre) if unit == "%" else number


def read_spread(text: str, kind: Quantity) -> Spread:
    """A number with or without an uncertainty; one unit at the end serves both numbers."""
    first, sign, second = _cut(text)
    if not sign:
        value = read(text, kind)[0]
        return Spread(value, value, value, False)
    _sides(text, first, sign, second)
    if sign == "..":
        return _between(text, first, second, kind)
    centre = read(_borrowed(first, second), kind)[0]
    half = _deviation(second, centre, kind)
    if half.digits < 0:
        refuse("out-of-range", f'"{shortened(text)}" has an uncertainty below 0', "write it without a sign")
    return Spread(centre, centre.minus(half), centre.plus(half), True)


def _between(text: str, first: str, second: str, kind: Quantity) -> Spread:
    high = read(second, kind)[0]
    low = read(_borrowed(first, second), kind)[0]
    if low.minus(high).digits > 0:
        refuse("range-reversed", f'"{shortened(text)}" runs from high to low', "write the smaller end first")
    return Spread(low.middle(high), low, high, True)


def read_thickness(text: str) -> Spread:
    """A thickness [m] from 0 to 1 m, with or without an uncertainty."""
    found = read_spread(text, LENGTH)
    check_length(found.low if ".." in text else found.value, text)
    return _within_layer(found, text)


def read_tolerance(text: str, thickness: Exact) -> Spread:
    """A thickness [m] with its tolerance as typed: ``0.1mm``, ``5%`` or ``-0.10..+0.05mm``."""
    bare = text.strip()
    for sign in SIGNS:
        bare = bare.removeprefix(sign)
    first, sign, second = _cut(bare)
    if not sign:
        half = _deviation(bare, thickness, TOLERANCE)
        if half.digits < 0:
            refuse("out-of-range", f'tol="{shortened(text)}" is below 0', "write tol=0.1mm, or tol=-0.1..0mm")
        return _within_layer(Spread(thickness, thickness.minus(half), thickness.plus(half), True), f"tol={text}")
    if sign != "..":
        refuse("not-a-number", f'tol="{shortened(text)}" is not one tolerance', "write tol=0.1mm")
    _sides(text, first, sign, second)
    low = _deviation(_borrowed(first, second, percent=True), thickness, TOLERANCE)
    high = _deviation(second, thickness, TOLERANCE)
    if low.digits > 0 or high.digits < 0:
        refuse("tolerance-sign", f'tol="{shortened(text)}" does not run from minus to plus', "write tol=-0.10..+0.05mm")
    return _within_layer(Spread(thickness, thickness.plus(low), thickness.plus(high), True), f"tol={text}")


def _within_layer(spread: Spread, text: str) -> Spread:
    if spread.low.digits < 0:
        refuse(
            "tolerance-too-large",
            f'the tolerance of "{shortened(text)}" is larger than the layer',
            "write a smaller one",
        )
    if spread.high.minus(ONE).digits > 0:
        refuse("out-of-range", f'"{shortened(text)}" reaches above 1 m', "write a length from 0 to 1 m")
    return spread


def read_permittivity(text: str) -> Span:
    """A relative permittivity [-] of 1 or above, with or without an uncertainty.

    >>> read_permittivity("3.3±0.2")
    Span(value=3.3, low=3.1, high=3.5)
    """
    found = read_spread(text, PURE)
    if found.low.minus(ONE).digits < 0:
        reach = "reaches below 1" if found.value.minus(ONE).digits >= 0 else "is below 1"
        refuse("eps-below-one", f"eps={shortened(text)} {reach}", "no passive layer has that")
    if found.high.minus(HIGHEST_PERMITTIVITY).digits > 0:
        refuse("out-of-range", f"eps={shortened(text)} is above 1000000", "write the relative permittivity")
    return found.span(text)
