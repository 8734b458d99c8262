"""``stackdb tolerance``."""

from __future__ import annotations

import sys
from typing import Any

import click

from stackdb.cli import options
from stackdb.studies.asked import Limits

SHAPES = click.Choice(["rectangular", "triangular", "normal", "lognormal"])
SHOW_PROGRESS_FROM = 2_000_000


@click.command("tolerance", epilog='Example: stackdb tolerance "pmma-cast 3mm / acrylic-oca 175um" --max-gap 1.2mm')
@options.stack_argument
@click.option("--samples", type=int, default=100_000, metavar="N", help="Monte Carlo samples, default 100000.")
@click.option("--seed", type=int, default=1, metavar="N", help="Seed of the draws, default 1.")
@click.option("--thickness-shape", type=SHAPES, default="rectangular", help="How thicknesses are drawn.")
@click.option("--permittivity-shape", type=SHAPES, default="lognormal", help="How permittivities are drawn.")
@click.option(
    "--cold", "cold_c", type=options.TEMPERATURE, default=-20.0, metavar="T", help="Cold corner, default -20C."
)
@click.option("--hot", "hot_c", type=options.TEMPERATURE, default=60.0, metavar="T", help="Hot corner, default 60C.")
@click.option("--wet", "wet_pct", type=options.PERCENT, default=95.0, metavar="P", help="Wet corner, default 95%.")
@options.conditions
@options.limit_options
@options.reference_option
@options.catalogue_options
@options.output_options
@click.pass_context
def command(
    ctx: click.Context,
    /,
    *,
    words: tuple[str, ...],
    catalogue_path: str | None,
    own: bool,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Tolerance a stack: exact corners, contributions, Monte Carlo, yield against limits, climate corners."""
    from stackdb.studies.tolerance import tolerance

    limits = options.take(asked, Limits)
    watched = asked["samples"] >= SHOW_PROGRESS_FROM and sys.stderr.isatty()
    with options.opened(catalogue_path, own=own) as catalogue:
        if watched:
            with click.progressbar(length=asked["samples"], label="drawing", file=sys.stderr) as bar:
                result = tolerance(
                    options.text_of(words), catalogue=catalogue, limits=limits, progress=bar.update, **asked
                )
        else:
            result = tolerance(options.text_of(words), catalogue=catalogue, limits=limits, **asked)
        options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
    if result.monte_carlo.interrupted:
        ctx.exit(130)
    ctx.exit(0 if result.met else 1)
