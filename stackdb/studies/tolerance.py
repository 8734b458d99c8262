"""What tolerances do to a stack: exact corners, first-order contributions, Monte Carlo, yield, and the climate's corners."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, NamedTuple, Unpack

from stackdb.errors import InputError
from stackdb.quantities import EPS0, Span
from stackdb.results import Limit, Result, Warned, at_least, at_most, sources_dict
from stackdb.stack import firstorder
from stackdb.stack.resolve import ResolvedLayer, ResolvedStack, resolve
from stackdb.studies.asked import Asked, Limits, Request
from stackdb.studies.compose import conditions_dict, edition_of, resolved

if TYPE_CHECKING:
    from collections.abc import Callable
    from os import PathLike

    from stackdb.catalogue import Catalogue
    from stackdb.results import Edition
    from stackdb.stack.layers import Stack
    from stackdb.studies.montecarlo import Drawn, MonteCarlo

MOST_SAMPLES = 10**10
FIRST_ORDER_OFF = 0.1  # of the range, from which the note says so
COLD_C, HOT_C, WET_PCT = -20.0, 60.0, 95.0  # common practice for an industrial panel; editable


class Corners(NamedTuple):
    """The least and the greatest value that limits and permittivity ranges allow."""

    low: float
    high: float


class Contribution(NamedTuple):
    """The share [-] of the variance that an input owns; a material's permittivity stands at its first layer."""

    layer: int
    input: str
    share: float


class FirstOrder(NamedTuple):
    """JCGM 100: value, standard uncertainty (both in the quantity's unit) and contributions, the largest first."""

    value: float
    standard_uncertainty: float
    contributions: tuple[Contribution, ...]


class Quantity(NamedTuple):
    """One quantity three ways."""

    corners: Corners
    first_order: FirstOrder
    drawn: Drawn
    span: Span


class ClimateCorner(NamedTuple):
    """The gap [m] at a corner of the climate, by the slopes in the catalogue."""

    name: str
    temperature_c: float
    humidity_pct: float
    gap_m: float


def _corner_permittivity(layers: tuple[ResolvedLayer, ...], sign: int) -> float:
    """Extreme effective permittivity: thick where eps_i is beyond the result, thin where not, until it stops moving.

    T/g is quasi-linear in each thickness, so at the extreme each sits at an end; the signs depend on the result itself.
    """
    eps = [x.permittivity.high if sign > 0 else x.permittivity.low for x in layers]
    found = sum(eps) / len(eps)
    for _ in range(100):
        t = [x.thickness.high if sign * (e - found) > 0 else x.thickness.low for x, e in zip(layers, eps, strict=True)]
        gap = sum(a / e for a, e in zip(t, eps, strict=True))
        before, found = found, sum(t) / gap if gap else found
        if found == before:
            break
    return found


def corners_of(stack: ResolvedStack) -> tuple[Corners, Corners, Corners]:
    """Exact corners of gap [m], areal capacitance [F/m2] and effective permittivity [-]."""
    gap = Corners(*firstorder.gap_corners(stack))
    areal = Corners(EPS0 / gap.high, EPS0 / gap.low if gap.low else float("inf"))
    effective = Corners(_corner_permittivity(stack.layers, -1), _corner_permittivity(stack.layers, +1))
    return gap, areal, effective


def first_order(stack: ResolvedStack, form: firstorder.Form) -> FirstOrder:
    """Standard uncertainty and contributions of a result to first order (JCGM 100:2008, 5.1.2)."""
    inputs = firstorder.inputs_of(stack)
    parts = firstorder.variance_parts(form, inputs)
    total = sum(parts.values())
    first = {firstorder.permittivity_key(x): x.number for x in reversed(stack.layers)}
    rows = []
    for key, part in sorted(parts.items(), key=lambda item: -item[1]):
        layer = int(key[2]) if key[0] == "thickness" else first[key]
        rows.append(Contribution(layer, key[0], part / total))
    return FirstOrder(form.value, form.value * total**0.5, tuple(rows))


@dataclass(frozen=True, slots=True)
class ToleranceResult(Result):
    """Corners, contributions, Monte Carlo and yield of a stack."""

    read: Stack
    asked: Asked
    stack: ResolvedStack
    gap: Quantity
    areal: Quantity
    effective: Quantity
    monte_carlo: MonteCarlo
    climate: tuple[ClimateCorner, ...]
    limits: tuple[Limit, ...]
    warnings: tuple[Warned, ...]
    sources: dict[str, Any]
    edition: Edition

    @property
    def met(self) -> bool:
        """Whether every limit that was set is met."""
        return all(limit.met for limit in self.limits)

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        return {
            "format": 1,
            "name": self.read.name,
            "revision": self.read.revision,
            "conditions": conditions_dict(self.asked.conditions),
            "level": self.asked.level,
            "air_equivalent_gap_m": self._quantity(self.gap),
            "capacitance_per_area_farad_per_m2": self._quantity(self.areal),
            "effective_permittivity": self._quantity(self.effective),
            "interrupted": self.monte_carlo.interrupted,
            "climate": [c._asdict() for c in self.climate],
            "limits": [x._asdict() for x in self.limits],
            "warnings": [w._asdict() for w in self.warnings],
            "sources": self.sources,
            "catalogue": self.edition._asdict(),
        }

    def _quantity(self, q: Quantity) -> dict[str, Any]:
        first = q.first_order
        return {
            "value": q.span.value,
            "low": q.span.low,
            "high": q.span.high,
            "corners": q.corners._asdict(),
            "gum": {
                "value": first.value,
                "standard_uncertainty": first.standard_uncertainty,
                "contributions": [c._asdict() for c in first.contributions],
            },
            "monte_carlo": {
                "samples": self.monte_carlo.samples,
                "seed": self.monte_carlo.seed,
                **q.drawn._asdict(),
                "yield": self.monte_carlo.within_limits,
            },
        }


def _climate(
    catalogue: Catalogue, read: Stack, asked: Asked, corners: tuple[tuple[str, float, float], ...]
) -> tuple[ClimateCorner, ...]:
    found = []
    for name, temperature_c, humidity_pct in corners:
        conditions = asked.conditions._replace(temperature_c=temperature_c, humidity_pct=humidity_pct)
        stack = resolve(catalogue, read, conditions, level=asked.level, source=asked.source)
        found.append(ClimateCorner(name, temperature_c, humidity_pct, stack.series.gap_m))
    return tuple(found)


def _accept(limits: Limits, reference_gap_m: float | None) -> Callable[[Any], Any] | None:
    """Which gaps are inside the limits that concern the gap; None when none is set."""
    most = limits.max_gap_m if limits.max_gap_m is not None else float("inf")
    if limits.min_ratio is not None and reference_gap_m is not None:
        most = min(most, reference_gap_m / limits.min_ratio)
    return None if most == float("inf") else lambda gap: gap <= most


def _off(name: str, span: Span, drawn: Drawn) -> list[Warned]:
    apart = max(abs(span.low - drawn.low), abs(span.high - drawn.high))
    width = drawn.high - drawn.low
    if not width or apart <= FIRST_ORDER_OFF * width:
        return []
    text = f"first order is off by {100 * apart / width:.0f} % of the range of the {name}: use the Monte Carlo range"
    return [Warned("first-order-off", None, text)]


def tolerance(
    stack: str | PathLike[str] | Stack,
    *,
    reference: str | PathLike[str] | Stack | None = None,
    samples: int = 100_000,
    seed: int = 1,
    thickness_shape: str = "rectangular",
    permittivity_shape: str = "lognormal",
    cold_c: float = COLD_C,
    hot_c: float = HOT_C,
    wet_pct: float = WET_PCT,
    progress: Callable[[int], None] | None = None,
    **request: Unpack[Request],
) -> ToleranceResult:
    """Corners, contributions and Monte Carlo of a stack, with its yield against the limits set.

    ``request`` as in ``compose``; ``samples`` draws with ``seed``; the climate's corners at ``cold_c`` and ``hot_c`` [degC] and
    ``wet_pct`` [%]. Raises InputError when a layer cannot be summed as a dielectric.
    """
    if not 1 <= samples <= MOST_SAMPLES:
        raise InputError("out-of-range", f"samples {samples} is outside 1 to {MOST_SAMPLES}")
    from stackdb.studies import montecarlo
    from stackdb.touch.conduction import forbids_sum

    found = resolved(stack, **request)
    layers, asked = found.stack, found.asked
    bad = next((x for x in layers.layers if forbids_sum(x)), None)
    if bad is not None:
        raise InputError(
            "conductor-in-path", f"{bad.name} conducts: the stack has no gap to tolerance", layer=bad.number
        )
    reference_gap = _reference_gap(found.catalogue, reference if reference is not None else found.read.reference, asked)
    drawn = montecarlo.run(
        layers,
        samples=samples,
        seed=seed,
        level=asked.level,
        thickness_shape=thickness_shape,
        permittivity_shape=permittivity_shape,
        accept=_accept(asked.limits, reference_gap),
        progress=progress,
    )
    gap, areal, effective = corners_of(layers)
    gap_form, eps_form = firstorder.gap_form(layers), firstorder.permittivity_form(layers)
    areal_form = firstorder.Form(EPS0 / gap_form.value, {k: -s for k, s in gap_form.slopes.items()})
    gap_span = firstorder.gap_span(layers, asked.level)
    gaps = Quantity(gap, first_order(layers, gap_form), drawn.gap_m, gap_span)
    areals = Quantity(
        areal, first_order(layers, areal_form), drawn.capacitance_per_area, firstorder.inverse(gap_span, EPS0)
    )
    effectives = Quantity(
        effective,
        first_order(layers, eps_form),
        drawn.effective_permittivity,
        firstorder.effective_span(layers, asked.level),
    )
    c = asked.conditions
    corners = (
        ("cold", cold_c, c.humidity_pct),
        ("hot", hot_c, c.humidity_pct),
        ("wet", c.temperature_c, wet_pct),
    )
    ratio = reference_gap / gap_span.high if reference_gap else None
    checked = at_most("max-gap", asked.limits.max_gap_m, gap_span.high)
    checked += at_least("min-ratio", asked.limits.min_ratio, ratio)
    checked += at_least("min-signal", asked.limits.min_signal_farad, None)
    warnings = _off("gap", gap_span, drawn.gap_m) + _off(
        "effective permittivity", effectives.span, drawn.effective_permittivity
    )
    if drawn.interrupted:
        warnings.append(Warned("interrupted", None, f"interrupted after {drawn.samples} of {samples} samples"))
    keys = [k for x in layers.layers for k in x.sources] + [
        x.thickness_source for x in layers.layers if x.thickness_source
    ]
    return ToleranceResult(
        read=found.read,
        asked=asked,
        stack=layers,
        gap=gaps,
        areal=areals,
        effective=effectives,
        monte_carlo=drawn,
        climate=_climate(found.catalogue, found.read, asked, corners),
        limits=tuple(checked),
        warnings=tuple(warnings),
        sources=sources_dict(found.catalogue, keys),
        edition=edition_of(found.catalogue),
    )


def _reference_gap(catalogue: Catalogue, reference: Any, asked: Asked) -> float | None:
    if reference is None:
        return None
    from stackdb.stack.stackfile import load

    return resolve(catalogue, load(reference), asked.conditions, level=asked.level).series.gap_m
