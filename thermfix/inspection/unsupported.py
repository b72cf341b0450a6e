"""What the file may say but a correction cannot do yet. Removing a row switches the feature on."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any


@dataclass(frozen=True, slots=True)
class Unsupported:
    """One row: a key of a table ("region", "scene" or "window"), what of its value is refused, and the sentence."""

    table: str
    key: str
    refuses: Callable[[Any], bool]
    sentence: str


def _is_other_view(view: Any) -> bool:
    return view.angle_deg is None


def _is_solved_from_region(number: Any) -> bool:
    return number.from_region is not None


NOT_YET = (
    Unsupported("region", "view", _is_other_view, "a view other than angle_deg is not yet supported."),
    Unsupported("region", "small_target", bool, "unmixing small targets is not yet supported."),
    Unsupported("region", "true_area_mm2", lambda _: True, "targets below one pixel are not yet supported."),
    Unsupported(
        "region", "emissivity", lambda number: number.from_contact_c is not None,
        "solving emissivity from a contact reading is not yet supported.",
    ),
    Unsupported(
        "region", "emissivity", lambda number: number.same_temperature_as is not None,
        "solving emissivity from another region is not yet supported.",
    ),
    Unsupported(
        "region", "reflected_c", _is_solved_from_region,
        "solving the reflected temperature from a region is not yet supported.",
    ),
    Unsupported(
        "region", "transmittance", _is_solved_from_region,
        "solving transmittance from a region is not yet supported.",
    ),
    Unsupported(
        "scene", "reflected_c", _is_solved_from_region,
        "solving the reflected temperature from a region is not yet supported.",
    ),
    Unsupported(
        "scene", "transmittance", _is_solved_from_region,
        "solving transmittance from a region is not yet supported.",
    ),
    Unsupported(
        "window", "transmittance", _is_solved_from_region,
        "solving the window's transmittance from a region is not yet supported.",
    ),
    Unsupported(
        "window", "material", lambda _: True,
        "a window by its material is not yet supported; give transmittance and reflectance.",
    ),
)  # fmt: skip
"""All rows."""
