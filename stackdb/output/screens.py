"""Which screen draws which result."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.output.lines import Line
from stackdb.output.terminal import to_plain, width

if TYPE_CHECKING:
    from stackdb.results import Result

# class name of a result -> module that draws it; by name, so that drawing one loads no other
SCREENS = {
    "ComposeResult": "compose",
    "ShowResult": "material",
    "FindResult": "listing",
    "SourcesResult": "listing",
    "TouchResult": "touch",
    "CompareResult": "compare",
    "SizeResult": "size",
    "ToleranceResult": "tolerance",
    "ChangeResult": "change",
    "EdgesResult": "edges",
    "VerifyResult": "verify",
}


def draw(result: Result, columns: int | None = None) -> list[Line]:
    """The lines of a result for a width in characters, by default the terminal's."""
    from importlib import import_module

    name = type(result).__name__
    module = import_module(f"stackdb.output.{SCREENS[name]}")
    drawn: list[Line] = getattr(module, f"draw_{_snake(name)}")(result, columns or width())
    return drawn


def _snake(name: str) -> str:
    return "".join(f"_{c.lower()}" if c.isupper() else c for c in name).lstrip("_").removesuffix("_result")


def to_text(result: Result) -> str:
    """A result as the terminal shows it, without colour."""
    return to_plain(draw(result))
