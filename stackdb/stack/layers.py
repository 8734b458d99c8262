"""What was asked: layers as typed, before any number of a material is known, and their text."""

from __future__ import annotations

from typing import NamedTuple

from stackdb.errors import InputError
from stackdb.quantities import Span
from stackdb.quantities.exact import Exact, exact_of

MOST_LAYERS = 1000


class Thickness(NamedTuple):
    """Nominal thickness [m] and the limits [m] that were typed for it; None where none were."""

    nominal_m: float
    low_m: float | None = None
    high_m: float | None = None

    @property
    def given(self) -> bool:
        """Whether a tolerance was typed."""
        return self.low_m is not None and self.high_m is not None


class Layer(NamedTuple):
    """A layer as typed.

    ``eps`` [-] frees it from the catalogue; ``fill`` is the solid volume fraction [-] of a porous layer, ``host``
    the material between, ``rule`` the mixing rule. ``text_span`` (start and end in the text it was read from) is
    where, not what: layers that differ only there are equal.
    """

    name: str
    thickness: Thickness
    eps: Span | None = None
    loss_tangent: float | None = None
    conductivity_s_per_m: float | None = None
    sheet_resistance_ohm: float | None = None
    fill: float | None = None
    host: str | None = None
    rule: str | None = None
    text_span: tuple[int, int] | None = None

    def __eq__(self, other: object) -> bool:
        return tuple(self)[:-1] == tuple(other)[:-1] if isinstance(other, Layer) else NotImplemented

    def __ne__(self, other: object) -> bool:
        return not self == other

    def __hash__(self) -> int:
        return hash(tuple(self)[:-1])


class Choice(NamedTuple):
    """One slot of a sweep: the layers to try there, None for no layer. Steps are written out as layers."""

    options: tuple[Layer | None, ...]


class Below(NamedTuple):
    """Layers under the electrode plane, and what ends them: ``open``, ``ground`` or ``driven``."""

    layers: tuple[Layer, ...]
    end: str


class Constraint(NamedTuple):
    """A rule's claim on a layer or a material: a least thickness [m], or a ban; with its owner and clause."""

    rule: str
    owner: str | None = None
    clause: str | None = None
    layer: int | None = None
    material: str | None = None
    minimum_thickness_m: float | None = None
    banned: bool = False
    note: str | None = None


class Stack(NamedTuple):
    """Layers from the touched surface down to the electrode, and what a stack file says beside them."""

    layers: tuple[Layer, ...]
    name: str | None = None
    revision: str | None = None
    frequency_hz: float | None = None
    temperature_c: float | None = None
    humidity_pct: float | None = None
    level: float | None = None
    max_gap_m: float | None = None
    min_ratio: float | None = None
    min_signal_farad: float | None = None
    reference: str | None = None
    cases: tuple[str, ...] = ()
    pad_m: float | None = None
    finger_m: float | None = None
    pitch_m: float | None = None
    around: str | None = None
    clearance_m: float | None = None
    below: str | None = None
    body_farad: float | None = None
    device_farad: float | None = None
    counts: float | None = None
    noise: float | None = None
    edition: str | None = None
    own: bool = False
    zones: tuple[tuple[str, str], ...] = ()
    constraints: tuple[Constraint, ...] = ()


def _length(metres: Exact, like: float) -> str:
    """An exact length [m] as text, in mm beside lengths of 1 mm and above, else in um."""
    power, unit = (3, "mm") if abs(like) >= 1e-3 else (6, "um")
    return metres.shifted(power).text() + unit if metres.digits else "0"


def length_text(metres: float) -> str:
    """A length [m] as text that reads back to the same float.

    >>> length_text(0.0018), length_text(1.5e-4)
    ('1.8mm', '150um')
    """
    return _length(exact_of(metres), metres)


def _spread_text(value: float, low: float, high: float) -> tuple[str, Exact, Exact]:
    """How three numbers can be typed: ``half`` or ``ends`` or ``sides``, with what is below and above the value."""
    middle, first, last = exact_of(value), exact_of(low), exact_of(high)
    minus, plus = middle.minus(first), last.minus(middle)
    if not minus.minus(plus).digits:
        return "half", minus, plus
    return ("ends" if first.middle(last).value == value else "sides"), minus, plus


def _thickness_text(t: Thickness) -> str:
    nominal = length_text(t.nominal_m)
    if t.low_m is None or t.high_m is None:
        return nominal
    form, minus, plus = _spread_text(t.nominal_m, t.low_m, t.high_m)
    if form == "ends":
        return f"{_length(exact_of(t.low_m), t.nominal_m)}..{_length(exact_of(t.high_m), t.nominal_m)}"
    below, above = _length(minus, t.nominal_m), _length(plus, t.nominal_m)
    return f"{nominal} tol={above}" if form == "half" else f"{nominal} tol=-{below}..+{above}"


def _eps_text(eps: Span) -> str:
    value = exact_of(eps.value).text()
    if eps.low == eps.high == eps.value:
        return value
    form, _, plus = _spread_text(*eps)
    if form == "half":
        return f"{value}+-{plus.text()}"
    if form == "sides":
        raise InputError("eps-uneven", f"eps={value} with {eps.low} to {eps.high} has no text", "centre the value")
    return f"{exact_of(eps.low).text()}..{exact_of(eps.high).text()}"


def layer_text(layer: Layer) -> str:
    """A layer as text that reads back to an equal layer; InputError where none can (an uneven range of ``eps``).

    >>> layer_text(Layer("pmma", Thickness(0.0018, 0.0017, 0.0019)))
    'pmma 1.8mm tol=0.1mm'
    """
    parts = [layer.name, _thickness_text(layer.thickness)]
    if layer.eps is not None:
        parts.append(f"eps={_eps_text(layer.eps)}")
    for key, value, unit in (
        ("tan", layer.loss_tangent, ""),
        ("sigma", layer.conductivity_s_per_m, "S/m"),
        ("rs", layer.sheet_resistance_ohm, "ohm/sq"),
        ("fill", layer.fill, ""),
    ):
        if value is not None:
            parts.append(f"{key}={exact_of(value).text()}{unit}")
    parts += [f"{key}={word}" for key, word in (("host", layer.host), ("rule", layer.rule)) if word is not None]
    return " ".join(parts)


def to_text(stack: Stack, separator: str = " / ") -> str:
    """The layers as text that reads back to the same layers, tolerances as typed or their equal.

    >>> to_text(Stack((Layer("PET film", Thickness(125e-6)), Layer("air", Thickness(0.0)))))
    'PET film 125um / air 0'
    """
    return separator.join(layer_text(layer) for layer in stack.layers)
