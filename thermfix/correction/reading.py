"""One region on one page: its pixels corrected, its reading with uncertainty, budget and cautions."""

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.budgets import NO_MIXING, Mixing, budget_of, mean_u
from thermfix.correction.cautions import CODE_OF_REASON, Caution, Reason, caution
from thermfix.correction.layer import Layer
from thermfix.correction.plan import RegionPlan
from thermfix.correction.results import Reading
from thermfix.correction.trials import ReadingModel, is_curved, try_many
from thermfix.quantities import ZERO_C_K

Fast = NDArray[np.float32]

SHORT_TRIALS = 10_000
"""Trials per page of a sequence, for regions whose first page needed Monte Carlo."""

MOST_U_K = 10.0
"""A reading less certain than this (k = 2), and than its difference from what it mirrors, is not shown. [K]."""

LOW_EMISSIVITY, LOW_EMISSIVITY_U_K = 0.5, 5.0
"""An emissivity below the first with an expanded uncertainty above the second [K] is cautioned."""

WINDOW_SHARE = 0.2
"""Share of the signal from which what a window emits or mirrors is cautioned."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Corrected:
    """The pixels of one region: received radiance, the region's own part of it, and what they give. Shapes (n,)."""

    plan: RegionPlan
    received: Fast
    own: Fast
    apparent: Fast
    surface: Fast
    reason: NDArray[np.uint8]
    mixing: Mixing

    @property
    def known(self) -> NDArray[np.bool_]:
        """Which pixels have a reading."""
        return np.asarray(self.reason == Reason.READ)

    def emptied(self) -> "Corrected":
        """Return the region without any temperature, because its reading is too uncertain to be shown."""
        reason = np.where(self.known, np.uint8(Reason.TOO_UNCERTAIN), self.reason)
        return replace(self, surface=np.full_like(self.surface, np.nan), reason=reason)


def correct_region(plan: RegionPlan, stored: NDArray[np.generic], radiance: Fast) -> Corrected:
    """Return a region's pixels corrected, from the whole page's stored numbers and received radiance, both flat."""
    layer, small = plan.layer, plan.small
    received = radiance[layer.pixels]
    own = received if small is None else small.own(radiance, layer.pixels)
    surface = layer.temperature(own)
    reason = reasons(layer, stored[layer.pixels], own, surface)
    mixing = NO_MIXING
    if small is not None:
        reason[np.isnan(own) & np.isfinite(received)] = Reason.TOO_SMALL
        read = surface[reason == Reason.READ]
        per_radiance = 0.0
        if read.size:
            per_radiance = float(layer.typical(layer.noise_u_k, float(read.mean())) / layer.instrument.noise_radiance)
        terms = tuple((one, slope * per_radiance) for one, slope in small.terms(radiance, layer.pixels))
        mixing = Mixing(sensitivities=terms, noise_factor=small.noise_factor())
    apparent = layer.instrument.band.curve.pieces(received)
    return Corrected(
        plan=plan, received=received, own=own, apparent=apparent, surface=surface, reason=reason, mixing=mixing
    )


def reasons(layer: Layer, stored: NDArray[np.generic], radiance: Fast, surface: Fast) -> NDArray[np.uint8]:
    """Return why pixels have no temperature (``Reason``), 0 where they have one."""
    codes = layer.reason(radiance, surface)
    lost = np.isnan(radiance)
    if lost.any():
        codes[lost] = Reason.OUTSIDE_CALIBRATION
        if stored.dtype.kind == "f":
            codes[lost & ~np.isfinite(stored)] = Reason.NO_VALUE
        elif stored.dtype.itemsize <= 2:
            codes[lost & (stored == np.iinfo(stored.dtype.str).max)] = Reason.SATURATED
    return codes


def reading_of(one: Corrected, *, thorough: bool, curved: bool = False) -> Reading:
    """Return the reading of a region.

    ``thorough`` adds its budget and, where the correction is strongly curved, Monte Carlo's answer;
    ``curved`` says that it is known to be, and a short run will do.
    """
    layer, known = one.plan.layer, one.known
    read = one.surface[known].astype(np.float64)
    seen = one.apparent[np.isfinite(one.apparent)].astype(np.float64)
    u_k = mean_u(layer, one.surface.astype(np.float64), known, one.mixing).u if read.size else None
    reading = Reading(
        region=one.plan.region.name,
        material=one.plan.region.material or "",
        emissivity=_emissivity(layer, read),
        view_angle_deg=layer.geometry.angle_mean_deg,
        distance_m=layer.geometry.distance_mean_m,
        pixels=int(one.surface.size),
        pixels_read=int(read.size),
        apparent_mean_k=float(seen.mean()) if seen.size else None,
        surface_mean_k=float(read.mean()) if read.size else None,
        surface_min_k=float(read.min()) if read.size else None,
        surface_max_k=float(read.max()) if read.size else None,
        surface_sd_k=float(read.std(ddof=1)) if read.size > 1 else None,
        u_k=u_k,
        cautions=(*one.plan.cautions, *_cautions_after(one, read)),
        area_m2=_area(one),
        radiant_exitance_w_m2=_exitance(one),
    )
    if read.size == 0:
        return reading
    if thorough:
        reading = _thorough(one, reading)
    elif curved:
        reading = _tried(one, reading, SHORT_TRIALS)
    return _judged(one, reading)


def _judged(one: Corrected, reading: Reading) -> Reading:
    """Return the reading with what its uncertainty says of it; without temperature where it says nothing."""
    expanded, mean = reading.expanded_u_k, reading.surface_mean_k
    if expanded is None or mean is None:
        return reading
    contrast = abs(mean - one.plan.layer.circumstances.mirrored.apparent_k(one.plan.layer.instrument.band))
    if expanded > max(MOST_U_K, contrast):
        found = caution("too-uncertain", f"± {expanded:.0f} K, and only {contrast:.0f} K between them")
        return replace(
            reading,
            pixels_read=0,
            surface_mean_k=None,
            surface_min_k=None,
            surface_max_k=None,
            surface_sd_k=None,
            u_k=None,
            radiant_exitance_w_m2=None,
            budget=None,
            trials=None,
            cautions=(*(one for one in reading.cautions if one.code != "curved"), found),
        )
    if reading.emissivity is not None and reading.emissivity < LOW_EMISSIVITY and expanded > LOW_EMISSIVITY_U_K:
        found = caution("low-emissivity", f"ε = {reading.emissivity:.2f} gives ± {expanded:.0f} K")
        return replace(reading, cautions=(*reading.cautions, found))
    return reading


def _thorough(one: Corrected, reading: Reading) -> Reading:
    assert reading.apparent_mean_k is not None
    layer, known = one.plan.layer, one.known
    budget = budget_of(layer, one.surface.astype(np.float64), known, reading.apparent_mean_k, one.mixing)
    reading = replace(reading, budget=budget)
    return _tried(one, reading, None) if is_curved(_model(one)) else reading


def _model(one: Corrected) -> ReadingModel:
    return ReadingModel(one.plan.layer, float(one.own[one.known].mean(dtype=np.float64)))


def _tried(one: Corrected, reading: Reading, count: int | None) -> Reading:
    """Return the reading after a Monte Carlo run, whose answer stands where first order does not hold."""
    assert reading.surface_mean_k is not None
    assert reading.u_k is not None
    trials = try_many(_model(one), reading.surface_mean_k, reading.u_k, count)
    if trials.first_order_holds:
        return replace(reading, trials=trials)
    low, high = (end - ZERO_C_K for end in trials.found.interval)
    found = caution("curved", f"95 % of the trials lie between {low:.1f} and {high:.1f} °C")
    return replace(reading, trials=trials, u_k=trials.found.sd, cautions=(*reading.cautions, found))


def _emissivity(layer: Layer, read: NDArray[np.float64]) -> float:
    """Return the band-effective emissivity at the mean angle and temperature."""
    weights = layer.circumstances.band.weights_at(float(read.mean()) if read.size else 300.0)
    return float(weights @ layer.setting.emissivity / weights.sum())


def _area(one: Corrected) -> float | None:
    """Return the area of surface the region covers, where every pixel's footprint is known. [m²]."""
    area = one.plan.area_m2
    return float(area.sum()) if area is not None and np.isfinite(area).all() else None


def _exitance(one: Corrected) -> float | None:
    """Return the mean in-band radiant exitance, π ε L for a surface taken as diffuse. [W m⁻²]."""
    read = one.surface[one.known].astype(np.float64)
    if read.size == 0:
        return None
    band = one.plan.layer.circumstances.band
    weights = one.plan.layer.mean_weights(one.surface.astype(np.float64), one.known).sum(axis=0)
    radiance = float(band.radiance_at_knots @ weights)
    return float(np.pi * _emissivity(one.plan.layer, read) * radiance)


def _cautions_after(one: Corrected, read: NDArray[np.float64]) -> list[Caution]:
    layer, reason = one.plan.layer, one.reason
    if read.size == 0:
        codes, counts = np.unique(reason, return_counts=True)
        return [caution(CODE_OF_REASON[Reason(int(codes[counts.argmax()]))])]
    found = []
    if read.size < reason.size:
        found.append(caution("missing-pixels", f"{reason.size - read.size} of {reason.size}"))
    full = int((reason == Reason.SATURATED).sum())
    if full:
        found.append(caution("partly-saturated", f"{full} pixels"))
    own = float(1 - np.nanmean((layer.rest / one.own)[one.known]))
    if own < 0.5:
        found.append(caution("reflection-dominated", f"{100 * own:.0f} % of it is"))
    found += _window_cautions(layer, float(np.nanmean(one.own[one.known])))
    material = layer.circumstances.surface.material
    if material is not None and material.valid_c is not None:
        low, high = material.valid_c
        celsius = float(read.mean()) - ZERO_C_K
        if not low <= celsius <= high:
            found.append(caution("outside-material", f"it holds for {low:g} to {high:g} °C"))
    return found


def _window_cautions(layer: Layer, received: float) -> list[Caution]:
    """Return what a window adds to a signal where it is much."""
    about = layer.circumstances
    window, band = about.window, about.band
    if window.temperature is None:
        return []
    emits = float(
        band.weights * (1 - window.transmittance - window.reflectance) @ band.planck_at(window.temperature.value)
    )
    mirrors = float(band.weights * window.reflectance @ band.planck_at(window.camera_side.value))
    found = []
    if emits > WINDOW_SHARE * received:
        found.append(caution("window-hot", f"{100 * emits / received:.0f} % of the signal is its own"))
    if mirrors > WINDOW_SHARE * received:
        found.append(caution("window-mirror", f"{100 * mirrors / received:.0f} % of the signal"))
    return found
