"""Text to SI numbers and back: lengths, frequencies, temperatures, tolerances, and the digits a number deserves."""

from stackdb.quantities.parsing import (
    parse_areal_mass,
    parse_capacitance,
    parse_conductivity,
    parse_density,
    parse_frequency,
    parse_length,
    parse_number,
    parse_percent,
    parse_share,
    parse_sheet_resistance,
    parse_signed_length,
    parse_temperature,
)
from stackdb.quantities.printing import format_frequency, format_length, printable, printed, shortened
from stackdb.quantities.span import EPS0, Span

__all__ = [
    "EPS0",
    "Span",
    "format_frequency",
    "format_length",
    "parse_areal_mass",
    "parse_capacitance",
    "parse_conductivity",
    "parse_density",
    "parse_frequency",
    "parse_length",
    "parse_number",
    "parse_percent",
    "parse_share",
    "parse_sheet_resistance",
    "parse_signed_length",
    "parse_temperature",
    "printable",
    "printed",
    "shortened",
]
