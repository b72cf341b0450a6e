"""Planck's law against published constants, an independent quadrature, and astropy."""

import re

import astropy.units as units
import numpy as np
import pytest
from astropy.modeling.models import BlackBody
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad

from thermfix.radiometry import planck

CONSTANTS = {
    "a_c2": (planck.C2_UM_K * 1e-6, 1e-10),
    "a_c1L": (planck.C1L * 1e-24, 1e-10),
    "a_sigma": (planck.STEFAN_BOLTZMANN, 1e-9),
    "a_wien": (planck.WIEN_UM_K, 1e-9),
}


@pytest.mark.rows("a_planck", *CONSTANTS)
def test_constants_of_codata_2018(row, expected):
    """SI 2019 exact constants; the printed digits end at eleven, hence 1e-10."""
    value, tolerance = CONSTANTS[row["id"]]
    assert value == pytest.approx(expected, rel=tolerance)


@pytest.mark.rows("a_planck", "a_F_")
def test_blackbody_fraction(row, expected):
    """Siegel and Howell's series, computed with mpmath to 30 digits; handbook tables are 5e-5 off."""
    product = float(re.search(r"lambdaT=([\d.]+)", row["inputs"]).group(1))
    assert float(planck.fraction_below(product)) == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize("product", [900.0, 2898.0, 11500.0, 60000.0])
def test_blackbody_fraction_by_quadrature(product):
    """The same share by adaptive quadrature of Planck's law, which knows nothing of the series."""
    share, _ = quad(lambda x: x**3 / np.expm1(x), planck.C2_UM_K / product, 700, epsabs=1e-12)
    assert float(planck.fraction_below(product)) == pytest.approx(15 / np.pi**4 * share, abs=1e-9)


@pytest.mark.rows("a_planck", "a_L_")
def test_spectral_radiance(row, expected):
    """mpmath, 30 digits."""
    wavelength, temperature = re.search(r"lambda=([\d.]+) um; T=([\d.]+)", row["inputs"]).groups()
    assert float(planck.spectral_radiance(float(wavelength), float(temperature))) == pytest.approx(expected, rel=1e-9)


@pytest.mark.rows("a_planck", "a_Lnu_")
def test_spectral_radiance_per_wavenumber(row, expected):
    """mpmath, 30 digits; the table is in mW."""
    wavenumber, temperature = re.search(r"nu=([\d.]+) cm-1; T=([\d.]+)", row["inputs"]).groups()
    value = planck.spectral_radiance_per_wavenumber(float(wavenumber), float(temperature))
    assert 1000 * float(value) == pytest.approx(expected, rel=1e-9)


def test_astropy_agrees():
    """An independent library of the same law; its constants are CODATA 2018 too."""
    wavelength = np.array([2.0, 3.9, 8.0, 10.0, 14.0])
    unit = units.W / (units.m**2 * units.sr * units.um)
    for temperature in (213.15, 300.0, 1273.15, 3273.15):
        theirs = BlackBody(temperature * units.K, scale=1.0 * unit)(wavelength * units.um).to_value(unit)
        np.testing.assert_allclose(planck.spectral_radiance(wavelength, temperature), theirs, rtol=1e-9)


@given(st.floats(2, 15), st.floats(200, 3400))
def test_slope_is_the_derivative(wavelength, temperature):
    """Central difference, step 1e-4 of T: its own error is below 1e-6."""
    step = 1e-4 * temperature
    low, high = planck.spectral_radiance(wavelength, [temperature - step, temperature + step])
    assert float(planck.spectral_radiance_slope(wavelength, temperature)) == pytest.approx(
        (high - low) / (2 * step), rel=1e-5
    )


@pytest.mark.parametrize("temperature", [0.0, -1.0, np.nan])
def test_no_radiance_without_a_temperature(temperature):
    assert np.isnan(planck.spectral_radiance(10.0, temperature))
