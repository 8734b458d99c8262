"""Pad and finger on a resolved stack: the field solution, and what the parallel-plate number is worth."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, NamedTuple

from stackdb.errors import InputError
from stackdb.touch.verdicts import CAUTION, OK, OPEN, Verdict, record_notes

if TYPE_CHECKING:
    from collections.abc import Sequence

    from stackdb.catalogue import Catalogue
    from stackdb.evidence.judge import Conditions
    from stackdb.fields.discs import FieldResult
    from stackdb.fields.kernel import FieldLayer
    from stackdb.stack.resolve import ResolvedLayer, ResolvedStack

AROUND = ("alone", "driven", "grounded")
GOOD = 0.10  # the parallel-plate number within this of the truth may stand for it
RATIOS = 0.35  # within this it still ranks and gives ratios at like thickness


class Sizes(NamedTuple):
    """Pad and finger diameter, electrode pitch, clearance [m]; neighbours; layers below the electrode plane (text)."""

    pad_m: float | None = None
    finger_m: float | None = None
    pitch_m: float | None = None
    around: str | None = None
    clearance_m: float | None = None
    below: str | None = None

    @property
    def known(self) -> bool:
        """Whether a field solution is possible."""
        return self.pad_m is not None and self.finger_m is not None


class Below(NamedTuple):
    """What lies under the electrode plane: layers from it down, and what ends them."""

    layers: tuple[FieldLayer, ...] = ()
    ending: str = "open"


class Field(NamedTuple):
    """The field solution for the neighbours asked, or for all three kinds where none was named."""

    solutions: tuple[FieldResult, ...]
    asked: bool

    @property
    def first(self) -> FieldResult:
        """The solution that stands for the stack: that asked, else the most cautious (least change)."""
        return min(self.solutions, key=lambda s: s.change_farad)

    @property
    def signal_farad(self) -> float | None:
        """The change of capacitance [F] by the touch; None while the neighbours are not named."""
        return self.first.change_farad if self.asked else None

    def to_dict(self) -> dict[str, Any]:
        """One object where the neighbours were named, else one for each kind of neighbour."""
        if self.asked:
            return self.first.to_dict()
        return {s.around: s.to_dict() for s in self.solutions}


def field_layers(layers: Sequence[ResolvedLayer]) -> tuple[FieldLayer, ...]:
    """The layers as the kernel sees them, complex permittivity with loss."""
    from stackdb.fields.kernel import FieldLayer

    return tuple(FieldLayer(x.thickness.value, x.complex_permittivity) for x in layers if x.thickness.value)


def resolve_below(catalogue: Catalogue, text: str | None, conditions: Conditions, level: float) -> Below:
    """The layers under the electrode plane from their text, whose last word may be ``ground`` or ``driven``."""
    if text is None:
        return Below()
    from stackdb.stack.grammar import parse_below
    from stackdb.stack.resolve import resolve_layer

    parsed = parse_below(text)
    try:
        layers = [
            resolve_layer(catalogue, layer, number, conditions, level=level)
            for number, layer in enumerate(parsed.layers, 1)
        ]
    except InputError as error:
        raise InputError(error.code, f"below: {error}") from None
    return Below(field_layers(layers), parsed.end)


def solve_field(stack: ResolvedStack, sizes: Sizes, below: Below) -> Field:
    """The field solution of a stack for the sizes given. InputError where it cannot be solved."""
    from stackdb.fields.discs import solve

    if sizes.pad_m is None or sizes.finger_m is None:
        raise InputError("sizes-missing", "the field solution needs --pad and --finger")
    kinds = (sizes.around,) if sizes.around else AROUND
    cover = field_layers(stack.layers)
    solutions = tuple(
        solve(
            cover=cover,
            below=below.layers,
            below_ending=below.ending,
            pad_diameter_m=sizes.pad_m,
            finger_diameter_m=sizes.finger_m,
            around=kind,
            clearance_m=sizes.clearance_m,
        )
        for kind in kinds
    )
    return Field(solutions, sizes.around is not None)


def use_of(edge_factor: float) -> tuple[str, str]:
    """Verdict state and words for an edge factor [-]: what the gap may still be used for."""
    off = abs(edge_factor - 1.0)
    if off <= GOOD:
        return OK, "the gap may stand for absolute values"
    if off <= RATIOS:
        return CAUTION, "use the gap for ranking and for ratios at like thickness, the field solution for values"
    return CAUTION, "use the gap for ranking at like thickness only, the field solution for signals"


def _factor_text(solution: FieldResult) -> str:
    percent = 100.0 * (1.0 / solution.edge_factor - 1.0)
    high = f"{percent:.0f} % too high" if percent >= 0.0 else f"{-percent:.0f} % too low"
    return f"edge factor {solution.edge_factor:.2f} {_neighbours(solution.around)}: the plate number is {high}"


def _neighbours(around: str) -> str:
    return "for a pad alone" if around == "alone" else f"among {around} neighbours"


def validity_verdict(stack: ResolvedStack, field: Field, sizes: Sizes, shares: tuple[float, ...]) -> Verdict:
    """Whether the parallel-plate idea holds for this pad, finger and stack, by the computed edge factor."""
    notes = record_notes(stack, shares)
    if field.asked:
        state, use = use_of(field.first.edge_factor)
        texts = [f"{_factor_text(field.first)}; {use}"]
    else:
        state = CAUTION
        low, high = (f(s.edge_factor for s in field.solutions) for f in (min, max))
        texts = [f"neighbours not named: edge factor {low:.2f} to {high:.2f} (--around alone, driven or grounded)"]
    if sizes.pitch_m:
        texts.append(f"thickness over pitch {stack.series.thickness_m / sizes.pitch_m:.2f}")
    return Verdict(state, "; ".join([*texts, *notes]))


def field_and_validity(
    catalogue: Catalogue, stack: ResolvedStack, sizes: Sizes, shares: tuple[float, ...]
) -> tuple[Field | None, Verdict]:
    """The field solution and the verdict; where it cannot be solved, no field and the reason."""
    below = resolve_below(catalogue, sizes.below, stack.conditions, stack.level)
    try:
        field = solve_field(stack, sizes, below)
    except InputError as error:
        return None, Verdict(OPEN, str(error))
    return field, validity_verdict(stack, field, sizes, shares)
