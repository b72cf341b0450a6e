"""In-band radiance, its inverse and slope, against mpmath, adaptive quadrature and published satellite bands."""

import re

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from thermfix.errors import InputError, OutOfRange
from thermfix.radiometry import Band
from thermfix.radiometry.planck import spectral_radiance, spectral_radiance_per_wavenumber

BANDS = [(8.0, 14.0), (7.5, 14.0), (3.0, 5.0), (2.0, 15.0), (2.0, 2.2), (14.5, 15.0)]


def of(row):
    low, high, celsius = re.search(r"band=([\d.]+)-([\d.]+) um; t=([-\d.]+) degC", row["inputs"]).groups()
    return Band.rectangular(float(low), float(high)), float(celsius) + 273.15


@pytest.mark.rows("a_band", "a_B_")
def test_in_band_radiance(row, expected):
    """mpmath, 30 digits."""
    band, temperature = of(row)
    assert float(band.radiance(temperature)) == pytest.approx(expected, rel=1e-9)


@pytest.mark.rows("a_band", "a_dB_")
def test_in_band_slope(row, expected):
    """mpmath numerical derivative, 30 digits."""
    band, temperature = of(row)
    assert float(band.slope(temperature)) == pytest.approx(expected, rel=1e-7)


@pytest.mark.rows("a_band", "a_n_")
def test_local_exponent(row, expected):
    """d ln L / d ln T; ten printed digits."""
    band, temperature = of(row)
    exponent = temperature * float(band.slope(temperature) / band.radiance(temperature))
    assert exponent == pytest.approx(expected, abs=1e-7)


@given(st.floats(2, 14.9), st.floats(0.1, 13), st.floats(213.15, 3273.15))
@settings(max_examples=60)
def test_adaptive_quadrature_agrees(low, width, temperature):
    """L within 1e-7 relative of adaptive quadrature over the whole range of bands and temperatures."""
    high = min(low + width, 15.0)
    exact, _ = quad(lambda x: float(spectral_radiance(x, temperature)), low, high, epsrel=1e-11, epsabs=0, limit=200)
    band = Band.rectangular(low, high)
    assert float(band.radiance(temperature)) == pytest.approx(exact, rel=1e-7)
    assert float(band.curve.radiance(temperature)) == pytest.approx(exact, rel=1e-7)


@pytest.mark.parametrize(("low", "high"), BANDS)
def test_inverse_undoes_the_radiance(low, high):
    """T(L(T)) within 0.1 mK from −60 to 3000 °C."""
    band = Band.rectangular(low, high)
    temperature = np.linspace(213.15, 3273.15, 1000)
    assert np.abs(band.temperature(band.radiance(temperature)) - temperature).max() < 1e-4


@pytest.mark.parametrize(("low", "high"), BANDS)
def test_fast_inverse_reaches_its_marks(low, high):
    """float32 pieces within 0.25 mK over the range and 0.06 mK below 400 K of the exact inverse."""
    band = Band.rectangular(low, high)
    radiance = band.radiance(np.linspace(213.2, 3273.1, 200_000)).astype(np.float32)
    exact = band.temperature(radiance)
    error = np.abs(band.curve.pieces(radiance) - exact)
    assert error.max() <= 0.25e-3
    assert error[exact < 400].max() <= 0.06e-3


@pytest.mark.parametrize("radiance", [0.0, -0.0, -5.0, np.nan, np.inf, -np.inf, 1e-30, 1e30, 1e-45])
def test_no_temperature_from_radiance_that_no_surface_gives(radiance):
    band = Band.rectangular(8, 14)
    assert np.isnan(band.temperature(radiance))
    assert np.isnan(band.curve.pieces(np.array([radiance], np.float32))).all()


@given(st.integers(0, 2**32 - 1))
@settings(max_examples=300)
def test_any_bit_pattern_gives_nothing_or_a_carried_temperature(bits):
    """Negative, subnormal, NaN and infinite patterns included."""
    fast = Band.rectangular(3, 5).curve.pieces
    value = np.array([bits], np.uint32).view(np.float32)
    temperature = float(fast(value)[0])
    assert np.isnan(temperature) or 213.0 <= temperature <= 3273.3


def test_scale_and_offset_ahead_of_the_inverse():
    band = Band.rectangular(8, 14)
    radiance = band.radiance(np.linspace(250, 400, 70_000)).astype(np.float32)
    scale = np.linspace(1, 1.1, radiance.size, dtype=np.float32)
    whole, slope = band.curve.pieces.with_slope(radiance, scale=scale, offset=-1.5)
    y = scale.astype(np.float64) * radiance - 1.5
    np.testing.assert_allclose(whole, band.temperature(y), atol=1e-3)
    np.testing.assert_allclose(slope[::1000], 1 / band.slope(band.temperature(y[::1000])), rtol=1e-3)
    np.testing.assert_array_equal(whole, band.curve.pieces(radiance, scale=scale, offset=-1.5))


def test_slope_of_the_pieces_is_the_slope_of_the_inverse():
    """Pieces are 1/2048 of an octave wide; the slope changes by less than 0.1 % across one."""
    band = Band.rectangular(7.5, 14)
    temperature = np.linspace(220, 3200, 900)
    _, slope = band.curve.pieces.with_slope(band.radiance(temperature).astype(np.float32))
    np.testing.assert_allclose(slope, 1 / band.slope(temperature), rtol=1e-3)


def response(reference_dir, name):
    table = np.loadtxt(reference_dir / "response" / f"{name}.csv", delimiter=",", skiprows=2)
    return table[:, 0], np.clip(table[:, 1], 0, None)


@pytest.mark.rows("c_satellite", "c_L", "c_ASTER")
def test_satellite_bands(row, expected, reference_dir):
    """Published responses (NASA/USGS) and published K1, K2 constants.

    Only Landsat 7 and ASTER 11 are absolute tests; the other published constants differ from their
    own response tables by the stated deviations, which must be found again. The table's means are
    trapezoids on its grid: 1e-5 instead of 1e-6 allows for the finer quadrature here.
    """
    kind = row["id"].rsplit("_", 2)
    if "_L_" in row["id"]:
        name, kelvin = re.search(r"rsr/(\w+)\.csv; T=(\d+)", row["inputs"]).groups()
        wavelength, value = response(reference_dir, name)
        band = Band.from_response(wavelength, value / value.max())
        mean = float(band.radiance(float(kelvin))) / (np.trapezoid(value, wavelength) / value.max())
        assert mean == pytest.approx(expected, rel=1e-5), kind
    elif row["id"].endswith("_dev"):
        k1, k2, name = re.search(r"K1=([\d.]+); K2=([\d.]+); RSR rsr/(\w+)\.csv", row["inputs"]).groups()
        wavelength, value = response(reference_dir, name)
        band = Band.from_response(wavelength, value / value.max())
        temperature = np.arange(250.0, 331.0, 10.0)
        mean = band.radiance(temperature) / (np.trapezoid(value, wavelength) / value.max())
        deviation = float(k2) / np.log(float(k1) / mean + 1) - temperature
        assert np.abs(deviation).max() == pytest.approx(expected, abs=0.01)
    else:
        k1, k2 = map(float, re.search(r"K1=([\d.]+); K2=([\d.]+)", row["inputs"]).groups())
        assert k2 / np.log(k1 / 10 + 1) == pytest.approx(expected, abs=1e-6)


@pytest.mark.parametrize(("name", "k1", "k2", "kelvin"), [
    ("L7_ETM_B6", 666.09, 1282.71, 0.025),
    ("ASTER_B11", 2482.375199, 1666.398761, 0.035),
])  # fmt: skip
def test_absolute_satellite_temperatures(name, k1, k2, kelvin, reference_dir):
    """Landsat 7 (Chander et al. 2009) within 0.023 K and ASTER 11 within 0.030 K of their published constants."""
    wavelength, value = response(reference_dir, name)
    band = Band.from_response(wavelength, value / value.max())
    mean = np.trapezoid(value, wavelength) / value.max()
    for temperature in np.arange(250.0, 331.0, 10.0):
        published = k1 / np.expm1(k2 / temperature)
        assert float(band.temperature(published * mean)) == pytest.approx(temperature, abs=kelvin)


@pytest.mark.rows("c_satellite", "c_MSG")
def test_weather_satellite_effective_radiance(row, expected):
    """EUMETSAT's effective wavenumber form of Planck's law; its own constants differ by 5e-7."""
    centre, alpha, beta, kelvin = map(
        float, re.search(r"vc=([\d.]+), alpha=([\d.]+), beta=([\d.]+); T=(\d+)", row["inputs"]).groups()
    )
    value = 1000 * float(spectral_radiance_per_wavenumber(centre, alpha * kelvin + beta))
    assert value == pytest.approx(expected, rel=2e-6)


def test_flat_response_is_the_rectangular_band():
    flat = Band.from_response([8.0, 9.3, 14.0], [1.0, 1.0, 1.0])
    assert float(flat.radiance(300.0)) == pytest.approx(float(Band.rectangular(8, 14).radiance(300.0)), rel=1e-10)


@pytest.mark.parametrize(("wavelength", "value", "words"), [
    ([8, 14], [0, 98], "0 to 1"),
    ([8, 14], [0, 0], "0 everywhere"),
    ([14, 8], [1, 1], "rise"),
    ([8], [1], "2 rows"),
    ([8, 14, 15], [1, 1], "equal length"),
    ([8, 9, 14], [1, float("nan"), 1], "0 to 1"),
])  # fmt: skip
def test_refused_responses(wavelength, value, words):
    with pytest.raises(InputError, match=words):
        Band.from_response(wavelength, value)


@pytest.mark.parametrize(("low", "high"), [(1.9, 5), (8, 15.1), (float("nan"), 14)])
def test_refused_bands(low, high):
    with pytest.raises(OutOfRange):
        Band.rectangular(low, high)


def test_empty_band_is_refused():
    with pytest.raises(InputError, match="empty"):
        Band.rectangular(14, 8)
