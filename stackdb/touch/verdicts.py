"""The three verdicts: dielectric, conduction, validity. Each text holds the number that decided it."""

from __future__ import annotations

from math import exp, log, log10
from typing import TYPE_CHECKING, NamedTuple

from stackdb.quantities import Span, format_frequency

if TYPE_CHECKING:
    from stackdb.stack.resolve import ResolvedLayer, ResolvedStack

OK, CAUTION, REFUSED, OPEN = "ok", "caution", "refused", "open"
WIDE = 0.15  # a gap known worse than this is a caution
TELLING_SHARE = 0.10  # a layer of less than this share does not decide a verdict
FAR_DECADES = 1.0
FAR_KELVIN = 15.0


class Verdict(NamedTuple):
    """A state (ok, caution, refused, open) and the text that holds the number which decided it."""

    state: str
    text: str


class Verdicts(NamedTuple):
    """The three that come with every stack."""

    dielectric: Verdict
    conduction: Verdict
    validity: Verdict


def half_width(span: Span) -> float:
    """Relative half-width [-] of a range, symmetric in its logarithm."""
    return exp(0.5 * log(span.high / span.low)) - 1.0


def percent(share: float) -> str:
    """A share as whole percent, one place below three."""
    value = 100.0 * share
    return f"{value:.1f} %" if value < 2.95 else f"{value:.0f} %"


def dielectric_verdict(
    stack: ResolvedStack, gap: Span | None, shares: tuple[float, ...], dominant: tuple[int, str, float] | None
) -> Verdict:
    """How well the gap is known, what limits it, and which layers rest on memory or weak evidence.

    ``dominant`` is the layer number, the input and its share of the variance.
    """
    if gap is None:
        return Verdict(REFUSED, "no gap: a conductor in the path is not a dielectric layer")
    width = half_width(gap)
    reasons = []
    for layer, share in zip(stack.layers, shares, strict=True):
        if share < TELLING_SHARE or layer.confidence not in ("weak", "guess"):
            continue
        ground = "rests on memory alone" if "recalled" in layer.flags else f"is a {layer.confidence} figure"
        reasons.append(f"layer {layer.number} {ground}")
    text = f"gap known to ±{percent(width)}" + (f", but {' and '.join(reasons)}" if reasons else "")
    if dominant is not None and width > 0.0:
        number, name, share = dominant
        text += f"; {percent(share)} of that variance is layer {number}'s {name}"
    return Verdict(CAUTION if reasons or width > WIDE else OK, text)


def _frequency_distance(layer: ResolvedLayer) -> tuple[float, float] | None:
    """Decades from the nearest used record, and that record's frequency [Hz]; None without any stated frequency."""
    found = layer.evidence.recommended if layer.evidence else None
    if found is None:
        return None
    stated = [j.record.frequency_hz for j in found.judged if j.used and j.record.frequency_hz]
    if not stated:
        return None
    nearest = min(stated, key=lambda f: abs(log10(f / layer.frequency_hz)))
    return abs(log10(nearest / layer.frequency_hz)), nearest


def _temperature_distance(layer: ResolvedLayer, temperature_c: float) -> float:
    """Kelvin to the nearest used record's temperature, 20 to 25 degC where none is printed."""
    found = layer.evidence.recommended if layer.evidence else None
    if found is None:
        return 0.0
    used = [j.record.temperature_c for j in found.judged if j.used]
    return min((abs((22.5 if t is None else t) - temperature_c) for t in used), default=0.0)


def _unknown_direction(layer: ResolvedLayer) -> bool:
    found = layer.evidence.recommended if layer.evidence else None
    if found is None or layer.material is None or layer.material.kind != "film":
        return False
    return all(j.record.direction == "unknown" for j in found.judged if j.used)


def record_notes(stack: ResolvedStack, shares: tuple[float, ...]) -> list[str]:
    """What the records of telling layers cannot carry: frequency and temperature far off, direction unknown."""
    notes = []
    for layer, share in zip(stack.layers, shares, strict=True):
        if share < TELLING_SHARE or layer.evidence is None or layer.evidence.recommended is None:
            continue
        far = _frequency_distance(layer)
        if far is None:
            notes.append(f"layer {layer.number}: no record states its frequency")
        elif far[0] > FAR_DECADES:
            notes.append(
                f"layer {layer.number}: nearest record {far[0]:.1f} decades away, at {format_frequency(far[1])}"
            )
        kelvin = _temperature_distance(layer, stack.conditions.temperature_c)
        if kelvin > FAR_KELVIN:
            notes.append(f"layer {layer.number}: nearest record {kelvin:.0f} K away")
        if _unknown_direction(layer):
            notes.append(f"layer {layer.number}: field direction of its records unknown")
    return notes


def validity_without_sizes(stack: ResolvedStack, shares: tuple[float, ...]) -> Verdict:
    """Open: without pad and finger the worth of the parallel-plate number cannot be computed."""
    notes = record_notes(stack, shares)
    text = "pad and finger not given: use ratios, not picofarads"
    return Verdict(OPEN, "; ".join([text, *notes]))
