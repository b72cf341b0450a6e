"""Greyscale PNG of 8 or 16 bits, values as stored."""

from pathlib import Path

import numpy as np

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.decoding import decoding, without_warnings
from thermfix.frames.frame_file import FrameFile, Stored
from thermfix.frames.refusing import COLOUR_HINT, refuse_colours


class PngFrameFile(FrameFile):
    """A PNG of one grey page. Pixels are decoded at the first read."""

    def __init__(self, path: Path, start: bytes) -> None:
        if len(start) < 33 or start[12:16] != b"IHDR":
            raise FrameError(f"{printable(path)} is a damaged PNG.", hint="Export the file again.")
        columns, rows = int.from_bytes(start[16:20]), int.from_bytes(start[20:24])
        bits, colour = start[24], start[25]
        if colour != 0:
            raise refuse_colours(path, "a colour picture" if colour != 4 else "a picture with transparency")
        if bits not in (8, 16):
            raise FrameError(f"{printable(path)} has {bits}-bit pixels; 8 or 16 bits can be read.", hint=COLOUR_HINT)
        super().__init__(path, "PNG", 1, (rows, columns), np.dtype(np.uint16 if bits == 16 else np.uint8))

    def _read(self, page: int) -> Stored:
        from PIL import Image  # costs start-up time

        with decoding(self.path), without_warnings(), Image.open(self.path, formats=("PNG",)) as picture:
            values = np.asarray(picture)
        # Some versions of the decoder widen 16 bits to 32.
        return values.astype(self.dtype) if values.dtype == np.int32 else values
