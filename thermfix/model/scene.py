"""What surrounds the surfaces: reflected temperature, air, path and window. Temperatures in kelvin."""

from dataclasses import dataclass

from thermfix.model.estimate import Estimate
from thermfix.model.solves import FromReflector, FromTarget


@dataclass(frozen=True, slots=True, kw_only=True)
class Window:
    """An infrared window between air and camera: either in-band numbers or a material and its thickness."""

    transmittance: Estimate | FromTarget | None
    reflectance: Estimate
    temperature_k: Estimate
    material: str | None = None
    thickness_mm: Estimate | None = None
    angle_deg: Estimate | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Scene:
    """Conditions of one frame, after its own overrides.

    ``distance_m`` None means a clear path (nothing absorbed, said by a caution); ``transmittance``
    replaces the air model; ``camera_side_k`` None means the air temperature.
    """

    reflected_k: Estimate | FromReflector
    air_k: Estimate
    humidity_pct: Estimate
    pressure_hpa: Estimate
    co2_ppm: Estimate
    emissivity: Estimate
    distance_m: Estimate | None = None
    transmittance: Estimate | FromTarget | None = None
    camera_side_k: Estimate | None = None
    window: Window | None = None
