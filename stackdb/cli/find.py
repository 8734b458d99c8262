"""``stackdb find``."""

from __future__ import annotations

from typing import Any

import click

from stackdb import quantities
from stackdb.cli import options
from stackdb.errors import InputError


def _range(text: str) -> tuple[float | None, float | None]:
    low, dots, high = text.partition("..")
    if not dots:
        raise InputError("not-a-range", f'"{text}" is not a range', "write 2.5..4, 2.5.. or ..4")
    return (
        quantities.parse_number(low) if low.strip() else None,
        quantities.parse_number(high) if high.strip() else None,
    )


@click.command("find", epilog="Example: stackdb find acrylic --eps 2.5..3.5")
@click.argument("words", nargs=-1, metavar="[TEXT]")
@click.option("--kind", help="Only this kind, for example cover-lens, adhesive, film.")
@click.option(
    "--eps",
    "span",
    type=options.Quantity("range", _range),
    metavar="LOW..HIGH",
    help="Only permittivities in this range.",
)
@click.option("--names", is_flag=True, help="Print the names alone, one a line, for pipes.")
@options.conditions
@click.option("--catalogue", "catalogue_path", metavar="FILE", help="A catalogue file in place of the one shipped.")
@options.output_options
def command(
    *,
    words: tuple[str, ...],
    span: tuple[float | None, float | None] | None,
    names: bool,
    catalogue_path: str | None,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Find materials by name, other name, kind or range of permittivity; without TEXT all of them."""
    from stackdb.evidence.report import find

    given = {name: value for name, value in asked.items() if value is not None}
    low, high = span or (None, None)
    with options.opened(catalogue_path) as catalogue:
        result = find(options.text_of(words), catalogue=catalogue, at_least=low, at_most=high, **given)
        if names:
            for hit in result.found:
                click.echo(hit.material.key)
            return
        options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
