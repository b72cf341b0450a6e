"""Sakuma–Hattori: published parameters and signals, its misfit to exact bands, and the fit."""

import re

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.optimize import brentq

from thermfix.errors import InputError
from thermfix.radiometry.sakuma_hattori import fit, parameters_of_band, signal, slope, temperature

C2 = 14387.768775
TRUE = (9.4, 180.0, 50_000.0, 300.0)


def band_signal(lo_um, hi_um, kelvin):
    """Exact in-band signal up to a factor, by adaptive quadrature written here."""
    return np.array(
        [
            quad(lambda x, t=t: 1e5 / (x**5 * np.expm1(C2 / (x * t))), lo_um, hi_um, epsrel=1e-12, epsabs=0)[0]
            for t in np.atleast_1d(kelvin)
        ]
    )


def edges_of(row):
    return tuple(float(edge) for edge in re.fullmatch(r"b_\w+?_([\d.]+)-([\d.]+)(?:_.+)?", row["id"]).groups())


@pytest.mark.rows("b_sakuma_hattori", "b_A_", "b_B_")
def test_parameters_of_rectangular_bands(row, expected):
    """CCT-WG5 (2008), Saunders & White (2003), formula from memory: 1e-6; ASTM E2847 prints 9.364 and 178.4."""
    a, b = parameters_of_band(*edges_of(row))
    assert (a if row["id"].startswith("b_A") else b) == pytest.approx(expected, rel=1e-6)
    if row["id"].endswith("_8-14"):
        assert a == pytest.approx(9.364, abs=5e-4)
        assert b == pytest.approx(178.4, abs=0.05)


@pytest.mark.rows("b_sakuma_hattori", "b_res_")
def test_misfit_of_band_edge_parameters(row, expected):
    """What A and B from the edges miss when matched at 100 °C: mpmath, 1e-4 K."""
    celsius = float(re.search(r"_(-?\d+)C$", row["id"])[1])
    a, b = parameters_of_band(*edges_of(row))
    matched, seen = band_signal(*edges_of(row), [373.15, celsius + 273.15])
    c = float(matched / signal(373.15, a, b, 1.0))
    assert temperature(seen, a, b, c) - (celsius + 273.15) == pytest.approx(expected, abs=1e-4)


@pytest.mark.rows("b_sakuma_hattori", "b_fitmax_")
def test_fit_reaches_the_best_known_residual(row, expected):
    """Three parameters, −40…500 °C: at most 1.3 × the reference fit's largest residual, and its A and B to 1 %."""
    kelvin = np.arange(-40, 501, 20) + 273.15
    found = fit(kelvin, band_signal(*edges_of(row), kelvin), fixed_d=0.0)
    assert np.abs(found.residual_k).max() <= 1.3 * expected
    a, b = (float(text) for text in re.search(r"A=([\d.]+), B=([\d.]+)", row["inputs"]).groups())
    assert found.parameters[0] == pytest.approx(a, rel=1e-3)
    assert found.parameters[1] == pytest.approx(b, rel=1e-2)


@pytest.mark.rows("b_sakuma_hattori", "b_S_")
def test_published_signals(row, expected):
    """ASTM E2847 constants (from memory) with c2 = 14387.769 µm K: 1e-8."""
    celsius = float(re.search(r"t=(-?\d+)", row["inputs"])[1])
    assert signal(celsius + 273.15, 9.364, 178.4, 1.0) == pytest.approx(expected, rel=1e-8)


@pytest.mark.rows("b_sakuma_hattori", "b_epsErr_")
def test_error_of_a_wrong_emissivity(row, expected):
    """In the way of ASTM E2847: set 0.94, true 0.95, reflected 23 °C; 1e-5 K."""
    kelvin = float(re.search(r"t=(-?\d+)", row["inputs"])[1]) + 273.15

    def s(t):
        return float(signal(t, 9.364, 178.4, 1.0))

    received = 0.95 * s(kelvin) + 0.05 * s(296.15)
    indicated = temperature((received - 0.06 * s(296.15)) / 0.94, 9.364, 178.4, 1.0)
    assert indicated - kelvin == pytest.approx(expected, abs=1e-5)
    independent = brentq(lambda t: 0.94 * s(t) + 0.06 * s(296.15) - received, 100, 1500, xtol=1e-10)
    assert indicated == pytest.approx(independent, abs=1e-7)


@given(st.floats(220, 2500), st.floats(1, 20), st.floats(0, 300), st.floats(1, 1e6), st.floats(-1e4, 1e4))
def test_inverse_undoes_the_signal(kelvin, a, b, c, d):
    """Where the offset does not swallow the digits of the signal."""
    counts = signal(kelvin, a, b, c, d)
    if counts - d > 1e-6 * abs(d):
        assert temperature(counts, a, b, c, d) == pytest.approx(kelvin, rel=1e-9, abs=1e-6 * kelvin * (abs(d) > 0))


@given(st.floats(220, 2500), st.floats(1, 20), st.floats(0, 300))
def test_slope_is_the_derivative(kelvin, a, b):
    h = 1e-3
    difference = (signal(kelvin + h, a, b, 1e3) - signal(kelvin - h, a, b, 1e3)) / (2 * h)
    assert slope(kelvin, a, b, 1e3) == pytest.approx(difference, rel=1e-6)


def test_no_temperature_without_radiance():
    """S ≤ D is below what no surface at all gives."""
    got = temperature([300.0, 299.0, -np.inf, np.nan, np.inf, 301.0], *TRUE)
    assert np.isnan(got).tolist() == [True] * 5 + [False]
    assert np.isnan(temperature(300.0 + 1e-300, *TRUE)) or temperature(300.0 + 1e-300, *TRUE) > 0
    assert np.isnan(signal([0.0, -5.0, np.nan], *TRUE)).all()
    assert np.isnan(signal(300.0, 9.4, -5000.0, 1.0))


@given(st.floats(2.5, 14), st.floats(0, 0.25), st.floats(100, 1e6), st.floats(-2000, 5000), st.floats(240, 320))
@settings(max_examples=25)
def test_fit_finds_the_parameters_that_made_the_shots(a, share, c, d, coldest):
    """Exact shots over 300 K: the curve comes back to 0.1 mK whatever the band, gain and offset."""
    kelvin = np.linspace(coldest, coldest + 300, 9)
    b = share * a * coldest
    counts = signal(kelvin, a, b, c, d)
    if np.diff(counts).min() < 1e-7 * abs(d):
        return
    found = fit(kelvin, counts)
    between = np.linspace(coldest, coldest + 300, 50)
    error = (signal(between, *found.parameters) - signal(between, a, b, c, d)) / slope(between, a, b, c)
    assert np.abs(error).max() < 1e-4
    assert found.parameters[0] > 0
    assert found.parameters[2] > 0
    assert found.degrees_of_freedom == 5


def test_covariance_is_the_scatter_of_repeated_calibrations():
    """100 calibrations with 50 mK of noise: the stated covariance against the one seen.

    The sample standard deviation of 100 draws is good to 7 %, the mean stated variance of as many with 4
    degrees of freedom as well: 20 % is two standard deviations of their ratio.
    """
    rng = np.random.default_rng(20240517)
    kelvin = np.linspace(273.15, 573.15, 8)
    fits = [fit(kelvin, signal(kelvin + rng.normal(0, 0.05, 8), *TRUE)) for _ in range(100)]
    seen = np.std([one.parameters for one in fits], axis=0)
    stated = np.sqrt(np.mean([np.diag(one.covariance) for one in fits], axis=0))
    assert stated == pytest.approx(seen, rel=0.20)
    assert np.mean([one.parameters for one in fits], axis=0) == pytest.approx(TRUE, rel=0.01)


def test_residuals_are_fitted_minus_given_in_both_units():
    rng = np.random.default_rng(1)
    kelvin = np.linspace(283.15, 573.15, 8)
    order = rng.permutation(8)
    counts = signal(kelvin, *TRUE) + rng.normal(0, 2, 8)
    one, shuffled = fit(kelvin, counts), fit(kelvin[order], counts[order])
    assert one.residual_counts == pytest.approx(signal(kelvin, *one.parameters) - counts)
    assert one.residual_k == pytest.approx(temperature(counts, *one.parameters) - kelvin)
    assert np.all(one.residual_counts * one.residual_k <= 0)
    assert shuffled.residual_k == pytest.approx(one.residual_k[order], abs=1e-5)
    assert all(type(value) is float for value in one.parameters)
    assert np.linalg.eigvalsh(one.covariance / np.outer(*[np.sqrt(np.diag(one.covariance))] * 2)).min() > -1e-9


def test_a_fixed_offset_is_kept_and_has_no_uncertainty():
    kelvin = np.linspace(283.15, 573.15, 5)
    found = fit(kelvin, np.round(signal(kelvin, *TRUE)), fixed_d=300.0)
    assert found.parameters[3] == 300.0
    assert found.degrees_of_freedom == 2
    assert found.covariance[3].tolist() == found.covariance[:, 3].tolist() == [0, 0, 0, 0]
    assert np.all(np.diag(found.covariance)[:3] > 0)


def test_repeated_shots_are_welcome():
    kelvin = np.repeat(np.linspace(283.15, 573.15, 5), 3)
    counts = signal(kelvin, *TRUE) + np.tile([-1.0, 0.0, 1.0], 5)
    found = fit(kelvin, counts)
    assert found.degrees_of_freedom == 11
    assert found.parameters == pytest.approx(TRUE, rel=1e-3)


def test_shots_that_settle_nothing_are_reported_not_hidden():
    """A straight line is no Planck curve: the curve holds near the shots, the parameters are not meant."""
    kelvin = np.linspace(300.0, 301.0, 8)
    found = fit(kelvin, 1000 + 20 * (kelvin - 300))
    assert found.degenerate
    assert np.isnan(found.covariance).all()
    assert np.abs(found.residual_k).max() < 1e-4


@pytest.mark.parametrize(
    ("kelvin", "counts", "fixed_d", "words"),
    [
        ([280, 300, 320, 340], [1, 2, 3, 4], None, "needs at least 5 shots"),
        ([280, 300, 320], [1, 2, 3], 0.0, "needs at least 4 shots"),
        ([280, 280, 280, 300, 320], [1, 1, 1, 2, 3], None, "at 3 temperatures"),
        ([280, 300, 320, 340, 360], [1, 2, 3, 3, 4], None, r"do not rise from 320.00 K \(3\) to 340.00 K"),
        ([280, 300, 320, 340, 360], [5, 4, 3, 2, 1], None, "do not rise"),
        ([280, 300, 320, 340, 360], [1, 2, 3, 4, np.nan], None, "finite"),
        ([0, 300, 320, 340, 360], [1, 2, 3, 4, 5], None, "absolute zero"),
        ([280, 300, 320, 340], [1, 2, 3, 4], 1.0, "above the fixed offset 1"),
        ([280, 300, 320, 340], [1, 2, 3, 4, 5], None, "as many of both"),
        ([[280, 300, 320, 340, 360]], [[1, 2, 3, 4, 5]], None, "as many of both"),
    ],
)
def test_shots_that_are_refused(kelvin, counts, fixed_d, words):
    with pytest.raises(InputError, match=words):
        fit(kelvin, counts, fixed_d=fixed_d)
