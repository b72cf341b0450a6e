"""Reads an inspection file: everything in it checked, all faults at once, then the model."""

from collections.abc import Mapping
from pathlib import Path
from typing import Any

from thermfix.inspection.cameras import build_camera
from thermfix.inspection.checking import checked
from thermfix.inspection.faults import Faults
from thermfix.inspection.frame_list import FrameList
from thermfix.inspection.lines import KeyPath, key_lines
from thermfix.inspection.listing import frames_in
from thermfix.inspection.references import References
from thermfix.inspection.schema import FORMAT, FrameTable, InspectionTable
from thermfix.inspection.source import parse, read_text
from thermfix.inspection.surfaces import Regions, build_material
from thermfix.materials import library
from thermfix.model import Inspection
from thermfix.model import Sequence as Timing

FILE_NAME = "inspection.toml"

MOST_REGIONS = 100_000
"""Most regions that one file may hold. [1]."""

Listed = list[tuple[str, FrameTable | None, KeyPath]]


def load_inspection(path: Path | str) -> Inspection:
    """Read and check an inspection.

    Parameters
    ----------
    path : Path
        An inspection file, or the folder that holds ``inspection.toml``.

    Returns
    -------
    Inspection
        Temperatures in kelvin; every frame with its complete scene and regions; documented defaults
        marked as assumed; the tables that the file names, read.

    Raises
    ------
    InspectionError
        With all faults at once, each with its line and key path (places in lists from 0).
    """
    file = Path(path)
    if file.is_dir():
        file = file / FILE_NAME
    return read_inspection(read_text(file), file)


def read_inspection(text: str, file: Path) -> Inspection:
    """Return the inspection of a text as if it stood in ``file``, which need not exist; its folder must.

    Raises
    ------
    InspectionError
        As `load_inspection`.
    """
    data = parse(text, file)
    faults = Faults()
    inspection = _build(data, file.parent, faults)
    if faults:
        raise faults.error(file, key_lines(text.removeprefix("\ufeff")))
    return inspection


def _build(data: Mapping[str, Any], folder: Path, faults: Faults) -> Inspection:
    if _count_regions(data) > MOST_REGIONS:
        faults.add(("regions",), f"the file holds more than {MOST_REGIONS} regions.")
        return Inspection(folder=folder, camera=build_camera(None, References(folder, faults), faults), frames=())
    table = checked(data, faults)
    if table.format is None:
        faults.follow(("format",), f"is missing: the file begins with format = “{FORMAT}”.")
    references = References(folder, faults)
    camera = build_camera(table.camera, references, faults)
    materials = {name: build_material(name, one, references, faults) for name, one in table.materials.items()}
    listed = _listed(table, data, references, faults)
    regions = Regions(materials, library(), faults)
    frames = FrameList(table, camera, regions, faults).build(listed)
    return Inspection(
        folder=folder,
        title=table.title,
        camera=camera,
        frames=frames,
        materials=materials,
        sequence=Timing(start=table.sequence.start, interval_s=table.sequence.interval_s),
    )


def _listed(table: InspectionTable, data: Mapping[str, Any], references: References, faults: Faults) -> Listed:
    """Return file, table and place of every frame: those listed, or else all frame files of the folder."""
    if "frames" not in data:
        found: Listed = [(name, None, ()) for name in frames_in(references.folder, references.tables)]
        if not found:
            faults.follow(("frames",), "no frame is listed, and the folder holds none.")
        return found
    found, taken = [], set()
    for place, frame in enumerate(table.frames or ()):
        path: KeyPath = ("frames", place, "file")
        if frame.file is None:
            faults.follow(path, "is missing.")
        file = None if frame.file is None else references.file(path, frame.file)
        if file in taken:
            faults.follow(path, "the file is listed twice.")
        taken |= {file} - {None}
        found.append((file or f"frames[{place}]", frame, path[:-1]))
    if not found:
        faults.follow(("frames",), "lists no frame; leave it out to take every frame file of the folder.")
    return found


def _count_regions(data: Mapping[str, Any]) -> int:
    holders = [data, *(data["frames"] if isinstance(data.get("frames"), list) else [])]
    lists = [one.get("regions") for one in holders if isinstance(one, dict)]
    return sum(len(one) for one in lists if isinstance(one, list))
