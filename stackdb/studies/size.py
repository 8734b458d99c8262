"""Solve a layer: the thickness, or the permittivity it would need, for a gap, an areal capacitance, a ratio, or a signal."""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt
from typing import TYPE_CHECKING, Any, NamedTuple, Unpack

from stackdb.errors import InputError
from stackdb.evidence.quantiles import two_sided
from stackdb.quantities import EPS0, Span, format_length
from stackdb.results import Edition, Result, Warned, sources_dict, span_dict
from stackdb.stack.resolve import ResolvedLayer, ResolvedStack, resolve
from stackdb.stack.series import Slab, series_gap
from stackdb.stack.stackfile import load
from stackdb.studies.asked import Asked, Request
from stackdb.studies.compose import Resolved, conditions_dict, edition_of, resolved
from stackdb.studies.constraints import Claim, claims_on, least_thickness
from stackdb.touch.conduction import forbids_sum
from stackdb.touch.contact import Below, resolve_below, solve_field

if TYPE_CHECKING:
    from collections.abc import Callable
    from os import PathLike

    from stackdb.stack.layers import Stack

MOST_THICKNESS_M = 0.05
LEAST_THICKNESS_M = 1e-6
MOST_PERMITTIVITY = 1e4


class Target(NamedTuple):
    """What is asked for: ``gap`` [m], ``areal-capacitance`` [F/m2], ``ratio`` [-] by gap, or ``signal`` [F] by the field solution."""

    kind: str
    value: float


class MarketThickness(NamedTuple):
    """A thickness on the market beside the solution, and what it gives."""

    thickness_m: float
    air_equivalent_gap_m: float
    meets: bool
    source: str


@dataclass(frozen=True, slots=True)
class SizeResult(Result):
    """The solved layer. Thickness or permittivity is None where nothing can reach the target; ``reason`` says what would."""

    read: Stack
    asked: Asked
    layer: ResolvedLayer
    target: Target
    thickness_m: Span | None
    permittivity: Span | None
    reachable: bool
    reason: str
    market: tuple[MarketThickness, ...]
    claims: tuple[Claim, ...]
    warnings: tuple[Warned, ...]
    sources: dict[str, Any]
    edition: Edition

    @property
    def met(self) -> bool:
        """Whether the target can be reached."""
        return self.reachable

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        return {
            "format": 1,
            "conditions": conditions_dict(self.asked.conditions),
            "level": self.asked.level,
            "layer": self.layer.number,
            "material": self.layer.name,
            "target": self.target._asdict(),
            "thickness_m": span_dict(self.thickness_m),
            "permittivity": span_dict(self.permittivity),
            "reachable": self.reachable,
            "reason": self.reason,
            "market": [m._asdict() for m in self.market],
            "constraints": [c.to_dict() for c in self.claims],
            "warnings": [w._asdict() for w in self.warnings],
            "sources": self.sources,
            "catalogue": self.edition._asdict(),
        }


def _others(stack: ResolvedStack, number: int) -> list[ResolvedLayer]:
    return [x for x in stack.layers if x.number != number]


def gap_with_thickness(stack: ResolvedStack, number: int, thickness_m: float) -> float:
    """The gap [m] of a stack whose layer has another thickness [m]."""
    slabs = [
        Slab(thickness_m if x.number == number else x.thickness.value, x.complex_permittivity) for x in stack.layers
    ]
    return series_gap(slabs).gap_m


def _absolute_u(stack: ResolvedStack, layer: ResolvedLayer, thickness_m: float) -> float:
    """Standard uncertainty [m] of a solved thickness: the other layers' errors seen through it, and its own permittivity's."""
    eps = layer.permittivity.value
    by_material: dict[str, float] = {layer.error_name: thickness_m}
    variance = 0.0
    for x in _others(stack, layer.number):
        part = eps * x.air_equivalent_m
        by_material[x.error_name] = by_material.get(x.error_name, 0.0) + part
        variance += (part * x.thickness_u) ** 2
    u = {x.error_name: x.permittivity_u for x in stack.layers}
    return sqrt(variance + sum((part * u[name]) ** 2 for name, part in by_material.items()))


def solve_thickness(stack: ResolvedStack, number: int, gap_m: float) -> tuple[float, float]:
    """Thickness [m] of a layer for a gap [m], and its standard uncertainty [m]; negative where the others are already too thick."""
    layer = stack.layers[number - 1]
    rest = sum(x.air_equivalent_m for x in _others(stack, number))
    per_metre = (1.0 / layer.complex_permittivity).real
    thickness = (gap_m - rest) / per_metre
    return thickness, _absolute_u(stack, layer, max(thickness, 0.0))


def solve_permittivity(stack: ResolvedStack, number: int, gap_m: float) -> float | None:
    """Permittivity [-] that a layer would need at its thickness for a gap [m]; None where the others are already too thick."""
    layer = stack.layers[number - 1]
    rest = sum(x.air_equivalent_m for x in _others(stack, number))
    left = gap_m - rest
    return layer.thickness.value / left if left > 0.0 else None


def _signal_at(found: Resolved, number: int, below: Below) -> Callable[[float], float]:
    def signal(thickness_m: float) -> float:
        changed = found.stack.layers[number - 1]
        layers = tuple(
            x._replace(thickness=Span(thickness_m, thickness_m, thickness_m)) if x.number == changed.number else x
            for x in found.stack.layers
        )
        return solve_field(found.stack._replace(layers=layers), found.asked.sizes, below).first.change_farad

    return signal


def thickness_for_signal(found: Resolved, number: int, signal_farad: float) -> float | None:
    """Thickness [m] at which the field solution gives a signal [F]; None where no thickness in range does."""
    from scipy.optimize import brentq

    below = resolve_below(found.catalogue, found.asked.sizes.below, found.asked.conditions, found.asked.level)
    signal = _signal_at(found, number, below)
    least = max(LEAST_THICKNESS_M, 2e-4 * (found.asked.sizes.pad_m or 0.0))
    if signal(least) < signal_farad or signal(MOST_THICKNESS_M) > signal_farad:
        return None
    return float(brentq(lambda t: signal(t) - signal_farad, least, MOST_THICKNESS_M, xtol=1e-8, rtol=1e-8))


def _market(found: Resolved, number: int, thickness_m: float, target_gap_m: float) -> tuple[MarketThickness, ...]:
    """The two sizes sold on either side of a thickness."""
    layer = found.stack.layers[number - 1]
    if layer.material is None:
        return ()
    sold: dict[float, str] = {}
    for row in found.catalogue.thicknesses(layer.material.key):
        if row.nominal_m is not None:
            sold.setdefault(row.nominal_m, row.source)
    below = sorted(t for t in sold if t <= thickness_m)[-2:]
    above = sorted(t for t in sold if t > thickness_m)[:2]
    rows = []
    for t in (*below, *above):
        gap = gap_with_thickness(found.stack, number, t)
        rows.append(MarketThickness(t, gap, gap <= target_gap_m * (1.0 + 1e-12), sold[t]))
    return tuple(rows)


def _target_gap(target: Target, reference_gap_m: float | None) -> float:
    if target.kind == "gap":
        return target.value
    if target.kind == "areal-capacitance":
        return EPS0 / target.value
    if reference_gap_m is None:
        raise InputError("reference-missing", "a ratio needs a stack to refer to", "add --reference STACK")
    return reference_gap_m / target.value


def _checked(found: Resolved, number: int, solve: str, target: Target) -> ResolvedLayer:
    if not 1 <= number <= len(found.stack.layers):
        raise InputError("layer-unknown", f"there is no layer {number}", f"layers are 1 to {len(found.stack.layers)}")
    if solve not in ("thickness", "permittivity"):
        raise InputError("word-unknown", f'"{solve}" is neither thickness nor permittivity')
    if target.value <= 0.0:
        raise InputError("out-of-range", f"the {target.kind} asked for is not above 0")
    if target.kind == "signal":
        if solve == "permittivity":
            raise InputError("not-solved", "a signal is solved for thickness", "use --solve thickness")
        if not found.asked.sizes.known or not found.asked.sizes.around:
            raise InputError("sizes-missing", "a signal needs --pad, --finger and --around")
    bad = next((x for x in found.stack.layers if forbids_sum(x)), None)
    if bad is not None:
        raise InputError("conductor-in-path", f"{bad.name} conducts: the stack has no gap to solve", layer=bad.number)
    return found.stack.layers[number - 1]


def size(
    stack: str | PathLike[str] | Stack,
    *,
    layer: int,
    target: Target,
    solve: str = "thickness",
    reference: str | PathLike[str] | Stack | None = None,
    **request: Unpack[Request],
) -> SizeResult:
    """Solve layer ``layer`` (from 1 at the touched side) for a target, within recorded bounds.

    ``request`` as in ``compose``; a ratio refers to ``reference`` by gap; a signal is solved by the field solution and is another
    target than a gap. Raises InputError for what cannot be solved at all; an empty range is an answer.
    """
    found = resolved(stack, **request)
    chosen = _checked(found, layer, solve, target)
    other = reference if reference is not None else found.read.reference
    reference_gap = None
    if other is not None:
        asked = found.asked
        reference_gap = resolve(found.catalogue, load(other), asked.conditions, level=asked.level).series.gap_m
    if solve == "permittivity":
        return _permittivity(found, chosen, target, _target_gap(target, reference_gap))
    if target.kind == "signal":
        thickness = thickness_for_signal(found, layer, target.value)
        if thickness is None:
            reason = "no thickness from 1 um to 50 mm gives this signal: another pad, material or bond would be needed"
            return _result(found, chosen, target, None, None, False, reason, ())
        return _thickness(found, chosen, target, thickness, gap_with_thickness(found.stack, layer, thickness))
    gap = _target_gap(target, reference_gap)
    thickness, _ = solve_thickness(found.stack, layer, gap)
    return _thickness(found, chosen, target, thickness, gap)


def _thickness(found: Resolved, layer: ResolvedLayer, target: Target, thickness_m: float, gap_m: float) -> SizeResult:
    rest = sum(x.air_equivalent_m for x in _others(found.stack, layer.number))
    if thickness_m <= 0.0:
        reason = (
            f"the other layers alone come to {format_length(rest)} of air, the target is {format_length(gap_m)}:"
            " thin them, fill air gaps, or raise their permittivity"
        )
        return _result(found, layer, target, None, None, False, reason, ())
    half = two_sided(found.asked.level) * _absolute_u(found.stack, layer, thickness_m)
    span = Span(thickness_m, max(0.0, thickness_m - half), thickness_m + half)
    market = _market(found, layer.number, thickness_m, gap_m)
    bound = least_thickness(found.read.constraints, layer)
    if bound is not None and thickness_m < bound[0]:
        reason = (
            f"empty: touch allows at most {format_length(thickness_m)}, {bound[1]} asks for at least"
            f" {format_length(bound[0])}; a higher permittivity, a thinner bond or a larger pad would open it"
        )
        return _result(found, layer, target, span, None, False, reason, market)
    reason = f"at most {format_length(thickness_m)} for this {target.kind}"
    if bound is not None:
        reason += f"; at least {format_length(bound[0])} by {bound[1]}"
    return _result(found, layer, target, span, None, True, reason, market)


def _permittivity(found: Resolved, layer: ResolvedLayer, target: Target, gap_m: float) -> SizeResult:
    needed = solve_permittivity(found.stack, layer.number, gap_m)
    if needed is None or needed > MOST_PERMITTIVITY:
        reason = "the other layers alone are too thick for the target: no permittivity of this layer reaches it"
        return _result(found, layer, target, None, None, False, reason, ())
    if needed < 1.0:
        reason = "any permittivity reaches the target: even air does"
        return _result(found, layer, target, None, Span(1.0, 1.0, 1.0), True, reason, ())
    u_other = _absolute_u(found.stack, layer._replace(level=layer.level), 0.0) / layer.thickness.value
    u = needed * sqrt(u_other**2 * (needed / layer.permittivity.value) ** 2 + layer.thickness_u**2)
    half = two_sided(found.asked.level) * u
    span = Span(needed, max(1.0, needed - half), needed + half)
    return _result(
        found, layer, target, None, span, True, f"at least {needed:.3g} at {format_length(layer.thickness.value)}", ()
    )


def _result(
    found: Resolved,
    layer: ResolvedLayer,
    target: Target,
    thickness: Span | None,
    permittivity: Span | None,
    reachable: bool,
    reason: str,
    market: tuple[MarketThickness, ...],
) -> SizeResult:
    warnings = []
    if target.kind in ("gap", "areal-capacitance", "ratio"):
        text = "equal gap is not equal signal: with pad and finger, ask for --signal"
        warnings.append(Warned("gap-not-signal", None, text))
    keys = [k for x in found.stack.layers for k in x.sources] + [m.source for m in market]
    return SizeResult(
        read=found.read,
        asked=found.asked,
        layer=layer,
        target=target,
        thickness_m=thickness,
        permittivity=permittivity,
        reachable=reachable,
        reason=reason,
        market=market,
        claims=claims_on(found.read.constraints, found.stack.layers),
        warnings=tuple(warnings),
        sources=sources_dict(found.catalogue, keys),
        edition=edition_of(found.catalogue),
    )
