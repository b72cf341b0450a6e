"""One region's reading taken apart: the equation with its numbers, its budget, and a difference to another region."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.correction import Instrument, Plan, Reading, run
from thermfix.correction.differences import Difference, difference_of
from thermfix.correction.explained import Step, explain
from thermfix.correction.plan import RegionPlan
from thermfix.correction.trials import ReadingModel, Trials, try_many
from thermfix.errors import InputError
from thermfix.files import printable
from thermfix.frames import open_frame
from thermfix.geometry.measure import extent_m
from thermfix.geometry.rays import rays
from thermfix.model import Frame, Inspection
from thermfix.session.batch import plan_of


@dataclass(frozen=True, slots=True, kw_only=True)
class Explanation:
    """A reading with the steps that lead to it; ``difference`` is to the other region, if one was named.

    ``extent_m`` is length and width of the surface the region covers, where known; ``note`` tells how a
    pose by corners fits.
    """

    frame: str
    page: int
    reading: Reading
    steps: tuple[Step, ...]
    difference: Difference | None
    trials: Trials | None
    extent_m: tuple[float, float] | None
    note: str


def explain_region(
    inspection: Inspection,
    region: str,
    *,
    frame: str | None = None,
    page: int = 0,
    minus: str | None = None,
    trials: bool = False,
) -> Explanation:
    """Return how a region's reading comes about.

    Parameters
    ----------
    inspection : Inspection
        The inspection.
    region : str
        Name of the region.
    frame : str, optional
        Frame file; the first that has the region if left out.
    page : int
        Page of the frame file, from 0.
    minus : str, optional
        Another region of the same frame, to state the difference to.
    trials : bool
        Whether to run Monte Carlo even where first order holds.

    Raises
    ------
    InputError
        If no such frame or region exists, or a difference is asked of regions without a reading.
    FrameError
        If the frame cannot be read.
    """
    entry = _frame(inspection, region, frame)
    instrument = Instrument(inspection.camera)
    with open_frame(inspection.folder / entry.file) as file:
        plan = plan_of(instrument, inspection, entry, file)
        stored = file.read(page)
    result = run(plan, stored, grid=False, pixels=True)
    index = _index(plan, region)
    surface = {one.region: one.surface_k.astype(np.float64) for one in result.pixels}
    received = instrument.signal.radiance(stored).reshape(-1)[plan.regions[index].layer.pixels]
    known = received[np.isfinite(result.pixels[index].surface_k)]
    mean = float((known if known.size else received).mean(dtype=np.float64))
    difference = None if minus is None else _difference(plan, surface, region, minus)
    reading = result.readings[index]
    run_of = reading.trials
    if trials and run_of is None and reading.surface_mean_k is not None and reading.u_k is not None:
        run_of = try_many(ReadingModel(plan.regions[index].layer, mean), reading.surface_mean_k, reading.u_k)
    return Explanation(
        frame=entry.file,
        page=page,
        reading=reading,
        steps=explain(plan.regions[index].layer, mean),
        difference=difference,
        trials=run_of,
        extent_m=_extent(plan.regions[index], inspection, (stored.shape[0], stored.shape[1])),
        note=plan.regions[index].note,
    )


def _extent(one: RegionPlan, inspection: Inspection, frame: tuple[int, int]) -> tuple[float, float] | None:
    """Return length and width of the surface a region covers, where field of view and range are known. [m]."""
    distance, fov = one.layer.geometry.distance_m, inspection.camera.field_of_view_deg
    if one.area_m2 is None or distance is None or fov is None or not np.isfinite(one.area_m2).all():
        return None
    points = rays(frame, fov, one.x + 0.5, one.y + 0.5) * np.broadcast_to(distance, one.x.shape)[:, None]
    return extent_m(points, one.area_m2)


def _difference(plan: Plan, surface: dict[str, NDArray[np.float64]], first: str, second: str) -> Difference:
    parts = []
    for name in (first, second):
        layer = plan.regions[_index(plan, name)].layer
        if not np.isfinite(surface[name]).any():
            raise InputError(f"The region “{printable(name)}” has no reading, so no difference can be stated.")
        parts.append((name, layer, surface[name]))
    return difference_of(parts[0], parts[1])


def _index(plan: Plan, name: str) -> int:
    names = [one.region.name for one in plan.regions]
    if name not in names:
        listed = ", ".join(printable(one) for one in names[:10])
        raise InputError(f"The frame has no region “{printable(name)}”.", hint=f"It has: {listed}.")
    return names.index(name)


def _frame(inspection: Inspection, region: str, frame: str | None) -> Frame:
    for one in inspection.frames:
        if frame == one.file or (frame is None and any(r.name == region for r in one.regions)):
            return one
    what = f"frame “{printable(frame)}”" if frame is not None else f"region “{printable(region)}” in any frame"
    listed = ", ".join(printable(one.file) for one in inspection.frames[:8])
    raise InputError(f"The inspection has no {what}.", hint=f"Its frames: {listed}.")
