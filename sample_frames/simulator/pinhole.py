"""Rays of a pinhole camera and where they meet a sphere, a cylinder and a rectangle. x right, y down, z forward."""

from dataclasses import dataclass

import numpy as np

from simulator.radiation import Array


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Meeting:
    """Where rays meet a body, shape of the rays: ``cosine`` of the view angle and ``range_m``, NaN where they miss.

    ``across`` and ``along`` are metres on a rectangle from its middle; of other bodies, the point's x and y.
    """

    cosine: Array
    range_m: Array
    across: Array
    along: Array


@dataclass(frozen=True, slots=True, kw_only=True)
class Pinhole:
    """A camera by its frame (rows, columns) and full angles across and down. [deg]."""

    frame: tuple[int, int]
    field_of_view_deg: tuple[float, float]

    def rays(self, x: Array, y: Array) -> Array:
        """Return unit vectors through image points, shape (..., 3)."""
        rows, columns = self.frame
        wide, high = np.tan(np.radians(self.field_of_view_deg) / 2)
        right = (2 * x / columns - 1) * wide
        down = (2 * y / rows - 1) * high
        vectors = np.stack(np.broadcast_arrays(right, down, np.ones(1)), axis=-1)
        return np.asarray(vectors / np.linalg.norm(vectors, axis=-1, keepdims=True))

    def seen_at(self, point: Array) -> tuple[float, float]:
        """Return the image point of a point in space. [px]."""
        rows, columns = self.frame
        wide, high = np.tan(np.radians(self.field_of_view_deg) / 2)
        across, down = point[0] / point[2] / wide, point[1] / point[2] / high
        return float(columns * (1 + across) / 2), float(rows * (1 + down) / 2)

    def sphere(self, x: Array, y: Array, centre: Array, radius: float) -> Meeting:
        """Return where rays meet a sphere. [m]."""
        rays = self.rays(x, y)
        reach = _nearest_root(np.ones(rays.shape[:-1]), rays @ centre, centre @ centre - radius**2)
        points = rays * reach[..., None]
        return _met(rays, reach, (points - centre) / radius, points[..., 0], points[..., 1])

    def cylinder(self, x: Array, y: Array, point: Array, axis: Array, radius: float) -> Meeting:
        """Return where rays meet an endless cylinder about the unit vector ``axis`` through ``point``. [m]."""
        rays = self.rays(x, y)
        flat, start = rays - (rays @ axis)[..., None] * axis, point - (point @ axis) * axis
        reach = _nearest_root((flat**2).sum(axis=-1), flat @ start, start @ start - radius**2)
        points = rays * reach[..., None]
        away = points - point
        outward = away - (away @ axis)[..., None] * axis
        return _met(rays, reach, outward / radius, points[..., 0], points[..., 1])

    def rectangle(
        self, x: Array, y: Array, middle: Array, right: Array, down: Array, size_m: tuple[float, float]
    ) -> Meeting:
        """Return where rays meet a rectangle with these unit vectors along its sides. [m]."""
        rays = self.rays(x, y)
        normal = np.cross(down, right)
        with np.errstate(divide="ignore"):
            reach = (middle @ normal) / (rays @ normal)
        points = rays * reach[..., None] - middle
        across, along = points @ right, points @ down
        hit = (reach > 0) & (np.abs(across) < size_m[0] / 2) & (np.abs(along) < size_m[1] / 2)
        return _met(rays, np.where(hit, reach, np.nan), np.broadcast_to(normal, rays.shape), across, along)


def _nearest_root(a: Array, b: Array, c: Array) -> Array:
    """Return the smaller root of a s² − 2 b s + c, NaN without one."""
    with np.errstate(invalid="ignore"):
        return np.asarray((b - np.sqrt(b**2 - a * c)) / a)


def _met(rays: Array, reach: Array, outward: Array, across: Array, along: Array) -> Meeting:
    cosine = -(rays * outward).sum(axis=-1) + 0 * reach
    return Meeting(cosine=cosine, range_m=reach, across=across, along=along)
