"""An inspection: camera, scene, regions and frames, as plain frozen values (kelvin, metres, pixels)."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import datetime
from pathlib import Path

from thermfix.model.camera import Camera
from thermfix.model.estimate import Estimate
from thermfix.model.material import Material
from thermfix.model.scene import Scene
from thermfix.model.shapes import Shape
from thermfix.model.solves import EmissivitySolve, FromReflector, FromTarget
from thermfix.model.views import View


@dataclass(frozen=True, slots=True, kw_only=True)
class Source:
    """One warm or cold body that a surface mirrors, with its share of the reflected hemisphere, [K] and [1]."""

    source_k: Estimate
    view_factor: Estimate


@dataclass(frozen=True, slots=True, kw_only=True)
class Region:
    """A named set of pixels that share one surface.

    ``material`` names an entry of the library or of the inspection; otherwise ``emissivity`` is a
    grey in-band value or how it is solved. ``reflected_k``, ``distance_m`` and ``transmittance``
    override the scene's.
    """

    name: str
    shape: Shape
    material: str | None = None
    emissivity: Estimate | EmissivitySolve | None = None
    view: View | None = None
    reflected_k: Estimate | FromReflector | None = None
    distance_m: Estimate | None = None
    transmittance: Estimate | FromTarget | None = None
    reflections: tuple[Source, ...] = ()
    small_target: bool = False
    true_area_mm2: Estimate | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Frame:
    """One frame file of the inspection: path inside the folder, its conditions, all its regions in order.

    ``scene`` and ``regions`` are complete: the inspection's own merged with this frame's.
    """

    file: str
    scene: Scene
    regions: tuple[Region, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Sequence:
    """Time of the pages of multi-page files."""

    start: datetime | None = None
    interval_s: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Inspection:
    """A folder of frames and what is known about them."""

    folder: Path
    title: str = ""
    camera: Camera
    frames: tuple[Frame, ...]
    materials: Mapping[str, Material] = field(default_factory=dict)
    sequence: Sequence = Sequence()
