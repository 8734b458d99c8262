"""The edge factor over finger diameter and cover thickness: where the parallel-plate number may stand for the truth."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Unpack

from stackdb.errors import InputError
from stackdb.quantities import Span
from stackdb.results import Result
from stackdb.studies.asked import Request
from stackdb.studies.compose import Resolved, resolved
from stackdb.touch.conduction import forbids_sum
from stackdb.touch.contact import resolve_below, solve_field

if TYPE_CHECKING:
    from os import PathLike

    from stackdb.stack.layers import Stack

FINGERS = (0.5, 0.75, 1.0, 1.5, 2.0, 3.0)  # of the pad's diameter
COVERS = (0.25, 0.5, 1.0, 1.5, 2.0, 3.0)  # of the layer's thickness


@dataclass(frozen=True, slots=True)
class EdgesResult(Result):
    """Edge factors [-] by cover thickness (rows) and finger diameter (columns)."""

    name: str
    pad_m: float
    around: str
    layer: int
    thicknesses_m: tuple[float, ...]
    fingers_m: tuple[float, ...]
    factors: tuple[tuple[float, ...], ...]

    @property
    def met(self) -> bool:
        """No limit is set here."""
        return True

    def to_dict(self) -> dict[str, Any]:
        """As JSON."""
        return {
            "format": 1,
            "material": self.name,
            "layer": self.layer,
            "pad_m": self.pad_m,
            "around": self.around,
            "thickness_m": list(self.thicknesses_m),
            "finger_m": list(self.fingers_m),
            "edge_factor": [list(row) for row in self.factors],
        }


def _factor(found: Resolved, number: int, thickness_m: float, finger_m: float) -> float:
    layers = tuple(
        x._replace(thickness=Span(thickness_m, thickness_m, thickness_m)) if x.number == number else x
        for x in found.stack.layers
    )
    asked = found.asked
    below = resolve_below(found.catalogue, asked.sizes.below, asked.conditions, asked.level)
    field = solve_field(found.stack._replace(layers=layers), asked.sizes._replace(finger_m=finger_m), below)
    return field.first.edge_factor


def edges(
    stack: str | PathLike[str] | Stack,
    *,
    layer: int = 1,
    **request: Unpack[Request],
) -> EdgesResult:
    """Map the edge factor of a stack over its finger's diameter and the thickness of one layer, for a pad among neighbours.

    ``request`` as in ``compose``; the sizes need the pad and the neighbours. Raises InputError otherwise.
    """
    found = resolved(stack, **request)
    pad, around = found.asked.sizes.pad_m, found.asked.sizes.around
    if pad is None or around is None:
        raise InputError("sizes-missing", "the map needs a pad and its neighbours", "add --pad and --around")
    if not 1 <= layer <= len(found.stack.layers):
        raise InputError("layer-unknown", f"there is no layer {layer}")
    bad = next((x for x in found.stack.layers if forbids_sum(x)), None)
    if bad is not None:
        raise InputError("conductor-in-path", f"{bad.name} conducts: the stack has no gap", layer=bad.number)
    chosen = found.stack.layers[layer - 1]
    thicknesses = tuple(share * chosen.thickness.value for share in COVERS)
    fingers = tuple(share * pad for share in FINGERS)
    factors = tuple(tuple(_factor(found, layer, t, f) for f in fingers) for t in thicknesses)
    return EdgesResult(chosen.name, pad, around, layer, thicknesses, fingers, factors)
