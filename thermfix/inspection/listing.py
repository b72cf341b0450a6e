"""Which files of a folder are frames when an inspection lists none (docs/decisions/0003)."""

from collections.abc import Collection
from pathlib import Path

from thermfix.errors import InputError
from thermfix.files import printable

FRAME_ENDINGS = (".tif", ".tiff", ".png", ".npy", ".npz", ".csv", ".tsv", ".txt")
"""Endings of frame files, in small letters."""

_RESULTS = ("regions.csv", "trend.csv")
_RESULT_ENDINGS = (".surface_c.csv", ".pixels.csv", ".surface.tif")


def frames_in(folder: Path, tables: Collection[str]) -> tuple[str, ...]:
    """Return the names of the frame files directly in a folder, sorted.

    Parameters
    ----------
    folder : Path
        The inspection's folder.
    tables : collection of str
        Files that the inspection names for another purpose; they are left out, as are hidden files,
        results of a correction, and links that lead out of the folder.

    Raises
    ------
    InputError
        If the folder cannot be listed.
    """
    root = folder.resolve()
    try:
        found = sorted(folder.iterdir())
    except OSError as error:
        raise InputError(f"Cannot list {printable(folder)}: {error.strerror}.") from error
    return tuple(one.name for one in found if one.name not in tables and _is_frame(one, root))


def _is_frame(file: Path, root: Path) -> bool:
    name = file.name.lower()
    if name.startswith(".") or name in _RESULTS or name.endswith(_RESULT_ENDINGS):
        return False
    return name.endswith(FRAME_ENDINGS) and file.is_file() and file.resolve().is_relative_to(root)
