"""Is a touch seen: every way of touching a stack against a bare finger, against limits, with its way back to ground."""

from __future__ import annotations

from dataclasses import dataclass
from math import pi
from typing import TYPE_CHECKING, Any, NamedTuple, Unpack

from stackdb.errors import InputError
from stackdb.quantities import EPS0, Span, format_length
from stackdb.results import Edition, Limit, Result, Warned, at_least, at_most, sources_dict, span_dict
from stackdb.stack import firstorder
from stackdb.stack.resolve import ResolvedLayer, ResolvedStack, resolve
from stackdb.stack.stackfile import load
from stackdb.studies.asked import Asked, Request
from stackdb.studies.compose import Resolved, conditions_dict, edition_of, resolved, verdicts_dict
from stackdb.touch.cases import BARE, Case, Touched, default_cases, named_case, touched
from stackdb.touch.conduction import (
    DEFAULT_BLUR_M,
    conduction_verdict,
    continuous_conductor,
    sheet_resistance,
    smear_length,
)
from stackdb.touch.contact import Below, Field, Sizes, field_layers, resolve_below, solve_field, validity_verdict
from stackdb.touch.returnpath import EARTHED_FARAD, ReturnPath, change_with_return
from stackdb.touch.verdicts import (
    CAUTION,
    OK,
    OPEN,
    REFUSED,
    Verdict,
    Verdicts,
    half_width,
    percent,
    validity_without_sizes,
)

if TYPE_CHECKING:
    from collections.abc import Sequence
    from os import PathLike

    from stackdb.catalogue import Catalogue
    from stackdb.stack.layers import Stack

RETRANSMITS_PER_M2 = 30.5e-9  # F/m2: a published guard against retransmission, US 2011/0100727 A1, abstract
FLOATS_BELOW_FARAD = 30e-12  # a device of less capacitance to ground floats, for this warning; common practice
THICK_LIQUID_M = 1e-3  # a liquid thicker than this is a layer of complex permittivity, still never a series gap
GLOVE_CAUTION = "Gloves are protective equipment. If the signal is too small, change the panel, not the glove."
WATER_SIGNS = (
    "grounded by a bezel or a finger it acts like a finger; floating and wide it lowers a driven mutual node and raises its"
    " neighbours; a floating drop up to a few pitches wide raises the mutual signal, opposite to a finger"
)
SAFETY_CAUTION = "No safety function may rest on one touch; test wet, gloved and floating cases on the real device."


class FilmAnswer(NamedTuple):
    """What a conducting film on the cover does.

    Apparent touch F [-] by the layered solution and by the closed form of a thin cover (real part), the touch that remains 1 - F
    [-], smear length [m], sheet resistance [ohm/sq]. The F are None without a pad.
    """

    apparent_touch_real: float | None
    apparent_touch_imag: float | None
    closed_form_real: float | None
    remaining_touch: float | None
    smear_length_m: float
    sheet_ohm: float


class CaseResult(NamedTuple):
    """One way of touching. Numbers are None where a conductor on the cover, or a refusal, leaves none."""

    case: Case
    gap: Span | None
    capacitance_per_area: Span | None
    gap_ratio: Span | None
    signal_ratio: Span | None
    field: Field | None
    film: FilmAnswer | None
    signal_farad: Span | None
    counts: float | None
    snr: float | None
    verdicts: Verdicts
    limits: tuple[Limit, ...]

    @property
    def ratio(self) -> Span | None:
        """The ratio that limits use: of signals where sizes are known, else of gaps."""
        return self.signal_ratio or self.gap_ratio


class MatrixCell(NamedTuple):
    """A hand on a surface: ratio by gap [-] and what remains of it under a conducting film [-]."""

    hand: str
    surface: str
    gap_ratio: float | None
    text: str


@dataclass(frozen=True, slots=True)
class TouchResult(Result):
    """Every way of touching a stack."""

    read: Stack
    asked: Asked
    stack: ResolvedStack
    reference: str
    path: ReturnPath
    cases: tuple[CaseResult, ...]
    matrix: tuple[MatrixCell, ...]
    insight: str
    warnings: tuple[Warned, ...]
    sources: dict[str, Any]
    edition: Edition

    @property
    def met(self) -> bool:
        """Whether every limit is met in every case that is a touch."""
        return all(limit.met for case in self.cases for limit in case.limits)

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        device = self.path.device_farad
        return {
            "format": 1,
            "name": self.read.name,
            "revision": self.read.revision,
            "conditions": conditions_dict(self.asked.conditions),
            "level": self.asked.level,
            "reference": self.reference,
            "body_farad": self.path.body_farad,
            "device_farad": None if device == EARTHED_FARAD else device,
            "cases": [_case_dict(c) for c in self.cases],
            "matrix": [m._asdict() for m in self.matrix],
            "insight": self.insight,
            "limits": [{"case": c.case.name, **x._asdict()} for c in self.cases for x in c.limits],
            "cautions": [GLOVE_CAUTION, SAFETY_CAUTION],
            "warnings": [w._asdict() for w in self.warnings],
            "sources": self.sources,
            "catalogue": self.edition._asdict(),
        }


def _case_dict(c: CaseResult) -> dict[str, Any]:
    film = None
    if c.film is not None:
        film = c.film._asdict()
    return {
        "name": c.case.name,
        "group": c.case.group,
        "layers": [
            {"name": x.name, "thickness_m": span_dict(x.thickness), "permittivity": span_dict(x.permittivity)}
            for x in c.case.layers
        ],
        "air_equivalent_gap_m": span_dict(c.gap),
        "capacitance_per_area_farad_per_m2": span_dict(c.capacitance_per_area),
        "gap_ratio": span_dict(c.gap_ratio),
        "signal_ratio": span_dict(c.signal_ratio),
        "field": c.field.to_dict() if c.field else None,
        "film": film,
        "signal_farad": span_dict(c.signal_farad),
        "counts": c.counts,
        "snr": c.snr,
        "verdicts": verdicts_dict(c.verdicts),
        "remark": c.case.remark,
    }


class Frame(NamedTuple):
    """What every case is held against."""

    found: Resolved
    below: Below
    path: ReturnPath
    reference: ResolvedStack
    reference_tag: str
    reference_signal: float | None
    counts: float | None
    noise: float | None
    blur_m: float


def film_answer(film: ResolvedLayer, cover: ResolvedStack, sizes: Sizes, below: Below) -> FilmAnswer:
    """Smear and apparent touch of a conducting film on the cover; F needs a pad, and is nothing among driven neighbours."""
    sheet = sheet_resistance(film) or float("inf")
    plate = EPS0 / sum(x.air_equivalent_m for x in cover.layers)
    length = smear_length(frequency_hz=film.frequency_hz, sheet_ohm=sheet, capacitance_per_area=plate)
    if sizes.pad_m is None:
        return FilmAnswer(None, None, None, None, length, sheet)
    from stackdb.fields import films
    from stackdb.fields.kernel import Sheet

    admittance = films.sheet_admittance(
        conductivity_s_per_m=film.conductivity_s_per_m or 0.0,
        permittivity=film.permittivity.value,
        thickness_m=film.thickness.value,
        frequency_hz=film.frequency_hz,
    )
    layers = field_layers(cover.layers)
    sheet_film = Sheet(admittance, 2.0 * pi * film.frequency_hz)
    around = sizes.around or "grounded"
    liquid = film.thickness.value > THICK_LIQUID_M
    touch_like = films.apparent_touch(
        cover=layers,
        film_under=0,
        film=field_layers([film])[0] if liquid else sheet_film,
        pad_diameter_m=sizes.pad_m,
        around=around,
        below=below.layers,
        below_ending="ground" if below.ending == "driven" else below.ending,
    )
    parameter = films.thin_cover_parameter(
        cover=layers, admittance=admittance, frequency_hz=film.frequency_hz, pad_diameter_m=sizes.pad_m
    )
    closed = films.unbounded_film(parameter).real if around == "grounded" else None
    return FilmAnswer(touch_like.real, touch_like.imag, closed, 1.0 - touch_like.real, length, sheet)


def _film_verdicts(film: FilmAnswer, layer: ResolvedLayer, sizes: Sizes) -> Verdicts:
    smear = f"conductor, smears the touch over {format_length(float(f'{film.smear_length_m:.2g}'))}"
    if film.apparent_touch_real is None:
        conduction = f"{smear}; floating or grounded decides, give --pad for the apparent touch"
        return Verdicts(
            Verdict(REFUSED, f"{layer.name} is not summed as a dielectric layer"),
            Verdict(REFUSED, conduction),
            Verdict(OPEN, "pad not given"),
        )
    seen = f"an unbounded floating film looks like {percent(film.apparent_touch_real)} of a touch"
    if sizes.around == "driven":
        seen = "among driven neighbours an unbounded floating film changes nothing; grounded it looks like a touch"
    closed = ""
    if film.closed_form_real is not None and abs(film.closed_form_real - film.apparent_touch_real) > 0.02:
        closed = f"; the thin-cover form would say {percent(film.closed_form_real)}"
    return Verdicts(
        Verdict(REFUSED, f"{layer.name} is not summed as a dielectric layer"),
        Verdict(REFUSED, f"{smear}; {seen}, {percent(film.remaining_touch or 0.0)} remains"),
        Verdict(CAUTION, f"layered solution{closed}; {WATER_SIGNS}"),
    )


def _refused(case: Case) -> CaseResult:
    reason = case.remark or "refused"
    verdicts = Verdicts(Verdict(REFUSED, reason), Verdict(REFUSED, reason), Verdict(REFUSED, reason))
    return CaseResult(case, None, None, None, None, None, None, None, None, None, verdicts, ())


def _with_film(under: Touched, frame: Frame) -> CaseResult:
    cover = frame.found.stack
    film = under.film
    if film is None:
        return _refused(under.case)
    answer = film_answer(film, cover, frame.found.asked.sizes, frame.below)
    verdicts = _film_verdicts(answer, film, frame.found.asked.sizes)
    return CaseResult(under.case, None, None, None, None, None, answer, None, None, None, verdicts, ())


def _returned(field: Field, path: ReturnPath) -> float | None:
    if not field.asked:
        return None
    first = field.first
    return change_with_return(
        change_farad=first.change_farad,
        pad_finger_farad=first.pad_finger_farad,
        finger_total_farad=first.finger_total_farad,
        path=path,
        driven=first.around == "driven",
    )


def _signal(field: Field | None, gap: Span, path: ReturnPath) -> Span | None:
    """The change [F] with its range: the gap's own relative range, which no signal exceeds (it falls slower than 1/g)."""
    value = _returned(field, path) if field else None
    if value is None:
        return None
    return Span(value, value * gap.value / gap.high, value * gap.value / gap.low)


def _dielectric(gap: Span, ratio: Span | None, film: ResolvedLayer | None) -> Verdict:
    text = f"gap known to ±{percent(half_width(gap))}"
    if ratio is not None:
        text += f", {percent(ratio.value)} of the reference"
    if film is not None:
        text += f"; {film.name} conducts and counts as part of the finger"
    return Verdict(CAUTION if half_width(gap) > 0.15 or film is not None else OK, text)


def _summed(under: Touched, frame: Frame) -> CaseResult:
    """A way of touching that can be summed: gap, ratios, field, limits."""
    stack = under.stack
    if stack is None:
        return _refused(under.case)
    asked = frame.found.asked
    gap = firstorder.gap_span(stack, asked.level)
    form = firstorder.gap_form(frame.reference, frame.reference_tag).over(firstorder.gap_form(stack))
    inputs = {**firstorder.inputs_of(frame.reference, frame.reference_tag), **firstorder.inputs_of(stack)}
    gap_ratio = firstorder.ranged(form, inputs, asked.level)
    shares = firstorder.shares(stack.layers)
    field, validity = _field(stack, asked.sizes, frame.below, shares)
    signal = _signal(field, gap, frame.path)
    signal_ratio = None
    if signal is not None and frame.reference_signal:
        share = signal.value / frame.reference_signal
        signal_ratio = Span(share, share * gap_ratio.low / gap_ratio.value, share * gap_ratio.high / gap_ratio.value)
    ratio = signal_ratio or gap_ratio
    counts = frame.counts * ratio.value if frame.counts is not None else None
    limits = (
        *at_most("max-gap", asked.limits.max_gap_m, gap.value),
        *at_least("min-ratio", asked.limits.min_ratio, ratio.value),
        *at_least("min-signal", asked.limits.min_signal_farad, signal.value if signal else None),
    )
    return CaseResult(
        case=under.case,
        gap=gap,
        capacitance_per_area=firstorder.inverse(gap, EPS0),
        gap_ratio=gap_ratio,
        signal_ratio=signal_ratio,
        field=field,
        film=None,
        signal_farad=signal,
        counts=counts,
        snr=counts / frame.noise if counts is not None and frame.noise else None,
        verdicts=Verdicts(
            _dielectric(gap, gap_ratio, under.film),
            conduction_verdict(stack, frame.blur_m, asked.sizes.pad_m),
            validity,
        ),
        limits=limits if under.case.group == "hand" else (),
    )


def _field(stack: ResolvedStack, sizes: Sizes, below: Below, shares: tuple[float, ...]) -> tuple[Field | None, Verdict]:
    if not sizes.known:
        return None, validity_without_sizes(stack, shares)
    try:
        field = solve_field(stack, sizes, below)
    except InputError as error:
        return None, Verdict(OPEN, str(error))
    return field, validity_verdict(stack, field, sizes, shares)


def _answer(case: Case, frame: Frame) -> CaseResult:
    under = touched(case, frame.found.stack)
    if case.refused is not None:
        return _refused(case)
    return _with_film(under, frame) if under.stack is None else _summed(under, frame)


def _cases(catalogue: Catalogue, names: Sequence[str], cover: ResolvedStack) -> tuple[Case, ...]:
    if names:
        return tuple(named_case(catalogue, name, cover) for name in names)
    return tuple(c for c in default_cases(catalogue, cover) if c.refused is None)


def _insight(results: Sequence[CaseResult], reference_gap_m: float) -> str:
    """What costs most: the layer worn that takes the most points of the reference, and what its neighbour takes."""
    costs = []
    for r in results:
        if r.case.group != "hand" or r.gap is None:
            continue
        for x in r.case.layers:
            part = x.air_equivalent_m
            costs.append((100.0 * part / (reference_gap_m + part), x, r.case))
    if not costs:
        return ""
    points, layer, case = max(costs, key=lambda c: c[0])
    text = f"{format_length(layer.thickness.value)} of {layer.name} in the case {case.name} costs {points:.0f} points"
    inside = [(p, x) for p, x, c in costs if c.name != case.name and x.name == "air" and x.thickness.value >= 5e-5]
    if inside:
        p, x = max(inside, key=lambda c: c[0])
        wall = [(q, y) for q, y, c in costs if y.name != "air" and any(z is x for z in c.layers)]
        text += f"; {format_length(x.thickness.value)} of air inside a glove costs {p:.0f}"
        text += f", that glove itself {min(wall)[0]:.0f}" if wall else ""
    return text + "."


def _matrix(results: Sequence[CaseResult], frame: Frame) -> tuple[MatrixCell, ...]:
    """Hands by surfaces: the gaps of both added where the surface is a dielectric, what remains where it conducts."""
    cover = frame.found.stack
    base = sum(x.air_equivalent_m for x in frame.reference.layers)
    cells = []
    surfaces: list[CaseResult | None] = [None, *(r for r in results if r.case.group == "surface")]
    for hand in (r for r in results if r.case.group == "hand" and r.gap is not None):
        for surface in surfaces:
            name = "dry" if surface is None else surface.case.name
            if surface is not None and surface.film is not None:
                left = surface.film.remaining_touch
                text = "conducts" if left is None else f"{100 * left:.0f} % remains"
                cells.append(MatrixCell(hand.case.name, name, None, text))
                continue
            extra = 0.0 if surface is None else sum(x.air_equivalent_m for x in surface.case.layers)
            worn = hand.gap.value if hand.gap else 0.0
            ratio = base / (worn + extra)
            cells.append(MatrixCell(hand.case.name, name, ratio, percent(ratio)))
    return tuple(cells) if cover.layers else ()


def _warnings(frame: Frame, results: Sequence[CaseResult]) -> list[Warned]:
    found = []
    area = frame.found.stack.series.capacitance_per_area
    if area > RETRANSMITS_PER_M2 and frame.path.device_farad < FLOATS_BELOW_FARAD:
        text = (
            f"{area * 1e9:.1f} fF/mm2 on a device of {frame.path.device_farad * 1e12:g} pF to ground: a large contact may"
            " be sent on to other electrodes (retransmission); test it floating"
        )
        found.append(Warned("retransmission", None, text))
    if frame.path.device_farad != EARTHED_FARAD and not any(r.signal_farad for r in results):
        found.append(
            Warned("return-path-open", None, "without pad, finger and --around the return path is not counted")
        )
    recalled = sorted({x.name for r in results for x in r.case.layers if "recalled" in x.flags})
    if recalled:
        found.append(Warned("recalled", None, f"from memory alone: {', '.join(recalled)}"))
    return found


def touch(
    stack: str | PathLike[str] | Stack,
    *,
    cases: Sequence[str] = (),
    reference: str | PathLike[str] | Stack | None = None,
    body_farad: float | None = None,
    device_farad: float | None = None,
    counts: float | None = None,
    noise: float | None = None,
    blur_m: float | None = None,
    **request: Unpack[Request],
) -> TouchResult:
    """Answer for every way of touching a stack, against a bare finger on it or on a reference stack.

    ``request`` as in ``compose``; ``cases`` are names or inline stacks, by default all that are named; body and device
    capacitance to ground [F], the device earthed by default; counts and noise [-] measured on the reference. Raises InputError for
    what cannot be used; a conductor inside the stack itself is refused.
    """
    found = resolved(stack, **request)
    bad = next((x for x in found.stack.layers if continuous_conductor(x)), None)
    if bad is not None:
        text = f"{bad.name} is a continuous conductor above the sensor: no touch reaches it"
        raise InputError("conductor-in-path", text, "know its sheet resistance? write rs=", layer=bad.number)
    frame = _frame(found, reference, body_farad, device_farad, counts, noise)._replace(blur_m=blur_m or DEFAULT_BLUR_M)
    chosen = _cases(found.catalogue, cases or found.read.cases, found.stack)
    results = tuple(_answer(case, frame) for case in chosen)
    keys = [k for r in results for x in r.case.layers for k in x.sources] + [
        r.case.source for r in results if r.case.source
    ]
    keys += [k for x in found.stack.layers for k in x.sources]
    return TouchResult(
        read=found.read,
        asked=found.asked,
        stack=found.stack,
        reference="a bare finger on the same stack" if frame.reference_tag == "" else "a bare finger on the reference",
        path=frame.path,
        cases=results,
        matrix=_matrix(results, frame),
        insight=_insight(results, frame.reference.series.gap_m),
        warnings=tuple(_warnings(frame, results)),
        sources=sources_dict(found.catalogue, keys),
        edition=edition_of(found.catalogue),
    )


def _frame(
    found: Resolved,
    reference: Any,
    body_farad: float | None,
    device_farad: float | None,
    counts: float | None,
    noise: float | None,
) -> Frame:
    read, asked = found.read, found.asked
    below = resolve_below(found.catalogue, asked.sizes.below, asked.conditions, asked.level)
    default = ReturnPath()
    path = ReturnPath(
        next(x for x in (body_farad, read.body_farad, default.body_farad) if x is not None),
        next(x for x in (device_farad, read.device_farad, default.device_farad) if x is not None),
    )
    other = reference if reference is not None else read.reference
    tag, cover = "", found.stack
    if other is not None:
        tag = "reference"
        cover = resolve(found.catalogue, load(other), asked.conditions, level=asked.level)
    bare = touched(named_case(found.catalogue, BARE, cover), cover).stack or cover
    field, _ = _field(bare, asked.sizes, below, firstorder.shares(bare.layers))
    signal = _returned(field, path) if field else None
    measured = counts if counts is not None else read.counts
    return Frame(
        found, below, path, bare, tag, signal, measured, noise if noise is not None else read.noise, DEFAULT_BLUR_M
    )
