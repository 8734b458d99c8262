"""First-order ranges: results as linear forms in the logarithms of their inputs, errors kept by input.

Two layers of one material share its permittivity error, and two stacks share what stands in both, so a ratio of two
results is the difference of their forms and common errors cancel (JCGM 100:2008, 5.1.2 and 5.2).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import exp, sqrt
from typing import TYPE_CHECKING, NamedTuple

from stackdb.evidence.quantiles import two_sided
from stackdb.quantities import Span

if TYPE_CHECKING:
    from stackdb.stack.resolve import ResolvedLayer, ResolvedStack

Key = tuple[str, ...]


class Form(NamedTuple):
    """ln(result) to first order: the nominal value and d ln(result)/d ln(input) [-] by input."""

    value: float
    slopes: Mapping[Key, float]

    def over(self, other: Form) -> Form:
        """The form of the ratio of two results."""
        slopes = dict(self.slopes)
        for key, slope in other.slopes.items():
            slopes[key] = slopes.get(key, 0.0) - slope
        return Form(self.value / other.value, slopes)


def permittivity_key(layer: ResolvedLayer) -> Key:
    """The permittivity error of a material is one error wherever the material stands."""
    return ("permittivity", layer.error_name)


def thickness_key(layer: ResolvedLayer, tag: str) -> Key:
    """A layer's thickness error belongs to that layer of that stack."""
    return ("thickness", tag, str(layer.number))


def inputs_of(stack: ResolvedStack, tag: str = "") -> dict[Key, float]:
    """Standard uncertainty of the logarithm [-] of each input of a stack."""
    inputs: dict[Key, float] = {}
    for layer in stack.layers:
        inputs[permittivity_key(layer)] = layer.permittivity_u
        inputs[thickness_key(layer, tag)] = layer.thickness_u
    return inputs


def shares(layers: Sequence[ResolvedLayer]) -> tuple[float, ...]:
    """Share of the gap [-] of each layer."""
    parts = [layer.air_equivalent_m for layer in layers]
    total = sum(parts)
    return tuple(p / total if total else 0.0 for p in parts)


def gap_form(stack: ResolvedStack, tag: str = "") -> Form:
    """The equivalent gap: d ln g / d ln t_i = share_i, d ln g / d ln eps_i = -share_i."""
    slopes: dict[Key, float] = {}
    for layer, share in zip(stack.layers, shares(stack.layers), strict=True):
        key = permittivity_key(layer)
        slopes[key] = slopes.get(key, 0.0) - share
        slopes[thickness_key(layer, tag)] = share
    return Form(stack.series.gap_m, slopes)


def permittivity_form(stack: ResolvedStack, tag: str = "") -> Form:
    """The effective permittivity: d ln e / d ln t_i = t_i/T - share_i, d ln e / d ln eps_i = share_i."""
    slopes: dict[Key, float] = {}
    total = stack.series.thickness_m
    for layer, share in zip(stack.layers, shares(stack.layers), strict=True):
        key = permittivity_key(layer)
        slopes[key] = slopes.get(key, 0.0) + share
        slopes[thickness_key(layer, tag)] = layer.thickness.value / total - share
    return Form(stack.series.effective_permittivity, slopes)


def variance_parts(form: Form, inputs: Mapping[Key, float]) -> dict[Key, float]:
    """Variance of ln(result) [-] owed to each input."""
    return {key: (slope * inputs[key]) ** 2 for key, slope in form.slopes.items() if inputs[key] and slope}


def spread(form: Form, inputs: Mapping[Key, float]) -> float:
    """Standard uncertainty of ln(result) [-]."""
    return sqrt(sum(variance_parts(form, inputs).values()))


def ranged(form: Form, inputs: Mapping[Key, float], level: float, low: float = 0.0, high: float = float("inf")) -> Span:
    """The range of a result at ``level`` [-]: symmetric in its logarithm, cut at ``low`` and ``high``."""
    factor = exp(two_sided(level) * spread(form, inputs))
    return Span(
        form.value, min(form.value, max(form.value / factor, low)), max(form.value, min(form.value * factor, high))
    )


def gap_corners(stack: ResolvedStack) -> tuple[float, float]:
    """Thickness corners times the permittivity ranges: what no gap [m] can pass."""
    low = sum(x.thickness.low / x.permittivity.high for x in stack.layers)
    high = sum(x.thickness.high / x.permittivity.low for x in stack.layers)
    return low, high


def gap_span(stack: ResolvedStack, level: float) -> Span:
    """The equivalent gap [m] with its first-order range, a typed limit never passed."""
    return ranged(gap_form(stack), inputs_of(stack), level, *gap_corners(stack))


def effective_span(stack: ResolvedStack, level: float) -> Span:
    """The effective permittivity [-] with its range by its own derivatives, inside its layers' ranges."""
    low = min(x.permittivity.low for x in stack.layers)
    high = max(x.permittivity.high for x in stack.layers)
    return ranged(permittivity_form(stack), inputs_of(stack), level, low, high)


def inverse(span: Span, scale: float) -> Span:
    """The range of ``scale`` over an uncertain number."""
    return Span(scale / span.value, scale / span.high, scale / span.low)
