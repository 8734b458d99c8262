"""``stackdb sources``."""

from __future__ import annotations

import click

from stackdb.cli import options


@click.command("sources", epilog="Example: stackdb sources iapws-r8-97")
@click.argument("key", required=False)
@click.option("--catalogue", "catalogue_path", metavar="FILE", help="A catalogue file in place of the one shipped.")
@options.output_options
def command(*, key: str | None, catalogue_path: str | None, as_json: bool, get: str | None, ascii_only: bool) -> None:
    """List the sources, or one with what rests on it."""
    from stackdb.evidence.report import list_sources

    with options.opened(catalogue_path) as catalogue:
        options.emit(list_sources(key, catalogue=catalogue), as_json=as_json, get=get, ascii_only=ascii_only)
