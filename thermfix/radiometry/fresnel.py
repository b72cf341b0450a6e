"""Emissivity of smooth opaque surfaces against the view angle, by Fresnel's equations."""

from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
_Complex = NDArray[np.complex128]
Kind = Literal["diffuse", "dielectric", "metal"]

METAL_MAX_EMISSIVITY = 2 * np.sqrt(2) - 2
"""Largest normal emissivity a surface with n = k can have, reached at n = k = 1/√2. [1]."""

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(96)


def polarised_emissivity(n: ArrayLike, k: ArrayLike, angle_deg: ArrayLike) -> tuple[Array, Array]:
    r"""Return the emissivity of a smooth half-space for s and for p polarisation.

    Parameters
    ----------
    n, k : array_like
        Refractive index and extinction coefficient. [1], n > 0, k ≥ 0.
    angle_deg : array_like
        Angle between surface normal and view direction. [deg], 0 to 90. All three broadcast.

    Returns
    -------
    tuple of ndarray
        ε_s and ε_p. [1], 0 to 1; exactly 0 at 90°; NaN where an input is outside its range.

    Notes
    -----
    With :math:`m = n + ik`, :math:`c = \cos\theta` and :math:`s = \sqrt{m^2 - \sin^2\theta}`

    .. math::
        \epsilon_s = 1 - \left|\frac{c - s}{c + s}\right|^2 = \frac{4c\,\mathrm{Re}\,s}{|c + s|^2},\quad
        \epsilon_p = 1 - \left|\frac{m^2c - s}{m^2c + s}\right|^2
        = \frac{4c\,\mathrm{Re}(m^2 s^*)}{|m^2c + s|^2}

    The right-hand forms lose no digits where the emissivity is small. Valid for a surface that is
    smooth against the wavelength and thick enough to be opaque: clean smooth metals are lower
    bounds for real ones, and thin plastics, glass and crystals let 3–5 µm through.

    References
    ----------
    .. [1] M. F. Modest, "Radiative Heat Transfer", chapters 2 and 3 (Fresnel's relations).
    """
    c, x = _cosine(angle_deg), _permittivity(n, k)
    c, x = np.broadcast_arrays(c, x)
    s = _inside(x, c)
    with np.errstate(invalid="ignore", divide="ignore"):  # n = 1 at exactly 90° is 0/0, set below
        eps_s = 4 * c * s.real / np.abs(c + s) ** 2
        eps_p = 4 * c * (x * s.conj()).real / np.abs(x * c + s) ** 2
    grazing = (c == 0) & np.isfinite(x)
    return np.where(grazing, 0.0, eps_s), np.where(grazing, 0.0, eps_p)


def fresnel_emissivity(n: ArrayLike, k: ArrayLike, angle_deg: ArrayLike) -> Array:
    """Return the unpolarised emissivity of a smooth half-space, the mean of `polarised_emissivity`.

    Parameters, shapes, validity and source as there.

    Examples
    --------
    >>> fresnel_emissivity(1.5, 0.0, [0, 60, 80]).round(4)
    array([0.96  , 0.9108, 0.6123])
    """
    eps_s, eps_p = polarised_emissivity(n, k, angle_deg)
    return np.asarray((eps_s + eps_p) / 2)


def hemispherical_emissivity(n: ArrayLike, k: ArrayLike) -> Array:
    r"""Return the hemispherical emissivity of a smooth half-space; n and k broadcast.

    Notes
    -----
    .. math:: \epsilon_h = 2\int_0^{\pi/2} \epsilon(\theta) \cos\theta \sin\theta\, d\theta

    Gauss–Legendre in v, cos θ = v³, which crowds the nodes where metals have their maximum near
    grazing view: 1e-7 for n and k from 0.5 to 200. For metals it exceeds the normal value by up to
    4/3; for dielectrics it is 0.91–0.98 of it. A camera sees the directional value, not this one.

    References
    ----------
    .. [1] R. Siegel and J. R. Howell, "Thermal Radiation Heat Transfer" (hemispherical emissivity).
    """
    v = (_NODES + 1) / 2
    cosine = v**3
    angle = np.degrees(np.arccos(cosine))
    n_, k_ = (np.asarray(one, dtype=np.float64)[..., None] for one in (n, k))
    return np.asarray(fresnel_emissivity(n_, k_, angle) @ (3 * v**2 * cosine * _WEIGHTS))


def dielectric_index(emissivity_normal: ArrayLike) -> Array:
    r"""Return the index n ≥ 1 (with k = 0) that has a given normal emissivity.

    Parameters
    ----------
    emissivity_normal : array_like
        Normal emissivity. [1], 0 < ε ≤ 1.

    Returns
    -------
    ndarray
        n. [1]; NaN outside that range.

    Notes
    -----
    The root n ≥ 1 of :math:`\epsilon_n = 4n/(n + 1)^2`: :math:`n = (1 + \sqrt{1 - \epsilon_n})^2/\epsilon_n`.

    Examples
    --------
    >>> float(dielectric_index(0.96).round(12))
    1.5
    """
    emissivity = _within(emissivity_normal, 1.0)
    return np.asarray((1 + np.sqrt(1 - emissivity)) ** 2 / emissivity)


def metal_index(emissivity_normal: ArrayLike) -> Array:
    r"""Return the index n = k that has a given normal emissivity.

    Parameters
    ----------
    emissivity_normal : array_like
        Normal emissivity. [1], 0 < ε ≤ `METAL_MAX_EMISSIVITY` = 2√2 − 2 ≈ 0.828.

    Returns
    -------
    ndarray
        n = k ≥ 1/√2. [1]; NaN outside that range, where no n = k has that emissivity.

    Notes
    -----
    The larger root of :math:`\epsilon_n = 4n/(2n^2 + 2n + 1)`:
    :math:`n = (2 - \epsilon_n + \sqrt{4 - 4\epsilon_n - \epsilon_n^2})/2\epsilon_n`, close to
    :math:`2/\epsilon_n` for small emissivities. n = k is the long-wavelength limit of a conductor
    (Hagen and Rubens): a fair picture for ε below about 0.5, a formal one above.

    Examples
    --------
    >>> n = metal_index(0.1)
    >>> float(fresnel_emissivity(n, n, 0.0).round(12))
    0.1
    """
    emissivity = _within(emissivity_normal, METAL_MAX_EMISSIVITY)
    root = np.sqrt(np.maximum(4 - 4 * emissivity - emissivity**2, 0.0))  # 0 at the limit but for rounding
    return np.asarray((2 - emissivity + root) / (2 * emissivity))


def directional_emissivity(emissivity_normal: ArrayLike, angle_deg: ArrayLike, kind: Kind) -> Array:
    """Return the emissivity at an angle of a surface known by its normal emissivity.

    Parameters
    ----------
    emissivity_normal : array_like
        Normal emissivity. [1], 0 < ε ≤ 1; for a metal ≤ `METAL_MAX_EMISSIVITY`; for a diffuse surface also 0.
    angle_deg : array_like, broadcast against it
        Angle between surface normal and view direction. [deg], 0 to 90.
    kind : {"diffuse", "dielectric", "metal"}
        The same at all angles; Fresnel with k = 0 (`dielectric_index`); Fresnel with n = k (`metal_index`).

    Returns
    -------
    ndarray
        ε(θ). [1]. Dielectrics fall with the angle, metals rise to a maximum near 90°; both are 0 at
        exactly 90°. NaN outside the ranges.

    Examples
    --------
    >>> directional_emissivity(0.95, [0, 60, 80], "dielectric").round(3)
    array([0.95 , 0.899, 0.601])
    >>> directional_emissivity(0.1, [0, 60, 80], "metal").round(3)
    array([0.1  , 0.121, 0.234])
    """
    if kind == "diffuse":
        value, cosine = np.broadcast_arrays(np.asarray(emissivity_normal, dtype=np.float64), _cosine(angle_deg))
        return np.where(np.isfinite(cosine) & (value >= 0) & (value <= 1), value, np.nan)
    if kind == "dielectric":
        return fresnel_emissivity(dielectric_index(emissivity_normal), 0.0, angle_deg)
    index = metal_index(emissivity_normal)
    return fresnel_emissivity(index, index, angle_deg)


def directional_slopes(emissivity_normal: ArrayLike, angle_deg: ArrayLike, kind: Kind) -> tuple[Array, Array]:
    r"""Return how `directional_emissivity` changes with the normal emissivity and with the angle.

    Parameters as there.

    Returns
    -------
    tuple of ndarray
        dε(θ)/dε_n [1] and dε(θ)/dθ [deg⁻¹], both at the given point. NaN outside the ranges. The
        first grows without bound toward `METAL_MAX_EMISSIVITY` for metals and, for a dielectric
        with ε_n near 1, toward grazing view.

    Notes
    -----
    Analytic. With :math:`x = m^2` and amplitudes ρ, :math:`\epsilon = 1 - \tfrac12\sum|\rho|^2`;
    :math:`\rho_s = -(x - 1)/(c + s)^2` and :math:`\rho_p = (x - 1)(c^2(x + 1) - 1)/(xc + s)^2`.
    The factor x − 1 is paired with dx/dε_n, which keeps the derivative finite at ε_n = 1, where
    dn/dε_n is not.
    """
    value, angle = np.broadcast_arrays(
        np.asarray(emissivity_normal, dtype=np.float64), np.asarray(angle_deg, dtype=np.float64)
    )
    c = _cosine(angle)
    if kind == "diffuse":
        known = np.isfinite(c) & (value >= 0) & (value <= 1)
        return np.where(known, 1.0, np.nan), np.where(known, 0.0, np.nan)
    x, pull = _dielectric_pull(value) if kind == "dielectric" else _metal_pull(value)
    s = _inside(x, c)
    sine = np.sin(np.radians(angle))
    with np.errstate(invalid="ignore", divide="ignore"):  # ε_n = 1 at exactly 90° has no slope: NaN
        below_s, below_p = (c + s) ** 2, (x * c + s) ** 2
        g_s, g_p = -1 / below_s, (c**2 * (x + 1) - 1) / below_p  # ρ/(x − 1)
        by_x = g_s.conj() * -c / (s * below_s) + g_p.conj() * c * (2 * s**2 - x) / (s * below_p)
        by_c = g_s.conj() * 2 / (s * below_s) + g_p.conj() * 2 * x / (s * below_p)
        in_value = -(by_x * pull).real
        in_angle = sine * by_c.real * np.abs(x - 1) ** 2 * np.pi / 180
    return in_value, in_angle


def _dielectric_pull(emissivity_normal: Array) -> tuple[_Complex, _Complex]:
    """Return x = n² and (x − 1)* dx/dε_n, with r = √(1 − ε_n) and n = (1 + r)/(1 − r)."""
    emissivity = _within(emissivity_normal, 1.0)
    index = dielectric_index(emissivity)
    short = emissivity / (1 + np.sqrt(1 - emissivity))  # 1 − r without cancellation
    return _permittivity(index, 0.0), np.asarray(-8 * index / short**4, dtype=np.complex128)


def _metal_pull(emissivity_normal: Array) -> tuple[_Complex, _Complex]:
    """Return x = 2in² and (x − 1)* dx/dε_n."""
    emissivity = _within(emissivity_normal, METAL_MAX_EMISSIVITY)
    index = metal_index(emissivity)
    x = _permittivity(index, index)
    with np.errstate(divide="ignore"):
        by_emissivity = -(2 * index**2 + 2 * index + 1) / (4 * emissivity * index + 2 * emissivity - 4)
    return x, np.asarray((x - 1).conj() * 4j * index * by_emissivity)


def _cosine(angle_deg: ArrayLike) -> Array:
    """Return cos θ, exactly 0 at 90°, NaN outside 0–90°."""
    angle = np.asarray(angle_deg, dtype=np.float64)
    cosine = np.where(angle == 90, 0.0, np.cos(np.radians(np.where(np.isfinite(angle), angle, 0.0))))
    return np.where((angle >= 0) & (angle <= 90), cosine, np.nan)


def _permittivity(n: ArrayLike, k: ArrayLike) -> _Complex:
    """Return (n + ik)², NaN where n ≤ 0, k < 0 or either is not finite."""
    n_, k_ = np.broadcast_arrays(np.asarray(n, dtype=np.float64), np.asarray(k, dtype=np.float64))
    good = (n_ > 0) & (k_ >= 0) & np.isfinite(n_) & np.isfinite(k_)
    return np.where(good, np.where(good, n_ + 1j * np.where(good, k_, 0.0), 1.0) ** 2, complex(np.nan, np.nan))


def _inside(x: _Complex, c: Array) -> _Complex:
    """Return s = √(m² − sin²θ) with Im s ≥ 0."""
    return np.asarray(np.sqrt(x - 1 + c**2))


def _within(emissivity: ArrayLike, highest: float) -> Array:
    value = np.asarray(emissivity, dtype=np.float64)
    return np.where((value > 0) & (value <= highest), value, np.nan)
