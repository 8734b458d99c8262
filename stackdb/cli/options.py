"""Options that commands share: the same names, order and help everywhere. Values become SI numbers here."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING, Any

import click

from stackdb import quantities
from stackdb.errors import InputError
from stackdb.studies.asked import Limits
from stackdb.touch.contact import Sizes

if TYPE_CHECKING:
    from stackdb.catalogue import Catalogue
    from stackdb.results import Result

Decorator = Callable[[Callable[..., Any]], Callable[..., Any]]


class Quantity(click.ParamType):  # type: ignore[type-arg,unused-ignore]  # generic only in newer releases of click
    """An option value with a unit, turned into an SI number by a parser of ``quantities``."""

    def __init__(self, name: str, parse: Callable[[str], Any]) -> None:
        self.name = name
        self.parse = parse

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> Any:
        """The SI number; the error names the option."""
        if not isinstance(value, str):
            return value
        try:
            return self.parse(value)
        except InputError as error:
            option = param.opts[0] if param else self.name
            raise InputError(error.code, f"{option}: {error.text}", error.hint) from None


def _level(text: str) -> float:
    level = quantities.parse_share(text)
    if not 0.5 <= level <= 0.999:
        raise InputError("out-of-range", f'"{text}" is not a level from 0.5 to 0.999')
    return level


def _frequencies(text: str) -> tuple[float, ...]:
    return tuple(quantities.parse_frequency(part.strip()) for part in text.split(","))


LENGTH = Quantity("length", quantities.parse_length)
FREQUENCY = Quantity("frequency", quantities.parse_frequency)
FREQUENCIES = Quantity("frequencies", _frequencies)
TEMPERATURE = Quantity("temperature", quantities.parse_temperature)
CAPACITANCE = Quantity("capacitance", quantities.parse_capacitance)
PERCENT = Quantity("percent", quantities.parse_percent)
SHARE = Quantity("share", quantities.parse_share)
LEVEL = Quantity("level", _level)


def bundle(*options: Decorator) -> Decorator:
    """Several options as one decorator, kept in the order written."""

    def decorate(function: Callable[..., Any]) -> Callable[..., Any]:
        for option in reversed(options):
            function = option(function)
        return function

    return decorate


stack_argument = click.argument("words", nargs=-1, metavar="STACK")

conditions = bundle(
    click.option("--freq", "frequency_hz", type=FREQUENCY, metavar="F", help="Drive frequency, default 100kHz."),
    click.option("--temp", "temperature_c", type=TEMPERATURE, metavar="T", help="Temperature, default 23C."),
    click.option("--humidity", "humidity_pct", type=PERCENT, metavar="P", help="Relative humidity, default 50%."),
    click.option("--level", type=LEVEL, metavar="P", help="How often ranges hold, default 0.9."),
)
catalogue_options = bundle(
    click.option("--catalogue", "catalogue_path", metavar="FILE", help="A catalogue file in place of the one shipped."),
    click.option("--source", metavar="KEY", help="Let one source alone speak."),
    click.option("--own", is_flag=True, help="Use own figures beside the curated ones."),
)
output_options = bundle(
    click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else."),
    click.option("--get", metavar="KEY", help="Print one number of the JSON, for example air_equivalent_gap_m."),
    click.option("--ascii", "ascii_only", is_flag=True, help="Draw with ASCII alone."),
)
limit_options = bundle(
    click.option("--max-gap", "max_gap_m", type=LENGTH, metavar="L", help="Greatest gap; exit status 1 when passed."),
    click.option("--min-ratio", type=SHARE, metavar="P", help="Least ratio to the reference."),
    click.option("--min-signal", "min_signal_farad", type=CAPACITANCE, metavar="C", help="Least signal (needs sizes)."),
)
blur_option = click.option(
    "--blur", "blur_m", type=LENGTH, metavar="L", help="How far a conducting film may smear a touch, default 5mm."
)
size_options = bundle(
    click.option("--pad", "pad_m", type=LENGTH, metavar="D", help="Pad diameter, for the field solution."),
    click.option("--finger", "finger_m", type=LENGTH, metavar="D", help="Finger contact diameter."),
    click.option("--pitch", "pitch_m", type=LENGTH, metavar="L", help="Electrode pitch."),
    click.option("--around", type=click.Choice(["alone", "driven", "grounded"]), help="Neighbours of the pad."),
    click.option("--clearance", "clearance_m", type=LENGTH, metavar="L", help="From the pad to its neighbours."),
    click.option("--below", metavar="STACK", help='Layers under the electrodes, then "ground" or "driven"; else open.'),
)
reference_option = click.option("--reference", metavar="STACK", help="What ratios refer to.")


def text_of(words: tuple[str, ...]) -> str:
    """The words of a stack, joined; quotes may be left out."""
    return " ".join(words)


def take(values: dict[str, Any], kind: type[Sizes] | type[Limits]) -> Any:
    """Pop the fields of a NamedTuple out of a command's keyword arguments."""
    return kind(**{name: values.pop(name) for name in kind._fields})


def opened(path: str | None, *, own: bool = False) -> Catalogue:
    """The catalogue named, else the one shipped; with own figures where they are asked for."""
    from stackdb.catalogue import open_catalogue

    curated = open_catalogue(path)
    if not own:
        return curated
    from stackdb.catalogue.own import with_own

    return with_own(curated)


def emit(result: Result, *, as_json: bool, get: str | None, ascii_only: bool) -> None:
    """Print a result: one number, one JSON object, or the screen. JSON comes first and loads no screen."""
    if as_json or get:
        from stackdb.output.machine import dumps, picked
        from stackdb.output.terminal import encodable

        body = result.to_dict()
        import sys

        text = picked(body, get) if get else dumps(body)
        sys.stdout.write(encodable(text, sys.stdout.encoding) + "\n")
        return
    from stackdb.output.screens import draw
    from stackdb.output.terminal import show

    show(draw(result), ascii_only=ascii_only)
