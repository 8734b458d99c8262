"""``stackdb touch``."""

from __future__ import annotations

from typing import Any

import click

from stackdb.cli import options
from stackdb.studies.asked import Limits
from stackdb.touch.contact import Sizes


@click.command("touch", epilog='Example: stackdb touch "soda-lime-glass 1.8mm / acrylic-oca 150um" --min-ratio 20%')
@options.stack_argument
@click.option(
    "--case", "cases", multiple=True, metavar="NAME_OR_STACK", help="A way of touching; repeatable, default all."
)
@click.option("--matrix", is_flag=True, help="Show hands by surfaces as one table.")
@options.conditions
@options.limit_options
@options.reference_option
@options.blur_option
@options.size_options
@click.option("--body", "body_farad", type=options.CAPACITANCE, metavar="C", help="Body to ground, default 100pF.")
@click.option(
    "--device", "device_farad", type=options.CAPACITANCE, metavar="C", help="Device to ground, default earthed."
)
@click.option("--counts", type=float, metavar="N", help="Counts measured on the reference.")
@click.option("--noise", type=float, metavar="N", help="Noise in the same counts.")
@options.catalogue_options
@options.output_options
@click.pass_context
def command(
    ctx: click.Context,
    /,
    *,
    words: tuple[str, ...],
    matrix: bool,
    catalogue_path: str | None,
    own: bool,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Answer for bare, gloved and wet touches: gap, ratio, signal, against limits."""
    from stackdb.studies.touch import touch

    sizes, limits = options.take(asked, Sizes), options.take(asked, Limits)
    with options.opened(catalogue_path, own=own) as catalogue:
        result = touch(options.text_of(words), catalogue=catalogue, sizes=sizes, limits=limits, **asked)
        if matrix and not as_json and not get:
            from stackdb.output.terminal import show, width
            from stackdb.output.touch import draw_touch

            show(draw_touch(result, width(), matrix=True), ascii_only=ascii_only)
        else:
            options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
    ctx.exit(0 if result.met else 1)
