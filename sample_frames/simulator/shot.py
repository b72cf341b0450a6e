"""One frame file of the sample inspections: its scenes, its camera, and what is true of its regions."""

from dataclasses import dataclass

from simulator.camera import Camera, celsius_thousandths, from_kelvin_hundredths, kelvin_hundredths
from simulator.camera import as_float as as_it_stands
from simulator.scene import Scene

SHOWN_BY_APPLIED = (0.95, 20.0)

KELVIN_CAMERA = Camera(
    unit="kelvin × 100, uint16",
    encode=kelvin_hundredths,
    decode=from_kelvin_hundredths,
    applied=SHOWN_BY_APPLIED,
)
CELSIUS_CAMERA = Camera(
    unit="°C, float32",
    encode=celsius_thousandths,
    decode=as_it_stands,
    applied=SHOWN_BY_APPLIED,
)
BARE_CAMERA = Camera(unit="kelvin × 100, uint16", encode=kelvin_hundredths, decode=from_kelvin_hundredths)
"""Applies nothing: it stores apparent temperatures."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Shot:
    """``regions`` maps a region of the inspection file to the body it lies on and to a note.

    ``small`` names regions that are no larger than their target, so that their pixels hold other bodies too.
    """

    file: str
    camera: Camera
    pages: tuple[Scene, ...]
    demonstrates: str
    regions: dict[str, tuple[str, str]]
    small: tuple[str, ...] = ()
