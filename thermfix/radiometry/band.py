"""The wavelengths a camera sees, and in-band radiance against temperature."""

from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError, OutOfRange
from thermfix.radiometry.curve import KNOTS_K, Curve
from thermfix.radiometry.planck import spectral_radiance, spectral_radiance_slope

Array = NDArray[np.float64]

SHORTEST_UM, LONGEST_UM = 2.0, 15.0
"""Bands must lie within these wavelengths. [µm]."""

_LINE_STEP_CM1 = 5.0
_MANY = 1024


class Band:
    r"""A relative spectral response and the in-band radiance it gives.

    Make one with `Band.rectangular` or `Band.from_response`.

    Attributes
    ----------
    nodes_um, weights : ndarray, shape (K,)
        Quadrature nodes [µm] and weights [µm], the response included: the in-band radiance of any
        spectrum S is ``(weights * S(nodes_um)).sum()``.
    lo_um, hi_um : float
        Ends of the band. [µm].

    Notes
    -----
    .. math:: L(T) = \int R(\lambda) L_\lambda(\lambda, T)\, d\lambda

    Gauss–Legendre on pieces that end at every 5 cm⁻¹ (where the air's table has its kinks) and at
    every row of a tabulated response, which is linear between rows.

    Examples
    --------
    >>> band = Band.rectangular(8, 14)
    >>> float(band.radiance(293.15).round(6))
    49.372895
    >>> float(band.temperature(band.radiance(350.0)).round(4))
    350.0
    """

    def __init__(self, nodes_um: Array, weights: Array, lo_um: float, hi_um: float) -> None:
        self.nodes_um, self.weights, self.lo_um, self.hi_um = nodes_um, weights, lo_um, hi_um

    @classmethod
    def rectangular(cls, lo_um: float, hi_um: float) -> "Band":
        """Return the band with response 1 from ``lo_um`` to ``hi_um``. [µm], 2 ≤ lo < hi ≤ 15."""
        _check_ends(lo_um, hi_um)
        nodes, weights = _gauss(_breaks(np.array([lo_um, hi_um])))
        return cls(nodes, weights, float(lo_um), float(hi_um))

    @classmethod
    def from_response(cls, wavelength_um: ArrayLike, response: ArrayLike) -> "Band":
        """Return the band of a tabulated response, linear between rows and 0 outside.

        Parameters
        ----------
        wavelength_um, response : array_like, shape (n,), n ≥ 2
            Strictly rising wavelengths [µm] within 2–15; response per unit wavelength, 0 to 1.

        Raises
        ------
        InputError
            If the shapes differ, wavelengths do not rise, or the response is outside 0–1 or all 0.
        """
        wavelength = np.asarray(wavelength_um, dtype=np.float64)
        value = np.asarray(response, dtype=np.float64)
        if wavelength.ndim != 1 or wavelength.shape != value.shape or wavelength.size < 2:
            raise InputError("A response needs two columns of equal length with at least 2 rows.")
        if not np.all(np.diff(wavelength) > 0):
            raise InputError("The wavelengths of a response must rise from row to row.")
        if not (np.all(value >= 0) and np.all(value <= 1)) or not value.any():
            raise InputError(
                "A relative response must lie in 0 to 1 and not be 0 everywhere.",
                hint="Divide the column by its peak (by 100 if it is in percent).",
            )
        _check_ends(float(wavelength[0]), float(wavelength[-1]))
        nodes, weights = _gauss(_breaks(wavelength))
        weights = weights * np.interp(nodes, wavelength, value)
        keep = weights > 0
        return cls(nodes[keep], weights[keep], float(wavelength[0]), float(wavelength[-1]))

    def radiance(self, temperature_k: ArrayLike) -> Array:
        """Return the in-band blackbody radiance, shape kept. [W m⁻² sr⁻¹]; NaN for T ≤ 0.

        Up to 1024 values are integrated; more are interpolated on the band's curve (200–3400 K,
        NaN outside), which agrees within 1e-8 relative.
        """
        temperature = np.asarray(temperature_k, dtype=np.float64)
        if temperature.size > _MANY:
            return self.curve.radiance(temperature)
        return spectral_radiance(self.nodes_um, temperature[..., None]) @ self.weights

    def slope(self, temperature_k: ArrayLike) -> Array:
        """Return dL/dT, shape kept. [W m⁻² sr⁻¹ K⁻¹]; NaN for T ≤ 0."""
        temperature = np.asarray(temperature_k, dtype=np.float64)
        return spectral_radiance_slope(self.nodes_um, temperature[..., None]) @ self.weights

    def temperature(self, radiance: ArrayLike) -> Array:
        """Return the blackbody temperature of an in-band radiance, shape kept. [K].

        NaN where the radiance is not positive or the temperature would lie outside −60…3000 °C.
        """
        return self.curve.temperature(radiance)

    def planck_at(self, temperature_k: float) -> Array:
        """Return a blackbody's spectral radiance at the nodes, shape (K,). [W m⁻² sr⁻¹ µm⁻¹]."""
        return spectral_radiance(self.nodes_um, temperature_k)

    def weights_at(self, temperature_k: float) -> Array:
        """Return the weights times a blackbody's spectral radiance, shape (K,); they sum to L(T)."""
        return self.weights * spectral_radiance(self.nodes_um, temperature_k)

    def slope_weights_at(self, temperature_k: float) -> Array:
        """Return the weights times its derivative with temperature, shape (K,); they sum to dL/dT."""
        return self.weights * spectral_radiance_slope(self.nodes_um, temperature_k)

    @cached_property
    def curve(self) -> Curve:
        """L(T) and T(L) of this band."""
        return self.seen_through(1.0)

    def seen_through(self, factor: ArrayLike) -> Curve:
        """Return the curve of ∫ R f L_λ dλ for a spectral factor f at the nodes, shape (K,) or scalar."""
        weights = self.weights * np.broadcast_to(np.asarray(factor, dtype=np.float64), self.weights.shape)
        return Curve(self.planck_at_knots @ weights, self.planck_slope_at_knots @ weights)

    @cached_property
    def planck_at_knots(self) -> Array:
        """Blackbody spectral radiance at ``KNOTS_K`` and the nodes, shape (320, K)."""
        return spectral_radiance(self.nodes_um, KNOTS_K[:, None])

    @cached_property
    def radiance_at_knots(self) -> Array:
        """In-band blackbody radiance at ``KNOTS_K``, shape (320,). [W m⁻² sr⁻¹]."""
        return self.planck_at_knots @ self.weights

    @cached_property
    def planck_slope_at_knots(self) -> Array:
        """Its derivative with temperature, shape (320, K)."""
        return spectral_radiance_slope(self.nodes_um, KNOTS_K[:, None])


def _check_ends(lo_um: float, hi_um: float) -> None:
    for name, value in (("the band's lower end", lo_um), ("the band's upper end", hi_um)):
        if not SHORTEST_UM <= value <= LONGEST_UM:
            raise OutOfRange.of(name, value, SHORTEST_UM, LONGEST_UM, "µm")
    if not lo_um < hi_um:
        raise InputError(f"The band {lo_um:g} to {hi_um:g} µm is empty.", hint="Give the shorter wavelength first.")


def _breaks(knots_um: Array) -> Array:
    """Return the knots and, between their ends, every multiple of 5 cm⁻¹, as rising wavelengths."""
    high, low = 1e4 / knots_um[0], 1e4 / knots_um[-1]
    lines = np.arange(np.ceil(low / _LINE_STEP_CM1), np.floor(high / _LINE_STEP_CM1) + 1) * _LINE_STEP_CM1
    breaks = np.union1d(knots_um, np.clip(1e4 / lines, knots_um[0], knots_um[-1]))
    distinct: Array = breaks[np.concatenate([[True], np.diff(breaks) > 1e-9])]
    return distinct


def _gauss(breaks: Array) -> tuple[Array, Array]:
    """Return Gauss–Legendre nodes and weights on every piece: 2 points, or 3 where pieces are wide."""
    parts = []
    width = np.diff(breaks)
    for count, chosen in ((2, width < 0.004), (3, width >= 0.004)):
        x, w = np.polynomial.legendre.leggauss(count)
        left, half = breaks[:-1][chosen, None], width[chosen, None] / 2
        parts.append(((left + half * (x + 1)).ravel(), (half * w).ravel()))
    nodes, weights = (np.concatenate(column) for column in zip(*parts, strict=True))
    order = np.argsort(nodes)
    return nodes[order], weights[order]
