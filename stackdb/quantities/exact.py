"""Numbers as they were typed: exact decimals, so that ``1.8mm`` minus ``0.1mm`` is 1.7 mm to the last bit."""

from __future__ import annotations

from math import isfinite
from typing import NamedTuple

from stackdb.errors import InputError

HIGHEST_POWER = 400  # beyond any float, and small enough that exact arithmetic stays quick


class Exact(NamedTuple):
    """The number ``digits * 10**power``, nothing rounded."""

    digits: int
    power: int

    def plus(self, other: Exact) -> Exact:
        """The exact sum."""
        power = min(self.power, other.power)
        return Exact(self.digits * 10 ** (self.power - power) + other.digits * 10 ** (other.power - power), power)

    def minus(self, other: Exact) -> Exact:
        """The exact difference."""
        return self.plus(Exact(-other.digits, other.power))

    def times(self, other: Exact) -> Exact:
        """The exact product."""
        return Exact(self.digits * other.digits, self.power + other.power)

    def shifted(self, power: int) -> Exact:
        """The number times a power of ten."""
        return Exact(self.digits, self.power + power)

    def middle(self, other: Exact) -> Exact:
        """Half way between two numbers."""
        total = self.plus(other)
        return Exact(total.digits * 5, total.power - 1)

    @property
    def value(self) -> float:
        """The nearest float; zero has no sign. Nearest to a number too small for a float is 0."""
        return float(f"{self.digits}e{self.power}") if self.digits else 0.0

    def text(self) -> str:
        """The digits as people write them, without an exponent where few zeros need be added."""
        digits, power = self.digits, self.power
        if digits == 0:
            return "0"
        while digits % 10 == 0:
            digits, power = digits // 10, power + 1
        sign, bare = ("-" if digits < 0 else ""), str(abs(digits))
        if 0 <= power <= 6:
            return f"{sign}{bare}{'0' * power}"
        if power < 0 and len(bare) + power > -6:
            padded = bare.rjust(1 - power, "0")
            return f"{sign}{padded[:power]}.{padded[power:]}"
        return f"{sign}{bare}e{power}"


def exact(number: str) -> Exact:
    """The exact number behind a decimal text such as ``-1.80e-3``; InputError beyond what a float can hold.

    >>> exact("1.8").minus(exact("0.1")).value
    1.7
    """
    mantissa, _, exponent = number.lower().partition("e")
    whole, _, part = mantissa.partition(".")
    digits, shift = int(whole + part), int(exponent or 0)
    if digits and abs(shift) > HIGHEST_POWER:
        text = f'"{number[:40]}" is beyond what a number can be'
        raise InputError("not-finite", text, "write fewer digits or a smaller exponent")
    return Exact(digits, shift - len(part) if digits else 0)


def exact_of(value: float) -> Exact:
    """The exact number behind the shortest text of a float, so that ``.value`` gives the float back."""
    if not isfinite(value):
        raise InputError("not-finite", f"{value} is not a finite number")
    return exact(repr(float(value)))
