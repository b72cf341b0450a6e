"""Fixed-decimal text by the array is the text that Python formats one by one."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp

from thermfix.errors import InputError, OutOfRange
from thermfix.export.digits import check_decimals, fixed, number_column, text_column

DECIMALS = range(7)


def texts(words):
    return words.tobytes().translate(None, b"\0").decode().removesuffix(",").split(",")


def one_by_one(values, decimals):
    made = ["" if value != value else f"{value:.{decimals}f}" for value in values.tolist()]
    return [text.lstrip("-") if text.strip("-0.") == "" else text for text in made]


def assert_same(values, decimals):
    values = np.asarray(values, dtype=np.float64)
    words = number_column(values, decimals, b",")
    assert (words.view(np.uint8)[:, -1] == ord(",")).all()
    assert texts(words) == one_by_one(values, decimals)


def some(low, high, width=64):
    return hnp.arrays(
        np.dtype(f"f{width // 8}"),
        st.integers(1, 40),
        elements=st.one_of(st.floats(low, high, width=width), st.just(float("nan"))),
    )


@settings(max_examples=300)
@given(values=some(-60, 3000), decimals=st.integers(0, 6))
def test_any_temperature(values, decimals):
    assert_same(values, decimals)


@settings(max_examples=200)
@given(values=some(213.25, 3276.0, width=32), decimals=st.integers(0, 6))
def test_any_float32_kelvin(values, decimals):
    assert_same(values.astype(np.float64) - 273.15, decimals)


@settings(max_examples=100)
@given(values=some(-1e12, 1e12), decimals=st.integers(0, 6))
def test_any_size(values, decimals):
    assert_same(values, decimals)


@settings(max_examples=100)
@given(values=some(-0.01, 0.01), decimals=st.integers(0, 6))
def test_about_zero(values, decimals):
    assert_same(values, decimals)


@settings(max_examples=300)
@given(
    steps=hnp.arrays(np.int64, st.integers(1, 40), elements=st.integers(-60_000, 3_000_000)),
    nudge=st.sampled_from([-2, -1, 0, 1, 2]),
    decimals=st.integers(0, 6),
)
def test_ties_and_their_neighbours(steps, nudge, decimals):
    """The float nearest to n + ½ steps, and the floats next to it: the exact binary value decides."""
    values = (steps + 0.5) / 10.0**decimals
    for _ in range(abs(nudge)):
        values = np.nextafter(values, np.copysign(np.inf, nudge))
    assert_same(values, decimals)


def test_exact_ties_go_to_even():
    assert texts(number_column(np.array([0.125, 0.375, -0.125, -0.375]), 2, b",")) == ["0.12", "0.38", "-0.12", "-0.38"]


@pytest.mark.parametrize("decimals", DECIMALS)
def test_every_eighth_over_the_range(decimals):
    """Kelvin stored in eighths, of which every fourth is an exact tie at two decimals."""
    assert_same(np.arange(-60, 3000, 0.125), decimals)


@pytest.mark.parametrize("decimals", DECIMALS)
@pytest.mark.parametrize(
    "edge",
    [9, 10, 99, 100, 999, 1000, 9998, 9999, 10_000, 99_999.5, 1e6, 1e15, 1e20, 1e300, -9, -99, -999, -1000]
    + [sign * (10**digits - 1e-9) for digits in (1, 2, 3, 4, 5) for sign in (1, -1)],
)
def test_where_the_digits_grow(edge, decimals):
    assert_same([edge], decimals)
    assert_same([np.nextafter(edge, -np.inf), edge, np.nextafter(edge, np.inf), edge - 0.004, 20.0], decimals)


@pytest.mark.parametrize("decimals", DECIMALS)
@pytest.mark.parametrize("values", [[np.nan], [np.nan, np.nan], [np.nan, 2999.0], [-0.0, 0.0], [-1e-9, np.nan, 1.5]])
def test_empty_and_zero(values, decimals):
    assert_same(values, decimals)


def test_a_minus_stays_where_a_digit_is_left():
    assert texts(number_column(np.array([-0.004, -0.006, -0.5]), 2, b",")) == ["0.00", "-0.01", "-0.50"]
    assert [fixed(value, 2) for value in (-0.004, -0.006, -0.5, -100.0)] == ["0.00", "-0.01", "-0.50", "-100.00"]


@pytest.mark.parametrize("value", [np.inf, -np.inf])
def test_infinity_is_refused(value):
    with pytest.raises(InputError, match="infinite"):
        number_column(np.array([20.0, value, np.nan]), 2, b",")
    with pytest.raises(InputError, match="infinite"):
        fixed(value, 2)


@pytest.mark.parametrize("decimals", [-1, 7])
def test_decimals_outside_their_range(decimals):
    with pytest.raises(OutOfRange, match="0 to 6"):
        check_decimals(decimals)


@given(st.lists(st.binary(max_size=20).filter(lambda text: b"\0" not in text and b"," not in text), min_size=1))
def test_text_column(made):
    words = text_column(made, b",")
    assert words.tobytes().translate(None, b"\0") == b"".join(text + b"," for text in made)
