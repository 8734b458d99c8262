"""``stackdb compose``."""

from __future__ import annotations

from typing import Any

import click

from stackdb.cli import options
from stackdb.studies.asked import Limits
from stackdb.touch.contact import Sizes


@click.command("compose", epilog='Example: stackdb compose "soda-lime-glass 1.8mm / acrylic-oca 150um" --freq 250kHz')
@options.stack_argument
@options.conditions
@options.limit_options
@options.reference_option
@click.option(
    "--as", "as_material", metavar="MATERIAL", help="The gap as a thickness of this material (default: layer 1)."
)
@options.blur_option
@options.size_options
@options.catalogue_options
@click.option("--save", metavar="FILE", help="Write the stack to a stack file.")
@options.output_options
@click.pass_context
def command(
    ctx: click.Context,
    /,
    *,
    words: tuple[str, ...],
    save: str | None,
    catalogue_path: str | None,
    own: bool,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Compose a stack: gap, effective permittivity, areal capacitance, ranges, verdicts.

    STACK is text (layers from the touched side, parted by " / "), a .toml stack file, or - for standard input.
    """
    from stackdb.studies.compose import compose

    sizes, limits = options.take(asked, Sizes), options.take(asked, Limits)
    with options.opened(catalogue_path, own=own) as catalogue:
        result = compose(options.text_of(words), catalogue=catalogue, sizes=sizes, limits=limits, **asked)
        if save is not None:
            from stackdb.stack.stackfile import write_stack

            write_stack(result.read, save)
        options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
    ctx.exit(0 if result.met else 1)
