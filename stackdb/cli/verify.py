"""``stackdb verify``."""

from __future__ import annotations

import click

from stackdb.cli import options


@click.command("verify", epilog="Example: stackdb verify --calibration")
@click.option("--calibration", is_flag=True, help="Leave one source out of every material and count.")
@click.option("--catalogue", "catalogue_path", metavar="FILE", help="A catalogue file in place of the one shipped.")
@options.output_options
@click.pass_context
def command(
    ctx: click.Context,
    /,
    *,
    calibration: bool,
    catalogue_path: str | None,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
) -> None:
    """Check the catalogue: integrity, sources, floors, digest; with --calibration, whether its ranges hold."""
    from stackdb.evidence.verify import verify

    with options.opened(catalogue_path) as catalogue:
        result = verify(catalogue, calibration=calibration)
        options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
    ctx.exit(0 if result.met else 1)
