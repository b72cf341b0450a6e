"""Run a plan on stored numbers: a grid of surface temperatures and one reading per region."""

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.budgets import budget_of, mean_u
from thermfix.correction.cautions import CODE_OF_REASON, Caution, Reason, caution
from thermfix.correction.layer import Layer
from thermfix.correction.plan import Plan, RegionPlan
from thermfix.correction.results import FrameResult, Reading, RegionPixels
from thermfix.correction.trials import ReadingModel, is_curved, try_many
from thermfix.errors import InputError
from thermfix.quantities import ZERO_C_K

Fast = NDArray[np.float32]


def run(
    plan: Plan,
    stored: NDArray[np.generic],
    *,
    grid: bool = True,
    uncertainty: bool = True,
    pixels: bool = False,
    budgets: bool = True,
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
        layer = region.layer
        received = flat[layer.pixels]
        surface = layer.temperature(received)
        reason = _reasons(layer, stored.reshape(-1)[layer.pixels], received, surface)
        if result is not None:
            result.put(layer, surface, reason)
        apparent = plan.instrument.band.curve.pieces(received)
        reading = _reading(region, received, apparent, surface, reason)
        readings.append(_thorough(region, reading, received, surface, reason) if budgets else reading)
        if pixels:
            u = layer.uncertainty(surface)
            lists.append(
                RegionPixels(
                    region=region.region.name, x=region.x, y=region.y, apparent_k=apparent, surface_k=surface, u_k=u
                )
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
        self.surface = background.temperature(radiance)
        self.reason = _reasons(background, stored, radiance, self.surface)
        self.u = background.uncertainty(self.surface) if uncertainty else None

    def put(self, layer: Layer, surface: Fast, reason: NDArray[np.uint8]) -> None:
        self.surface.reshape(-1)[layer.pixels] = surface
        self.reason.reshape(-1)[layer.pixels] = reason
        if self.u is not None:
            self.u.reshape(-1)[layer.pixels] = layer.uncertainty(surface)


def _reasons(layer: Layer, stored: NDArray[np.generic], radiance: Fast, surface: Fast) -> NDArray[np.uint8]:
    codes = layer.reason(radiance, surface)
    lost = np.isnan(radiance)
    if lost.any():
        codes[lost] = Reason.OUTSIDE_CALIBRATION
        if stored.dtype.kind == "f":
            codes[lost & ~np.isfinite(stored)] = Reason.NO_VALUE
    return codes


def _reading(plan: RegionPlan, received: Fast, apparent: Fast, surface: Fast, reason: NDArray[np.uint8]) -> Reading:
    layer = plan.layer
    read = surface[reason == Reason.READ].astype(np.float64)
    seen = apparent[np.isfinite(apparent)].astype(np.float64)
    return Reading(
        region=plan.region.name,
        material=plan.region.material or "",
        emissivity=_emissivity(layer, read),
        view_angle_deg=layer.geometry.angle_mean_deg,
        distance_m=layer.geometry.distance_mean_m,
        pixels=int(surface.size),
        pixels_read=int(read.size),
        apparent_mean_k=float(seen.mean()) if seen.size else None,
        surface_mean_k=float(read.mean()) if read.size else None,
        surface_min_k=float(read.min()) if read.size else None,
        surface_max_k=float(read.max()) if read.size else None,
        surface_sd_k=float(read.std(ddof=1)) if read.size > 1 else None,
        u_k=mean_u(layer, surface.astype(np.float64), reason == Reason.READ).u if read.size else None,
        cautions=(*plan.cautions, *_cautions_after(layer, received, read, reason)),
    )


def _thorough(plan: RegionPlan, reading: Reading, received: Fast, surface: Fast, reason: NDArray[np.uint8]) -> Reading:
    """Return the reading with its budget and, where the correction is strongly curved, Monte Carlo's answer."""
    if reading.surface_mean_k is None or reading.u_k is None or reading.apparent_mean_k is None:
        return reading
    layer, known = plan.layer, reason == Reason.READ
    budget = budget_of(layer, surface.astype(np.float64), known, reading.apparent_mean_k)
    model = ReadingModel(layer, float(received[known].mean(dtype=np.float64)))
    if not is_curved(model):
        return replace(reading, budget=budget)
    trials = try_many(model, reading.surface_mean_k, reading.u_k)
    if trials.first_order_holds:
        return replace(reading, budget=budget, trials=trials)
    low, high = (end - ZERO_C_K for end in trials.found.interval)
    found = caution("curved", f"95 % of the trials lie between {low:.1f} and {high:.1f} °C")
    return replace(reading, budget=budget, trials=trials, u_k=trials.found.sd, cautions=(*reading.cautions, found))


def _emissivity(layer: Layer, read: NDArray[np.float64]) -> float:
    """Return the band-effective emissivity at the mean angle and temperature."""
    weights = layer.circumstances.band.weights_at(float(read.mean()) if read.size else 300.0)
    return float(weights @ layer.setting.emissivity / weights.sum())


def _cautions_after(
    layer: Layer, received: Fast, read: NDArray[np.float64], reason: NDArray[np.uint8]
) -> list[Caution]:
    if read.size == 0:
        codes, counts = np.unique(reason, return_counts=True)
        return [caution(CODE_OF_REASON[Reason(int(codes[counts.argmax()]))])]
    found = []
    if read.size < reason.size:
        found.append(caution("missing-pixels", f"{reason.size - read.size} of {reason.size}"))
    own = float(1 - np.nanmean((layer.rest / received)[reason == Reason.READ]))
    if own < 0.5:
        found.append(caution("reflection-dominated", f"{100 * own:.0f} % of it is"))
    material = layer.circumstances.surface.material
    if material is not None and material.valid_c is not None:
        low, high = material.valid_c
        celsius = float(read.mean()) - ZERO_C_K
        if not low <= celsius <= high:
            found.append(caution("outside-material", f"it holds for {low:g} to {high:g} °C"))
    return found
