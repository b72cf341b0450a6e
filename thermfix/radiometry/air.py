"""Spectral transmittance of air: water vapour, carbon dioxide and minor gases along a homogeneous path."""

from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError

Array = NDArray[np.float64]
SelfContinuum = Literal["published", "lowtran7"]

SHORTEST_UM, LONGEST_UM = 2.5, 15.0
"""Wavelengths the model covers. [µm]."""

OPTICAL_DEPTH_U = 0.10
"""Relative standard uncertainty of the optical depth −ln τ, for the budget. [1].

A judgement, not a measurement. The tables are carried over to 0.0022 in band transmittance, which
says nothing of the air itself: band models of this generation differ from line-by-line results and
from each other by 5–10 % of the depth in windows, the water continuum is known to about 5–10 %, and
haze, dust and uneven temperature along the path are left out. 10 % of the depth covers these for
clear air. It comes on top of the uncertainties of humidity, temperature, pressure, CO₂ and distance.
"""

_P0_HPA, _T0_K, _CONTINUUM_K = 1013.25, 273.15, 296.0
_MOLECULES_PER_G, _LOSCHMIDT = 3.3429e21, 2.6868e24
_DENSITY_AT_296 = _T0_K / _CONTINUUM_K
_NITROGEN = 0.781
_CO2_PER_PPM = 0.0999338

# By region of wavenumber: its end, then the exponents of absorber amount, pressure and temperature.
_WATER_EDGES_CM1 = (1002.5, 1642.5, 2532.5, 3422.5)
_WATER_A = (0.5299, 0.5416, 0.5479, 0.5495, 0.5464)
_WATER_N = (1.1406, 0.9834, 1.0443, 0.9681, 0.9555)
_WATER_M = (-2.6343, -2.5294, -2.4359, -1.9537, -1.5378)
_CO2_EDGES_CM1 = (837.5, 1600.0, 2900.0, 3757.5)
_CO2_A = (0.6176, 0.6810, 0.6033, 0.6146, 0.6513)
_CO2_N = (0.6705, 0.7038, 0.7258, 0.6982, 0.8867)
_CO2_M = (-2.2560, -5.0768, -1.6740, -1.8107, -0.5327)


@dataclass(frozen=True, slots=True, eq=False)
class _Table:
    """Coefficients at each wavenumber, rising; shape (668,) each."""

    wavenumber_cm1: Array
    water: Array
    co2: Array
    minor: Array
    minor_a: Array
    self_k: Array
    self_t0_k: Array
    foreign_k: Array
    nitrogen_k: Array
    water_region: NDArray[np.intp]
    co2_region: NDArray[np.intp]


def water_vapour_g_m3(air_k: ArrayLike, humidity_pct: ArrayLike) -> Array:
    r"""Return the absolute humidity of air.

    Parameters
    ----------
    air_k : array_like
        Air temperature. [K], 233 to 333.
    humidity_pct : array_like, broadcast against it
        Relative humidity over liquid water, also below 0 °C. [%], 0 to 100.

    Returns
    -------
    ndarray
        Mass of vapour per volume. [g m⁻³]; NaN for temperatures ≤ 0 or negative humidity.

    Notes
    -----
    .. math:: w = \frac{RH}{100}\, t\, e^{18.9766 - 14.9595 t - 2.43882 t^2},\quad t = 273.15/T

    Within 0.5 % of the ASHRAE saturation pressure and the ideal gas from 0 to 50 °C, 0.1 % up to 30 °C.

    References
    ----------
    .. [1] F. X. Kneizys et al., "Users Guide to LOWTRAN 7", AFGL-TR-88-0177, 1988 (saturation density).

    Examples
    --------
    >>> float(water_vapour_g_m3(293.15, 50).round(3))
    8.641
    """
    temperature = np.asarray(air_k, dtype=np.float64)
    humidity = np.asarray(humidity_pct, dtype=np.float64)
    t = _T0_K / np.where(temperature > 0, temperature, np.nan)
    return np.where(humidity >= 0, humidity, np.nan) / 100 * t * np.exp(18.9766 - 14.9595 * t - 2.43882 * t**2)


def air_transmittance(
    wavelength_um: ArrayLike,
    distance_m: ArrayLike,
    *,
    air_k: float,
    humidity_pct: float,
    pressure_hpa: float = 1013.25,
    co2_ppm: float = 420.0,
    self_continuum: SelfContinuum = "published",
) -> Array:
    r"""Return the transmittance of a homogeneous horizontal path of clear air.

    Parameters
    ----------
    wavelength_um : array_like, shape (...w)
        Wavelengths. [µm], 2.5 to 15.
    distance_m : array_like, shape (...d)
        Length of the path. [m], 0 to a few kilometres.
    air_k : float
        Air temperature. [K], 233 to 333.
    humidity_pct : float
        Relative humidity over liquid water. [%], 0 to 100.
    pressure_hpa : float
        Air pressure. [hPa], > 0.
    co2_ppm : float
        Carbon dioxide by volume. [ppm], ≥ 0.
    self_continuum : {"published", "lowtran7"}
        Temperature law of the water vapour self-continuum. "lowtran7" stands still above 296 K as
        that program does, and serves comparison with its results.

    Returns
    -------
    ndarray, shape (...d, ...w)
        Transmittance. [1], exactly 1 at distance 0, falling with distance; NaN for a negative
        distance or a condition outside what can exist.

    Raises
    ------
    InputError
        If a wavelength lies outside 2.5–15 µm, where the model has no data.

    Notes
    -----
    .. math::
        -\ln\tau = (A_w u_w)^{a_w} + (A_c u_c)^{a_c} + (A_o u_o)^{a_o}
            + [k_s' n r + k_f n (f - r)] L/r_0 + 0.781\, k_n f p \sqrt t\, L

    on a grid of 5 cm⁻¹, τ linear in wavenumber between; L in km, p = P/1013.25, t = 273.15/T,
    f = pt, w in g/m³, n = 3.3429e21 w, r = n/2.6868e24, r₀ = 273.15/296,
    u_w = 0.1 w L p^n t^m, u_c = 0.0999338 CO₂ L p^(1+n) t^(1+m), u_o = L p^1.7 t^0.8,
    k_s' = k_s exp(T₀ (1/T − 1/296)). The lines follow a power law in the path, so that τ of a band
    does not follow Beer's law, and τ depends on what spectrum passes.

    Within 0.0022 of LOWTRAN7 in 3–5, 3.6–4.9, 7.5–14, 8–12 and 8–14 µm for paths up to 200 m in air
    up to 20 °C. In warmer air the published law passes more: 0.015 at 40 °C, 50 %, 100 m, and up to
    0.13 at 50 °C, 100 %. The model's own uncertainty is larger: `OPTICAL_DEPTH_U`. No aerosol.
    Strong lines are overdone by about 0.004 on paths under a metre; 5.7–7.2 µm lacks the oxygen
    continuum (up to 0.05).

    References
    ----------
    .. [1] F. X. Kneizys et al., "Users Guide to LOWTRAN 7", AFGL-TR-88-0177, 1988.
    .. [2] R. E. Roberts, J. E. A. Selby and L. M. Biberman, "Infrared continuum absorption by atmospheric water vapor
       in the 8–12-µm window", Applied Optics 15, 2085 (1976): the self-continuum's temperature law.

    Examples
    --------
    >>> air_transmittance([4.0, 10.0], 100, air_k=293.15, humidity_pct=50).round(3)
    array([0.992, 0.984])
    """
    wavelength = np.asarray(wavelength_um, dtype=np.float64)
    _check_covered(wavelength)
    distance = np.asarray(distance_m, dtype=np.float64)
    length_km = np.where((distance >= 0) & np.isfinite(distance), distance, np.nan)[..., None] / 1e3
    table = _table()
    p = pressure_hpa / _P0_HPA if pressure_hpa > 0 else np.nan
    t = _T0_K / air_k if air_k > 0 else np.nan
    w = float(water_vapour_g_m3(air_k, humidity_pct))
    ppm = co2_ppm if co2_ppm >= 0 else np.nan
    depth = (
        _water_lines(table, w, length_km, p, t)
        + _co2_lines(table, ppm, length_km, p, t)
        + (table.minor * length_km * p**1.7 * t**0.8) ** table.minor_a
        + _continuum(table, w, p, t, self_continuum) * length_km
    )
    return _between(np.exp(-depth), table.wavenumber_cm1, 1e4 / wavelength)


def _water_lines(table: _Table, w: float, length_km: Array, p: float, t: float) -> Array:
    a, n, m = (np.array(column)[table.water_region] for column in (_WATER_A, _WATER_N, _WATER_M))
    return np.asarray((table.water * 0.1 * w * length_km * p**n * t**m) ** a)


def _co2_lines(table: _Table, ppm: float, length_km: Array, p: float, t: float) -> Array:
    a, n, m = (np.array(column)[table.co2_region] for column in (_CO2_A, _CO2_N, _CO2_M))
    return np.asarray((table.co2 * _CO2_PER_PPM * ppm * length_km * p ** (1 + n) * t ** (1 + m)) ** a)


def _continuum(table: _Table, w: float, p: float, t: float, law: SelfContinuum) -> Array:
    """Return the depth per km of what follows Beer's law: water vapour's continuum and nitrogen's."""
    temperature = _T0_K / t
    f = p * t
    number = _MOLECULES_PER_G * w
    r = number / _LOSCHMIDT
    if law == "published":
        self_k = table.self_k * np.exp(table.self_t0_k * (1 / temperature - 1 / _CONTINUUM_K))
    else:
        cold = np.exp(table.self_t0_k * (1 / 260 - 1 / _CONTINUUM_K)) - 1
        self_k = table.self_k * (1 + cold * np.clip((_CONTINUUM_K - temperature) / 36, 0, 1))
    water = (self_k * number * r + table.foreign_k * number * (f - r)) / _DENSITY_AT_296
    return np.asarray(water + table.nitrogen_k * _NITROGEN * f * p * np.sqrt(t))


def _between(values: Array, grid_cm1: Array, wavenumber_cm1: Array) -> Array:
    """Return ``values`` (..., 668) at the wavenumbers, linear between the evenly spaced grid points."""
    position = (wavenumber_cm1 - grid_cm1[0]) / (grid_cm1[1] - grid_cm1[0])
    left = np.minimum(position.astype(np.intp), grid_cm1.size - 2)
    share = position - left
    # Written so that two equal neighbours give exactly their value.
    return np.asarray(values[..., left] + share * (values[..., left + 1] - values[..., left]))


def _check_covered(wavelength_um: Array) -> None:
    outside = ~((wavelength_um >= SHORTEST_UM) & (wavelength_um <= LONGEST_UM))
    if outside.any():
        raise InputError(
            f"The air model covers {SHORTEST_UM:g} to {LONGEST_UM:g} µm; it was asked for "
            f"{np.min(wavelength_um):g} to {np.max(wavelength_um):g} µm.",
            hint="Give a measured transmittance of the path (scene.transmittance); 1 for a path of a few centimetres.",
        )


@cache
def _table() -> _Table:
    text = files("thermfix.radiometry").joinpath("data/air_absorption.csv").read_text(encoding="utf-8")
    rows = [line for line in text.splitlines() if line and not line.startswith("#")][1:]
    nu, water, co2, minor, minor_a, self_k, self_t0, foreign_k, nitrogen_k = np.loadtxt(rows, delimiter=",").T
    return _Table(
        wavenumber_cm1=nu,
        water=_power(water),
        co2=_power(co2),
        minor=_power(minor),
        minor_a=minor_a,
        self_k=_power(self_k),
        self_t0_k=self_t0,
        foreign_k=_power(foreign_k),
        nitrogen_k=_power(nitrogen_k),
        water_region=np.searchsorted(_WATER_EDGES_CM1, nu, side="right"),
        co2_region=np.searchsorted(_CO2_EDGES_CM1, nu, side="right"),
    )


def _power(log10: Array) -> Array:
    return np.where(log10 > -32, 10.0**log10, 0.0)
