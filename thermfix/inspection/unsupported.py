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


NOT_YET = (
    Unsupported("region", "view", _is_other_view, "a view other than angle_deg is not yet supported."),
    Unsupported("region", "small_target", bool, "unmixing small targets is not yet supported."),
    Unsupported("region", "true_area_mm2", lambda _: True, "targets below one pixel are not yet supported."),
    Unsupported(
        "window", "material", lambda _: True,
        "a window by its material is not yet supported; give transmittance and reflectance.",
    ),
)  # fmt: skip
"""All rows."""
