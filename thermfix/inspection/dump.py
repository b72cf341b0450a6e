"""Everything an inspection says, as plain mappings for the record of a run."""

from collections.abc import Iterable, Mapping
from dataclasses import fields, is_dataclass
from datetime import datetime
from enum import Enum
from pathlib import Path
from typing import Any

import numpy as np

from thermfix.model import Inspection


def to_mapping(inspection: Inspection) -> dict[str, Any]:
    """Return a complete, JSON-able mapping of an inspection.

    Every dataclass becomes a mapping of its fields with its ``kind``, in the model's units (kelvin,
    names ending in ``_k``); assumed defaults are marked ``assumed``. Scenes and regions that frames
    share are listed once: ``frames`` name them by their places in ``scenes`` and ``regions``. Of
    the folder only its name is kept, so that the same inspection elsewhere gives the same mapping.
    """
    scenes = {id(frame.scene): frame.scene for frame in inspection.frames}
    regions = {id(region): region for frame in inspection.frames for region in frame.regions}
    scene_places = {key: place for place, key in enumerate(scenes)}
    region_places = {key: place for place, key in enumerate(regions)}
    return {
        "folder": inspection.folder.absolute().name,
        "title": inspection.title,
        "camera": _plain(inspection.camera),
        "sequence": _plain(inspection.sequence),
        "materials": _plain(inspection.materials),
        "scenes": _plain(scenes.values()),
        "regions": _plain(regions.values()),
        "frames": [
            {
                "file": frame.file,
                "scene": scene_places[id(frame.scene)],
                "regions": [region_places[id(region)] for region in frame.regions],
            }
            for frame in inspection.frames
        ],
    }


def _plain(value: Any) -> Any:
    if is_dataclass(value):
        return {"kind": type(value).__name__} | {one.name: _plain(getattr(value, one.name)) for one in fields(value)}
    if isinstance(value, Mapping):
        return {str(key): _plain(one) for key, one in value.items()}
    if isinstance(value, np.ndarray):
        return value.tolist()
    if isinstance(value, Iterable) and not isinstance(value, str):
        return [_plain(one) for one in value]
    return _scalar(value)


def _scalar(value: Any) -> Any:
    if isinstance(value, Enum):
        return value.value
    if isinstance(value, datetime):
        return value.isoformat()
    return value.as_posix() if isinstance(value, Path) else value
