"""View factors to and between flat polygons of any outline."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError

Array = NDArray[np.float64]

_FLAT = 1e-6


def patch_to_polygon(point: ArrayLike, normal: ArrayLike, corners: ArrayLike) -> float:
    r"""Return F from a small patch to a flat polygon; what lies below the patch's horizon is cut off.

    Parameters
    ----------
    point, normal : array_like, shape (3,)
        Of the patch; the normal is a unit vector.
    corners : array_like, shape (n, 3)
        Corners in order. Either face counts: turn away what must not be seen.

    Notes
    -----
    .. math:: F = \frac{1}{2\pi} \left|\sum_i \beta_i\, \hat n \cdot \hat g_i\right|

    with β the angle between neighbouring corners and ĝ the normal of their plane through the patch.

    References
    ----------
    .. [1] J. H. Lambert, "Photometria", 1760; P. Moon, "The Scientific Basis of Illuminating Engineering", 1936.
    """
    origin, up = np.asarray(point, dtype=np.float64), np.asarray(normal, dtype=np.float64)
    kept = _above(np.asarray(corners, dtype=np.float64) - origin, up)
    kept = kept[np.linalg.norm(kept, axis=1) > 0]  # a corner at the patch itself has no direction
    if len(kept) < 3:
        return 0.0
    unit = kept / np.linalg.norm(kept, axis=1, keepdims=True)
    after = np.roll(unit, -1, axis=0)
    cross = np.cross(unit, after)
    size = np.linalg.norm(cross, axis=1)
    beta = np.arctan2(size, (unit * after).sum(axis=1))
    with np.errstate(invalid="ignore", divide="ignore"):
        share = np.where(size > 0, beta * (cross @ up) / size, 0.0)
    return float(min(abs(share.sum()) / (2 * np.pi), 1.0))


def between_polygons(first: ArrayLike, second: ArrayLike, points: int = 12) -> float:
    """Return F₁₂ between two flat polygons: Lambert's patch formula averaged over the first.

    Parameters
    ----------
    first, second : array_like, shape (n, 3) and (m, 3)
        Corners in order, three or more. A polygon looks to where its corners go round counter-clockwise
        (right-hand rule); what lies behind the other's face gives and gets nothing.
    points : int
        Gauss points along each side of the triangles that make the first.

    Returns
    -------
    float
        0 to 1. With 12 points within 1e-6 for rectangles apart by half their size or on a common edge at right
        angles; touching polygons at sharper angles need more points.

    Raises
    ------
    InputError
        If a polygon has fewer than three corners, no area, or corners off its plane by over 1e-6 of its size.

    Notes
    -----
    What stands between the two is not considered.
    """
    (one, one_up), (other, other_up) = _flat(first), _flat(second)
    size = float(_areas(one, one_up).sum())
    seen = _above(one - other[0], other_up) + other[0]
    if len(seen) < 3:
        return 0.0
    total = 0.0
    for i, area in enumerate(_areas(seen, one_up), start=1):
        for weight, place in _triangle_points(seen[[0, i, i + 1]], points):
            total += area * weight * patch_to_polygon(place, one_up, other)
    return float(min(max(total / size, 0.0), 1.0))


def _flat(corners: ArrayLike) -> tuple[Array, Array]:
    """Return a polygon and the unit normal of its face."""
    places = np.asarray(corners, dtype=np.float64)
    if places.ndim != 2 or places.shape[1] != 3 or len(places) < 3 or not np.isfinite(places).all():
        raise InputError(f"A polygon for a view factor has 3 or more corners of 3 numbers, not shape {places.shape}.")
    centred = places - places.mean(axis=0)
    normal = np.cross(centred, np.roll(centred, -1, axis=0)).sum(axis=0)
    extent, length = float(np.abs(centred).max()), float(np.linalg.norm(normal))
    if not length > 1e-12 * extent**2:
        raise InputError("A polygon for a view factor must have an area; its corners lie on one line.")
    if float(np.abs(centred @ normal).max()) > _FLAT * extent * length:
        raise InputError("The corners of a polygon for a view factor do not lie in one plane.")
    return places, normal / length


def _areas(corners: Array, up: Array) -> Array:
    """Return the areas of the triangles from the first corner; negative ones take back what others count too much."""
    arms = corners[1:] - corners[0]
    return np.asarray(np.cross(arms[:-1], arms[1:]) @ up / 2)


def _above(corners: Array, up: Array) -> Array:
    """Return the part of a polygon on the normal's side of the patch's plane."""
    height = corners @ up
    kept = []
    for i in range(len(corners)):
        a, b, ha, hb = corners[i], corners[(i + 1) % len(corners)], height[i], height[(i + 1) % len(corners)]
        if ha >= 0:
            kept.append(a)
        if (ha > 0) != (hb > 0) and ha != hb:
            kept.append(a + (b - a) * ha / (ha - hb))
    return np.array(kept, dtype=np.float64).reshape(-1, 3)


def _triangle_points(triangle: Array, count: int) -> list[tuple[float, Array]]:
    """Return weights (summing to 1) and places of a Gauss rule on a triangle (Duffy's collapse of a square)."""
    x, w = np.polynomial.legendre.leggauss(count)
    u, v = (x + 1) / 2, w / 2
    found = []
    for i in range(count):
        for j in range(count):
            weight = float(2 * v[i] * v[j] * (1 - u[i]))
            place = triangle[0] + u[i] * (triangle[1] - triangle[0])
            place = place + (1 - u[i]) * u[j] * (triangle[2] - triangle[0])
            found.append((weight, place))
    return found
