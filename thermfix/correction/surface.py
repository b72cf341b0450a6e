"""What a region is made of, as spectral emissivity at the band's nodes and at any view angle."""

from abc import ABC, abstractmethod
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input, stated_or_default
from thermfix.errors import InputError
from thermfix.files import printable
from thermfix.model import Angular, Estimate, Material, Table
from thermfix.radiometry.band import Band
from thermfix.radiometry.fresnel import directional_emissivity, directional_slopes, fresnel_emissivity

Array = NDArray[np.float64]

_BANDS_UM = {"lwir": (7.0, 14.5), "mwir": (2.8, 5.7)}
_NEARLY_ALL = 0.9


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Surface(ABC):
    """Emissivity of one surface in one band.

    ``value`` is its in-band normal emissivity with the uncertainty used; an error of it moves the
    whole spectrum. ``material`` is None where a bare number was given.
    """

    band: Band
    value: Input
    material: Material | None = None

    @abstractmethod
    def emissivity(self, angle_deg: Array) -> Array:
        """Return ε at view angles (J,) and the band's K nodes: shape (J, K), or (J, 1) where grey.

        NaN where it is not known.
        """

    def slope_in_value(self, angle_deg: Array) -> Array:
        """Return dε/d(normal value), shape as `emissivity`: an error of the value moves the whole spectrum."""
        return np.ones((angle_deg.size, 1))

    def slope_in_angle(self, angle_deg: Array) -> Array:
        """Return dε/dθ, shape as `emissivity`. [deg⁻¹]."""
        low, high = np.maximum(angle_deg - 0.01, 0.0), np.minimum(angle_deg + 0.01, 90.0)
        return np.asarray((self.emissivity(high) - self.emissivity(low)) / (high - low)[:, None])


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Normal(Surface):
    """A normal emissivity, shape (1,) for a grey surface or (K,), taken to other angles by ``angular``.

    Each wavelength has its own equivalent index.
    """

    normal: Array
    angular: Angular = Angular.DIFFUSE

    def emissivity(self, angle_deg: Array) -> Array:
        """Return ε of the equivalent dielectric or metal, or the normal one at every angle."""
        return np.asarray(directional_emissivity(self.normal, angle_deg[:, None], self.angular.value))

    def slope_in_value(self, angle_deg: Array) -> Array:
        """Return dε/d(normal value) of the equivalent dielectric or metal."""
        return directional_slopes(self.normal, angle_deg[:, None], self.angular.value)[0]

    def slope_in_angle(self, angle_deg: Array) -> Array:
        """Return dε/dθ of the equivalent dielectric or metal. [deg⁻¹]."""
        return directional_slopes(self.normal, angle_deg[:, None], self.angular.value)[1]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Smooth(Surface):
    """A smooth opaque surface with optical constants: Fresnel at every wavelength and angle."""

    n: Array
    k: Array

    def emissivity(self, angle_deg: Array) -> Array:
        """Return ε at every node."""
        return fresnel_emissivity(self.n, self.k, angle_deg[:, None])


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ByAngle(Surface):
    """In-band emissivity tabulated against the view angle; nothing past its last row."""

    angles_deg: Array
    values: Array

    def emissivity(self, angle_deg: Array) -> Array:
        """Return the same ε for all wavelengths."""
        return np.interp(angle_deg, self.angles_deg, self.values, right=np.nan)[:, None]

    def slope_in_angle(self, angle_deg: Array) -> Array:
        """Return the slope of the table, one-sided at its last row."""
        high = np.minimum(angle_deg + 0.01, float(self.angles_deg[-1]))
        low = np.maximum(high - 0.02, 0.0)
        return np.asarray((self.emissivity(high) - self.emissivity(low)) / (high - low)[:, None])


def grey_surface(band: Band, emissivity: Estimate, origin: str = "scene") -> Normal:
    """Return a diffuse grey surface of a stated emissivity."""
    return Normal(
        band=band, value=stated_or_default("emissivity", emissivity, origin), normal=np.array([emissivity.value])
    )


def material_surface(band: Band, material: Material, origin: str) -> Surface:
    """Return the surface of a material in a band.

    Raises
    ------
    InputError
        If the material's data do not cover the band.
    """
    if material.nk is not None:
        n, k = (_at_nodes(band, material, material.nk, name) for name in ("n", "k"))
        value = _spectral_value(band, material, origin, np.asarray(fresnel_emissivity(n, k, 0.0)))
        return Smooth(band=band, material=material, value=value, n=n, k=k)
    if material.spectrum is not None:
        normal = _at_nodes(band, material, material.spectrum, "emissivity")
        value = _spectral_value(band, material, origin, normal)
        return Normal(band=band, material=material, value=value, normal=normal, angular=material.angular)
    if material.by_angle is not None:
        angles, values = (np.array(column, dtype=np.float64) for column in zip(*material.by_angle, strict=True))
        value = _input(float(np.interp(0.0, angles, values)), material.u, origin)
        return ByAngle(band=band, material=material, value=value, angles_deg=angles, values=values)
    value = stated_or_default("emissivity", _in_band_value(band, material), origin)
    return Normal(band=band, material=material, value=value, normal=np.array([value.value]), angular=material.angular)


def band_mean(band: Band, spectrum: Array, temperature_k: float) -> float:
    """Return the mean of a spectrum at the nodes, weighted by a blackbody's in-band radiance."""
    weights = band.weights_at(temperature_k)
    return float(weights @ spectrum / weights.sum())


def _input(value: float, u: float | None, origin: str) -> Input:
    return stated_or_default("emissivity", Estimate(value=value, u=u), origin)


def _spectral_value(band: Band, material: Material, origin: str, normal: Array) -> Input:
    return _input(band_mean(band, normal, 300.0), material.u, origin)


def _in_band_value(band: Band, material: Material) -> Estimate:
    if material.emissivity is not None:
        return material.emissivity
    for name, (low, high) in _BANDS_UM.items():
        estimate: Estimate | None = getattr(material, name)
        inside = (band.nodes_um >= low) & (band.nodes_um <= high)
        if estimate is not None and band.weights[inside].sum() >= _NEARLY_ALL * band.weights.sum():
            return estimate
    raise InputError(
        f"The material “{printable(material.name)}” has no emissivity for {band.lo_um:g} to {band.hi_um:g} µm.",
        hint="Give the region an emissivity of its own, or measure it (docs: choose an emissivity).",
    )


def _at_nodes(band: Band, material: Material, table: Table, column: str) -> Array:
    wavelength = table.columns["wavelength_um"]
    outside = (band.nodes_um < wavelength[0]) | (band.nodes_um > wavelength[-1])
    if outside.any():
        raise InputError(
            f"The table of “{printable(material.name)}” covers {wavelength[0]:g} to {wavelength[-1]:g} µm, "
            f"not the whole band {band.lo_um:g} to {band.hi_um:g} µm.",
            hint="Extend the table, or give the region an emissivity of its own.",
        )
    return np.interp(band.nodes_um, wavelength, table.columns[column])
