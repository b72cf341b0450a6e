"""How a region is seen: its view turned into an angle, a range and a footprint for every pixel."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input, stated_or_default
from thermfix.correction.setting import Tilt
from thermfix.errors import InputError
from thermfix.files import printable
from thermfix.geometry.pose import pose_of_rectangle
from thermfix.geometry.rays import rays
from thermfix.geometry.views import (
    Imaging,
    Sight,
    constant_view,
    cylinder_view,
    mirror_direction_deg,
    plane_normal,
    plane_view,
    posed_plane_view,
    sphere_view,
)
from thermfix.model import AngleView, Camera, CornersView, CylinderView, Estimate, PlaneView, Region, SphereView

MARK_U_PX = 1.0
"""Standard uncertainty of an outline that a person placed on the picture. [px]."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Seen:
    """What a region's pixels see, and the inputs that the view angle hangs on.

    A pose by corners also finds the range, and tells in ``note`` how it fits.
    """

    sight: Sight
    tilts: tuple[Tilt, ...]
    found_range: Input | None = None
    note: str = ""


def see(
    camera: Camera,
    frame: tuple[int, int],
    region: Region,
    x: NDArray[np.intp],
    y: NDArray[np.intp],
    distance: Input | None,
) -> Seen:
    """Return how the pixels (x, y) of a region are seen in a frame of (rows, columns).

    Raises
    ------
    InputError
        If a pose by corners is asked of a camera without a field of view.
    PhysicsError
        If no pose explains the corners.
    """
    px, py = x.astype(np.float64) + 0.5, y.astype(np.float64) + 0.5
    centroid = (float(px.mean()), float(py.mean()))
    imaging = Imaging(
        frame=frame,
        field_of_view_deg=camera.field_of_view_deg,
        distance_m=None if distance is None else distance.value,
    )
    origin = f"region {region.name}"
    view = region.view
    match view:
        case PlaneView():
            sight = plane_view(imaging, px, py, view.tilt_deg.value, view.azimuth_deg, centroid)
            normal = plane_normal(view.tilt_deg.value, view.azimuth_deg)
            tilted = Tilt(input=stated_or_default("tilt_deg", view.tilt_deg, origin))
            return Seen(sight=sight, tilts=(tilted,), note=_mirrors(imaging, centroid, normal))
        case CornersView():
            return _by_corners(camera, imaging, view, px, py, region)
        case CylinderView():
            sight = cylinder_view(imaging, px, py, view.axis, view.width_px, view.tilt_deg.value)
            tilt = stated_or_default("tilt_deg", view.tilt_deg, origin)
            return Seen(sight=sight, tilts=(_outline(view.width_px / 2, origin), _tilted(tilt)))
        case SphereView():
            sight = sphere_view(imaging, px, py, view.centre, view.radius_px)
            return Seen(sight=sight, tilts=(_outline(view.radius_px, origin),))
        case AngleView():
            angle = stated_or_default("angle_deg", view.angle_deg, origin)
        case None:
            # Nobody said how it is seen: taken as facing the camera, with the default doubt about it.
            angle = stated_or_default("angle_deg", Estimate(value=0.0, assumed=True), origin)
    return Seen(sight=constant_view(imaging, px, py, angle.value), tilts=(Tilt(input=angle),))


def _by_corners(
    camera: Camera,
    imaging: Imaging,
    view: CornersView,
    x: NDArray[np.float64],
    y: NDArray[np.float64],
    region: Region,
) -> Seen:
    if camera.field_of_view_deg is None:
        raise InputError(
            f"The region “{printable(region.name)}” has its plane by corners, which needs camera.field_of_view_deg.",
            hint="Give the camera's field of view, or the plane by tilt and azimuth.",
        )
    pose = pose_of_rectangle(imaging.frame, camera.field_of_view_deg, view.corners, view.size_m)
    sight = posed_plane_view(imaging, x, y, pose.normal, pose.centre_m)
    note = f"tilt {pose.tilt_deg:.1f}°, range {pose.range_m:.2f} m, corners fit within {pose.rms_px:.2f} px; "
    note += _mirrors(imaging, (float(x.mean()), float(y.mean())), pose.normal)
    origin = f"region {region.name}"
    tilt = Input(key="tilt_deg", value=pose.tilt_deg, u=pose.u_tilt_deg, origin=origin)
    found = Input(key="distance_m", value=pose.range_m, u=0.02 * pose.range_m, origin=origin)
    return Seen(sight=sight, tilts=(Tilt(input=tilt),), found_range=found, note=note)


def _mirrors(imaging: Imaging, centroid: tuple[float, float], normal: NDArray[np.float64]) -> str:
    """Say where a smooth plane mirrors from: that is where to look for its reflected temperature."""
    across, up = mirror_direction_deg(rays(imaging.frame, imaging.field_of_view_deg, *centroid), normal)
    side, height = "right" if across >= 0 else "left", "up" if up >= 0 else "down"
    return f"a smooth surface mirrors from {abs(across):.0f}° {side} and {abs(up):.0f}° {height} of the camera"


def _outline(radius_px: float, origin: str) -> Tilt:
    """Return the radius of a round body as an input: its outline may be off by a pixel, dθ/dr = −tan θ / r."""
    radius = Input(key="radius_px", value=radius_px, u=MARK_U_PX, origin=origin, assumed_u=True)
    return Tilt(input=radius, slope=lambda angle: -float(np.degrees(np.tan(np.radians(min(angle, 80.0))))) / radius_px)


def _tilted(tilt: Input) -> Tilt:
    """Return the tilt of a cylinder's axis as an input: dθ/dtilt = cos θ tan(tilt) / sin θ."""
    lean = float(np.tan(np.radians(tilt.value)))

    def slope(angle_deg: float) -> float:
        sine = float(np.sin(np.radians(angle_deg)))
        return min(float(np.cos(np.radians(angle_deg))) * lean / sine, 1.0) if sine > 1e-6 else 1.0

    return Tilt(input=tilt, slope=slope)
