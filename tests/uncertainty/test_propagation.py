"""First-order propagation, held to JCGM 100 Annex H.2 and to an independent library."""

import numpy as np
import pytest
import uncertainties
from hypothesis import given, settings
from hypothesis import strategies as st
from uncertainties import umath

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.propagation import (
    combine,
    correlation_matrix,
    covariance_of_inputs,
    covariance_of_outputs,
    split_covariance,
)

# JCGM 100:2008, Table H.2: five simultaneous observations. (Typed from memory; the tests below
# reproduce every figure the GUM prints from them.)
V = np.array([5.007, 4.994, 5.005, 4.990, 4.999])
I = np.array([19.663, 19.639, 19.640, 19.685, 19.678]) * 1e-3  # noqa: E741  the GUM's symbol
PHI = np.array([1.0456, 1.0438, 1.0468, 1.0428, 1.0433])
OUTPUTS = ("R", "X", "Z")


def impedance(v, i, phi):
    """Return R, X, Z and their Jacobian with respect to V, I, φ (JCGM 100 eq. H.6)."""
    r, x, z = v / i * np.cos(phi), v / i * np.sin(phi), v / i
    return np.array([r, x, z]), np.array([[r / v, -r / i, -x], [x / v, -x / i, r], [z / v, -z / i, 0]])


@pytest.fixture
def observed():
    mean = [a.mean() for a in (V, I, PHI)]
    covariance = np.cov([V, I, PHI]) / 5
    values, jacobian = impedance(*mean)
    return values, jacobian, covariance


@pytest.mark.rows("g_gum", "gum_H2")
def test_gum_h2_rows(row, expected, observed):
    """The rows are a recomputation to full digits: only rounding may differ."""
    values, jacobian, covariance = observed
    u, r = split_covariance(covariance_of_outputs(jacobian, covariance))
    what = row["id"].removeprefix("gum_H2_")
    found = {
        **dict(zip(OUTPUTS, values, strict=True)),
        **{f"u{name}": u[place] for place, name in enumerate(OUTPUTS)},
        "rRX": r[0, 1], "rRZ": r[0, 2], "rXZ": r[1, 2],
    }  # fmt: skip
    assert found[what] == pytest.approx(expected, rel=1e-9)


def test_gum_h2_as_printed(observed):
    """The GUM prints 0.071, 0.295, 0.236 and −0.588, −0.485, 0.993; its last digits carry round-off: ±0.001."""
    values, jacobian, covariance = observed
    u, r = split_covariance(covariance_of_outputs(jacobian, covariance))
    assert values == pytest.approx([127.732, 219.847, 254.260], abs=0.001)
    assert u == pytest.approx([0.071, 0.295, 0.236], abs=0.001)
    assert (r[0, 1], r[0, 2], r[1, 2]) == pytest.approx((-0.588, -0.485, 0.993), abs=0.001)


def test_gum_h2_from_the_printed_inputs():
    """From the rounded u and r of Table H.2 (approach 2) follow 0.0700, 0.2957, 0.2366; four printed digits."""
    _, jacobian = impedance(4.9990, 19.6610e-3, 1.04446)
    r = correlation_matrix(["V", "I", "phi"], {("V", "I"): -0.36, ("V", "phi"): 0.86, ("phi", "I"): -0.65})
    u = [0.0032, 0.0095e-3, 0.00075]
    assert combine(jacobian, u, r) == pytest.approx([0.0700, 0.2957, 0.2366], abs=1e-4)
    both = covariance_of_outputs(jacobian, covariance_of_inputs(u, r))
    assert np.sqrt(np.diag(both)) == pytest.approx(combine(jacobian, u, r), rel=1e-12)


def expression(m, a, b, c, d):
    """Return a curved function of four inputs; m is where its functions come from."""
    return a * m.exp(b / 3) + m.sqrt(1 + c * c) / (2 + m.sin(d)) - a * d + b**2 * c


@settings(max_examples=60)
@given(
    x=st.lists(st.floats(-2, 2), min_size=4, max_size=4),
    u=st.lists(st.floats(0.001, 0.5), min_size=4, max_size=4),
    mix=st.lists(st.floats(-1, 1), min_size=16, max_size=16),
)
def test_independent_library(x, u, mix):
    """The same derivatives, propagated by a library that tracks them through every operation: rounding only."""
    root = np.reshape(mix, (4, 4)) + 2 * np.eye(4)
    _, r = split_covariance(root @ root.T)
    inputs = uncertainties.correlated_values_norm(list(zip(x, u, strict=True)), r)
    tracked = expression(umath, *inputs)
    step = 1e-20  # complex step: derivatives without cancellation
    c = [
        expression(np, *(np.array(x) + 1j * step * np.eye(4)[place])).imag / step
        for place in range(4)
    ]  # fmt: skip
    assert combine(c, u, r).item() == pytest.approx(tracked.std_dev, rel=1e-6, abs=1e-9)


@settings(max_examples=60)
@given(
    c=st.lists(st.floats(-100, 100), min_size=3, max_size=3),
    u=st.lists(st.floats(0, 10), min_size=3, max_size=3),
    r=st.floats(-0.49, 1),
)
def test_correlation_stays_between_full_cancellation_and_plain_sum(c, u, r):
    matrix = np.full((3, 3), r) + (1 - r) * np.eye(3)
    total = combine(c, u, matrix).item()
    assert 0 <= total <= np.abs(np.multiply(c, u)).sum() * (1 + 1e-12)
    assert combine(c, u).item() == pytest.approx(combine(c, u, np.eye(3)).item(), rel=1e-12, abs=1e-150)


def test_whole_frames_at_once_and_no_reading_stays_none():
    c = np.array([[[3.0, 4.0], [np.nan, 1.0]]])
    assert combine(c, [1.0, 1.0]).shape == (1, 2)
    assert combine(c, [1.0, 1.0])[0, 0] == pytest.approx(5.0)
    assert np.isnan(combine(c, [1.0, 1.0])[0, 1])


def test_errors_that_cancel_exactly_leave_nothing():
    assert combine([0.1, 0.1], [0.3, 0.3], [[1, -1], [-1, 1]]).item() == pytest.approx(0, abs=1e-9)


@pytest.mark.parametrize(
    ("u", "r", "says"),
    [
        ([1.0], None, "do not fit"),
        ([1.0, 1.0], np.eye(3), "shape"),
        ([1.0, 1.0], [[1, 0.2], [0.3, 1]], "symmetric"),
        ([1.0, 1.0], [[1, 1.2], [1.2, 1]], "contradict"),
        ([1.0, 1.0], [[1, np.nan], [np.nan, 1]], "finite"),
    ],
)
def test_refuses_what_does_not_fit(u, r, says):
    with pytest.raises(InputError, match=says):
        combine([1.0, 2.0], u, r)


@pytest.mark.parametrize("bad", [-0.1, np.nan, np.inf])
def test_refuses_impossible_uncertainties(bad):
    with pytest.raises(OutOfRange):
        combine([1.0, 2.0], [0.1, bad])


@pytest.mark.parametrize(
    ("pairs", "says"),
    [
        ({("a", "z"): 0.5}, "not two of the inputs"),
        ({("a", "a"): 1.0}, "not two of the inputs"),
        ({("a", "b"): 0.5, ("b", "a"): 0.5}, "twice"),
        ({("a", "b"): 1.5}, "-1 to 1"),
        ({("a", "b"): 0.9, ("b", "c"): 0.9, ("a", "c"): -0.9}, "contradict"),
    ],
)
def test_refuses_correlations_that_make_no_sense(pairs, says):
    with pytest.raises(InputError, match=says):
        correlation_matrix(["a", "b", "c"], pairs)


def test_refuses_two_inputs_of_one_name():
    with pytest.raises(InputError, match="same name"):
        correlation_matrix(["a", "a"], {})


def test_split_covariance_refuses_what_is_none():
    with pytest.raises(InputError):
        split_covariance([[1.0, 0.0], [0.0, -1.0]])
    u, r = split_covariance([[4.0, 0.0], [0.0, 0.0]])
    assert u.tolist() == [2.0, 0.0]
    assert r.tolist() == [[1.0, 0.0], [0.0, 1.0]]
    with pytest.raises(InputError):
        covariance_of_outputs([[1.0, 2.0]], np.eye(3))
    with pytest.raises(InputError):
        covariance_of_inputs([[1.0, 2.0]])
