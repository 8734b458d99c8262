"""From what was asked to numbers: the only bridge between the catalogue and the physics."""

from __future__ import annotations

from collections.abc import Sequence
from math import log, sqrt
from typing import TYPE_CHECKING, NamedTuple

from stackdb.errors import InputError
from stackdb.evidence.judge import Conditions
from stackdb.evidence.material import Evidence, evidence_for
from stackdb.evidence.naming import material_named
from stackdb.evidence.quantiles import two_sided
from stackdb.quantities import Span
from stackdb.stack.series import SeriesGap, Slab, complex_permittivity, series_gap

if TYPE_CHECKING:
    from stackdb.catalogue import Catalogue, Material, ThicknessRecord
    from stackdb.stack.layers import Layer, Stack, Thickness

NEAREST_FACTOR = 2.0  # a market tolerance carries to a thickness within this factor


class ResolvedThickness(NamedTuple):
    """Thickness [m] with its limits, whether they were typed, and else whose tolerance they are."""

    span: Span
    typed: bool
    source: str | None


class ResolvedLayer(NamedTuple):
    """A layer with its numbers, ranges and sources. ``material`` is None where ``eps=`` freed it from the catalogue."""

    number: int
    name: str
    material: Material | None
    thickness: Span
    thickness_typed: bool
    thickness_source: str | None
    permittivity: Span
    loss_tangent: float | None
    conductivity_s_per_m: float | None
    sheet_resistance_ohm: float | None
    conducts: str  # "no", "yes" or "unknown"
    frequency_hz: float
    level: float
    confidence: str | None
    why: str
    sources: tuple[str, ...]
    flags: tuple[str, ...]
    evidence: Evidence | None

    @property
    def given(self) -> bool:
        """Whether the permittivity was typed."""
        return self.confidence is None

    @property
    def error_name(self) -> str:
        """Whose permittivity error this layer carries."""
        return self.material.key if self.material is not None and not self.given else f"given {self.name}"

    @property
    def permittivity_u(self) -> float:
        """Standard uncertainty of ln(permittivity) [-]: half the range over the normal deviate of its level."""
        return 0.5 * log(self.permittivity.high / self.permittivity.low) / two_sided(self.level)

    @property
    def thickness_u(self) -> float:
        """Standard uncertainty of thickness relative to itself [-], rectangular between its limits (JCGM 100, 4.3.7)."""
        if self.thickness.value == 0.0:
            return 0.0
        return (self.thickness.high - self.thickness.low) / (2.0 * sqrt(3.0)) / self.thickness.value

    @property
    def complex_permittivity(self) -> complex:
        """eps* [-] of the layer; an unknown loss counts as none, and the caller says so."""
        return complex_permittivity(
            permittivity=self.permittivity.value,
            loss_tangent=self.loss_tangent or 0.0,
            conductivity_s_per_m=self.conductivity_s_per_m or 0.0,
            frequency_hz=self.frequency_hz,
        )

    @property
    def air_equivalent_m(self) -> float:
        """The layer's part of the gap [m]: real part of thickness over complex permittivity."""
        return (self.thickness.value / self.complex_permittivity).real


class ResolvedStack(NamedTuple):
    """Layers with their numbers, and their series sum."""

    layers: tuple[ResolvedLayer, ...]
    conditions: Conditions
    level: float
    series: SeriesGap


def _rule_limits(record: ThicknessRecord, nominal_m: float) -> tuple[float, float] | None:
    """Lower and upper limit [m] of a thickness by a market record, or None where it states no tolerance."""
    sides = ((record.minus_m, record.minus_share), (record.plus_m, record.plus_share))
    if any(length is None and share is None for length, share in sides):
        return None
    minus = (record.minus_m or 0.0) + (record.minus_share or 0.0) * nominal_m
    plus = (record.plus_m or 0.0) + (record.plus_share or 0.0) * nominal_m
    return max(0.0, nominal_m - minus), nominal_m + plus


def _distance(record: ThicknessRecord, nominal_m: float) -> float | None:
    """How far, as a factor's logarithm, a market record is from a thickness; None beyond reach."""
    if record.nominal_m is not None:
        apart = abs(log(nominal_m / record.nominal_m))
        return apart if apart <= log(NEAREST_FACTOR) else None
    low, high = record.from_m or 0.0, record.to_m or float("inf")
    # A rule for the span stands behind a quoted size that matches exactly, before one that is only near.
    return 0.01 if low <= nominal_m < high else None


def _scaled(record: ThicknessRecord, nominal_m: float) -> tuple[float, float] | None:
    limits = _rule_limits(record, record.nominal_m or nominal_m)
    if limits is None or record.nominal_m is None:
        return limits
    scale = nominal_m / record.nominal_m
    return limits[0] * scale, limits[1] * scale


def market_limits(records: Sequence[ThicknessRecord], nominal_m: float) -> tuple[tuple[float, float], str] | None:
    """Limits [m] and source key of the market's tolerance nearest to a thickness [m]."""
    ranked = sorted(
        ((d, i) for i, r in enumerate(records) if (d := _distance(r, nominal_m)) is not None),
    )
    for _, i in ranked:
        limits = _scaled(records[i], nominal_m)
        if limits is not None:
            return limits, records[i].source
    return None


def resolve_thickness(catalogue: Catalogue, material: Material | None, thickness: Thickness) -> ResolvedThickness:
    """Typed limits as they stand; else the market's tolerance, else the kind's; a freed layer without any has none."""
    nominal = thickness.nominal_m
    if thickness.low_m is not None and thickness.high_m is not None:
        return ResolvedThickness(Span(nominal, thickness.low_m, thickness.high_m), True, None)
    if material is None or nominal == 0.0:
        return ResolvedThickness(Span(nominal, nominal, nominal), True, None)
    market = market_limits(catalogue.thicknesses(material.key), nominal)
    if market is not None:
        (low, high), source = market
        return ResolvedThickness(Span(nominal, low, high), False, source)
    default = catalogue.kind_default(material.kind)
    half = default.tolerance_share * nominal
    return ResolvedThickness(Span(nominal, nominal - half, nominal + half), False, default.source)


def _freed(layer: Layer, number: int, conditions: Conditions, level: float) -> ResolvedLayer:
    """A layer whose permittivity was typed: its name is a label."""
    eps = layer.eps
    if eps is None:
        raise InputError("no-permittivity", f'"{layer.name}" has no permittivity')
    t = layer.thickness
    low, high = t.low_m, t.high_m
    return ResolvedLayer(
        number=number,
        name=layer.name,
        material=None,
        thickness=Span(t.nominal_m, t.nominal_m if low is None else low, t.nominal_m if high is None else high),
        thickness_typed=True,
        thickness_source=None,
        permittivity=eps,
        loss_tangent=layer.loss_tangent,
        conductivity_s_per_m=layer.conductivity_s_per_m,
        sheet_resistance_ohm=layer.sheet_resistance_ohm,
        conducts="no",
        frequency_hz=conditions.frequency_hz,
        level=level,
        confidence=None,
        why="given",
        sources=(),
        flags=("given",),
        evidence=None,
    )


def resolve_layer(
    catalogue: Catalogue,
    layer: Layer,
    number: int,
    conditions: Conditions,
    *,
    level: float,
    source: str | None = None,
) -> ResolvedLayer:
    """A layer's numbers at the conditions asked. Errors carry the layer's number."""
    try:
        if layer.eps is not None:
            return _freed(layer, number, conditions, level)
        material = material_named(catalogue, layer.name)
        return _catalogued(catalogue, material, layer, number, conditions, level, source)
    except InputError as error:
        raise error.at_layer(number, layer.text_span) from None


def _catalogued(
    catalogue: Catalogue,
    material: Material,
    layer: Layer,
    number: int,
    conditions: Conditions,
    level: float,
    source: str | None,
) -> ResolvedLayer:
    found = evidence_for(catalogue, material, conditions, level=level, source=source)
    if layer.fill is not None:
        from stackdb.stack.mixture import mixed

        found = mixed(catalogue, layer, material, found, conditions, level)
    thickness = resolve_thickness(catalogue, material, layer.thickness)
    flags = [] if thickness.typed else ["market-tolerance"]
    if found.recalled_alone:
        flags.append("recalled")
    conductivity = layer.conductivity_s_per_m
    if conductivity is None and layer.sheet_resistance_ohm is None and layer.loss_tangent is None:
        conductivity = found.conductivity_s_per_m
    sheet = layer.sheet_resistance_ohm
    loss = layer.loss_tangent
    if loss is None and conductivity is None:
        loss = found.loss_tangent
    return ResolvedLayer(
        number=number,
        name=material.key,
        material=material,
        thickness=thickness.span,
        thickness_typed=thickness.typed,
        thickness_source=thickness.source,
        permittivity=found.permittivity,
        loss_tangent=loss,
        conductivity_s_per_m=conductivity,
        sheet_resistance_ohm=sheet,
        conducts=material.conducts,
        frequency_hz=conditions.frequency_hz,
        level=level,
        confidence=found.confidence,
        why=found.why,
        sources=found.sources,
        flags=tuple(flags),
        evidence=found,
    )


def resolve(
    catalogue: Catalogue,
    stack: Stack,
    conditions: Conditions,
    *,
    level: float = 0.9,
    source: str | None = None,
) -> ResolvedStack:
    """Numbers for every layer and their series sum; InputError names the layer that cannot be resolved."""
    layers = tuple(
        resolve_layer(catalogue, layer, number, conditions, level=level, source=source)
        for number, layer in enumerate(stack.layers, 1)
    )
    if not sum(layer.thickness.value for layer in layers):
        raise InputError("no-thickness", "the stack has no thickness", "give one layer a thickness above 0")
    series = series_gap([Slab(x.thickness.value, x.complex_permittivity) for x in layers])
    return ResolvedStack(layers, conditions, level, series)
