"""What is doubtful about a region before any of its pixels is read: its path, view, size and material."""

from collections.abc import Iterator

import numpy as np

from thermfix.correction.cautions import Caution, caution
from thermfix.correction.layer import Layer
from thermfix.correction.setting import Circumstances
from thermfix.correction.small import RESOLVED_PX, narrowest_px
from thermfix.correction.surface import Surface
from thermfix.model import Region

GRAZING_DEG = 60.0
"""Mean view angle from which emissivity falls fast. [deg]."""

THICK_AIR = 0.5
"""In-band transmittance of the air below which it is cautioned."""


def cautions_before(layer: Layer, region: Region, *, clipped: int) -> tuple[Caution, ...]:
    """Return the cautions of a region; ``clipped`` is how many of its pixels lie outside the frame."""
    about = layer.circumstances
    return (
        *_of_shape(region, clipped),
        *_of_path(about, layer),
        *_of_view(about, layer, region),
        *_of_material(about),
    )


def _of_shape(region: Region, clipped: int) -> Iterator[Caution]:
    if clipped:
        yield caution("clipped", f"{clipped} of its pixels lie outside the frame")
    width = narrowest_px(region)
    if width < RESOLVED_PX:
        yield caution("under-resolved", f"it is {width:.1f} pixels wide")


def _of_path(about: Circumstances, layer: Layer) -> Iterator[Caution]:
    if about.path.clear:
        yield caution("path-clear")
    air = float(about.band.weights_at(300.0) @ layer.setting.air / about.band.radiance(300.0))
    if air < THICK_AIR:
        yield caution("thick-air", f"only {100 * air:.0f} % of the signal passes")
    if about.window.warning:
        yield caution("window-material", about.window.warning.rstrip("."))


def _of_view(about: Circumstances, layer: Layer, region: Region) -> Iterator[Caution]:
    if region.view is None and _bends(about.surface):
        yield caution("view-unstated")
    angle = layer.geometry.angle_mean_deg
    if angle > GRAZING_DEG:
        yield caution("grazing-view", f"seen at {angle:.0f}° to its normal")


def _of_material(about: Circumstances) -> Iterator[Caution]:
    material = about.surface.material
    if material is not None and material.warning:
        yield caution("material-varies", material.warning.rstrip("."))


def _bends(surface: Surface) -> bool:
    """Return whether a surface's emissivity goes with the angle."""
    straight, slanted = surface.emissivity(np.array([0.0, 45.0]))
    return bool(np.abs(slanted - straight).max() > 1e-3)
