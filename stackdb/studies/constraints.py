"""Recorded constraints: a rule's claim on a thickness or a material, printed beside every thickness and never traded away."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, NamedTuple

from stackdb.catalogue.folding import fold
from stackdb.quantities import format_length

if TYPE_CHECKING:
    from collections.abc import Sequence

    from stackdb.stack.layers import Constraint
    from stackdb.stack.resolve import ResolvedLayer

OWNER_NOTE = "the rule's owner decides compliance; this program does not"


class Claim(NamedTuple):
    """A constraint as it bears on a layer: what it asks, what the layer has, whether it is kept."""

    layer: int | None
    text: str
    kept: bool
    constraint: Constraint

    def to_dict(self) -> dict[str, Any]:
        """As JSON."""
        return {"layer": self.layer, "text": self.text, "kept": self.kept, **self.constraint._asdict()}


def _whose(c: Constraint) -> str:
    parts = [c.rule, f"clause {c.clause}" if c.clause else "", f"owner {c.owner}" if c.owner else ""]
    return ", ".join(p for p in parts if p)


def _concerns(c: Constraint, layer: ResolvedLayer) -> bool:
    if c.layer is not None:
        return c.layer == layer.number
    return c.material is not None and fold(c.material) in (
        fold(layer.name),
        layer.material.key if layer.material else "",
    )


def claims_on(constraints: Sequence[Constraint], layers: Sequence[ResolvedLayer]) -> tuple[Claim, ...]:
    """Every recorded constraint, held against the layers it concerns."""
    found = []
    for c in constraints:
        for layer in (x for x in layers if _concerns(c, x)):
            if c.banned:
                found.append(Claim(layer.number, f"{layer.name} is banned by {_whose(c)}", False, c))
            elif c.minimum_thickness_m is not None:
                least = c.minimum_thickness_m
                kept = layer.thickness.low >= least
                text = (
                    f"layer {layer.number}: at least {format_length(least)} by {_whose(c)};"
                    f" here {format_length(layer.thickness.low)} at the least"
                )
                found.append(Claim(layer.number, text, kept, c))
    return tuple(found)


def least_thickness(constraints: Sequence[Constraint], layer: ResolvedLayer) -> tuple[float, str] | None:
    """The largest recorded minimum thickness [m] that concerns a layer, and whose it is."""
    bounds = [
        (c.minimum_thickness_m, _whose(c))
        for c in constraints
        if c.minimum_thickness_m is not None and _concerns(c, layer)
    ]
    return max(bounds, default=None)
