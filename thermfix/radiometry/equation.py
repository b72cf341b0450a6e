r"""The measurement equation, wavelength by wavelength: the reference that the fast path is held against.

.. math::
    L_{meas} = \int R \left\{ \tau_w \left[ \tau_a \left( \varepsilon B(T_s) + (1-\varepsilon) L_{refl} \right)
    + (1-\tau_a) B(T_{air}) \right] + (1-\tau_w-\rho_w) B(T_w) + \rho_w B(T_{cs}) \right\} d\lambda

From surface to camera: surface, air, window (if any), camera. All products stand inside the integral.
The chain is that of ISO 18434-1 (surface and air) with the window's own emission and reflection added.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.radiometry.band import Band
from thermfix.radiometry.curve import HIGHEST_K, LOWEST_K
from thermfix.radiometry.planck import spectral_radiance

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Chain:
    """What lies between one surface and the camera. Spectral values have the shape of the band's nodes, or none.

    ``sources`` are (temperature [K], view factor) of what the surface mirrors besides the surroundings
    at ``reflected_k``; their view factors sum to at most 1. ``camera_side_k`` is what the window mirrors.
    """

    emissivity: ArrayLike = 1.0
    reflected_k: float = 293.15
    sources: Sequence[tuple[float, float]] = ()
    air_transmittance: ArrayLike = 1.0
    air_k: float = 293.15
    window_transmittance: ArrayLike = 1.0
    window_reflectance: ArrayLike = 0.0
    window_k: float = 293.15
    camera_side_k: float = 293.15

    def reflected_radiance(self, nodes_um: Array) -> Array:
        """Return the spectral radiance that falls on the surface, averaged over its hemisphere."""
        rest = 1.0 - sum(share for _, share in self.sources)
        total = rest * spectral_radiance(nodes_um, self.reflected_k)
        for temperature_k, share in self.sources:
            total = total + share * spectral_radiance(nodes_um, temperature_k)
        return total


def received_radiance(band: Band, surface_k: ArrayLike, chain: Chain) -> Array:
    """Return the in-band radiance at the camera for surface temperatures [K], shape kept. [W m⁻² sr⁻¹]."""
    emission, rest = _terms(band, chain)
    surface = np.asarray(surface_k, dtype=np.float64)
    return spectral_radiance(band.nodes_um, surface[..., None]) @ emission + rest


def surface_temperature(band: Band, radiance: ArrayLike, chain: Chain) -> Array:
    """Return the surface temperature that gives the radiance, by bisection of `received_radiance`. [K].

    NaN where none within −60…3000 °C does. Slow and plain on purpose; accurate to 1e-9 K.
    """
    target = np.asarray(radiance, dtype=np.float64)
    emission, rest = _terms(band, chain)
    low, high = np.full(target.shape, LOWEST_K), np.full(target.shape, HIGHEST_K)
    at_ends = spectral_radiance(band.nodes_um, np.array([[LOWEST_K], [HIGHEST_K]])) @ emission + rest
    for _ in range(52):
        middle = (low + high) / 2
        below = spectral_radiance(band.nodes_um, middle[..., None]) @ emission + rest < target
        low, high = np.where(below, middle, low), np.where(below, high, middle)
    inside = (target >= at_ends[0] * (1 - 1e-12)) & (target <= at_ends[1] * (1 + 1e-12))
    return np.where(inside, (low + high) / 2, np.nan)


def _terms(band: Band, chain: Chain) -> tuple[Array, float]:
    """Return the weights that the surface's B(T) meets, and all that reaches the camera without it."""
    weights, nodes = band.weights, band.nodes_um
    emissivity = np.asarray(chain.emissivity, dtype=np.float64)
    tau_air = np.asarray(chain.air_transmittance, dtype=np.float64)
    tau_w = np.asarray(chain.window_transmittance, dtype=np.float64)
    rho_w = np.asarray(chain.window_reflectance, dtype=np.float64)
    rest = tau_w * (
        tau_air * (1 - emissivity) * chain.reflected_radiance(nodes)
        + (1 - tau_air) * spectral_radiance(nodes, chain.air_k)
    )
    rest = rest + (1 - tau_w - rho_w) * spectral_radiance(nodes, chain.window_k)
    rest = rest + rho_w * spectral_radiance(nodes, chain.camera_side_k)
    return weights * tau_w * tau_air * emissivity, float(weights @ rest)
