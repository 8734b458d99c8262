"""Stacks against the first: what changed layer by layer, what it cost, and whether this evidence can tell them apart."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, NamedTuple, Unpack

from stackdb.errors import InputError
from stackdb.quantities import Span, format_frequency, format_length
from stackdb.results import Edition, Limit, Result, Warned, at_least, at_most, sources_dict, span_dict
from stackdb.stack import firstorder
from stackdb.studies.asked import Request
from stackdb.studies.compose import Resolved, conditions_dict, edition_of, resolved
from stackdb.studies.constraints import Claim, claims_on
from stackdb.touch.conduction import conduction_verdict, forbids_sum
from stackdb.touch.contact import Field, resolve_below, solve_field
from stackdb.touch.verdicts import REFUSED, Verdict

if TYPE_CHECKING:
    from collections.abc import Sequence
    from os import PathLike

    from stackdb.stack.layers import Stack
    from stackdb.stack.resolve import ResolvedLayer, ResolvedStack


class Difference(NamedTuple):
    """A layer's field that differs from the first stack, and what the layer's change does to the gap [m]."""

    stack: int
    layer: int
    field: str
    before: str | None
    after: str | None
    gap_change_m: float

    def to_dict(self) -> dict[str, Any]:
        """As the contract writes it."""
        return {
            "stack": self.stack,
            "layer": self.layer,
            "field": self.field,
            "from": self.before,
            "to": self.after,
            "gap_change_m": self.gap_change_m,
        }


class Compared(NamedTuple):
    """One stack: gap, ratios to the first with shared errors cancelled, whether they can be told apart."""

    name: str
    stack: ResolvedStack
    gap: Span | None
    gap_ratio: Span | None
    signal_ratio: float | None
    edge_share: float | None
    field: Field | None
    distinguishable: bool | None
    conduction: Verdict
    claims: tuple[Claim, ...]
    limits: tuple[Limit, ...]


@dataclass(frozen=True, slots=True)
class CompareResult(Result):
    """Stacks held against the first."""

    stacks: tuple[Compared, ...]
    differences: tuple[Difference, ...]
    conditions: Any
    level: float
    warnings: tuple[Warned, ...]
    sources: dict[str, Any]
    edition: Edition

    @property
    def met(self) -> bool:
        """Whether every limit is met by every stack."""
        return all(x.met for s in self.stacks for x in s.limits)

    @property
    def distinguishable(self) -> bool | None:
        """Whether every other stack can be told from the first on this evidence."""
        found = [s.distinguishable for s in self.stacks[1:]]
        return None if None in found else all(found)

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        return {
            "format": 1,
            "conditions": conditions_dict(self.conditions),
            "level": self.level,
            "stacks": [_stack_dict(s) for s in self.stacks],
            "differences": [d.to_dict() for d in self.differences],
            "distinguishable": self.distinguishable,
            "limits": [{"stack": s.name, **x._asdict()} for s in self.stacks for x in s.limits],
            "warnings": [w._asdict() for w in self.warnings],
            "sources": self.sources,
            "catalogue": self.edition._asdict(),
        }


def _stack_dict(s: Compared) -> dict[str, Any]:
    return {
        "name": s.name,
        "layers": [
            {
                "number": x.number,
                "name": x.name,
                "thickness_m": span_dict(x.thickness),
                "permittivity": span_dict(x.permittivity),
                "confidence": x.confidence,
            }
            for x in s.stack.layers
        ],
        "air_equivalent_gap_m": span_dict(s.gap),
        "gap_ratio": span_dict(s.gap_ratio),
        "signal_ratio": s.signal_ratio,
        "edge_share": s.edge_share,
        "field": s.field.to_dict() if s.field else None,
        "distinguishable": s.distinguishable,
        "conduction": {"state": s.conduction.state, "text": s.conduction.text},
        "constraints": [c.to_dict() for c in s.claims],
    }


def _aligned(first: Sequence[ResolvedLayer], other: Sequence[ResolvedLayer]) -> list[tuple[Any, Any]]:
    """Layers of two stacks side by side: equal names matched in order, the rest by place."""
    from difflib import SequenceMatcher

    pairs: list[tuple[Any, Any]] = []
    names = [[x.name for x in layers] for layers in (first, other)]
    for tag, a1, a2, b1, b2 in SequenceMatcher(a=names[0], b=names[1], autojunk=False).get_opcodes():
        old, new = list(first[a1:a2]), list(other[b1:b2])
        size = max(len(old), len(new)) if tag != "equal" else len(old)
        pairs += [(old[i] if i < len(old) else None, new[i] if i < len(new) else None) for i in range(size)]
    return pairs


def _texts(layer: ResolvedLayer | None) -> dict[str, str | None]:
    if layer is None:
        return {"material": None, "thickness": None, "permittivity": None}
    low, high = layer.thickness.low, layer.thickness.high
    thickness = format_length(layer.thickness.value)
    limits = "" if low == high else f" ({format_length(low)} .. {format_length(high)})"
    return {
        "material": layer.name,
        "thickness": thickness + limits,
        "permittivity": f"{layer.permittivity.value:.4g}",
    }


def differences_between(first: ResolvedStack, other: ResolvedStack, number: int) -> list[Difference]:
    """What differs, layer by layer, with the gap change [m] of the whole layer beside its first differing field."""
    found = []
    for old, new in _aligned(first.layers, other.layers):
        before, after = _texts(old), _texts(new)
        change = (new.air_equivalent_m if new else 0.0) - (old.air_equivalent_m if old else 0.0)
        for field in before:
            if before[field] != after[field]:
                place = new.number if new else old.number
                found.append(Difference(number, place, field, before[field], after[field], change))
                change = 0.0
    return found


def _name(found: Resolved, number: int) -> str:
    read = found.read
    if read.name:
        return f"{read.name} {read.revision}" if read.revision else read.name
    return read.revision or f"stack {number}"


def _solved(found: Resolved) -> Field | None:
    sizes = found.asked.sizes
    if not sizes.known:
        return None
    below = resolve_below(found.catalogue, sizes.below, found.asked.conditions, found.asked.level)
    try:
        return solve_field(found.stack, sizes, below)
    except InputError:
        return None


def _signal_ratio(first: Field | None, field: Field | None) -> float | None:
    if first is None or field is None or not (first.asked and field.asked):
        return None
    return field.first.change_farad / first.first.change_farad


def _compared(
    found: Resolved, number: int, reference: Resolved, reference_field: Field | None, field: Field | None
) -> Compared:
    stack, level = found.stack, found.asked.level
    refused = any(forbids_sum(x) for x in stack.layers) or any(forbids_sum(x) for x in reference.stack.layers)
    gap = None if refused else firstorder.gap_span(stack, level)
    ratio, apart = None, None
    if not refused:
        form = firstorder.gap_form(reference.stack, "first").over(firstorder.gap_form(stack, str(number)))
        inputs = {
            **firstorder.inputs_of(reference.stack, "first"),
            **firstorder.inputs_of(stack, str(number)),
        }
        ratio = firstorder.ranged(form, inputs, level)
        apart = not ratio.low <= 1.0 <= ratio.high
    signal = _signal_ratio(reference_field, field)
    used = signal if signal is not None else (ratio.value if ratio else None)
    limits = (
        *at_most("max-gap", found.asked.limits.max_gap_m, gap.value if gap else None),
        *at_least("min-ratio", found.asked.limits.min_ratio, used),
        *at_least("min-signal", found.asked.limits.min_signal_farad, field.signal_farad if field else None),
    )
    return Compared(
        name=_name(found, number),
        stack=stack,
        gap=gap,
        gap_ratio=ratio,
        signal_ratio=signal,
        edge_share=signal / ratio.value - 1.0 if signal is not None and ratio else None,
        field=field,
        distinguishable=apart if number > 1 else None,
        conduction=conduction_verdict(stack),
        claims=claims_on((*reference.read.constraints, *found.read.constraints), stack.layers),
        limits=limits,
    )


def _moves(found: Sequence[Resolved]) -> list[Warned]:
    """Records that had to be carried far to the common conditions."""
    warned = []
    for number, stack in enumerate(found, 1):
        for layer in stack.stack.layers:
            recommended = layer.evidence.recommended if layer.evidence else None
            used = [j for j in recommended.judged if j.used] if recommended else []
            if not used:
                continue
            nearest = min(used, key=lambda j: j.u or 0.0)
            frequency = nearest.record.frequency_hz
            if frequency is None:
                text = f"stack {number}, {layer.name}: no record states its frequency"
                warned.append(Warned("frequency-unknown", layer.number, text))
            elif abs(nearest.move.shift) > 0.03:
                text = (
                    f"stack {number}, {layer.name}: the nearest record, at {format_frequency(frequency)}, was moved by"
                    f" {100 * nearest.move.shift:+.0f} %"
                )
                warned.append(Warned("moved", layer.number, text))
    return warned


def _other_conditions(found: Sequence[Resolved]) -> list[Warned]:
    """Files written for other conditions than those they are compared at."""
    c = found[0].asked.conditions
    warned = []
    for number, f in enumerate(found[1:], 2):
        own = f.read.frequency_hz
        if own is not None and own != c.frequency_hz:
            text = (
                f"stack {number} is written for {format_frequency(own)}, compared at {format_frequency(c.frequency_hz)}"
            )
            warned.append(Warned("moved", None, text))
        if f.read.temperature_c is not None and f.read.temperature_c != c.temperature_c:
            text = f"stack {number} is written for {f.read.temperature_c:g} degC, compared at {c.temperature_c:g} degC"
            warned.append(Warned("moved", None, text))
    return warned


def compare(
    stacks: Sequence[str | PathLike[str] | Stack],
    **request: Unpack[Request],
) -> CompareResult:
    """Hold stacks against the first, all at the first one's conditions. Raises InputError for fewer than two.

    ``request`` as in ``compose``. Material errors that stand in both stacks cancel.
    """
    if len(stacks) < 2:
        raise InputError("too-few-stacks", "compare needs two stacks or more", 'quote each: "a 1mm" "b 2mm"')
    first = resolved(stacks[0], **request)
    c = first.asked.conditions
    common: Request = {
        **request,
        "catalogue": first.catalogue,
        "level": first.asked.level,
        "sizes": first.asked.sizes,
        "frequency_hz": c.frequency_hz,
        "temperature_c": c.temperature_c,
        "humidity_pct": c.humidity_pct,
    }
    found = [first, *(resolved(s, **common) for s in stacks[1:])]
    fields = [_solved(f) for f in found]
    compared = tuple(
        _compared(f, n, first, fields[0], field) for n, (f, field) in enumerate(zip(found, fields, strict=True), 1)
    )
    differences = [d for n, f in enumerate(found[1:], 2) for d in differences_between(first.stack, f.stack, n)]
    warnings = _moves(found) + _other_conditions(found)
    warnings += [Warned("refused", None, s.conduction.text) for s in compared if s.conduction.state == REFUSED]
    return CompareResult(
        stacks=compared,
        differences=tuple(differences),
        conditions=c,
        level=first.asked.level,
        warnings=tuple(warnings),
        sources=sources_dict(first.catalogue, [k for f in found for x in f.stack.layers for k in x.sources]),
        edition=edition_of(first.catalogue),
    )
