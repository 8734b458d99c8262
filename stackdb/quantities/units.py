"""The units that people type, each with its exact size in SI."""

from __future__ import annotations

from typing import NamedTuple

from stackdb.quantities.exact import Exact

ONE = Exact(1, 0)
PERCENT = Exact(1, -2)


class Quantity(NamedTuple):
    """What a number measures: its units with their size in SI, those to show, and two for an example."""

    name: str
    units: dict[str, Exact]
    shown: str
    examples: tuple[str, ...]


def _powers(**units: int) -> dict[str, Exact]:
    return {unit: Exact(1, power) for unit, power in units.items()}


_MICRO = ("\u00b5", "\u03bc")  # the micro sign and the Greek letter look alike
_OHM = ("\u03a9", "\u2126")  # so do the Greek letter and the ohm sign

LENGTH = Quantity(
    "a length",
    _powers(nm=-9, um=-6, mm=-3, cm=-2, m=0)
    | {sign + "m": Exact(1, -6) for sign in _MICRO}
    | {"in": Exact(254, -4), "mil": Exact(254, -7), "thou": Exact(254, -7)},
    "nm um mm cm m in mil thou",
    ("um", "mm"),
)
FREQUENCY = Quantity("a frequency", _powers(Hz=0, kHz=3, MHz=6, GHz=9), "Hz kHz MHz GHz", ("kHz", "MHz"))
TEMPERATURE = Quantity("a temperature", dict.fromkeys(("C", "°C", "\u2103", "K"), ONE), "C °C K", ("C",))
CAPACITANCE = Quantity("a capacitance", _powers(fF=-15, pF=-12, nF=-9), "fF pF nF", ("fF", "pF"))
CONDUCTIVITY = Quantity(
    "a conductivity",
    {"S/m": ONE, "mS/m": Exact(1, -3), "uS/cm": Exact(1, -4), "mS/cm": Exact(1, -1)}
    | {sign + "S/cm": Exact(1, -4) for sign in _MICRO},
    "S/m mS/m uS/cm mS/cm",
    ("S/m", "mS/cm"),
)
SHEET_RESISTANCE = Quantity(
    "a sheet resistance",
    {
        prefix + ohm + per: Exact(1, power)
        for prefix, power in (("", 0), ("k", 3), ("M", 6), ("G", 9))
        for ohm in ("ohm", *_OHM)
        for per in ("", "/sq", "/\u25a1")
    },
    "ohm/sq kohm/sq Mohm/sq",
    ("ohm/sq", "kohm/sq"),
)
AREAL_MASS = Quantity("a mass per area", {"g/m2": Exact(1, -3), "g/m²": Exact(1, -3)}, "g/m2", ("g/m2",))
DENSITY = Quantity("a density", {"g/cm3": Exact(1, 3), "g/cm³": Exact(1, 3)}, "g/cm3", ("g/cm3",))
PURE = Quantity("a pure number", {}, "", ())
SHARE = Quantity("a share", {"%": PERCENT}, "%", ("%",))
TOLERANCE = Quantity("a tolerance", LENGTH.units | {"%": PERCENT}, f"{LENGTH.shown} %", ("um", "mm", "%"))
