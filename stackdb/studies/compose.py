"""Compose a stack and judge it: gap, effective permittivity, areal capacitance, ranges, three verdicts, limits."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, NamedTuple, Unpack

from stackdb.quantities import EPS0, Span
from stackdb.results import Edition, Limit, Result, Warned, at_least, at_most, sources_dict, span_dict
from stackdb.stack import firstorder
from stackdb.stack.resolve import ResolvedLayer, ResolvedStack, resolve
from stackdb.stack.stackfile import load
from stackdb.studies.asked import Asked, Request, asked_of, catalogue_of
from stackdb.studies.constraints import Claim, claims_on
from stackdb.touch.conduction import DEFAULT_BLUR_M, conduction_verdict, forbids_sum
from stackdb.touch.verdicts import Verdict, Verdicts, dielectric_verdict, validity_without_sizes

if TYPE_CHECKING:
    from os import PathLike

    from stackdb.catalogue import Catalogue
    from stackdb.stack.layers import Stack
    from stackdb.touch.contact import Field


class MeasureNext(NamedTuple):
    """The layer and input whose measurement would narrow the gap most, and its share of the variance [-]."""

    layer: int
    input: str
    share: float


@dataclass(frozen=True, slots=True)
class ComposeResult(Result):
    """What a stack comes to. Numbers are None where an answer would mislead; ``warnings`` says why."""

    read: Stack
    asked: Asked
    stack: ResolvedStack
    shares: tuple[float, ...]
    thickness_m: Span
    air_equivalent_gap_m: Span | None
    cover_name: str
    cover_equivalent_gap_m: Span | None
    effective_permittivity: Span | None
    capacitance_per_area: Span | None
    loss_tangent: float | None
    measure_next: MeasureNext | None
    reference: str | None
    gap_ratio: Span | None
    field: Field | None
    verdicts: Verdicts
    limits: tuple[Limit, ...]
    claims: tuple[Claim, ...]
    warnings: tuple[Warned, ...]
    sources: dict[str, Any]
    edition: Edition

    def to_frame(self) -> Any:
        """The layers as a pandas table, one row each."""
        import pandas as pd

        return pd.json_normalize(self.to_dict()["layers"], sep="_")

    @property
    def met(self) -> bool:
        """Whether every limit that was set is met."""
        return all(limit.met for limit in self.limits)

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        c = self.asked.conditions
        body: dict[str, Any] = {
            "format": 1,
            "name": self.read.name,
            "revision": self.read.revision,
            "conditions": conditions_dict(c),
            "level": self.asked.level,
            "layers": [layer_dict(x, s) for x, s in zip(self.stack.layers, self.shares, strict=True)],
            "thickness_m": span_dict(self.thickness_m),
            "air_equivalent_gap_m": span_dict(self.air_equivalent_gap_m),
            "cover_equivalent_gap_m": span_dict(self.cover_equivalent_gap_m),
            "cover": self.cover_name,
            "effective_permittivity": span_dict(self.effective_permittivity),
            "capacitance_per_area_farad_per_m2": span_dict(self.capacitance_per_area),
            "loss_tangent": self.loss_tangent,
            "measure_next": self.measure_next._asdict() if self.measure_next else None,
            "reference": self.reference,
            "gap_ratio": span_dict(self.gap_ratio),
        }
        if self.asked.sizes.known:
            body["field"] = self.field.to_dict() if self.field is not None else None
        body["verdicts"] = verdicts_dict(self.verdicts)
        body["limits"] = [limit._asdict() for limit in self.limits]
        body["constraints"] = [c.to_dict() for c in self.claims]
        body["warnings"] = [w._asdict() for w in self.warnings]
        body["sources"] = self.sources
        body["catalogue"] = self.edition._asdict()
        return body


def conditions_dict(conditions: Any) -> dict[str, float]:
    """Conditions as the contract writes them."""
    return {
        "frequency_hz": conditions.frequency_hz,
        "temperature_c": conditions.temperature_c,
        "humidity_pct": conditions.humidity_pct,
    }


def verdicts_dict(verdicts: Verdicts) -> dict[str, dict[str, str]]:
    """The three verdicts as the contract writes them."""
    return {name: {"state": v.state, "text": v.text} for name, v in verdicts._asdict().items()}


def layer_dict(layer: ResolvedLayer, share: float) -> dict[str, Any]:
    """A layer as the contract writes it."""
    return {
        "number": layer.number,
        "material": layer.material.key if layer.material else None,
        "name": layer.name,
        "thickness_m": span_dict(layer.thickness),
        "permittivity": span_dict(layer.permittivity),
        "loss_tangent": layer.loss_tangent,
        "air_equivalent_m": layer.air_equivalent_m,
        "share": share,
        "confidence": layer.confidence,
        "why": layer.why,
        "given": layer.given,
        "sources": list(layer.sources),
        "flags": list(layer.flags),
    }


def total_thickness(stack: ResolvedStack) -> Span:
    """Sum of the layers' thickness [m]: nominal, and both corners."""
    t = [x.thickness for x in stack.layers]
    return Span(sum(x.value for x in t), sum(x.low for x in t), sum(x.high for x in t))


def next_to_measure(stack: ResolvedStack) -> MeasureNext | None:
    """The input with the largest share of the gap's variance; a material's error stands at its first layer."""
    inputs = firstorder.inputs_of(stack)
    parts = firstorder.variance_parts(firstorder.gap_form(stack), inputs)
    total = sum(parts.values())
    if not total:
        return None
    key = max(parts, key=lambda k: parts[k])
    if key[0] == "thickness":
        return MeasureNext(int(key[2]), "thickness", parts[key] / total)
    number = next(x.number for x in stack.layers if firstorder.permittivity_key(x) == key)
    return MeasureNext(number, "permittivity", parts[key] / total)


def cover_gap(catalogue: Catalogue, stack: ResolvedStack, asked: Asked, as_material: str | None) -> tuple[str, Span]:
    """The gap as a thickness [m] of layer 1 or of a named material; a shared permittivity error cancels in part."""
    form = firstorder.gap_form(stack)
    inputs = firstorder.inputs_of(stack)
    if as_material is None:
        cover = stack.layers[0]
        key, eps, u, name = (
            firstorder.permittivity_key(cover),
            cover.permittivity.value,
            cover.permittivity_u,
            cover.name,
        )
    else:
        from stackdb.stack.layers import Layer, Thickness
        from stackdb.stack.resolve import resolve_layer

        layer = Layer(as_material, Thickness(1e-3, 1e-3, 1e-3))
        cover = resolve_layer(catalogue, layer, 1, asked.conditions, level=asked.level, source=asked.source)
        key, eps, u, name = (
            firstorder.permittivity_key(cover),
            cover.permittivity.value,
            cover.permittivity_u,
            cover.name,
        )
    slopes = dict(form.slopes)
    slopes[key] = slopes.get(key, 0.0) + 1.0
    return name, firstorder.ranged(firstorder.Form(form.value * eps, slopes), {**inputs, key: u}, asked.level)


def _warnings(stack: ResolvedStack) -> list[Warned]:
    found = []
    for layer in stack.layers:
        if forbids_sum(layer):
            text = f"{layer.name} conducts: it is not summed as a dielectric, so the stack has no gap"
            found.append(Warned("conductor-in-path", layer.number, text))
        if layer.loss_tangent is None and not layer.conductivity_s_per_m and not forbids_sum(layer):
            found.append(
                Warned("loss-unknown", layer.number, f"loss of {layer.name} not known; the whole loss is null")
            )
        if "recalled" in layer.flags:
            found.append(Warned("recalled", layer.number, f"the permittivity of {layer.name} rests on memory alone"))
        if "market-tolerance" in layer.flags:
            text = f"no tolerance typed for {layer.name}: the market's is used"
            found.append(Warned("market-tolerance", layer.number, text))
    return found


def whole_loss(stack: ResolvedStack) -> float | None:
    """Loss tangent of the series sum [-], None where a layer's loss is unknown."""
    known = all(
        x.loss_tangent is not None or x.conductivity_s_per_m is not None or not x.thickness.value for x in stack.layers
    )
    return stack.series.loss_tangent if known else None


def edition_of(catalogue: Catalogue, own: bool = False) -> Edition:
    """Edition and digest of the catalogue an answer stands on."""
    found = catalogue.edition()
    return Edition(found.edition, found.digest, own)


def _used_sources(stack: ResolvedStack) -> list[str]:
    keys = [key for layer in stack.layers for key in layer.sources]
    return keys + [x.thickness_source for x in stack.layers if x.thickness_source]


class Resolved(NamedTuple):
    """A stack read, its request and its numbers: what every study starts from."""

    catalogue: Catalogue
    read: Stack
    asked: Asked
    stack: ResolvedStack


def resolved(stack: str | PathLike[str] | Stack, **request: Unpack[Request]) -> Resolved:
    """Read, merge and resolve a stack; the way into the house for all studies. InputError says what cannot be used."""
    read = load(stack)
    asked = asked_of(read, request)
    opened = catalogue_of(request.get("catalogue"))
    numbers = resolve(opened, read, asked.conditions, level=asked.level, source=asked.source)
    return Resolved(opened, read, asked, numbers)


def ratio_of_gaps(reference: ResolvedStack, stack: ResolvedStack, level: float) -> Span:
    """Reference gap over this gap [-]: the parallel-plate signal ratio, with shared material errors cancelled."""
    form = firstorder.gap_form(reference, "reference").over(firstorder.gap_form(stack))
    inputs = {**firstorder.inputs_of(reference, "reference"), **firstorder.inputs_of(stack)}
    return firstorder.ranged(form, inputs, level)


def compose(
    stack: str | PathLike[str] | Stack,
    *,
    reference: str | PathLike[str] | Stack | None = None,
    as_material: str | None = None,
    blur_m: float | None = None,
    **request: Unpack[Request],
) -> ComposeResult:
    """Compose a stack into its gap, effective permittivity and areal capacitance, with ranges and verdicts.

    ``stack`` is text, a path or a Stack; ``request`` the catalogue, ``frequency_hz`` [Hz], ``temperature_c`` [degC],
    ``humidity_pct`` [%], ``level`` [-], ``source``, ``sizes`` and ``limits``, which default to the stack file's, else to 100 kHz,
    23 degC, 50 % and 0.9. Raises InputError for what cannot be used, FileError for a file.
    """
    found = resolved(stack, **request)
    other = reference if reference is not None else found.read.reference
    ratio = None
    if other is not None:
        against = resolve(
            found.catalogue, load(other), found.asked.conditions, level=found.asked.level, source=found.asked.source
        )
        ratio = ratio_of_gaps(against, found.stack, found.asked.level)
    return _composed(found, ratio, other, as_material, blur_m or DEFAULT_BLUR_M)


def _composed(
    found: Resolved, ratio: Span | None, reference: Any, as_material: str | None, blur_m: float
) -> ComposeResult:
    stack, asked = found.stack, found.asked
    shares = firstorder.shares(stack.layers)
    refused = any(forbids_sum(x) for x in stack.layers)
    gap = None if refused else firstorder.gap_span(stack, asked.level)
    following = None if refused else next_to_measure(stack)
    cover = (stack.layers[0].name, None) if refused else cover_gap(found.catalogue, stack, asked, as_material)
    field, validity = _validity(found.catalogue, stack, asked, shares, refused)
    ratio = None if refused else ratio
    checked = [
        *at_most("max-gap", asked.limits.max_gap_m, gap.value if gap else None),
        *at_least("min-ratio", asked.limits.min_ratio, ratio.value if ratio else None),
        *at_least("min-signal", asked.limits.min_signal_farad, field.signal_farad if field else None),
    ]
    return ComposeResult(
        read=found.read,
        asked=asked,
        stack=stack,
        shares=shares,
        thickness_m=total_thickness(stack),
        air_equivalent_gap_m=gap,
        cover_name=cover[0],
        cover_equivalent_gap_m=cover[1],
        effective_permittivity=None if refused else firstorder.effective_span(stack, asked.level),
        capacitance_per_area=firstorder.inverse(gap, EPS0) if gap else None,
        loss_tangent=None if refused else whole_loss(stack),
        measure_next=following,
        reference=None if reference is None else str(reference),
        gap_ratio=ratio,
        field=field,
        verdicts=Verdicts(
            dielectric_verdict(stack, gap, shares, following),
            conduction_verdict(stack, blur_m, asked.sizes.pad_m),
            validity,
        ),
        limits=tuple(checked),
        claims=claims_on(found.read.constraints, stack.layers),
        warnings=tuple(_warnings(stack)),
        sources=sources_dict(found.catalogue, _used_sources(stack)),
        edition=edition_of(found.catalogue),
    )


def _validity(
    catalogue: Catalogue, stack: ResolvedStack, asked: Asked, shares: tuple[float, ...], refused: bool
) -> tuple[Field | None, Verdict]:
    if not asked.sizes.known or refused:
        return None, validity_without_sizes(stack, shares)
    from stackdb.touch.contact import field_and_validity

    return field_and_validity(catalogue, stack, asked.sizes, shares)
