"""Surface temperatures from thermal-camera frames, with their uncertainty or a plain reason why not.

>>> from thermfix import Band
>>> band = Band.rectangular(7.5, 14.0)
>>> float(band.temperature(band.radiance(353.15)).round(3))
353.15
"""

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from thermfix.frames import load_frame
    from thermfix.inspection import load_inspection
    from thermfix.radiometry import Band
    from thermfix.session import correct

__all__ = ["Band", "correct", "load_frame", "load_inspection"]

_HOMES = {
    "Band": "thermfix.radiometry",
    "load_frame": "thermfix.frames",
    "load_inspection": "thermfix.inspection",
    "correct": "thermfix.session",
}


def __getattr__(name: str) -> Any:
    """Load a public name when it is first asked for, so that importing the package costs nothing."""
    if name not in _HOMES:
        raise AttributeError(f"module 'thermfix' has no attribute {name!r}")
    import importlib

    return getattr(importlib.import_module(_HOMES[name]), name)
