"""The set-up of one frame: a layer for the background and one per region, reused for every page that shares it."""

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.cautions import Caution, caution
from thermfix.correction.conditions import Conditions, Key
from thermfix.correction.defaults import Input
from thermfix.correction.instrument import Instrument
from thermfix.correction.layer import Geometry, Layer
from thermfix.correction.sight import see
from thermfix.correction.unknowns import regions_used
from thermfix.errors import InputError
from thermfix.files import printable
from thermfix.geometry.masks import ellipse_pixels, line_pixels, point_pixels, polygon_pixels, rectangle_pixels
from thermfix.geometry.views import Sight
from thermfix.model import (
    Ellipse,
    Estimate,
    Frame,
    Line,
    Material,
    Point,
    Polygon,
    Rectangle,
    Region,
    Shape,
)

Pixels = tuple[NDArray[np.intp], NDArray[np.intp], int]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class RegionPlan:
    """One region ready to be read: its pixels (x, y), its layer, and what is to be said before looking.

    ``area_m2`` is the footprint of each pixel on the surface, None where field of view or range is
    unknown; ``note`` tells how a pose by corners fits.
    """

    region: Region
    x: NDArray[np.intp]
    y: NDArray[np.intp]
    layer: Layer
    area_m2: NDArray[np.float64] | None
    note: str
    cautions: tuple[Caution, ...]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Plan:
    """The correction of every frame that shares scene, regions and shape (rows, columns)."""

    instrument: Instrument
    shape: tuple[int, int]
    background: Layer
    regions: tuple[RegionPlan, ...]


def make_plan(
    instrument: Instrument,
    frame: Frame,
    shape: tuple[int, int],
    materials: Mapping[str, Material] | None = None,
    solved: Mapping[Key, Input] | None = None,
) -> Plan:
    """Return the plan for a frame of the given shape.

    Parameters
    ----------
    instrument : Instrument
        The camera.
    frame : Frame
        Its scene and regions.
    shape : tuple
        Rows and columns of the stored array.
    materials : mapping, optional
        Materials of the inspection; they go before the library's.
    solved : mapping, optional
        Inputs that were found from regions of the frame (see `solve`).

    Raises
    ------
    InputError
        If a region lies wholly outside the frame or a material does not cover the band.
    """
    conditions = Conditions(instrument=instrument, scene=frame.scene, materials=materials or {}, solved=solved or {})
    background = Layer(
        instrument=instrument,
        circumstances=conditions.of(None),
        geometry=Geometry(angle_deg=np.zeros(1), distance_m=_distance(frame.scene.distance_m)),
    )
    used = regions_used(frame)
    regions = tuple(
        replace(one, cautions=(*one.cautions, caution("used-to-solve"))) if one.region.name in used else one
        for one in (plan_region(conditions, region, shape, frame.file) for region in frame.regions)
    )
    return Plan(instrument=instrument, shape=shape, background=background, regions=regions)


def plan_region(conditions: Conditions, region: Region, shape: tuple[int, int], file: str) -> RegionPlan:
    """Return one region's plan in a frame of the given shape; ``file`` is for messages."""
    x, y, total = _pixels_of(region.shape, shape)
    if x.size == 0:
        raise InputError(
            f"{printable(file)}: the region “{printable(region.name)}” lies wholly outside the frame "
            f"of {shape[1]} × {shape[0]} pixels.",
            hint="Move it, or remove it from this frame.",
        )
    path = conditions.path(region)
    seen = see(conditions.instrument.camera, shape, region, x, y, path.distance)
    layer = Layer(
        instrument=conditions.instrument,
        circumstances=conditions.of(region, seen.angle, seen.found_range),
        geometry=_geometry(seen.sight),
        region=region,
        pixels=y * shape[1] + x,
    )
    cautions = _cautions_before(layer, clipped=total - x.size)
    return RegionPlan(
        region=region, x=x, y=y, layer=layer, area_m2=seen.sight.area_m2, note=seen.note, cautions=cautions
    )


def _geometry(sight: Sight) -> Geometry:
    """Return angle and distance, one number where all pixels share it."""
    distance = sight.range_m
    return Geometry(angle_deg=_shared(sight.angle_deg), distance_m=None if distance is None else _shared(distance))


def _shared(values: NDArray[np.float64]) -> NDArray[np.float64]:
    return values[:1] if (values == values[0]).all() else values


def _distance(distance: Estimate | None) -> NDArray[np.float64] | None:
    return None if distance is None else np.array([distance.value])


def _pixels_of(shape: Shape, frame: tuple[int, int]) -> Pixels:
    match shape:
        case Rectangle(x0, y0, x1, y1):
            return rectangle_pixels(frame, x0, y0, x1, y1)
        case Ellipse(cx, cy, rx, ry):
            return ellipse_pixels(frame, cx, cy, rx, ry)
        case Polygon(corners):
            return polygon_pixels(frame, corners)
        case Line(points):
            return line_pixels(frame, points)
        case Point(x, y):
            return point_pixels(frame, x, y)


def _cautions_before(layer: Layer, *, clipped: int) -> tuple[Caution, ...]:
    """Return what is known to be doubtful before any pixel is read."""
    about = layer.circumstances
    found = []
    if clipped:
        found.append(caution("clipped", f"{clipped} of its pixels lie outside the frame"))
    if about.path.clear:
        found.append(caution("path-clear"))
    air = float(about.band.weights_at(300.0) @ layer.setting.air / about.band.radiance(300.0))
    if air < 0.5:
        found.append(caution("thick-air", f"only {100 * air:.0f} % of the signal passes"))
    angle = layer.geometry.angle_mean_deg
    if angle > 60:
        found.append(caution("grazing-view", f"seen at {angle:.0f}° to its normal"))
    material = about.surface.material
    if material is not None and material.warning:
        found.append(caution("material-varies", material.warning.rstrip(".")))
    return tuple(found)
