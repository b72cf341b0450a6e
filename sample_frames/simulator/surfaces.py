"""Emissivity of surfaces at every wavelength of the grid and at any angle."""

from collections.abc import Callable
from pathlib import Path

import numpy as np

from simulator.radiation import GRID_UM, Array

Emissivity = Callable[[Array], Array]
"""Cosines (J,) of the view angle to emissivity (J, 1300)."""


def grey(value: float) -> Emissivity:
    """Return a surface of one emissivity at every wavelength and angle."""
    return lambda cosine: np.full((cosine.size, GRID_UM.size), value)


def smooth_dielectric(normal: float) -> Emissivity:
    """Return a smooth surface without absorption index, whose emissivity seen from the front is ``normal``."""
    root = np.sqrt(1 - normal)
    return _smooth(np.full(GRID_UM.shape, (1 + root) / (1 - root) + 0j))


def smooth_metal(normal: float) -> Emissivity:
    """Return a smooth metal with n = k, whose emissivity seen from the front is ``normal``."""
    # ε (2n² + 2n + 1) = 4n, the larger root.
    half = (2 - normal) / (2 * normal)
    n = half + np.sqrt(half**2 - 0.5)
    return _smooth(np.full(GRID_UM.shape, n + 1j * n))


def optical_constants(path: Path) -> Emissivity:
    """Return a smooth opaque surface from a table with the columns wavelength_um, n, k."""
    lines = [line for line in path.read_text(encoding="utf-8").splitlines() if line and not line.startswith("#")]
    wavelength, n, k = np.loadtxt(lines[1:], delimiter=",").T
    return _smooth(np.interp(GRID_UM, wavelength, n) + 1j * np.interp(GRID_UM, wavelength, k))


def _smooth(index: Array) -> Emissivity:
    """Fresnel's equations for unpolarised light."""

    def emissivity(cosine: Array) -> Array:
        outside = cosine[:, None]
        square = index**2
        inside = np.sqrt(square - 1 + outside**2)  # index times the cosine of the refracted ray
        across = np.abs((outside - inside) / (outside + inside)) ** 2
        along = np.abs((square * outside - inside) / (square * outside + inside)) ** 2
        return np.asarray(1 - (across + along) / 2)

    return emissivity
