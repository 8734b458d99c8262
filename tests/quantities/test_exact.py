"""Exact decimals: what was typed, to the last bit."""

from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stackdb.errors import InputError
from stackdb.quantities.exact import Exact, exact, exact_of

numbers = st.builds(Exact, st.integers(-(10**12), 10**12), st.integers(-12, 6))
floats = st.floats(allow_nan=False, allow_infinity=False)


def fraction(number: Exact) -> Fraction:
    return number.digits * Fraction(10) ** number.power


@given(numbers, numbers)
def test_sum_difference_product_and_middle_are_exact(a: Exact, b: Exact) -> None:
    x, y = fraction(a), fraction(b)
    found = [fraction(n) for n in (a.plus(b), a.minus(b), a.times(b), a.middle(b))]
    assert found == [x + y, x - y, x * y, (x + y) / 2]


@given(numbers)
def test_value_is_the_nearest_float(number: Exact) -> None:
    assert number.value == float(fraction(number))


@given(numbers)
def test_text_reads_back_exactly(number: Exact) -> None:
    assert fraction(exact(number.text())) == fraction(number)


@given(floats)
@settings(deadline=None)
def test_a_float_goes_through_and_comes_back(value: float) -> None:
    assert exact_of(value).value == value
    assert exact(exact_of(value).text()).value == value


@pytest.mark.parametrize(
    ("number", "text"),
    [
        (Exact(18, -1), "1.8"),
        (Exact(1500, -1), "150"),
        (Exact(-5, -2), "-0.05"),
        (Exact(0, 7), "0"),
        (Exact(12, 5), "1200000"),
        (Exact(1, -9), "1e-9"),
        (Exact(1, 30), "1e30"),
    ],
)
def test_text_is_as_people_write_it(number: Exact, text: str) -> None:
    assert number.text() == text


def test_zero_has_no_sign() -> None:
    assert str(exact("-0.0").value) == "0.0"


@pytest.mark.parametrize("text", ["1e401", "1e-401", "9e999999999999"])
def test_beyond_any_float_is_refused_at_once(text: str) -> None:
    with pytest.raises(InputError, match="beyond"):
        exact(text)


@pytest.mark.parametrize("value", [float("nan"), float("inf")])
def test_no_exact_number_behind_nan_and_infinity(value: float) -> None:
    with pytest.raises(InputError) as caught:
        exact_of(value)
    assert caught.value.code == "not-finite"
