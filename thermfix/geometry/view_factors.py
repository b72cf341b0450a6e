"""View factors: the share of what leaves one diffuse surface that reaches another."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError

Array = NDArray[np.float64]


def coaxial_discs(radius_1: float, radius_2: float, height: float) -> float:
    r"""Return F₁₂ of two parallel discs on one axis. Lengths in one unit, > 0.

    Notes
    -----
    .. math:: F_{12} = \tfrac12\left[S - \sqrt{S^2 - 4 (r_2/r_1)^2}\right],\quad S = 1 + \frac{1 + (r_2/h)^2}{(r_1/h)^2}

    References
    ----------
    .. [1] J. R. Howell, "A Catalog of Radiation Heat Transfer Configuration Factors", C-41.
    """
    a, b = radius_1 / height, radius_2 / height
    s = 1 + (1 + b**2) / a**2
    root = np.sqrt(s**2 - 4 * (radius_2 / radius_1) ** 2)
    # The difference of two near numbers, written as a quotient that keeps its digits.
    return float(2 * (radius_2 / radius_1) ** 2 / (s + root))


def parallel_rectangles(width: float, length: float, distance: float) -> float:
    """Return F₁₂ of two equal rectangles face to face (Howell C-11). Lengths in one unit, > 0."""
    x, y = width / distance, length / distance
    a, b = np.sqrt(1 + x**2), np.sqrt(1 + y**2)
    total = 0.5 * np.log((a * b) ** 2 / (1 + x**2 + y**2))
    total += x * b * np.arctan(x / b) + y * a * np.arctan(y / a) - x * np.arctan(x) - y * np.arctan(y)
    return float(2 / (np.pi * x * y) * total)


def perpendicular_rectangles(height: float, width: float, edge: float = 1.0) -> float:
    """Return F₁₂ from a rectangle to one that stands at right angles on a common edge (Howell C-14).

    The first is ``width`` × ``edge``, the second ``height`` × ``edge``. Lengths in one unit, > 0.
    """
    h, w = height / edge, width / edge
    both = np.hypot(h, w)
    terms = w * np.arctan(1 / w) + h * np.arctan(1 / h) - both * np.arctan(1 / both)
    a = (1 + w**2) * (1 + h**2) / (1 + both**2)
    b = w**2 * (1 + both**2) / ((1 + w**2) * both**2)
    c = h**2 * (1 + both**2) / ((1 + h**2) * both**2)
    return float((terms + 0.25 * np.log(a * b ** (w**2) * c ** (h**2))) / (np.pi * w))


def patch_to_disc(radius: float, height: float) -> float:
    r"""Return F from a small patch to a disc on its normal, facing it: R²/(R² + H²) (Howell B-12)."""
    return radius**2 / (radius**2 + height**2)


def patch_to_sphere(radius: float, distance: float, angle_deg: float = 0.0) -> float:
    """Return F from a small patch to a sphere wholly above its horizon: (R/d)² cos θ (Howell B-38).

    Parameters
    ----------
    radius, distance : float
        Of the sphere and to its centre, one unit; distance > radius.
    angle_deg : float
        Between the patch's normal and the direction to the centre. [deg].

    Raises
    ------
    InputError
        If part of the sphere lies below the patch's horizon.
    """
    if not distance > radius:
        raise InputError(f"The distance {distance:g} must be larger than the radius {radius:g}.")
    horizon = np.degrees(np.arccos(radius / distance))
    if angle_deg > horizon:
        raise InputError(
            f"The sphere dips below the patch's horizon at {angle_deg:g}°; up to {horizon:.1f}° it lies above.",
            hint="Split it into polygons, or give the view factor.",
        )
    return float((radius / distance) ** 2 * np.cos(np.radians(angle_deg)))


def small_source(area: float, distance: float, surface_angle_deg: float, source_angle_deg: float) -> float:
    r"""Return F from a small patch to a flat source far away: A cos θ₁ cos θ₂ / (π d²).

    Angles between each normal and the line between them. [deg]. Good to 1 % where d is over 5 times the source's size.
    """
    cosines = np.cos(np.radians([surface_angle_deg, source_angle_deg]))
    if (cosines <= 0).any():
        return 0.0
    return float(min(area * cosines.prod() / (np.pi * distance**2), 1.0))


def facing_rectangle(
    width: float, height: float, distance: float, surface_angle_deg: float = 0.0, source_angle_deg: float = 0.0
) -> float:
    """Return F from a small patch to a rectangle whose middle is ``distance`` away. Lengths in one unit, > 0.

    ``surface_angle_deg`` is between the patch's normal and the line to the middle, ``source_angle_deg``
    between the rectangle's normal and that line, turned about its height. [deg], 0–90.
    """
    tilt, turn = np.radians(surface_angle_deg), np.radians(source_angle_deg)
    across = np.array([np.cos(turn), 0.0, np.sin(turn)]) * width / 2
    up = np.array([0.0, height / 2, 0.0])
    middle = np.array([0.0, 0.0, distance])
    corners = np.stack([middle - across - up, middle + across - up, middle + across + up, middle - across + up])
    return patch_to_polygon((0.0, 0.0, 0.0), (0.0, np.sin(tilt), np.cos(tilt)), corners)


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
    """Return F₁₂ between flat polygons of 3 or 4 corners: Lambert's patch formula averaged over the first.

    Parameters
    ----------
    first, second : array_like, shape (3, 3) or (4, 3)
        Corners in order; the normal of the first by the right-hand rule is the face that looks.
    points : int
        Gauss points along each side of the first. 12 are good to 1e-6 unless the polygons touch; touching
        ones (a common edge) to 1e-3.

    Notes
    -----
    What the second polygon hides from view behind itself or other bodies is not considered.
    """
    corners = np.asarray(first, dtype=np.float64)
    total = area = 0.0
    for triangle in _triangles(corners):
        normal = np.cross(triangle[1] - triangle[0], triangle[2] - triangle[0])
        size = float(np.linalg.norm(normal)) / 2
        unit = normal / (2 * size)
        for weight, place in _triangle_points(triangle, points):
            total += weight * size * patch_to_polygon(place, unit, second)
        area += size
    return total / area


def disc_irradiance(radiance: float, radius: float, distance: float) -> float:
    """Return the irradiance on axis from a Lambertian disc: π L R²/(R² + H²). [W m⁻²] for L in W m⁻² sr⁻¹."""
    return float(np.pi * radiance * patch_to_disc(radius, distance))


def irradiance(
    radiance: float, area_m2: float, distance_m: float, source_angle_deg: float, receiver_angle_deg: float
) -> float:
    """Return the irradiance at a receiver from a small Lambertian area: L A cos θ₁ cos θ₂ / d². [W m⁻²]."""
    return np.pi * radiance * small_source(area_m2, distance_m, receiver_angle_deg, source_angle_deg)


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
    found = np.array(kept).reshape(-1, 3)
    off_origin: Array = found[np.linalg.norm(found, axis=1) > 0]
    return off_origin


def _triangles(corners: Array) -> Sequence[Array]:
    if corners.shape not in ((3, 3), (4, 3)):
        raise InputError(f"A polygon for a view factor has 3 or 4 corners of 3 coordinates, not shape {corners.shape}.")
    return [corners[[0, i, i + 1]] for i in range(1, len(corners) - 1)]


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
