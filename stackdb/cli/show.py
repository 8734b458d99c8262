"""``stackdb show``."""

from __future__ import annotations

from typing import Any

import click

from stackdb.cli import options


@click.command("show", epilog="Example: stackdb show PMMA --freq 60Hz,1kHz,1MHz")
@click.argument("words", nargs=-1, required=True, metavar="MATERIAL")
@click.option(
    "--freq",
    "frequencies_hz",
    type=options.FREQUENCIES,
    metavar="F[,F]",
    help="One frequency or several, default 100kHz.",
)
@click.option("--temp", "temperature_c", type=options.TEMPERATURE, metavar="T", help="Temperature, default 23C.")
@click.option("--humidity", "humidity_pct", type=options.PERCENT, metavar="P", help="Relative humidity, default 50%.")
@click.option("--level", type=options.LEVEL, metavar="P", help="How often ranges hold, default 0.9.")
@options.catalogue_options
@options.output_options
def command(
    *,
    words: tuple[str, ...],
    catalogue_path: str | None,
    own: bool,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Show a material: the recommended value with its range, grade and why; every record with its source."""
    from stackdb.evidence.report import show

    given = {name: value for name, value in asked.items() if value is not None}
    with options.opened(catalogue_path, own=own) as catalogue:
        result = show(options.text_of(words), catalogue=catalogue, **given)
        options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
