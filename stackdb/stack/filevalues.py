"""Single values of a stack file: TOML to SI numbers and words, and back."""

from __future__ import annotations

from collections.abc import Callable
from math import isfinite

from stackdb.errors import InputError
from stackdb.quantities.exact import exact_of
from stackdb.quantities.printing import shortened
from stackdb.stack.layers import length_text

AROUND = ("alone", "driven", "grounded")


def wrong_type(value: object, wanted: str) -> InputError:
    """The error for a value of another TOML type than wanted."""
    return InputError("wrong-type", f"{shortened(shown(value))} is not {wanted}", f"write {wanted}")


def shown(value: object) -> str:
    """A value as a stack file shows it."""
    return str(value).lower() if isinstance(value, bool) else str(value)


def read_text(value: object) -> str:
    """A text in quotes."""
    if not isinstance(value, str):
        raise InputError("wrong-type", f"{shortened(shown(value))} stands without quotes", "write it in quotes")
    return value


def quantity_reader(parse: Callable[[str], float], example: str) -> Callable[[object], float]:
    """A reader of texts with a unit; a bare number is told that it lacks one."""

    def read(value: object) -> float:
        if isinstance(value, int | float) and not isinstance(value, bool):
            raise InputError("missing-unit", f"{value} has no unit", f'write "{example}", in quotes')
        return parse(read_text(value))

    return read


def number_reader(parse: Callable[[str], float], low: float, high: float) -> Callable[[object], float]:
    """Numbers bare or in quotes, within limits."""

    def read(value: object) -> float:
        if isinstance(value, str):
            number = parse(value)
        elif isinstance(value, int | float) and not isinstance(value, bool):
            number = float(value) if abs(value) < 1e300 else float("inf")
        else:
            raise wrong_type(value, "a number")
        if not isfinite(number) or not low <= number <= high:
            what = f"from {low:g} to {high:g}" if isfinite(high) else f"of {low:g} or above"
            raise InputError("out-of-range", f"{shortened(str(value))} is out of range", f"write a number {what}")
        return number

    return read


def read_flag(value: object) -> bool:
    """A flag, true or false."""
    if not isinstance(value, bool):
        raise wrong_type(value, "true or false")
    return value


def read_around(value: object) -> str:
    """What surrounds the pad."""
    word = read_text(value)
    if word not in AROUND:
        raise InputError("word-unknown", f'"{shortened(word)}" is no neighbour', f"there is {', '.join(AROUND)}")
    return word


def read_layer_number(value: object) -> int:
    """A layer's number, from 1 at the touched side."""
    if not isinstance(value, int) or isinstance(value, bool) or value < 1:
        raise wrong_type(value, "a layer's number from 1")
    return value


def write_string(value: str) -> str:
    """A text in quotes, its odd characters as TOML escapes."""
    plain = value.replace("\\", "\\\\").replace('"', '\\"')
    return '"' + "".join(c if c.isprintable() else f"\\U{ord(c):08X}" for c in plain) + '"'


def write_number(value: float) -> str:
    """A bare number."""
    return str(int(value)) if value == int(value) and abs(value) < 1e15 else repr(value)


def write_flag(value: bool) -> str:
    """A flag, true or false."""
    return "true" if value else "false"


def write_list(values: tuple[str, ...]) -> str:
    """A list of texts."""
    return f"[{', '.join(write_string(v) for v in values)}]"


def _scaled(value: float, units: tuple[tuple[str, int], ...]) -> str:
    """A number with the largest unit that it reaches, else the last."""
    unit, power = next((u for u in units if abs(value) >= 10.0 ** u[1]), units[-1])
    return write_string(exact_of(value).shifted(-power).text() + unit)


def write_length(metres: float) -> str:
    """A length [m] with its unit."""
    return write_string(length_text(metres))


def write_farad(farad: float) -> str:
    """A capacitance [F] with its unit."""
    return _scaled(farad, (("nF", -9), ("pF", -12), ("fF", -15)))


def write_hertz(hertz: float) -> str:
    """A frequency [Hz] with its unit."""
    return _scaled(hertz, (("GHz", 9), ("MHz", 6), ("kHz", 3), ("Hz", 0)))


def write_celsius(celsius: float) -> str:
    """A temperature [°C] with its unit."""
    return write_string(exact_of(celsius).text() + "C")
