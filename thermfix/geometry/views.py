"""How each pixel sees its surface: view angle, range and footprint for a plane, a cylinder, a sphere."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.geometry.rays import FieldOfView, pixel_solid_angle_sr, rays

Array = NDArray[np.float64]

_DEEPEST = 0.5
"""A body deeper than this share of its range is not what its outline says; it gets one range."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Sight:
    """What pixels see, shape (n,) each; NaN where the surface is not there or not known.

    ``angle_deg`` between surface normal and line of sight [deg]; ``range_m`` along it [m], None where
    no distance is known; ``area_m2`` of surface in each pixel [m²], None without field of view or distance.
    """

    angle_deg: Array
    range_m: Array | None
    area_m2: Array | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Imaging:
    """The frame (rows, columns), its full angles [deg], and the range to the region's centroid [m]; None = unknown."""

    frame: tuple[int, int]
    field_of_view_deg: FieldOfView | None = None
    distance_m: float | None = None


def constant_view(imaging: Imaging, x: ArrayLike, y: ArrayLike, angle_deg: float) -> Sight:
    """Return one angle and one range for all pixels centred at image points (n,)."""
    px = np.asarray(x, dtype=np.float64)
    angle = np.full(px.shape, float(angle_deg))
    return _sight(imaging, px, y, angle, None)


def plane_view(
    imaging: Imaging, x: ArrayLike, y: ArrayLike, tilt_deg: float, azimuth_deg: float, centroid: tuple[float, float]
) -> Sight:
    """Return the view of a plane through the region's centroid.

    Parameters
    ----------
    imaging : Imaging
        The camera; with a field of view every pixel has its own line of sight.
    x, y : array_like, shape (n,)
        Pixel centres. [px].
    tilt_deg : float
        Angle between the plane's normal (toward the camera) and the optical axis reversed. [deg], 0–90.
    azimuth_deg : float
        Direction in the image toward which the surface recedes: 0 = right, 90 = down. [deg].
    centroid : tuple
        Image point to which ``imaging.distance_m`` is the range. [px].
    """
    normal = plane_normal(tilt_deg, azimuth_deg)
    point = None
    if imaging.distance_m is not None:
        point = imaging.distance_m * rays(imaging.frame, imaging.field_of_view_deg, *centroid)
    return posed_plane_view(imaging, x, y, normal, point)


def plane_normal(tilt_deg: float, azimuth_deg: float) -> Array:
    """Return the unit normal toward the camera of a plane by tilt and azimuth [deg]; x right, y down, z forward."""
    tilt, azimuth = np.radians(tilt_deg), np.radians(azimuth_deg)
    return np.array([np.sin(tilt) * np.cos(azimuth), np.sin(tilt) * np.sin(azimuth), -np.cos(tilt)])


def mirror_direction_deg(sight: Array, normal: Array) -> tuple[float, float]:
    """Return where a smooth plane mirrors from: degrees to the right and up of the direction back to the camera.

    ``sight`` is the unit vector from the camera to the surface, ``normal`` that of the surface, both shape (3,).
    """
    mirrored = sight - 2 * float(sight @ normal) * normal
    across = np.degrees(np.arctan2(mirrored[0], -mirrored[2]) - np.arctan2(-sight[0], sight[2]))
    up = np.degrees(np.arcsin(np.clip(-mirrored[1], -1, 1)) - np.arcsin(np.clip(sight[1], -1, 1)))
    return float(across), float(up)


def posed_plane_view(imaging: Imaging, x: ArrayLike, y: ArrayLike, normal: Array, point_m: Array | None) -> Sight:
    """Return the view of the plane with this unit normal (toward the camera) through a point [m], camera axes."""
    directions = rays(imaging.frame, imaging.field_of_view_deg, x, y)
    cosine = -directions @ normal
    angle = _angle(cosine)
    if point_m is None or imaging.field_of_view_deg is None:
        return _sight(imaging, x, y, angle, None)
    with np.errstate(divide="ignore", invalid="ignore"):
        distance = -(point_m @ normal) / cosine
    return _sight(imaging, x, y, angle, np.where((cosine > 0) & (distance > 0), distance, np.nan))


def cylinder_view(
    imaging: Imaging,
    x: ArrayLike,
    y: ArrayLike,
    axis: tuple[tuple[float, float], tuple[float, float]],
    width_px: float,
    tilt_deg: float,
) -> Sight:
    r"""Return the view of a cylinder by its axis in the image and its full visible width. [px].

    Notes
    -----
    .. math:: \cos\theta = \sqrt{1 - t^2}\,\cos(\mathrm{tilt})

    t runs from −1 to 1 across; rays are parallel. The range grows from the nearest line to the outline by the
    body's own depth where field of view and distance are known; along the axis it is one.
    """
    (x0, y0), (x1, y1) = axis
    along = np.array([x1 - x0, y1 - y0]) / np.hypot(x1 - x0, y1 - y0)
    px, py = np.asarray(x, dtype=np.float64), np.asarray(y, dtype=np.float64)
    lean = float(np.cos(np.radians(tilt_deg)))

    def off_axis(at_x: Array, at_y: Array) -> Array:
        return np.asarray(((at_x - x0) * -along[1] + (at_y - y0) * along[0]) ** 2 / (width_px / 2) ** 2)

    square = off_axis(px, py)
    distance = _round_range(imaging, (px, py), square, off_axis(px.mean(), py.mean()), width_px / 2, lean)
    return _sight(imaging, px, py, _angle(_rise(square) * lean), distance)


def sphere_view(imaging: Imaging, x: ArrayLike, y: ArrayLike, centre: tuple[float, float], radius_px: float) -> Sight:
    r"""Return the view of a sphere by its centre and radius in the image. [px].

    Notes
    -----
    .. math:: \cos\theta = \sqrt{1 - (\rho/r)^2}

    The range grows from the middle to the rim by the sphere's own depth where field of view and distance are known.
    """
    px, py = np.asarray(x, dtype=np.float64), np.asarray(y, dtype=np.float64)

    def off_centre(at_x: Array, at_y: Array) -> Array:
        return np.asarray(((at_x - centre[0]) ** 2 + (at_y - centre[1]) ** 2) / radius_px**2)

    square = off_centre(px, py)
    distance = _round_range(imaging, (px, py), square, off_centre(px.mean(), py.mean()), radius_px, 1.0)
    return _sight(imaging, px, py, _angle(_rise(square)), distance)


def _round_range(
    imaging: Imaging, pixels: tuple[Array, Array], square: Array, at_centroid: Array, radius_px: float, lean: float
) -> Array | None:
    """Return the range to a round body's surface, None where it is taken as one.

    Its axis stands D away and its radius is R = D sin α, α half the angle it fills:
    r = D (1 − sin α √(1 − t²) / cos tilt), with D from the range to the centroid.
    """
    if imaging.field_of_view_deg is None or imaging.distance_m is None:
        return None
    middle = float(pixels[0].mean()), float(pixels[1].mean())
    pixel_rad = float(np.sqrt(pixel_solid_angle_sr(imaging.frame, imaging.field_of_view_deg, *middle)))
    depth = float(np.sin(np.arctan(radius_px * pixel_rad))) / max(lean, 1e-6)
    share = depth * np.sqrt(np.clip(1 - at_centroid, 0, 1))
    if not depth < _DEEPEST:
        return None
    return np.asarray(imaging.distance_m / (1 - share) * (1 - depth * np.sqrt(np.clip(1 - square, 0, 1))))


def _rise(square: Array) -> Array:
    """Return √(1 − square), NaN off the body."""
    with np.errstate(invalid="ignore"):
        return np.asarray(np.sqrt(1 - square))


def _angle(cosine: Array) -> Array:
    """Return the angle of a cosine, NaN for a face turned away."""
    inside = np.where((cosine >= 0) & (cosine <= 1 + 1e-12), np.minimum(cosine, 1.0), np.nan)
    return np.degrees(np.arccos(inside))


def _sight(imaging: Imaging, x: ArrayLike, y: ArrayLike, angle: Array, distance: Array | None) -> Sight:
    if distance is None and imaging.distance_m is not None:
        distance = np.full(angle.shape, imaging.distance_m)
    area = None
    if distance is not None and imaging.field_of_view_deg is not None:
        solid_angle = pixel_solid_angle_sr(imaging.frame, imaging.field_of_view_deg, x, y)
        with np.errstate(divide="ignore"):
            area = np.where(angle < 90, distance**2 * solid_angle / np.cos(np.radians(angle)), np.nan)
    return Sight(angle_deg=angle, range_m=distance, area_m2=area)
