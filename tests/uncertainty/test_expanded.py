"""Coverage factors, effective degrees of freedom and rounding, held to JCGM 100 Annexes G and H.1."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.expanded import coverage_factor, effective_dof, round_up, rounded
from thermfix.uncertainty.propagation import combine

H1_NM = [25.0, 9.7, 2.9, 16.6]  # JCGM 100 Table H.1, from memory: standard, comparison, expansion, temperature
H1_DOF = [18, 25.6, 50, 2]


@pytest.mark.rows("g_gum", "gum_H1")
def test_gum_h1(row, expected):
    """End gauge: rows hold the arithmetic, the GUM prints it rounded (32, 34, 2.92, 93 nm)."""
    first = combine(np.ones(4), H1_NM).item()
    t99 = coverage_factor(16.7, 0.99)
    found, printed, last_digit = {
        "gum_H1_uc": (first, 32, 0.5),
        "gum_H1_uc2": (combine(np.ones(5), [*H1_NM, 11.7]).item(), 34, 0.5),
        "gum_H1_t99": (t99, 2.92, 0.005),
        "gum_H1_U99": (t99 * 32, 93, 0.5),
    }[row["id"]]
    assert found == pytest.approx(expected, rel=1e-9)
    assert found == pytest.approx(printed, abs=last_digit)


def test_gum_h1_effective_degrees_of_freedom():
    """Printed 16.7 (from memory), from a u_c the GUM rounded on the way: ±0.1."""
    assert effective_dof(H1_NM, H1_DOF) == pytest.approx(16.7, abs=0.1)


@pytest.mark.parametrize(
    ("dof", "probability", "printed"),
    [(1, 0.95, 12.71), (2, 0.95, 4.30), (5, 0.95, 2.57), (10, 0.95, 2.23), (20, 0.95, 2.09), (50, 0.95, 2.01),
     (5, 0.99, 4.03), (10, 0.6827, 1.05), (10, 0.9545, 2.28), (np.inf, 0.95, 1.960), (np.inf, 0.9545, 2.000)],
)  # fmt: skip
def test_table_g2(dof, probability, printed):
    """JCGM 100 Table G.2, from memory, two decimals."""
    assert coverage_factor(dof, probability) == pytest.approx(printed, abs=0.006)


def test_degrees_of_freedom_limits():
    assert effective_dof([0.3], [7]) == pytest.approx(7)
    assert effective_dof([0.3, 0.4], [np.inf, np.inf]) == np.inf
    assert effective_dof([0.0, 0.0], [3, 4]) == np.inf
    assert effective_dof([1e-200, 1e-200], [4, 4]) == pytest.approx(8)
    assert coverage_factor(16.99) == coverage_factor(16)


@pytest.mark.parametrize(
    ("u", "up"),
    [(10.47, 11), (0.362, 0.37), (2, 2), (0.1 + 0.2, 0.3), (0.0994, 0.1), (99.2, 100), (1234, 1300), (3e-7, 3e-7)],
)
def test_rounding_up(u, up):
    """10.47 → 11 is the GUM's own example (7.2.6); 0.1 + 0.2 differs from 0.3 by computation only."""
    assert round_up(u) == up


@given(u=st.floats(1e-6, 1e6), digits=st.integers(1, 4))
def test_rounding_never_understates_and_costs_at_most_one_last_digit(u, digits):
    up = round_up(u, digits)
    assert up >= u * (1 - 1e-8)
    assert up <= u * (1 + 10.0 ** (1 - digits) * 1.000001)
    assert round_up(up, digits) == up


def test_value_and_uncertainty_end_at_the_same_place():
    assert str(rounded(100.0212, 2.7659)) == "100.0 ± 2.8"
    assert str(rounded(1234.5, 211.0)) == "1230 ± 220"
    assert str(rounded(60.0, 0.0994)) == "60.00 ± 0.10"
    assert str(rounded(60.123, 0.0)) == "60.12 ± 0.00"


def test_refuses():
    for call in (
        lambda: coverage_factor(0.5),
        lambda: coverage_factor(5, 1.0),
        lambda: round_up(-1.0),
        lambda: round_up(1.0, 0),
        lambda: rounded(np.nan, 1.0),
    ):
        with pytest.raises(OutOfRange):
            call()
    for bad in (([1.0], [1, 2]), ([np.nan], [1]), ([1.0], [0])):
        with pytest.raises(InputError):
            effective_dof(*bad)
