"""Refractive index and absorption of uncoated infrared windows, from published dispersion formulas."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError, OutOfRange
from thermfix.files import printable

_CM_PER_UM = 1e-4


@dataclass(frozen=True, slots=True, kw_only=True)
class WindowMaterial:
    """One uncoated window material: Sellmeier pairs (strength [1], resonance [µm]) and absorption [1/cm].

    Absorption is ``floor_per_cm`` plus, where given, the multiphonon edge K exp(−γ ν/ν0) with
    ``edge`` = (K [1/cm], γ [1], ν0 [1/cm]).
    """

    sellmeier: tuple[tuple[float, float], ...]
    range_um: tuple[float, float]
    floor_per_cm: float
    edge: tuple[float, float, float] | None
    warning: str
    source: str


# The Burnett formula is printed with squared resonances: hence the roots.
_WINDOWS = {
    "calcium fluoride": WindowMaterial(
        sellmeier=((0.5675888, 0.050263605), (0.4710914, 0.1003909), (3.8484723, 34.649040)),
        range_um=(0.23, 9.7),
        floor_per_cm=0.0,
        edge=(105680.0, 5.1, 482.0),
        warning="Opaque in millimetres beyond 9 µm: for 3–5 µm cameras. Its absorption edge is from memory, "
        "good to a factor of 1.5; measure the transmittance of a window seen at 7–9 µm.",
        source="I. H. Malitson, Applied Optics 2, 1103 (1963), 24 °C",
    ),
    "germanium": WindowMaterial(
        sellmeier=((0.4886331, 1.393959**0.5), (14.5142535, 0.1626427**0.5), (0.0091224, 752.190**0.5)),
        range_um=(2.0, 14.0),
        floor_per_cm=0.03,
        edge=None,
        warning="Uncoated it passes less than half. Lattice absorption beyond 11 µm is not included: a window of 5 mm "
        "passes up to about a tenth less at 12–14 µm, and absorption rises steeply above about 60 °C. "
        "Most germanium windows are coated: measure their transmittance.",
        source="J. H. Burnett, S. G. Kaplan, E. Stover and A. Phenis, Proc. SPIE 9974, 99740X (2016), 22 °C",
    ),
    "sapphire": WindowMaterial(
        sellmeier=((1.4313493, 0.0726631), (0.65054713, 0.1193242), (5.3414021, 18.028251)),
        range_um=(0.20, 5.0),
        floor_per_cm=0.0,
        edge=(55222.0, 5.03, 900.0),
        warning="Opaque beyond 6 µm: for 3–5 µm cameras only. Ordinary ray. Its absorption edge is from memory, "
        "good to a factor of 1.5, and takes a tenth per millimetre at 5 µm.",
        source="I. H. Malitson and M. J. Dodge, J. Opt. Soc. Am. 62, 1405 (1972), ordinary ray, 20 °C",
    ),
    "zinc selenide": WindowMaterial(
        sellmeier=((4.45813734, 0.200859853), (0.467216334, 0.391371166), (2.89566290, 47.1362108)),
        range_um=(0.54, 15.0),
        floor_per_cm=0.0005,
        edge=None,
        warning="Uncoated it reflects about 30 %. Most such windows are coated: measure their transmittance.",
        source="J. Connolly and others, Proc. SPIE 181, 141 (1979), formula by B. Tatian, Appl. Opt. 23, 4477 (1984)",
    ),
}


def window_materials() -> tuple[str, ...]:
    """Return the names of the window materials, in alphabetical order.

    >>> window_materials()
    ('calcium fluoride', 'germanium', 'sapphire', 'zinc selenide')
    """
    return tuple(sorted(_WINDOWS))


def window_material(name: str) -> WindowMaterial:
    """Return one window material, whatever the upper and lower case of its name; ``InputError`` if it is unknown."""
    wanted = " ".join(name.split()).casefold()
    if wanted not in _WINDOWS:
        raise InputError(
            f"There is no window material named {printable(name)!r}; known are {', '.join(window_materials())}.",
            hint="For a coated or other window give its measured transmittance and reflectance.",
        )
    return _WINDOWS[wanted]


def window_index(name: str, wavelength_um: ArrayLike) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    r"""Return the refractive index n and extinction coefficient k of an uncoated window material.

    Parameters
    ----------
    name : str
        One of ``window_materials()``, whatever its upper and lower case.
    wavelength_um : array_like, shape (...)
        Wavelengths. [µm], inside the range of the published formula: calcium fluoride 0.23–9.7,
        germanium 2–14, sapphire 0.2–5, zinc selenide 0.54–15 (published to 18.2).

    Returns
    -------
    n, k : ndarray, shape (...)
        Real and imaginary part of the complex index, at room temperature. [1]

    Raises
    ------
    InputError
        If the material is unknown.
    OutOfRange
        If a wavelength is not finite or outside the material's range.

    Notes
    -----
    .. math::
        n^2 - 1 = \sum_i \frac{B_i λ^2}{λ^2 - C_i^2}, \qquad
        k = \frac{λ}{4π}\left(α_0 + K e^{-γ ν / ν_0}\right), \quad ν = 1/λ

    The germanium index has a stated standard uncertainty of 2e-5 near 2 µm to 8e-5 near 14 µm. The
    absorption terms are handbook values from memory: α₀ = 0.03 /cm for germanium and 0.0005 /cm for
    zinc selenide (both at 10.6 µm), the multiphonon edge of M. E. Thomas for the other two, good to
    a factor of 1.5.

    References
    ----------
    .. [1] I. H. Malitson, Appl. Opt. 2, 1103 (1963): calcium fluoride.
    .. [2] J. H. Burnett et al., Proc. SPIE 9974, 99740X (2016): germanium.
    .. [3] I. H. Malitson and M. J. Dodge, J. Opt. Soc. Am. 62, 1405 (1972): sapphire.
    .. [4] J. Connolly et al., Proc. SPIE 181, 141 (1979), fitted by
       B. Tatian, Appl. Opt. 23, 4477 (1984): zinc selenide.
       Coefficients of all four by way of refractiveindex.info (CC0).

    Examples
    --------
    >>> n, k = window_index("germanium", 10.0)
    >>> round(float(n), 4)
    4.004
    """
    window = window_material(name)
    wavelength = np.asarray(wavelength_um, dtype=np.float64)
    low, high = window.range_um
    outside = ~((wavelength >= low) & (wavelength <= high))
    if outside.any():
        raise OutOfRange(
            f"{name} is described from {low:g} to {high:g} µm; {wavelength[outside].flat[0]:g} µm lies outside.",
            hint="Give the window's measured transmittance and reflectance instead of its material.",
        )
    squared = wavelength**2
    n = np.sqrt(1.0 + sum(strength * squared / (squared - pole**2) for strength, pole in window.sellmeier))
    absorption_per_cm = np.full_like(wavelength, window.floor_per_cm)
    if window.edge is not None:
        strength_per_cm, gamma, wavenumber_per_cm = window.edge
        absorption_per_cm += strength_per_cm * np.exp(-gamma / (wavelength * _CM_PER_UM * wavenumber_per_cm))
    return n, absorption_per_cm * wavelength * _CM_PER_UM / (4.0 * np.pi)
