"""The set-up of one frame: a layer for the background and one per region, reused for every page that shares it."""

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.before_looking import cautions_before
from thermfix.correction.cautions import Caution, caution
from thermfix.correction.conditions import Conditions, Key
from thermfix.correction.defaults import Input
from thermfix.correction.instrument import Instrument
from thermfix.correction.layer import Geometry, Layer
from thermfix.correction.sight import see
from thermfix.correction.small import SmallTarget, small_target
from thermfix.correction.unknowns import as_reflector, reflectors, regions_used
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
    unknown; ``note`` tells how a pose by corners fits; ``small`` how a small target mixes with its surroundings.
    """

    region: Region
    x: NDArray[np.intp]
    y: NDArray[np.intp]
    layer: Layer
    area_m2: NDArray[np.float64] | None
    note: str
    cautions: tuple[Caution, ...]
    small: SmallTarget | None = None


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
        for one in (
            plan_region(conditions, region, shape, frame.file, _elsewhere(region, frame.regions, shape))
            for region in (as_reflector(one) if one.name in reflectors(frame) else one for one in frame.regions)
        )
    )
    return Plan(instrument=instrument, shape=shape, background=background, regions=regions)


def plan_region(
    conditions: Conditions,
    region: Region,
    shape: tuple[int, int],
    file: str,
    others: NDArray[np.bool_] | None = None,
) -> RegionPlan:
    """Return one region's plan in a frame of the given shape.

    ``file`` is for messages; ``others`` marks the pixels of other regions, which are no surroundings of a
    small target.
    """
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
        circumstances=conditions.of(region, seen.tilts, seen.found_range),
        geometry=_geometry(seen.sight),
        region=region,
        pixels=y * shape[1] + x,
    )
    small = None
    if region.small_target or region.true_area_mm2 is not None:
        elsewhere = np.zeros(shape, dtype=bool) if others is None else others
        distance = layer.circumstances.path.distance
        camera = conditions.instrument.camera
        small = small_target(camera, shape, region, (x, y), elsewhere, layer.geometry.angle_mean_deg, distance)
    return RegionPlan(
        region=region,
        x=x,
        y=y,
        layer=layer,
        area_m2=seen.sight.area_m2,
        note=seen.note,
        cautions=cautions_before(layer, region, clipped=total - x.size),
        small=small,
    )


def _elsewhere(region: Region, regions: tuple[Region, ...], shape: tuple[int, int]) -> NDArray[np.bool_] | None:
    """Return the pixels of all other regions, where the region needs to know its surroundings."""
    if not region.small_target and region.true_area_mm2 is None:
        return None
    taken = np.zeros(shape, dtype=bool)
    for other in regions:
        if other is not region:
            x, y, _ = _pixels_of(other.shape, shape)
            taken[y, x] = True
    return taken


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
