"""Numbers as screens print them: to the place of the second digit of their half-width, in units a person expects."""

from __future__ import annotations

from stackdb.quantities import Span, format_length, printed

CASES = {0.9: "9 of 10", 0.95: "19 of 20", 0.8: "4 of 5", 0.5: "1 of 2", 0.99: "99 of 100"}


def half(span: Span) -> float:
    """Half-width of a range."""
    return 0.5 * (span.high - span.low)


def value_and_range(span: Span, scale: float = 1.0) -> tuple[str, str]:
    """A value and its range as text, all to the same place."""
    scaled = Span(span.value * scale, span.low * scale, span.high * scale)
    h = half(scaled)
    if h <= 0.0:
        return f"{scaled.value:.4g}", ""
    return printed(scaled.value, h), f"{printed(scaled.low, h)} .. {printed(scaled.high, h)}"


def length_unit(metres: float) -> tuple[float, str]:
    """The scale and unit a length is read in: µm below 1 mm, else mm."""
    return (1e6, "µm") if 0.0 < metres < 0.9995e-3 else (1e3, "mm")


def length_and_range(span: Span) -> tuple[str, str]:
    """A length with its unit, and its range without."""
    scale, unit = length_unit(span.value)
    value, limits = value_and_range(span, scale)
    return f"{value} {unit}", limits


def thickness(span: Span) -> str:
    """A thickness with its tolerance: 1.80 ±0.10 mm, 150 -10 +20 µm, 125 µm."""
    scale, unit = length_unit(span.value)
    minus, plus = (span.value - span.low) * scale, (span.high - span.value) * scale
    if minus <= 0.0 and plus <= 0.0:
        return format_length(span.value)
    if abs(minus - plus) < 1e-6 * (minus + plus):
        return f"{printed(span.value * scale, minus)} ±{printed(minus, minus)} {unit}"
    h = 0.5 * (minus + plus)
    return f"{printed(span.value * scale, h)} -{printed(minus, h)} +{printed(plus, h)} {unit}"


def cases(level: float) -> str:
    """A level as odds."""
    return CASES.get(level, f"{100 * level:g} of 100")
