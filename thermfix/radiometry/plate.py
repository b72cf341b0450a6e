"""Transmittance and reflectance of an uncoated window plate, with its multiple internal reflections."""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.radiometry.fresnel import polarised_emissivity

Array = NDArray[np.float64]


class PlateOptics(NamedTuple):
    """What a plate does with radiation that falls on it: three shares [1] that sum to 1."""

    transmittance: Array
    reflectance: Array
    emissivity: Array


def plate(
    n: ArrayLike, k: ArrayLike, thickness_mm: ArrayLike, wavelength_um: ArrayLike, angle_deg: ArrayLike
) -> PlateOptics:
    r"""Return the optics of a plane-parallel uncoated plate in air, unpolarised.

    Parameters
    ----------
    n, k : array_like
        Refractive index and extinction coefficient at the wavelengths. [1], n > 0, k ≥ 0.
    thickness_mm : array_like
        Thickness. [mm], ≥ 0.
    wavelength_um : array_like
        Vacuum wavelength. [µm], > 0.
    angle_deg : array_like
        Angle of incidence. [deg], 0 to 90. All five broadcast.

    Returns
    -------
    PlateOptics
        Transmittance, reflectance and emissivity 1 − τ − ρ. [1]; NaN where an input is outside its range.

    Notes
    -----
    For each polarisation, with the reflectance R of one face and the internal transmittance a,

    .. math::
        \tau = \frac{(1 - R)^2 a}{1 - R^2a^2},\quad \rho = R(1 + a\tau),\quad
        a = e^{-4\pi d\,\mathrm{Im}\,s/\lambda},\quad s = \sqrt{(n + ik)^2 - \sin^2\theta}

    and the mean of both. Im s is k/cos θ' to first order in k, θ' being the angle inside. The
    reflections add without interference: right where the fringes are finer than the band, that is
    for thicknesses well above λ²/(n Δλ), some tens of micrometres for thermal cameras.

    References
    ----------
    .. [1] R. Siegel and J. R. Howell, "Thermal Radiation Heat Transfer"; M. F. Modest, "Radiative Heat Transfer"
       (transmission through a plane slab by ray tracing or net radiation).

    Examples
    --------
    >>> float(plate(4.0, 0.0, 5.0, 10.0, 0.0).transmittance.round(6))  # 2n/(n² + 1)
    0.470588
    """
    thickness, wavelength = _at_least_zero(thickness_mm), _above_zero(wavelength_um)
    x = (np.asarray(n, dtype=np.float64) + 1j * _at_least_zero(k)) ** 2
    s = np.sqrt(x - np.sin(np.radians(np.asarray(angle_deg, dtype=np.float64))) ** 2)
    internal = np.exp(-4e3 * np.pi * thickness * s.imag / wavelength)
    return _slab(polarised_emissivity(n, k, angle_deg), internal, angle_deg)


def plate_of_internal_transmittance(
    n: ArrayLike, internal_transmittance: ArrayLike, angle_deg: ArrayLike
) -> PlateOptics:
    r"""Return the optics of a weakly absorbing plate known by its internal transmittance.

    Parameters
    ----------
    n : array_like
        Refractive index. [1], ≥ 1.
    internal_transmittance : array_like
        Share that survives one pass straight through, face reflections excluded. [1], 0 to 1.
    angle_deg : array_like
        Angle of incidence. [deg], 0 to 90. All three broadcast.

    Notes
    -----
    As `plate`, with R from n alone and :math:`a = a_0^{1/\cos\theta'}`, :math:`\sin\theta' = \sin\theta/n`.
    """
    index = np.asarray(n, dtype=np.float64)
    index = np.where(index >= 1, index, np.nan)
    straight = np.asarray(internal_transmittance, dtype=np.float64)
    straight = np.where((straight >= 0) & (straight <= 1), straight, np.nan)
    sine = np.sin(np.radians(np.asarray(angle_deg, dtype=np.float64))) / index
    with np.errstate(divide="ignore"):  # n = 1 at exactly 90° never gets through
        internal = straight ** (1 / np.sqrt(1 - sine**2))
    return _slab(polarised_emissivity(index, 0.0, angle_deg), internal, angle_deg)


def _slab(entering: tuple[Array, Array], internal: Array, angle_deg: ArrayLike) -> PlateOptics:
    """Return the mean over both polarisations of the slab whose faces let ``entering`` = 1 − R in."""
    grazing = np.asarray(angle_deg, dtype=np.float64) == 90
    through, back = [], []
    for share in entering:
        reflected = 1 - share
        with np.errstate(invalid="ignore"):  # grazing view of a lossless plate is 0/0: nothing enters
            tau = share**2 * internal / ((1 - reflected * internal) * (1 + reflected * internal))
        tau = np.where(grazing & np.isfinite(share) & np.isfinite(internal), 0.0, tau)
        through.append(tau)
        back.append(reflected * (1 + internal * tau))
    transmittance, reflectance = (through[0] + through[1]) / 2, (back[0] + back[1]) / 2
    # Rounding of a lossless plate may leave −1e-16: not an emission.
    return PlateOptics(transmittance, reflectance, np.maximum(1 - transmittance - reflectance, 0.0))


def _at_least_zero(values: ArrayLike) -> Array:
    array = np.asarray(values, dtype=np.float64)
    return np.where((array >= 0) & np.isfinite(array), array, np.nan)


def _above_zero(values: ArrayLike) -> Array:
    array = np.asarray(values, dtype=np.float64)
    return np.where((array > 0) & np.isfinite(array), array, np.nan)
