"""Numbers with their uncertainty, in all the forms that can be typed."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from stackdb.errors import InputError
from stackdb.quantities import Span
from stackdb.quantities.exact import exact
from stackdb.quantities.uncertain import read_permittivity, read_thickness, read_tolerance


def thickness(text: str) -> Span:
    return read_thickness(text).span(text)


def tolerance(text: str, nominal: str = "1.8e-3") -> Span:
    return read_tolerance(text, exact(nominal)).span(text)


@pytest.mark.parametrize(
    "text",
    [
        "1.8±0.1mm",
        "1.8+-0.1mm",
        "1.8mm±0.1mm",
        "1.8 ± 0.1 mm",
        "1.8mm+-100um",
        "1.7..1.9mm",
        "1.7mm..1.9mm",
        "1.7 .. 1.9 mm",
        "1700um..1.9mm",
    ],
)
def test_all_forms_of_a_thickness_are_the_same_to_the_last_bit(text: str) -> None:
    assert thickness(text) == Span(0.0018, 0.0017, 0.0019)
    assert read_thickness(text).given


@pytest.mark.parametrize("text", ["0.1mm", "100um", "±0.1mm", "+-0.1mm", "-0.1..+0.1mm", "-0.1mm..+100um", "0.1 mm"])
def test_all_forms_of_a_tolerance_are_the_same_to_the_last_bit(text: str) -> None:
    assert tolerance(text) == Span(0.0018, 0.0017, 0.0019)


def test_percent_is_of_the_thickness() -> None:
    assert tolerance("5%") == Span(0.0018, 0.00171, 0.00189)
    assert tolerance("-5..+10%") == Span(0.0018, 0.00171, 0.00198)
    assert thickness("1.8mm±5%") == Span(0.0018, 0.00171, 0.00189)


def test_an_uneven_tolerance_keeps_the_nominal() -> None:
    assert tolerance("-0.10..+0.05mm") == Span(0.0018, 0.0017, 0.00185)


def test_no_uncertainty_is_not_an_uncertainty_of_zero() -> None:
    assert not read_thickness("1.8mm").given
    assert read_tolerance("0", exact("1.8e-3")).given


@pytest.mark.parametrize("text", ["3.3±0.2", "3.3+-0.2", "3.1..3.5", "3.3 ± 0.2"])
def test_all_forms_of_a_permittivity_are_the_same(text: str) -> None:
    assert read_permittivity(text) == Span(3.3, 3.1, 3.5)


@given(st.integers(10, 5000), st.integers(0, 10))
def test_plus_minus_and_ends_agree(hundredths: int, half: int) -> None:
    plus_minus = f"{hundredths / 100}±{half / 100}mm"
    ends = f"{(hundredths - half) / 100}..{(hundredths + half) / 100}mm"
    assert thickness(plus_minus) == thickness(ends)


@pytest.mark.parametrize(
    ("text", "code", "told"),
    [
        ("1.8±0.1", "missing-unit", '"1.8" has no unit'),
        ("1.8mm±0.1", "missing-unit", '"0.1" has no unit'),
        ("1.9..1.7mm", "range-reversed", "runs from high to low; write the smaller end first"),
        ("1.7..mm", "not-a-number", '"mm" is not a number'),
        ("1.7..", "range-open", "lacks one side of .."),
        ("±0.1mm", "range-open", "lacks one side of ±"),
        ("1.8±-0.1mm", "out-of-range", "has an uncertainty below 0"),
        ("1±2mm", "tolerance-too-large", "larger than the layer"),
        ("-0.1..0.2mm", "out-of-range", "is below 0"),
        ("0.9..1.1m", "out-of-range", "above 1 m"),
        ("1,7..1,9mm", "decimal-comma", "decimal comma"),
    ],
)
def test_thickness_refused(text: str, code: str, told: str) -> None:
    with pytest.raises(InputError) as caught:
        read_thickness(text)
    assert caught.value.code == code
    assert told in str(caught.value)


@pytest.mark.parametrize(
    ("text", "code", "told"),
    [
        ("0.1", "missing-unit", "write 0.1um or 0.1mm or 0.1%"),
        ("2mm", "tolerance-too-large", '"tol=2mm" is larger than the layer'),
        ("101%", "tolerance-too-large", "larger than the layer"),
        ("-0.1mm", "out-of-range", "write tol=0.1mm, or tol=-0.1..0mm"),
        ("0.05..0.1mm", "tolerance-sign", "does not run from minus to plus"),
        ("0.1MM", "unit-case", "write 0.1mm"),
        ("nan", "not-finite", "not a finite number"),
    ],
)
def test_tolerance_refused(text: str, code: str, told: str) -> None:
    with pytest.raises(InputError) as caught:
        tolerance(text)
    assert caught.value.code == code
    assert told in str(caught.value)


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ("0.7", "eps=0.7 is below 1; no passive layer has that"),
        ("1.1±0.2", "eps=1.1±0.2 reaches below 1"),
        ("0.9..1.2", "reaches below 1"),
        ("-3", "is below 1"),
    ],
)
def test_permittivity_below_one_is_refused(text: str, told: str) -> None:
    with pytest.raises(InputError, match="below 1") as caught:
        read_permittivity(text)
    assert caught.value.code == "eps-below-one"
    assert told in str(caught.value)
