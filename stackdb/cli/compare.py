"""``stackdb compare``."""

from __future__ import annotations

from typing import Any

import click

from stackdb.cli import options
from stackdb.studies.asked import Limits
from stackdb.touch.contact import Sizes


@click.command("compare", epilog='Example: stackdb compare "soda-lime-glass 3mm" "pmma-extruded 3mm" --freq 250kHz')
@click.argument("stacks", nargs=-1, metavar="STACK STACK...")
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
    stacks: tuple[str, ...],
    catalogue_path: str | None,
    own: bool,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Hold stacks (each quoted, or a file) against the first: what changed, what it cost, different or not."""
    from stackdb.studies.compare import compare

    sizes, limits = options.take(asked, Sizes), options.take(asked, Limits)
    with options.opened(catalogue_path, own=own) as catalogue:
        result = compare(stacks, catalogue=catalogue, sizes=sizes, limits=limits, **asked)
        options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
    ctx.exit(0 if result.met else 1)
