"""Numbers with units: what is read, and what a refusal tells."""

from collections.abc import Callable
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from stackdb import quantities as q
from stackdb.errors import InputError

Parse = Callable[[str], float]


@pytest.mark.parametrize(
    ("parse", "text", "value"),
    [
        (q.parse_length, "150nm", 150e-9),
        (q.parse_length, "150um", 150e-6),
        (q.parse_length, "150\u00b5m", 150e-6),
        (q.parse_length, "150\u03bcm", 150e-6),
        (q.parse_length, "1.8mm", 0.0018),
        (q.parse_length, "2.5cm", 0.025),
        (q.parse_length, "1m", 1.0),
        (q.parse_length, "0.5in", 0.0127),
        (q.parse_length, "5mil", 0.000127),
        (q.parse_length, "5thou", 0.000127),
        (q.parse_length, "1.8 mm", 0.0018),
        (q.parse_length, ".5mm", 0.0005),
        (q.parse_length, "2.mm", 0.002),
        (q.parse_length, "1e-1mm", 0.0001),
        (q.parse_length, "+1mm", 0.001),
        (q.parse_length, "0", 0.0),
        (q.parse_length, "0.00", 0.0),
        (q.parse_signed_length, "-0.1mm", -0.0001),
        (q.parse_frequency, "60Hz", 60.0),
        (q.parse_frequency, "250kHz", 250e3),
        (q.parse_frequency, "1.5 MHz", 1.5e6),
        (q.parse_frequency, "2GHz", 2e9),
        (q.parse_temperature, "23C", 23.0),
        (q.parse_temperature, "23 °C", 23.0),
        (q.parse_temperature, "-40°C", -40.0),
        (q.parse_temperature, "\u221240C", -40.0),
        (q.parse_temperature, "296.15K", 23.0),
        (q.parse_temperature, "0K", -273.15),
        (q.parse_capacitance, "5fF", 5e-15),
        (q.parse_capacitance, "100pF", 1e-10),
        (q.parse_capacitance, "1 nF", 1e-9),
        (q.parse_conductivity, "5S/m", 5.0),
        (q.parse_conductivity, "5mS/m", 0.005),
        (q.parse_conductivity, "50uS/cm", 0.005),
        (q.parse_conductivity, "50µS/cm", 0.005),
        (q.parse_conductivity, "53mS/cm", 5.3),
        (q.parse_sheet_resistance, "50ohm", 50.0),
        (q.parse_sheet_resistance, "1.5kohm/sq", 1500.0),
        (q.parse_sheet_resistance, "2Mohm/sq", 2e6),
        (q.parse_sheet_resistance, "100\u03a9", 100.0),
        (q.parse_sheet_resistance, "100\u2126/sq", 100.0),
        (q.parse_areal_mass, "180g/m2", 0.18),
        (q.parse_density, "1.54g/cm3", 1540.0),
        (q.parse_number, "3.3", 3.3),
        (q.parse_share, "20%", 0.2),
        (q.parse_share, "0.2", 0.2),
        (q.parse_percent, "50%", 50.0),
        (q.parse_percent, "50", 50.0),
    ],
)
def test_reads_to_the_nearest_float(parse: Parse, text: str, value: float) -> None:
    assert parse(text) == value


@given(st.integers(1, 10**7), st.sampled_from([("nm", -9), ("um", -6), ("mm", -3), ("cm", -2)]))
def test_a_length_is_the_float_nearest_to_the_fraction(count: int, unit: tuple[str, int]) -> None:
    exact = Fraction(count, 10) * Fraction(10) ** unit[1]
    text = f"{count // 10}.{count % 10}{unit[0]}"
    if exact <= 1:
        assert q.parse_length(text) == float(exact)
    else:
        with pytest.raises(InputError, match="above 1 m"):
            q.parse_length(text)


@pytest.mark.parametrize(
    ("parse", "text", "code", "told"),
    [
        (q.parse_length, "150", "missing-unit", '"150" has no unit; write 150um or 150mm'),
        (q.parse_frequency, "250", "missing-unit", '"250" has no unit; write 250kHz or 250MHz'),
        (q.parse_temperature, "23", "missing-unit", '"23" has no unit; write 23C'),
        (q.parse_temperature, "0", "missing-unit", '"0" has no unit; write 0C'),
        (q.parse_length, "1.8MM", "unit-case", '"1.8MM" has its unit in the wrong case; write 1.8mm'),
        (q.parse_length, "150µM", "unit-case", '"150µM" has its unit in the wrong case; write 150µm'),
        (q.parse_frequency, "250khz", "unit-case", "; write 250kHz"),
        (q.parse_frequency, "1mhz", "unit-case", "; write 1MHz"),
        (q.parse_temperature, "23c", "unit-case", "; write 23C"),
        (q.parse_capacitance, "5pf", "unit-case", "; write 5pF"),
        (q.parse_conductivity, "5s/m", "unit-case", "; write 5S/m"),
        (q.parse_sheet_resistance, "5kOhm/sq", "unit-case", "; write 5kohm/sq"),
        (q.parse_length, "1.8mm mm", "unit-twice", '"1.8mm mm" has more than one unit; write 1.8mm'),
        (q.parse_length, "1.8mmmm", "unit-twice", "; write 1.8mm"),
        (q.parse_frequency, "5kHzkHz", "unit-twice", "; write 5kHz"),
        (q.parse_length, "5kg", "unknown-unit", '"kg" is no unit of a length; there is nm um mm cm m in mil thou'),
        (q.parse_frequency, "5rpm", "unknown-unit", "there is Hz kHz MHz GHz"),
        (q.parse_number, "3mm", "unit-unwanted", '"3mm" should be a pure number; write 3'),
        (q.parse_number, "2%", "unit-unwanted", "write 0.02"),
        (q.parse_length, "1,8mm", "decimal-comma", '"1,8mm" has a decimal comma; write a decimal point, 1.8mm'),
        (q.parse_length, "1,800um", "decimal-comma", "write a decimal point, 1.800um or 1800um"),
        (q.parse_length, "abc", "not-a-number", '"abc" is not a number'),
        (q.parse_length, "", "not-a-number", "a number is missing"),
        (q.parse_length, "1.8.2mm", "not-a-number", '"1.8.2mm" is not one number'),
        (q.parse_length, "1.7-1.9mm", "not-a-number", "1.7..1.9mm for a range"),
        (q.parse_number, "nan", "not-finite", '"nan" is not a finite number'),
        (q.parse_number, "-inf", "not-finite", '"-inf" is not a finite number'),
        (q.parse_frequency, "1e400Hz", "not-finite", "beyond what a number can be"),
        (q.parse_length, "1e-350mm", "not-finite", "beyond what a number can be"),
        (q.parse_length, "-1mm", "out-of-range", '"-1mm" is below 0'),
        (q.parse_length, "1.0001m", "out-of-range", '"1.0001m" is above 1 m'),
        (q.parse_frequency, "0Hz", "out-of-range", "is not above 0 Hz"),
        (q.parse_temperature, "-274C", "out-of-range", "is below absolute zero"),
        (q.parse_capacitance, "-1pF", "out-of-range", "is below 0 F"),
        (q.parse_sheet_resistance, "0ohm", "out-of-range", "is not above 0 ohm"),
        (q.parse_length, "１.８mm", "foreign-digit", "the fullwidth digit one (U+FF11); write 1.8mm"),
        (q.parse_number, "٣", "foreign-digit", "the arabic-indic digit three (U+0663); write 3"),
    ],
)
def test_refusal_says_what_would_be_right(parse: Parse, text: str, code: str, told: str) -> None:
    with pytest.raises(InputError) as caught:
        parse(text)
    assert caught.value.code == code
    assert told in str(caught.value)


def test_a_number_of_5000_digits_is_refused_in_one_short_line() -> None:
    with pytest.raises(InputError) as caught:
        q.parse_length("9" * 5000 + "mm")
    assert str(caught.value) == "a number of 5000 characters, 99999999...; a few digits are enough"


PARSERS = [getattr(q, name) for name in q.__all__ if name.startswith("parse_")]


@given(st.sampled_from(PARSERS), st.text(max_size=30) | st.from_regex(r"[+-]?[0-9.,]{1,6}[ a-zA-Z%/°µ]{0,6}"))
def test_any_text_is_a_finite_number_or_one_line(parse: Parse, text: str) -> None:
    try:
        value, said = parse(text), ""
    except InputError as error:
        value, said = 0.0, str(error)
    assert abs(value) < float("inf")
    assert q.printable(said) == said
    assert len(said) < 250
