"""Open a frame file by what it holds; a name's ending only tells text from other unknown files."""

from pathlib import Path

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.frame_file import FrameFile, Stored
from thermfix.frames.npz import NpzFrameFile
from thermfix.frames.numpy_files import NpyFrameFile
from thermfix.frames.png import PngFrameFile
from thermfix.frames.refusing import check_file, check_not_a_picture
from thermfix.frames.text import TextFrameFile
from thermfix.frames.tiff import TiffFrameFile

FRAME_ENDINGS = (".tif", ".tiff", ".png", ".npy", ".npz", ".csv", ".tsv", ".txt")
"""Endings of files that are looked at when a folder is searched for frames."""

_TIFF = (b"II*\x00", b"MM\x00*", b"II+\x00", b"MM\x00+")


def open_frame(path: Path | str) -> FrameFile:
    """Return an open frame file.

    Raises
    ------
    FrameError
        If it is no frame that can be read; the message says why and what to export instead.
    """
    path = Path(path)
    check_file(path)
    try:
        with path.open("rb") as stream:
            start = stream.read(64)
    except OSError as error:
        raise FrameError(f"{printable(path)} cannot be read: {error.strerror}.") from error
    check_not_a_picture(path, start)
    if start[:4] in _TIFF:
        return TiffFrameFile(path)
    if start.startswith(b"\x89PNG\r\n\x1a\n"):
        return PngFrameFile(path, start)
    if start.startswith(b"\x93NUMPY"):
        return NpyFrameFile(path)
    if start[:4] in (b"PK\x03\x04", b"PK\x05\x06"):
        return NpzFrameFile(path)
    return TextFrameFile(path)


def load_frame(path: Path | str, page: int = 0) -> Stored:
    """Return one page of a frame file as it is stored, shape (rows, columns).

    Raises
    ------
    FrameError
        If the file or the page cannot be read.
    """
    with open_frame(path) as file:
        return file.read(page)


def is_frame_name(name: str) -> bool:
    """Return whether a file's ending is one that frames have.

    >>> is_frame_name("panel.TIF"), is_frame_name("notes.md")
    (True, False)
    """
    return name.lower().endswith(FRAME_ENDINGS)
