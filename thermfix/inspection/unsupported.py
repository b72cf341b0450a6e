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


NOT_YET: tuple[Unsupported, ...] = ()
"""All rows: none at present."""
