"""Run a plan on stored numbers: a grid of surface temperatures and one reading per region."""

from collections.abc import Collection

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.layer import Layer
from thermfix.correction.plan import Plan
from thermfix.correction.reading import correct_region, reading_of, reasons
from thermfix.correction.results import FrameResult, RegionPixels
from thermfix.errors import InputError

Fast = NDArray[np.float32]


def run(
    plan: Plan,
    stored: NDArray[np.generic],
    *,
    grid: bool = True,
    uncertainty: bool = True,
    pixels: bool = False,
    budgets: bool = True,
    curved: Collection[str] = (),
) -> FrameResult:
    """Correct one page.

    Parameters
    ----------
    plan : Plan
        The set-up; its shape must be that of ``stored``.
    stored : ndarray, shape (rows, columns)
        Stored numbers of any real dtype. Never changed.
    grid, uncertainty, pixels : bool
        Whether to fill the grid of temperatures, the grid of uncertainties, and the list of region pixels.
    budgets : bool
        Whether readings come with their budget and, where first order may not hold, a Monte Carlo run.
    curved : collection of str
        Regions for which a short Monte Carlo run stands in for first order even without ``budgets``:
        those of a sequence whose first page showed that first order does not hold.

    Returns
    -------
    FrameResult
        Without ``grid`` its arrays are empty (0, 0).
    """
    if stored.shape != plan.shape:
        raise InputError(f"The frame has shape {stored.shape}, but the plan was made for {plan.shape}.")
    radiance = plan.instrument.signal.radiance(stored)
    result = _Grids(plan, stored, radiance, uncertainty) if grid else None
    readings, lists = [], []
    flat = radiance.reshape(-1)
    for region in plan.regions:
        one = correct_region(region, stored.reshape(-1), flat)
        reading = reading_of(one, thorough=budgets, curved=region.region.name in curved)
        readings.append(reading)
        if reading.surface_mean_k is None and one.known.any():
            one = one.emptied()
        if result is not None:
            result.put(region.layer, one.surface, one.reason)
        if pixels:
            u = region.layer.uncertainty(one.surface)
            name = region.region.name
            lists.append(
                RegionPixels(region=name, x=region.x, y=region.y, apparent_k=one.apparent, surface_k=one.surface, u_k=u)
            )
    empty = np.empty((0, 0), np.float32)
    return FrameResult(
        surface_k=empty if result is None else result.surface,
        u_k=None if result is None else result.u,
        reason=np.empty((0, 0), np.uint8) if result is None else result.reason,
        readings=tuple(readings),
        pixels=tuple(lists),
    )


class _Grids:
    """The background, over which the regions are laid in order."""

    def __init__(self, plan: Plan, stored: NDArray[np.generic], radiance: Fast, uncertainty: bool) -> None:
        background = plan.background
        self.u: Fast | None = None
        if uncertainty:
            self.surface, self.u = background.temperature_and_u(radiance)
        else:
            self.surface = background.temperature(radiance)
        self.reason = reasons(background, stored, radiance, self.surface)

    def put(self, layer: Layer, surface: Fast, reason: NDArray[np.uint8]) -> None:
        self.surface.reshape(-1)[layer.pixels] = surface
        self.reason.reshape(-1)[layer.pixels] = reason
        if self.u is not None:
            self.u.reshape(-1)[layer.pixels] = layer.uncertainty(surface)
