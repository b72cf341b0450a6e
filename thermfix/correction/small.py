"""Regions a few pixels wide: their own radiance taken out of what they share with their surroundings."""

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input, stated_or_default
from thermfix.errors import InputError
from thermfix.files import printable
from thermfix.geometry.masks import rectangle_pixels
from thermfix.geometry.point_spread import (
    LOWEST_SHARE,
    ellipse_corners,
    fill_of,
    polygon_share,
    rectangle_share,
    ring,
    unmix,
)
from thermfix.geometry.rays import pixel_solid_angle_sr
from thermfix.model import XY, Camera, Ellipse, Line, Point, Polygon, Rectangle, Region

Array = NDArray[np.float64]
Fast = NDArray[np.float32]
Index = NDArray[np.intp]

RESOLVED_PX = 3.0
"""A region narrower than this is under-resolved: pixels at its edges are never its own alone. [px]."""

_STEP_PX = 0.02


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SmallTarget:
    """How one region mixes with its surroundings.

    ``share`` (n,) is K of its pixels and ``share_slope`` its derivative with the blur; ``ring`` are flat
    indices of the surroundings. For a target below one pixel ``fill`` is how many pixels it covers and
    ``reach`` are the flat indices over which its signal is summed.
    """

    blur: Input
    share: Array
    share_slope: Array
    ring: Index
    fill: float | None = None
    reach: Index | None = None
    filled_by: tuple[Input, ...] = ()

    def own(self, radiance: Fast, pixels: Index) -> Fast:
        """Return the region's own radiance in each of its pixels from the whole frame's, flat; NaN where K < 0.2."""
        around = self.around(radiance)
        if self.fill is not None and self.reach is not None:
            excess = float((radiance[self.reach].astype(np.float64) - around).sum())
            return np.full(pixels.size, around + excess / self.fill, np.float32)
        return unmix(radiance[pixels].astype(np.float64), self.share, around).astype(np.float32)

    def around(self, radiance: Fast) -> float:
        """Return the radiance of the surroundings: the median over the ring."""
        return float(np.nanmedian(radiance[self.ring])) if self.ring.size else float("nan")

    def terms(self, radiance: Fast, pixels: Index) -> list[tuple[Input, float]]:
        """Return how the mean of `own` goes with the blur, or with area and range. [W m⁻² sr⁻¹ per unit]."""
        around = self.around(radiance)
        if self.fill is not None:
            contrast = float(self.own(radiance, pixels)[0]) - around
            # The signal grows with the area and falls with the square of the range.
            factors = {"true_area_mm2": -1.0, "distance_m": 2.0}
            return [(one, factors[one.key] * contrast / one.value) for one in self.filled_by]
        known = self.share >= LOWEST_SHARE
        received = radiance[pixels].astype(np.float64)[known]
        slope = -(received - around) * self.share_slope[known] / self.share[known] ** 2
        return [(self.blur, float(np.nanmean(slope)) if slope.size else 0.0)]

    def noise_factor(self) -> float:
        """Return how much larger the noise of the mean is than that of as many plain pixels."""
        if self.fill is not None and self.reach is not None:
            return float(np.sqrt(self.reach.size * self.share.size) / self.fill)
        known = self.share[self.share >= LOWEST_SHARE]
        return float(np.sqrt((1 / known**2).mean())) if known.size else 1.0


def small_target(
    camera: Camera,
    frame: tuple[int, int],
    region: Region,
    pixels: tuple[Index, Index],
    others: NDArray[np.bool_],
    angle_deg: float,
    distance: Input | None,
) -> SmallTarget:
    """Return how a region marked as a small target mixes with its surroundings.

    Parameters
    ----------
    camera : Camera
        Its blur, and its field of view for a target below one pixel.
    frame : tuple
        Rows and columns.
    region : Region
        The region.
    pixels : (x, y)
        Its pixels.
    others : ndarray of bool, shape (rows, columns)
        Pixels of other regions, which are no surroundings.
    angle_deg : float
        Its mean view angle. [deg].
    distance : Input or None
        Its range. [m].

    Raises
    ------
    InputError
        If the camera's blur is not given, or a target below one pixel lacks field of view or distance.
    """
    name = printable(region.name)
    if camera.blur_px is None:
        raise InputError(
            f"The region “{name}” is a small target, which needs camera.blur_px.",
            hint="Find it with thermfix calibrate from a straight hot edge, or give it.",
        )
    blur = stated_or_default("blur_px", camera.blur_px, "camera")
    x, y = pixels
    mask = np.zeros(frame, dtype=bool)
    mask[y, x] = True
    around = np.flatnonzero(ring(mask, blur.value) & ~others)
    share = _share(region, x, y, blur.value)
    low, high = max(blur.value - _STEP_PX, 0.0), blur.value + _STEP_PX
    slope = (_share(region, x, y, high) - _share(region, x, y, low)) / (high - low)
    made = SmallTarget(blur=blur, share=share, share_slope=slope, ring=around)
    if region.true_area_mm2 is None:
        return made
    if camera.field_of_view_deg is None or distance is None:
        raise InputError(
            f"The region “{name}” has true_area_mm2, which needs camera.field_of_view_deg and distance_m.",
            hint="Give both, or leave true_area_mm2 out.",
        )
    centre = float(x.mean()) + 0.5, float(y.mean()) + 0.5
    pixel_sr = float(pixel_solid_angle_sr(frame, camera.field_of_view_deg, *centre))
    fill = fill_of(region.true_area_mm2.value * 1e-6, distance.value, angle_deg, pixel_sr)
    area = stated_or_default("true_area_mm2", region.true_area_mm2, f"region {region.name}")
    return replace(
        made,
        fill=fill,
        reach=_widened(mask, blur.value),
        filled_by=(area, distance),
    )


def narrowest_px(region: Region) -> float:
    """Return the narrowest width of a region's shape. [px]."""
    match region.shape:
        case Rectangle(x0, y0, x1, y1):
            return min(x1 - x0, y1 - y0)
        case Ellipse(_, _, rx, ry):
            return 2 * min(rx, ry)
        case Polygon(corners):
            return _narrowest(np.array(corners))
        case _:
            return 1.0


def _share(region: Region, x: Index, y: Index, sigma_px: float) -> Array:
    shape = region.shape
    if isinstance(shape, Rectangle):
        corners = (shape.x0, shape.y0, shape.x1, shape.y1)
        return rectangle_share(x.astype(np.float64), y.astype(np.float64), corners, sigma_px)
    outlines = _outlines(shape) or [_square(float(px), float(py)) for px, py in zip(x, y, strict=True)]
    left, top = int(x.min()), int(y.min())
    box = (left, top, int(x.max()) - left + 1, int(y.max()) - top + 1)
    total = sum(polygon_share(box, one, sigma_px) for one in outlines)
    return np.asarray(np.minimum(np.asarray(total)[y - top, x - left], 1.0))


def _outlines(shape: Polygon | Ellipse | Line | Point | Rectangle) -> list[list[XY]]:
    """Return the outlines whose areas make the shape; none for a line, which is the squares of its pixels."""
    match shape:
        case Polygon(corners):
            return [list(corners)]
        case Ellipse(cx, cy, rx, ry):
            return [ellipse_corners(cx, cy, rx, ry)]
        case Line():
            return []
        case Point(px, py):
            return [_square(px, py)]
        case Rectangle(x0, y0, x1, y1):
            return [[(x0, y0), (x1, y0), (x1, y1), (x0, y1)]]


def _square(x: float, y: float) -> list[XY]:
    left, top = float(np.floor(x)), float(np.floor(y))
    return [(left, top), (left + 1, top), (left + 1, top + 1), (left, top + 1)]


def _widened(mask: NDArray[np.bool_], sigma_px: float) -> Index:
    """Return the flat indices of the shape widened by 3σ + 1 px."""
    reach = int(np.ceil(3 * sigma_px + 1))
    rows, columns = np.nonzero(mask)
    left, right, top, bottom = columns.min(), columns.max() + 1, rows.min(), rows.max() + 1
    x, y, _ = rectangle_pixels((mask.shape[0], mask.shape[1]), left - reach, top - reach, right + reach, bottom + reach)
    away = np.min(np.hypot(x[:, None] - columns, y[:, None] - rows), axis=1)
    keep = away <= 3 * sigma_px + 1
    return np.asarray(y[keep] * mask.shape[1] + x[keep])


def _narrowest(corners: Array) -> float:
    """Return the smallest extent of a polygon over the directions across its own edges."""
    edges = np.roll(corners, -1, axis=0) - corners
    lengths = np.hypot(edges[:, 0], edges[:, 1])
    across = np.stack([-edges[:, 1], edges[:, 0]], axis=1)[lengths > 0] / lengths[lengths > 0, None]
    extents = corners @ across.T
    return float(np.ptp(extents, axis=0).min()) if extents.size else 0.0
