"""View factors: the share of what leaves one diffuse surface that reaches another."""

import numpy as np

from thermfix.errors import InputError
from thermfix.geometry.polygon_factors import patch_to_polygon


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
    r"""Return F from a small patch to a sphere; what lies below the patch's horizon is cut off.

    Parameters
    ----------
    radius, distance : float
        Of the sphere and to its centre, one unit; distance > radius > 0.
    angle_deg : float
        Between the patch's normal and the direction to the centre. [deg], 0–180.

    Raises
    ------
    InputError
        If the patch lies inside the sphere.

    Notes
    -----
    With H = d/R: cos θ / H² where the whole sphere stands above the horizon (H cos θ ≥ 1), else

    .. math:: \frac12 - \frac1\pi \arcsin\frac{\sqrt{H^2-1}}{H\sin\theta} + \frac1{\pi H^2}\left[\cos\theta
        \arccos(-\sqrt{H^2-1}\cot\theta) - \sqrt{H^2-1}\sqrt{1-H^2\cos^2\theta}\right]

    References
    ----------
    .. [1] J. R. Howell, "A Catalog of Radiation Heat Transfer Configuration Factors", B-38 and B-39.
    """
    if not distance > radius > 0:
        raise InputError(f"The distance {distance:g} must be larger than the radius {radius:g}, and that over 0.")
    far, angle = distance / radius, np.radians(angle_deg)
    cosine, sine = float(np.cos(angle)), float(np.sin(angle))
    if far * cosine >= 1:
        return cosine / far**2
    if far * cosine <= -1:
        return 0.0
    root = np.sqrt(far**2 - 1)
    seen = cosine * np.arccos(np.clip(-root * cosine / sine, -1, 1)) - root * np.sqrt(1 - (far * cosine) ** 2)
    return float(0.5 - np.arcsin(min(root / (far * sine), 1.0)) / np.pi + seen / (np.pi * far**2))


def sphere_to_disc(radius: float, distance: float) -> float:
    r"""Return F from a sphere to a disc whose axis goes through the sphere's centre. Lengths in one unit, > 0.

    ``radius`` is the disc's, ``distance`` from the sphere's centre to it; the sphere's own size does not count,
    as long as it does not reach the disc.

    Notes
    -----
    .. math:: F = \tfrac12\left[1 - \frac{1}{\sqrt{1 + (R/h)^2}}\right]

    the share of the full solid angle that the disc fills, seen from the centre.

    References
    ----------
    .. [1] J. R. Howell, "A Catalog of Radiation Heat Transfer Configuration Factors", C-135 (number from memory).
    """
    # ½ (1 − cos) written as a quotient that keeps the digits of small discs.
    square = (radius / distance) ** 2
    root = np.sqrt(1 + square)
    return float(square / (2 * root * (1 + root)))


def sphere_to_patch(radius: float, distance: float, angle_deg: float, area: float) -> float:
    r"""Return F from a sphere to a small patch of this area, by reciprocity: F₂₁ A₂ / (4 π R²).

    Parameters as in `patch_to_sphere`; ``area`` of the patch in the same unit squared, far below R².
    """
    return patch_to_sphere(radius, distance, angle_deg) * area / (4 * np.pi * radius**2)


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
