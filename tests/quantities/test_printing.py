"""Digits that a number deserves, units that a person expects, and text that cannot act."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from stackdb.quantities import EPS0, format_frequency, format_length, parse_length, printable, printed, shortened


@pytest.mark.parametrize(
    ("value", "half_width", "text"),
    [
        (0.33812, 0.025, "0.338"),
        (7.104, 0.5, "7.10"),
        (1234.5, 230.0, "1230"),
        (1234.5, 23.0, "1234"),
        (12345.0, 2300.0, "12300"),
        (0.1, 0.1, "0.10"),
        (0.5, 0.0996, "0.50"),
        (1.0, 0.0094, "1.0000"),
        (-0.0001, 0.1, "0.00"),
        (3.14159, 0.0, "3.142"),
        (3.14159, float("nan"), "3.142"),
    ],
)
def test_printed_to_the_second_digit_of_the_half_width(value: float, half_width: float, text: str) -> None:
    assert printed(value, half_width) == text


@given(st.floats(-1e6, 1e6), st.floats(1e-6, 1e5))
def test_printing_loses_less_than_a_tenth_of_the_half_width(value: float, half_width: float) -> None:
    # The second digit's place is at most half_width/10; rounding moves by half a place.
    assert abs(float(printed(value, half_width)) - value) <= 0.0501 * half_width + 1e-12 * abs(value)


@pytest.mark.parametrize(
    ("metres", "text"),
    [
        (0.0, "0 mm"),
        (40e-9, "40 nm"),
        (150e-6, "150 µm"),
        (999.6e-6, "999.6 µm"),
        (0.00099999, "1 mm"),
        (0.0018, "1.8 mm"),
        (0.025, "25 mm"),
        (0.25, "250 mm"),
        (12.5, "12500 mm"),
    ],
)
def test_lengths_in_the_unit_a_person_expects(metres: float, text: str) -> None:
    assert format_length(metres) == text


def test_micro_has_an_ascii_form() -> None:
    assert format_length(150e-6, ascii_only=True) == "150 um"


@given(st.floats(1e-9, 1.0))
def test_a_printed_length_reads_back_to_four_digits(metres: float) -> None:
    assert parse_length(format_length(metres)) == pytest.approx(metres, rel=6e-4)


@pytest.mark.parametrize(
    ("hertz", "text"),
    [(60.0, "60 Hz"), (1e3, "1 kHz"), (250e3, "250 kHz"), (999999.0, "1 MHz"), (1e6, "1 MHz"), (2.45e9, "2.45 GHz")],
)
def test_frequencies(hertz: float, text: str) -> None:
    assert format_frequency(hertz) == text


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("a\x1b[31m", "a\\x1b[31m"),
        ("a\u202eb", "a\\u202eb"),
        ("a\u2066b", "a\\u2066b"),
        ("a\nb\tc", "a\\nb\\tc"),
        ("a\u200bb", "a\\u200bb"),
        ("a\u2028b", "a\\u2028b"),
        ("a\x85b", "a\\x85b"),
        ("\ud800", "\\ud800"),
        ("µm Ω é 中", "µm Ω é 中"),
    ],
)
def test_control_and_direction_changing_characters_become_visible(text: str, shown: str) -> None:
    assert printable(text) == shown


@given(st.text())
def test_printable_text_is_printable_and_stays_so(text: str) -> None:
    shown = printable(text)
    assert all(c.isprintable() or c.isspace() for c in shown)
    assert printable(shown) == shown


def test_shortened_text_says_how_long_it_was() -> None:
    assert shortened("x" * 5000) == "x" * 40 + "... (5000 characters)"
    assert shortened("short") == "short"


def test_electric_constant() -> None:
    assert EPS0 == 8.8541878188e-12  # CODATA 2022 recommended value
