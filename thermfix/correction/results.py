"""What a correction gives: a grid of surface temperatures and one reading per region. Kelvin inside."""

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.cautions import Caution
from thermfix.correction.trials import Trials
from thermfix.uncertainty.budget import Budget


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """One region on one page. A temperature is None where there is no reading; the cautions say why.

    ``pixels`` counts the region's pixels inside the frame, ``pixels_read`` those with a surface
    temperature. Means are of temperatures over pixels with a reading; ``surface_sd_k`` has n − 1.
    ``area_m2`` is the surface the region covers; ``radiant_exitance_w_m2`` is in the camera's band.
    ``u_k`` is the standard uncertainty of ``surface_mean_k``. ``budget`` and ``trials`` are there if
    they were asked for (and, for trials, needed).
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
    area_m2: float | None = None
    radiant_exitance_w_m2: float | None = None
    budget: Budget | None = None
    trials: Trials | None = None

    @property
    def radiant_power_w(self) -> float | None:
        """In-band power the region sends to its surroundings: exitance times area. [W]; None where unknown."""
        if self.area_m2 is None or self.radiant_exitance_w_m2 is None:
            return None
        return self.area_m2 * self.radiant_exitance_w_m2

    @property
    def expanded_u_k(self) -> float | None:
        """Expanded uncertainty. [K].

        2 u where first order holds; else the distance from the mean to the farther end of the Monte
        Carlo 95 % interval.
        """
        if self.u_k is None or self.surface_mean_k is None:
            return None
        if self.interval_k is None:
            return 2 * self.u_k
        low, high = self.interval_k
        return max(high - self.surface_mean_k, self.surface_mean_k - low)

    @property
    def interval_k(self) -> tuple[float, float] | None:
        """Monte Carlo 95 % interval, where it stands in for first order. [K]."""
        return None if self.trials is None or self.trials.first_order_holds else self.trials.found.interval


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
