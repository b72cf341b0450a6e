"""Blackbody radiation of the camera's band by a plain sum over a fine grid of wavelengths."""

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.interpolate import CubicSpline

Array = NDArray[np.float64]

ZERO_C_K = 273.15
H, C, K = 6.62607015e-34, 299792458.0, 1.380649e-23

STEP_UM = 0.005
BAND_UM = (7.5, 14.0)
GRID_UM: Array = np.arange(BAND_UM[0] + STEP_UM / 2, BAND_UM[1], STEP_UM)
"""Middles of the cells that the band is cut into. [µm], shape (1300,)."""


def planck(kelvin: ArrayLike) -> Array:
    """Return spectral radiance at the grid. [W m⁻² sr⁻¹ µm⁻¹], shape (..., 1300) for temperatures (...) in kelvin."""
    metres = GRID_UM * 1e-6
    exponent = H * C / (metres * K * np.asarray(kelvin, dtype=np.float64)[..., None])
    return np.asarray(2 * H * C**2 / metres**5 / np.expm1(exponent) * 1e-6)


def in_band(spectrum: Array) -> Array:
    """Return the sum over the band of spectra (..., 1300). [W m⁻² sr⁻¹]."""
    return np.asarray(spectrum.sum(axis=-1) * STEP_UM)


def radiance(kelvin: ArrayLike) -> Array:
    """Return the in-band radiance of blackbodies. [W m⁻² sr⁻¹], shape kept."""
    return in_band(planck(kelvin))


_KELVIN = np.arange(150.0, 900.0, 0.5)
_INVERSE = CubicSpline(np.log(radiance(_KELVIN)), 1 / _KELVIN, extrapolate=False)


def temperature(radiance_band: ArrayLike) -> Array:
    """Return the blackbody temperature of in-band radiance. [K], shape kept, NaN outside 150–900 K.

    Spline of 1/T over ln L: within 1e-6 K of the sum over the grid.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(1 / _INVERSE(np.log(np.asarray(radiance_band, dtype=np.float64))))
