"""What one page of a TIFF must be to hold a frame; checked from its tags, before its data are read."""

from pathlib import Path
from typing import Any

import numpy as np

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.decoding import AGAIN
from thermfix.frames.limits import MOST_PIXELS
from thermfix.frames.refusing import refuse_colours

_GREY = (0, 1)  # photometric: white is zero, black is zero
_JPEG = (6, 7, 34892)
_WEBP = (34927, 50001)
# No packing that TIFF knows makes data smaller than by this factor: 1032 is the bound of deflate.
_MOST_PACKED = 5000


def shape_of(page: Any) -> tuple[int, int]:
    """Return rows and columns of a page."""
    return int(page.imagelength), int(page.imagewidth)


def check_page(path: Path, number: int, page: Any, file_bytes: int) -> None:
    """Refuse colours, pictures, unknown numbers, absent or cut-off data and impossible sizes.

    Raises
    ------
    FrameError
        With the reason.
    """
    where = f"page {number} of {printable(path)}"
    if int(page.photometric) not in _GREY or int(page.samplesperpixel) != 1:
        raise refuse_colours(path, "a colour picture")
    if int(page.compression) in _JPEG + _WEBP:
        raise refuse_colours(path, "a JPEG or WebP picture")
    if page.dtype is None:
        raise FrameError(f"In {where} are numbers of a kind that cannot be decoded.", hint="Export 16-bit or float32.")
    if int(page.imagedepth) != 1:
        raise FrameError(f"In {where} is a volume, not a frame.", hint="Export one page for each frame.")
    _check_size(path, page, file_bytes)
    _check_segments(where, page, file_bytes)


def _check_size(path: Path, page: Any, file_bytes: int) -> None:
    rows, columns = shape_of(page)
    if rows * columns > MOST_PIXELS:
        raise FrameError(
            f"{printable(path)} claims {columns} × {rows} pixels; 1 to {MOST_PIXELS:,} can be read.", hint=AGAIN
        )
    claimed = rows * columns * int(page.bitspersample) / 8
    factor = 1 if int(page.compression) == 1 else _MOST_PACKED
    if claimed > factor * file_bytes:
        raise FrameError(
            f"{printable(path)} claims {columns} × {rows} pixels, more than its {file_bytes:,} bytes can hold.",
            hint=AGAIN,
        )


def _check_segments(where: str, page: Any, file_bytes: int) -> None:
    """Refuse strips and tiles that are absent (decoders fill them with zeros), too few or beyond the end."""
    tile = (int(page.tilelength), int(page.tilewidth)) if page.is_tiled else None
    if tile is not None and not 0 < tile[0] * tile[1] <= MOST_PIXELS:
        raise FrameError(f"In {where} are tiles of {tile[1]} × {tile[0]} pixels; {MOST_PIXELS:,} can be read.")
    counts = np.asarray(page.databytecounts, dtype=np.float64)
    starts = np.asarray(page.dataoffsets, dtype=np.float64)
    expected = int(np.prod(page.chunked)) if page.is_tiled or int(page.rowsperstrip) > 0 else 1
    if not counts.size or counts.size != starts.size or counts.size < expected or not (counts > 0).all():
        raise FrameError(f"In {where} parts of the data are absent.", hint=AGAIN)
    if (starts <= 0).any() or (starts + counts > file_bytes).any():
        raise FrameError(f"The data of {where} are cut off: they reach beyond the end of the file.", hint=AGAIN)
