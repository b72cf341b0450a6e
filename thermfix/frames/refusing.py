"""Files that cannot be frames, told by what they are and not by their name."""

import os
import stat
from pathlib import Path

from thermfix.errors import FrameError
from thermfix.files import printable

COLOUR_HINT = "Export the radiometric data instead: 16-bit TIFF or PNG, NPY, or CSV with temperatures."

_PICTURES = (
    (b"\xff\xd8\xff", "a JPEG picture"),
    (b"GIF8", "a GIF picture"),
    (b"\x00\x00\x01\x00", "an icon"),
    (b"\x00\x00\x00\x0cjP", "a JPEG 2000 picture"),
    (b"\xff\x0a", "a JPEG XL picture"),
)
_OTHERS = ((b"%PDF", "a PDF document"), (b"\x1f\x8b", "a gzip archive"), (b"7z\xbc\xaf", "a 7-Zip archive"))


def check_file(path: Path) -> None:
    """Refuse what is no readable, ordinary, non-empty file. Nothing is opened but an ordinary file."""
    name = printable(path)
    try:
        found = os.stat(path)
    except (OSError, ValueError) as error:
        raise FrameError(
            f"{name} cannot be read: {getattr(error, 'strerror', None) or error}.",
            hint="Check the name and the folder.",
        ) from error
    if stat.S_ISDIR(found.st_mode):
        raise FrameError(f"{name} is a folder, not a frame file.", hint="Name a file in it.")
    if not stat.S_ISREG(found.st_mode):
        raise FrameError(f"{name} is not an ordinary file.", hint="Copy the data to a file first.")
    if found.st_size == 0:
        raise FrameError(f"{name} is empty.", hint="Export the frame again.")
    if not os.access(path, os.R_OK):
        raise FrameError(f"{name} cannot be read: permission denied.", hint="Allow reading, or copy the file.")


def check_not_a_picture(path: Path, start: bytes) -> None:
    """Refuse pictures whose colours are not temperatures, and other files known by their first bytes."""
    what = next((what for magic, what in _PICTURES if start.startswith(magic)), None)
    if start[:4] == b"RIFF" and start[8:12] == b"WEBP":
        what = "a WebP picture"
    if start[4:8] == b"ftyp":
        what = "a HEIF or video file"
    # Text may begin with the letters BM; a picture has zero bytes after its size.
    if start[:2] == b"BM" and start[6:10] == bytes(4):
        what = "a BMP picture"
    if what is not None:
        raise FrameError(f"{printable(path)} is {what}: colours are not temperatures.", hint=COLOUR_HINT)
    other = next((what for magic, what in _OTHERS if start.startswith(magic)), None)
    if other is not None:
        raise FrameError(f"{printable(path)} is {other}, not a frame.", hint=COLOUR_HINT)


def refuse_colours(path: Path, what: str) -> FrameError:
    """Return the error for a file whose pixels are colours."""
    return FrameError(f"{printable(path)} holds {what}: colours are not temperatures.", hint=COLOUR_HINT)
