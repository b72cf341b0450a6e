"""What a diffuse (Lambertian) area of known radiance sends to a receiver, near and far."""

import numpy as np

from thermfix.geometry.view_factors import facing_rectangle, patch_to_disc, small_source


def exitance(radiance: float) -> float:
    """Return what a diffuse surface sends into its half space: π L. [W m⁻²] for L in W m⁻² sr⁻¹."""
    return float(np.pi * radiance)


def irradiance(
    radiance: float, area_m2: float, distance_m: float, source_angle_deg: float, receiver_angle_deg: float
) -> float:
    """Return the irradiance at a receiver from a small area: L A cos θ₁ cos θ₂ / d². [W m⁻²].

    Parameters
    ----------
    radiance : float
        Of the area. [W m⁻² sr⁻¹].
    area_m2, distance_m : float
        Its area [m²] and its distance [m], over 5 times its size for 1 %.
    source_angle_deg, receiver_angle_deg : float
        Between each normal and the line between them. [deg].
    """
    return exitance(radiance) * small_source(area_m2, distance_m, receiver_angle_deg, source_angle_deg)


def disc_irradiance(radiance: float, radius: float, distance: float) -> float:
    """Return the irradiance on the axis of a disc at any distance: π L R²/(R² + H²). [W m⁻²]."""
    return exitance(radiance) * patch_to_disc(radius, distance)


def rectangle_irradiance(
    radiance: float,
    width_m: float,
    height_m: float,
    distance_m: float,
    source_angle_deg: float = 0.0,
    receiver_angle_deg: float = 0.0,
) -> float:
    """Return the irradiance at a receiver from a rectangle at any distance, π L F with the exact F. [W m⁻²].

    The distance is to the rectangle's middle; angles as for `facing_rectangle`. [deg], 0–90.
    """
    return exitance(radiance) * facing_rectangle(width_m, height_m, distance_m, receiver_angle_deg, source_angle_deg)
