"""``stackdb size``."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import click

from stackdb import quantities
from stackdb.cli import options
from stackdb.errors import InputError
from stackdb.touch.contact import Sizes

if TYPE_CHECKING:
    from stackdb.studies.size import Target


def _areal(text: str) -> float:
    """fF/mm2 to F/m2."""
    number, unit = quantities.parsing.split_number(text)
    if unit not in ("fF/mm2", "fF/mm²"):
        raise InputError("unknown-unit", f'"{text[:40]}" should be in fF/mm2', f"write {number}fF/mm2")
    return float(number) * 1e-9


def _target(**given: float | None) -> Target:
    from stackdb.studies.size import Target

    kinds = {"gap_m": "gap", "areal": "areal-capacitance", "ratio": "ratio", "signal_farad": "signal"}
    named = [(kinds[k], v) for k, v in given.items() if v is not None]
    if len(named) != 1:
        raise InputError("one-target", "size needs one target", "one of --gap, --areal, --ratio, --signal")
    return Target(*named[0])


@click.command("size", epilog='Example: stackdb size "pmma-extruded 3mm / acrylic-oca 175um" --layer 1 --gap 0.48mm')
@options.stack_argument
@click.option("--layer", type=int, required=True, metavar="N", help="The layer to solve, from 1 at the touched side.")
@click.option(
    "--solve", type=click.Choice(["thickness", "permittivity"]), default="thickness", help="What to solve for."
)
@click.option("--gap", "gap_m", type=options.LENGTH, metavar="L", help="Target: the equivalent air gap.")
@click.option(
    "--areal", type=options.Quantity("areal", _areal), metavar="C", help="Target: capacitance per area, 26fF/mm2."
)
@click.option("--ratio", type=options.SHARE, metavar="P", help="Target: ratio to --reference, by gap.")
@click.option(
    "--signal", "signal_farad", type=options.CAPACITANCE, metavar="C", help="Target: signal, by the field solution."
)
@options.conditions
@options.reference_option
@options.size_options
@options.catalogue_options
@options.output_options
@click.pass_context
def command(
    ctx: click.Context,
    /,
    *,
    words: tuple[str, ...],
    gap_m: float | None,
    areal: float | None,
    ratio: float | None,
    signal_farad: float | None,
    catalogue_path: str | None,
    own: bool,
    as_json: bool,
    get: str | None,
    ascii_only: bool,
    **asked: Any,
) -> None:
    """Solve a layer's thickness, or the permittivity it would need, for a target; an empty range is an answer."""
    from stackdb.studies.size import size

    target = _target(gap_m=gap_m, areal=areal, ratio=ratio, signal_farad=signal_farad)
    sizes = options.take(asked, Sizes)
    with options.opened(catalogue_path, own=own) as catalogue:
        result = size(options.text_of(words), target=target, catalogue=catalogue, sizes=sizes, **asked)
        options.emit(result, as_json=as_json, get=get, ascii_only=ascii_only)
    ctx.exit(0 if result.met else 1)
