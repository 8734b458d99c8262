"""``stackdb change``."""

from __future__ import annotations

from typing import Any

import click

from stackdb import quantities
from stackdb.cli import options
from stackdb.errors import InputError
from stackdb.studies.asked import Limits
from stackdb.touch.contact import Sizes


def _offered(text: str) -> tuple[str, float]:
    name, equals, value = text.partition("=")
    if not equals:
        raise InputError("not-a-pair", f'"{text[:40]}" is no MATERIAL=EPS', "write pmma-cast=3.6")
    return name, quantities.parse_number(value)


@click.command("change", epilog='Example: stackdb change "soda-lime-glass 3mm" "pmma-cast 3mm" --offered pmma-cast=3.6')
@click.argument("old", metavar="OLD")
@click.argument("new", metavar="NEW")
@click.option(
    "--offered",
    multiple=True,
    type=options.Quantity("pair", _offered),
    metavar="MATERIAL=EPS",
    help="A figure from a sheet in hand, to be judged.",
)
@options.conditions
@options.limit_options
@options.size_options
@options.catalogue_options
@options.output_options
@click.pass_context
def command(
    ctx: click.Context,
    /,
    *,
    old: str,
    new: str,
    catalogue_path: str | None,
    own: bool,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Write the change note of a swap: what differs, its effect, figures rejected and why, what to test again."""
    from stackdb.studies.change import change_note

    sizes, limits = options.take(asked, Sizes), options.take(asked, Limits)
    with options.opened(catalogue_path, own=own) as catalogue:
        result = change_note(old, new, catalogue=catalogue, sizes=sizes, limits=limits, **asked)
        options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
    ctx.exit(0 if result.met else 1)
