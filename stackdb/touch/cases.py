"""Ways of touching: each is itself a small stack on top of the cover, from the catalogue or written inline."""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

from stackdb.errors import InputError
from stackdb.stack.resolve import ResolvedLayer, ResolvedStack, resolve_layer
from stackdb.stack.series import Slab, series_gap
from stackdb.touch.conduction import carries

if TYPE_CHECKING:
    from collections.abc import Sequence

    from stackdb.catalogue import Catalogue

BARE = "bare"


class Case(NamedTuple):
    """A way of touching: its layers with their numbers, and what stands beside it in the catalogue."""

    name: str
    group: str
    layers: tuple[ResolvedLayer, ...]
    refused: str | None
    remark: str | None
    source: str | None


class Touched(NamedTuple):
    """A stack under a way of touching. ``stack`` is None where a conductor lies on the cover and no finger joins it."""

    case: Case
    stack: ResolvedStack | None
    film: ResolvedLayer | None


def _numbered(layers: Sequence[ResolvedLayer]) -> tuple[ResolvedLayer, ...]:
    """Numbers below 0, so that the layers of the cover keep theirs in every case."""
    count = len(layers)
    return tuple(x._replace(number=i - count) for i, x in enumerate(layers))


def _layers_of(catalogue: Catalogue, text: str, cover: ResolvedStack) -> tuple[ResolvedLayer, ...]:
    from stackdb.stack.grammar import parse_stack

    conditions, level = cover.conditions, cover.level
    return _numbered(
        [
            resolve_layer(catalogue, layer, number, conditions, level=level)
            for number, layer in enumerate(parse_stack(text).layers, 1)
        ]
    )


def named_case(catalogue: Catalogue, text: str, cover: ResolvedStack) -> Case:
    """A way of touching by its name in the catalogue, else as a stack written inline (``NAME: layers`` names it).

    Raises InputError when the text is neither.
    """
    found = catalogue.touch_case(text)
    if found is not None:
        layers = () if found.verdict == "refused" else _layers_of(catalogue, found.layers, cover)
        refused = found.remark if found.verdict == "refused" else None
        return Case(found.name, found.group, layers, refused, found.remark, found.source)
    if not any(c.isdigit() for c in text):
        names = ", ".join(c.key for c in catalogue.touch_cases())
        raise InputError("case-unknown", f'no way of touching "{text[:60]}"', f"there is {names}, or write its layers")
    name, colon, layers_text = text.partition(":")
    try:
        layers = _layers_of(catalogue, layers_text if colon else text, cover)
    except InputError as error:
        raise InputError(error.code, f'case "{text[:60]}": {error}') from None
    on_surface = bool(layers) and all(carries(x) or (x.material and x.material.kind == "liquid") for x in layers)
    return Case(name.strip() if colon else text.strip(), "surface" if on_surface else "hand", layers, None, None, None)


def default_cases(catalogue: Catalogue, cover: ResolvedStack) -> tuple[Case, ...]:
    """All named cases: hands first, bare before gloves, then by their gap; those refused last."""
    cases = []
    for row in catalogue.touch_cases():
        case = named_case(catalogue, row.key, cover)
        if not any(_outside_model(catalogue, x) for x in case.layers):
            cases.append(case)
    return tuple(sorted(cases, key=lambda c: (c.group != "hand", c.refused is not None, _gap(c))))


def _outside_model(catalogue: Catalogue, layer: ResolvedLayer) -> bool:
    """Whether a liquid or ice is asked where its recorded model does not reach, such as ice above freezing."""
    if layer.material is None or layer.material.kind != "liquid" or layer.evidence is None:
        return False
    return layer.evidence.recommended is not None and bool(catalogue.dispersions(layer.material.key))


def _gap(case: Case) -> float:
    return sum(x.air_equivalent_m for x in case.layers)


def touched(case: Case, cover: ResolvedStack) -> Touched:
    """The cover under a way of touching.

    What conducts on a hand (a glove wet with sweat) is part of the finger: only what lies under it counts. What conducts on the
    surface is a film, answered apart and never summed.
    """
    if case.refused is not None:
        return Touched(case, None, None)
    conducting = [i for i, x in enumerate(case.layers) if carries(x)]
    if conducting and case.group == "surface":
        return Touched(case, None, case.layers[conducting[0]])
    kept = case.layers[conducting[-1] + 1 :] if conducting else case.layers
    film = case.layers[conducting[-1]] if conducting else None
    layers = (*kept, *cover.layers)
    series = series_gap([Slab(x.thickness.value, x.complex_permittivity) for x in layers])
    return Touched(case, ResolvedStack(layers, cover.conditions, cover.level, series), film)
