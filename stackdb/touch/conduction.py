"""Does anything in the path conduct at the drive frequency, so that it shields or smears instead of adding a gap?"""

from __future__ import annotations

from math import pi, sqrt
from typing import TYPE_CHECKING, NamedTuple

from stackdb.dielectrics.relaxation import relaxation_frequency
from stackdb.quantities import EPS0, format_frequency, format_length
from stackdb.touch.verdicts import CAUTION, OK, OPEN, REFUSED, Verdict

if TYPE_CHECKING:
    from stackdb.stack.resolve import ResolvedLayer, ResolvedStack

DEFAULT_BLUR_M = 5e-3  # common practice: about one electrode pitch; an editable default, never a limit
HARMLESS_SHARE = 0.2  # a smear below this share of the allowed blur is harmless (common practice)


class Smear(NamedTuple):
    """A film's sheet resistance [ohm/sq], the areal capacitance of both its sides [F/m2] and its smear length [m]."""

    sheet_ohm: float
    capacitance_per_area: float
    length_m: float


def smear_length(*, frequency_hz: float, sheet_ohm: float, capacitance_per_area: float) -> float:
    """Length [m] over which a resistive film spreads a touch: 1/sqrt(w R C'').

    Frequency [Hz], sheet resistance [ohm/sq], areal capacitance of both sides of the film [F/m2]; the diffusion length of the
    uniform RC line over sqrt 2.

    >>> round(1e3 * smear_length(frequency_hz=2e5, sheet_ohm=0.9e6, capacitance_per_area=2.5e-7), 1)
    1.9
    """
    return 1.0 / sqrt(2.0 * pi * frequency_hz * sheet_ohm * capacitance_per_area)


def sheet_limit(*, frequency_hz: float, blur_m: float, capacitance_per_area: float) -> float:
    """Least sheet resistance [ohm/sq] whose smear stays within a blur [m]: 1/(w C'' L^2), ``smear_length`` turned round."""
    return 1.0 / (2.0 * pi * frequency_hz * capacitance_per_area * blur_m**2)


def sheet_resistance(layer: ResolvedLayer) -> float | None:
    """Sheet resistance [ohm/sq] of a layer: typed, or one over conductivity times thickness; None if unknown."""
    if layer.sheet_resistance_ohm is not None:
        return layer.sheet_resistance_ohm
    if layer.conductivity_s_per_m and layer.thickness.value:
        return 1.0 / (layer.conductivity_s_per_m * layer.thickness.value)
    return None


def both_sides(stack: ResolvedStack, number: int) -> float:
    """Areal capacitance [F/m2] from a layer down to the electrode plus up to a finger on the touched surface.

    A film on the touched surface has no layer above it; nothing but air stands there, which is not counted.
    """
    above = sum(x.air_equivalent_m for x in stack.layers if x.number < number)
    below = sum(x.air_equivalent_m for x in stack.layers if x.number > number)
    return (EPS0 / below if below else 0.0) + (EPS0 / above if above else 0.0)


def smear_of(stack: ResolvedStack, layer: ResolvedLayer) -> Smear | None:
    """The smear of a layer whose sheet resistance is known; None if unknown, or if the layer stands alone."""
    sheet = sheet_resistance(layer)
    area = both_sides(stack, layer.number)
    if sheet is None or not area:
        return None
    length = smear_length(frequency_hz=layer.frequency_hz, sheet_ohm=sheet, capacitance_per_area=area)
    return Smear(sheet, area, length)


def carries(layer: ResolvedLayer) -> bool:
    """Whether a layer relaxes above the drive frequency, so that it conducts more than it polarises."""
    if not layer.conductivity_s_per_m:
        return False
    relaxes = relaxation_frequency(
        permittivity=layer.permittivity.value, conductivity_s_per_m=layer.conductivity_s_per_m
    )
    return relaxes > layer.frequency_hz


def continuous_conductor(layer: ResolvedLayer) -> bool:
    """A catalogue conductor (metal, transparent conductor) whose sheet resistance was not typed."""
    if layer.material is None or layer.sheet_resistance_ohm is not None:
        return False
    return layer.conducts == "yes" and layer.material.kind != "liquid"


def forbids_sum(layer: ResolvedLayer) -> bool:
    """Whether a layer must not be summed as a dielectric: a continuous conductor, or what conducts at the drive."""
    return continuous_conductor(layer) or carries(layer)


def format_sheet(ohm: float) -> str:
    """A sheet resistance in the unit a person expects.

    >>> format_sheet(1.3e5)
    '130 kohm/sq'
    """
    for scale, unit in ((1e9, "Gohm/sq"), (1e6, "Mohm/sq"), (1e3, "kohm/sq")):
        if ohm >= scale:
            return f"{ohm / scale:.2g} {unit}" if ohm < 99.5 * scale else f"{ohm / scale:.0f} {unit}"
    return f"{ohm:.2g} ohm/sq"


def _carrier(stack: ResolvedStack, layer: ResolvedLayer) -> Verdict:
    sigma = layer.conductivity_s_per_m or 0.0
    relaxes = relaxation_frequency(permittivity=layer.permittivity.value, conductivity_s_per_m=sigma)
    smear = smear_of(stack, layer)
    over = f", smears the touch over {format_length(smear.length_m)}" if smear else ""
    text = (
        f"layer {layer.number} ({layer.name}) conducts below {format_frequency(relaxes)}{over}; not a dielectric layer"
    )
    return Verdict(REFUSED, text)


def let_through(stack: ResolvedStack, layer: ResolvedLayer, smear: Smear, pad_m: float) -> float:
    """Share [-] of a touch on the cover that comes through a floating film inside it: layered solution, pad diameter [m]."""
    from stackdb.fields.films import touch_through
    from stackdb.fields.kernel import FieldLayer, Sheet

    layers = [x for x in stack.layers if x.thickness.value]
    cover = [FieldLayer(x.thickness.value, x.permittivity.value) for x in layers]
    above = sum(x.number < layer.number for x in layers)
    film = Sheet(1.0 / smear.sheet_ohm, 2.0 * pi * layer.frequency_hz)
    return touch_through(cover=cover, film_under=above, film=film, pad_diameter_m=pad_m).real


def _film(stack: ResolvedStack, layer: ResolvedLayer, blur_m: float, pad_m: float | None) -> Verdict | None:
    smear = smear_of(stack, layer)
    if smear is None:
        return None
    text = (
        f"layer {layer.number} ({layer.name}) of {format_sheet(smear.sheet_ohm)} smears the touch over"
        f" {format_length(smear.length_m)}, {format_length(blur_m)} allowed"
    )
    if pad_m is not None and any(x.number < layer.number for x in stack.layers):
        share = let_through(stack, layer, smear, pad_m)
        text += f"; floating, it lets {100 * share:.0f} % of a touch through to a pad of {format_length(pad_m)}"
    if smear.length_m > blur_m:
        return Verdict(REFUSED, text)
    return Verdict(CAUTION if smear.length_m > HARMLESS_SHARE * blur_m else OK, text)


def _unknown(stack: ResolvedStack, layer: ResolvedLayer, blur_m: float) -> Verdict:
    area = both_sides(stack, layer.number)
    text = f"layer {layer.number} ({layer.name}): sheet resistance unknown"
    if area:
        limit = sheet_limit(frequency_hz=layer.frequency_hz, blur_m=HARMLESS_SHARE * blur_m, capacitance_per_area=area)
        text += f"; harmless here above {format_sheet(limit)}; measure it, write rs="
    return Verdict(OPEN, text)


def _judge(stack: ResolvedStack, layer: ResolvedLayer, blur_m: float, pad_m: float | None) -> Verdict | None:
    if continuous_conductor(layer):
        text = f"layer {layer.number} ({layer.name}) is a continuous conductor above the sensor: it shields the touch"
        return Verdict(REFUSED, text)
    if carries(layer):
        return _carrier(stack, layer)
    film = _film(stack, layer, blur_m, pad_m)
    if film is not None:
        return film
    if layer.conducts == "unknown":
        return _unknown(stack, layer, blur_m)
    if layer.material is not None and layer.material.kind == "liquid" and layer.thickness.value:
        return Verdict(CAUTION, f"layer {layer.number} ({layer.name}) is a liquid: it couples sideways, test it")
    return None


def conduction_verdict(stack: ResolvedStack, blur_m: float = DEFAULT_BLUR_M, pad_m: float | None = None) -> Verdict:
    """The worst of the layers' judgements, all of that state in the text; ok when no layer conducts."""
    found = [v for v in (_judge(stack, layer, blur_m, pad_m) for layer in stack.layers) if v is not None]
    for state in (REFUSED, OPEN, CAUTION, OK):
        texts = [v.text for v in found if v.state == state]
        if texts:
            return Verdict(state, "; ".join(texts))
    return Verdict(OK, f"no layer conducts at {format_frequency(stack.conditions.frequency_hz)}")
