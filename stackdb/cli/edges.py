"""``stackdb edges``."""

from __future__ import annotations

from typing import Any

import click

from stackdb.cli import options
from stackdb.touch.contact import Sizes


@click.command(
    "edges", epilog='Example: stackdb edges "soda-lime-glass 3mm / acrylic-oca 150um" --pad 8mm --around grounded'
)
@options.stack_argument
@click.option("--layer", type=int, default=1, metavar="N", help="The layer whose thickness varies, default 1.")
@options.conditions
@options.size_options
@options.catalogue_options
@click.option("-o", "--picture", metavar="FILE", help="Also write the map as .svg or .png.")
@options.output_options
def command(
    *,
    words: tuple[str, ...],
    picture: str | None,
    catalogue_path: str | None,
    own: bool,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Map the edge factor over finger diameter and thickness: where the parallel-plate number may stand for the truth."""
    from stackdb.studies.edges import edges

    sizes = options.take(asked, Sizes)
    with options.opened(catalogue_path, own=own) as catalogue:
        result = edges(options.text_of(words), catalogue=catalogue, sizes=sizes, **asked)
    if picture is not None:
        from stackdb.output.edges import save_picture

        save_picture(result, picture)
    options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
