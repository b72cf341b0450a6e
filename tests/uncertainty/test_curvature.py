"""The cheap curvature test agrees with what Monte Carlo finds, on linear, curved and mixed functions."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.curvature import CURVED, nonlinearity


def test_paint_is_as_good_as_linear(case_of):
    case = case_of(96.932697806, 0.5, 0.95, 0.02, "rect", 23.0, 2.0)
    assert nonlinearity(case.of_points, [one.value for one in case.inputs.values()], case.u) < CURVED


def test_low_emissivity_is_curved(faint_case):
    """And by how much: mean shift over u is 8 K/25 K, which is what q measures for one dominant input."""
    case = faint_case
    q = nonlinearity(case.of_points, [one.value for one in case.inputs.values()], case.u)
    assert q > 4 * CURVED
    assert q == pytest.approx(8 / 25, rel=0.15)


@pytest.mark.rows("g_radiometric_mc", "g_mc_bare30_gum", "g_mc_bare10_gum", "g_mc_near_amb_gum")
def test_every_case_first_order_understates_is_seen(row, row_case):
    case, _ = row_case
    assert nonlinearity(case.of_points, [one.value for one in case.inputs.values()], case.u) >= CURVED


@given(
    c=st.lists(st.floats(-100, 100), min_size=3, max_size=3),
    x=st.lists(st.floats(-10, 10), min_size=3, max_size=3),
    u=st.lists(st.floats(0, 5), min_size=3, max_size=3),
)
def test_linear_functions_have_none(c, x, u):
    """Beyond rounding: contributions below a millionth of the value drown in it and are left out of the claim."""
    parts = np.linalg.norm(np.multiply(c, u))
    if parts == 0 or parts > 1e-6 * (1 + np.abs(np.multiply(c, x)).max()):
        assert nonlinearity(lambda p: p @ np.array(c), x, u) < 1e-6


@given(f1=st.floats(0.1, 10), f2=st.floats(-3, 3), x=st.floats(-1, 1), u=st.floats(0.01, 1))
def test_parabola_in_closed_form(f1, f2, x, u):
    """Of f1 (z − x) + f2 (z − x)² the measure at x is |f2| u/f1."""
    found = nonlinearity(lambda p: f1 * (p[:, 0] - x) + f2 * (p[:, 0] - x) ** 2, [x], [u])
    assert found == pytest.approx(abs(f2) * u / f1, rel=1e-6, abs=1e-9)


def test_a_product_is_curved_although_straight_in_each_input():
    """x·y at (1, 1), u = 0.3 each: second differences per input vanish; along x = y the measure is 0.3/√8."""
    assert nonlinearity(lambda p: p[:, 0] * p[:, 1], [1, 1], [0.3, 0.3]) == pytest.approx(0.3 / np.sqrt(8))


@given(angle=st.floats(0, np.pi))
def test_the_measure_does_not_depend_on_how_inputs_are_mixed(angle):
    turn = np.array([[np.cos(angle), -np.sin(angle)], [np.sin(angle), np.cos(angle)]])
    plain = nonlinearity(lambda p: 5 * p[:, 0] + p[:, 0] ** 2 - 0.5 * p[:, 1] ** 2, [0, 0], [1, 1])
    mixed = nonlinearity(
        lambda p: 5 * (p @ turn)[:, 0] + (p @ turn)[:, 0] ** 2 - 0.5 * (p @ turn)[:, 1] ** 2, [0, 0], [1, 1]
    )
    assert mixed == pytest.approx(plain, rel=1e-9)


def test_level_or_non_physical_is_infinitely_curved():
    assert nonlinearity(lambda p: p[:, 0] ** 2, [0.0], [1.0]) == np.inf
    assert nonlinearity(lambda p: np.log(p[:, 0]), [0.5], [0.6]) == np.inf
    assert nonlinearity(lambda p: 1 / p[:, 0], [0.5], [0.0]) == 0.0


def test_refuses():
    with pytest.raises(InputError, match="do not fit"):
        nonlinearity(lambda p: p[:, 0], [1.0, 2.0], [1.0])
    with pytest.raises(InputError, match="returned shape"):
        nonlinearity(lambda p: 1.0, [1.0], [1.0])
    with pytest.raises(OutOfRange):
        nonlinearity(lambda p: p[:, 0], [1.0], [-1.0])
