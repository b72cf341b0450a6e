"""How a region is seen: the geometry that gives each pixel its view angle, range and footprint."""

from dataclasses import dataclass

from thermfix.model.estimate import Estimate
from thermfix.model.shapes import XY


@dataclass(frozen=True, slots=True, kw_only=True)
class AngleView:
    """One view angle for the whole region. [deg]."""

    angle_deg: Estimate


@dataclass(frozen=True, slots=True, kw_only=True)
class PlaneView:
    """A plane by tilt and by the image direction toward which it recedes (0 = right, 90 = down). [deg]."""

    tilt_deg: Estimate
    azimuth_deg: float


@dataclass(frozen=True, slots=True, kw_only=True)
class CornersView:
    """A plane by the four image corners of a rectangle of known size, clockwise from its own top left."""

    corners: tuple[XY, XY, XY, XY]
    size_m: tuple[float, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class CylinderView:
    """A cylinder by its axis in the image, its full visible width, and the axis's tilt out of the image plane."""

    axis: tuple[XY, XY]
    width_px: float
    tilt_deg: Estimate


@dataclass(frozen=True, slots=True, kw_only=True)
class SphereView:
    """A sphere by its centre and radius in the image."""

    centre: XY
    radius_px: float


View = AngleView | PlaneView | CornersView | CylinderView | SphereView
