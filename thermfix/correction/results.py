"""What a correction gives: a grid of surface temperatures and one reading per region. Kelvin inside."""

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.cautions import Caution


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """One region on one page. A temperature is None where there is no reading; the cautions say why.

    ``pixels`` counts the region's pixels inside the frame, ``pixels_read`` those with a surface
    temperature. Means are of temperatures over pixels with a reading; ``surface_sd_k`` has n − 1.
    ``u_k`` is the standard uncertainty of ``surface_mean_k``.
    """

    region: str
    material: str
    emissivity: float | None
    view_angle_deg: float | None
    distance_m: float | None
    pixels: int
    pixels_read: int
    apparent_mean_k: float | None
    surface_mean_k: float | None
    surface_min_k: float | None
    surface_max_k: float | None
    surface_sd_k: float | None
    u_k: float | None
    cautions: tuple[Caution, ...]

    @property
    def expanded_u_k(self) -> float | None:
        """Expanded uncertainty at coverage factor k = 2. [K]."""
        return None if self.u_k is None else 2 * self.u_k


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class RegionPixels:
    """The pixels of one region in row order: integer positions and per-pixel temperatures [K], NaN = no reading."""

    region: str
    x: NDArray[np.intp]
    y: NDArray[np.intp]
    apparent_k: NDArray[np.float32]
    surface_k: NDArray[np.float32]
    u_k: NDArray[np.float32]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FrameResult:
    """One corrected page.

    ``surface_k`` and ``u_k`` have the frame's shape (rows, columns), float32, NaN where there is no
    reading; ``reason`` (uint8) says why, 0 = a reading (see ``cautions.Reason``).
    """

    surface_k: NDArray[np.float32]
    u_k: NDArray[np.float32] | None
    reason: NDArray[np.uint8]
    readings: tuple[Reading, ...]
    pixels: tuple[RegionPixels, ...] = field(default=())
