"""Numbers in sentences."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from routing.schemes.saying import amount, apart, fixed

numbers = st.floats(-1e6, 1e6)


@pytest.mark.parametrize(
    ("value", "decimals", "text"),
    [(-0.001, 2, "0.00"), (-0.0, 0, "0"), (1234.5, 1, "1,234.5"), (-1.006, 2, "-1.01"), (0.4, 0, "0")],
)
def test_fixed(value, decimals, text):
    assert fixed(value, decimals) == text


@pytest.mark.parametrize(
    ("value", "text"), [(0.0, "0.00"), (0.001, "under 0.01"), (-0.001, "under 0.01"), (0.006, "0.01"), (-2.5, "2.50")]
)
def test_amount(value, text):
    assert amount(value, 2) == text


@pytest.mark.parametrize(
    ("figure", "limit", "texts"),
    [
        (0.6501, 0.65, ("0.6501", "0.6500")),
        (0.7, 0.65, ("0.70", "0.65")),
        (0.65, 0.65, ("0.65", "0.65")),
        (-0.001, 0.001, ("-0.001", "0.001")),
        (-1e-9, 0.0, ("0.00", "0.00")),
    ],
)
def test_apart(figure, limit, texts):
    assert apart(figure, limit, 2) == texts


@given(figure=numbers, limit=numbers, decimals=st.integers(0, 3))
def test_texts_stand_in_the_order_of_the_numbers(figure, limit, decimals):
    left, right = (float(text.replace(",", "")) for text in apart(figure, limit, decimals))
    assert (left <= right) == (figure <= limit) or left == right
    if abs(figure - limit) > 2e-6:
        assert left != right


@given(value=numbers, decimals=st.integers(0, 3))
def test_nothing_has_no_sign_and_something_is_not_nothing(value, decimals):
    assert not (fixed(value, decimals).startswith("-") and float(fixed(value, decimals).replace(",", "")) == 0.0)
    assert (amount(value, decimals).strip("0.") == "") == (value == 0.0)
