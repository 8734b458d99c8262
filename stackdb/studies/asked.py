"""What is asked of a stack: conditions, level, sizes and limits, from the call, else the stack file, else the defaults."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, NamedTuple, TypedDict

from stackdb.errors import InputError
from stackdb.evidence.judge import Conditions
from stackdb.touch.contact import Sizes

if TYPE_CHECKING:
    from stackdb.catalogue import Catalogue
    from stackdb.stack.layers import Stack

DEFAULT_FREQUENCY_HZ = 1e5
DEFAULT_TEMPERATURE_C = 23.0
DEFAULT_HUMIDITY_PCT = 50.0
DEFAULT_LEVEL = 0.9
FREQUENCY_RANGE_HZ = (1.0, 1e9)
TEMPERATURE_RANGE_C = (-100.0, 300.0)


class Limits(NamedTuple):
    """Greatest gap [m], least ratio to the reference [-], least signal [F]."""

    max_gap_m: float | None = None
    min_ratio: float | None = None
    min_signal_farad: float | None = None


class Request(TypedDict, total=False):
    """What every study may be asked beside its stack: the catalogue, conditions, level, source, sizes, limits.

    Frequency [Hz], temperature [degC], humidity [%] and level [-] default to the stack file's, else 100 kHz, 23 degC, 50 %, 0.9.
    """

    catalogue: Catalogue | None
    frequency_hz: float | None
    temperature_c: float | None
    humidity_pct: float | None
    level: float | None
    source: str | None
    sizes: Sizes
    limits: Limits


class Asked(NamedTuple):
    """Everything that is asked beside the layers."""

    conditions: Conditions
    level: float
    sizes: Sizes
    limits: Limits
    source: str | None


def _first(*values: Any) -> Any:
    return next((v for v in values if v is not None), None)


def _within(name: str, value: float, low: float, high: float, unit: str) -> float:
    if not low <= value <= high:
        raise InputError("out-of-range", f"{name} {value:g} {unit} is outside {low:g} to {high:g} {unit}")
    return value


def asked_of(stack: Stack, request: Request) -> Asked:
    """Merge what the call says with what the stack file says and the defaults; InputError for values out of range."""
    conditions = Conditions(
        _within(
            "frequency",
            _first(request.get("frequency_hz"), stack.frequency_hz, DEFAULT_FREQUENCY_HZ),
            *FREQUENCY_RANGE_HZ,
            "Hz",
        ),
        _within(
            "temperature",
            _first(request.get("temperature_c"), stack.temperature_c, DEFAULT_TEMPERATURE_C),
            *TEMPERATURE_RANGE_C,
            "C",
        ),
        _within(
            "humidity", _first(request.get("humidity_pct"), stack.humidity_pct, DEFAULT_HUMIDITY_PCT), 0.0, 100.0, "%"
        ),
    )
    chosen_level = _within("level", _first(request.get("level"), stack.level, DEFAULT_LEVEL), 0.5, 0.999, "")
    sizes = _merged_sizes(stack, request.get("sizes", Sizes()))
    limits = _merged_limits(stack, request.get("limits", Limits()))
    return Asked(conditions, chosen_level, sizes, limits, request.get("source"))


def _merged_sizes(stack: Stack, sizes: Sizes) -> Sizes:
    return Sizes(
        _first(sizes.pad_m, stack.pad_m),
        _first(sizes.finger_m, stack.finger_m),
        _first(sizes.pitch_m, stack.pitch_m),
        _first(sizes.around, stack.around),
        _first(sizes.clearance_m, stack.clearance_m),
        _first(sizes.below, stack.below),
    )


def _merged_limits(stack: Stack, limits: Limits) -> Limits:
    return Limits(
        _first(limits.max_gap_m, stack.max_gap_m),
        _first(limits.min_ratio, stack.min_ratio),
        _first(limits.min_signal_farad, stack.min_signal_farad),
    )


def catalogue_of(catalogue: Catalogue | None) -> Catalogue:
    """The catalogue given, else the one shipped."""
    if catalogue is not None:
        return catalogue
    from stackdb.catalogue import open_catalogue

    return open_catalogue()
