"""What every answer of the library shares: it prints as the terminal shows it, and turns into plain data."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, NamedTuple

if TYPE_CHECKING:
    from collections.abc import Iterable

    from stackdb.catalogue import Catalogue, Source
    from stackdb.quantities import Span


class Warned(NamedTuple):
    """Something the reader must know: a stable code, the layer it concerns, the text."""

    code: str
    layer: int | None
    text: str


class Limit(NamedTuple):
    """A limit the user set, what came out, and whether it is met; a missing number never meets one."""

    name: str
    limit: float
    value: float | None
    met: bool


class Edition(NamedTuple):
    """Which catalogue an answer stands on."""

    edition: str
    digest: str
    own: bool


class Result:
    """Base of the answers. ``str()`` is the terminal's text: the one place where a result reaches up to ``output``."""

    __slots__ = ()

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        raise NotImplementedError

    def __str__(self) -> str:
        from stackdb.output.screens import to_text

        return to_text(self)

    def _repr_html_(self) -> str:
        from html import escape

        return f"<pre>{escape(str(self))}</pre>"


def span_dict(span: Span | None) -> dict[str, float] | None:
    """An uncertain number as the contract writes it."""
    return None if span is None else {"value": span.value, "low": span.low, "high": span.high}


def source_dict(source: Source) -> dict[str, Any]:
    """A source as the contract writes it."""
    return {
        "kind": source.kind,
        "authors": source.authors,
        "title": source.title,
        "year": source.year,
        "publisher": source.publisher,
        "identifier": source.identifier,
        "anonymous": bool(source.anonymous),
        "note": source.note,
    }


def sources_dict(catalogue: Catalogue, keys: Iterable[str]) -> dict[str, Any]:
    """Every source key used, resolved."""
    wanted = sorted({key for key in keys if key})
    return {s.key: source_dict(s) for s in catalogue.sources(wanted)} if wanted else {}


def at_most(name: str, limit: float | None, value: float | None) -> list[Limit]:
    """An upper limit, if one was set."""
    return [] if limit is None else [Limit(name, limit, value, value is not None and value <= limit)]


def at_least(name: str, limit: float | None, value: float | None) -> list[Limit]:
    """A lower limit, if one was set."""
    return [] if limit is None else [Limit(name, limit, value, value is not None and value >= limit)]
