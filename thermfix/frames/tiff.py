"""TIFF and BigTIFF: integers and floats, strips and tiles, one page or many."""

import contextlib
import logging
import os
import threading
from datetime import datetime
from pathlib import Path
from typing import Any

import numpy as np

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.decoding import AGAIN, decoding, without_warnings
from thermfix.frames.frame_file import FrameFile, Stored
from thermfix.frames.tiff_chain import check_chain
from thermfix.frames.tiff_page import check_page, shape_of

_WHAT = "it is damaged, cut off, or no TIFF that can be decoded"


class TiffFrameFile(FrameFile):
    """A TIFF. Uncompressed stacks are read at their known offsets; anything else through tifffile."""

    def __init__(self, path: Path) -> None:
        import tifffile  # costs start-up time

        logging.getLogger("tifffile").setLevel(logging.CRITICAL + 1)
        self._lock = threading.Lock()
        check_chain(path)
        with decoding(path, _WHAT), without_warnings():
            # Microscopy metadata may name other files: not followed.
            self._tiff = tifffile.TiffFile(path, is_ome=False)
        try:
            with decoding(path, _WHAT), without_warnings():
                self._describe(path)
        except BaseException:
            self._tiff.close()
            raise

    def _describe(self, path: Path) -> None:
        tiff = self._tiff
        self._size = path.stat().st_size
        first: Any = tiff.pages.first
        check_page(path, 0, first, self._size)
        shape = shape_of(first)
        stack, self._offset = _stack_of(tiff, first, shape)
        kind = "BigTIFF" if tiff.is_bigtiff else "TIFF"
        super().__init__(path, kind, stack or len(tiff.pages), shape, np.dtype(first.dtype))
        self._bytes = self.shape[0] * self.shape[1] * self.dtype.itemsize
        if self._offset is not None and self._offset + self.pages * self._bytes > self._size:
            raise FrameError(f"{printable(path)} is cut off: its pages reach beyond the end of the file.", hint=AGAIN)

    def _read(self, page: int) -> Stored:
        if self._offset is not None:
            with decoding(self.path, _WHAT):
                return self._read_plain(page, self._offset)
        with self._lock, decoding(self.path, f"page {page} is damaged, cut off, or cannot be decoded"):
            chosen: Any = self._tiff.pages[page]
            # A cast would lose digits without a word.
            if shape_of(chosen) != self.shape or np.dtype(chosen.dtype).newbyteorder("=") != self.dtype:
                raise FrameError(
                    f"Page {page} of {printable(self.path)} has {chosen.imagewidth} × {chosen.imagelength} numbers of "
                    f"type {chosen.dtype}, not {self.shape[1]} × {self.shape[0]} of type {self.dtype}.",
                    hint="Pages of one file must be of one size and type: save the others apart.",
                )
            check_page(self.path, page, chosen, self._size)
            return self._decoded(chosen, page)

    def _decoded(self, chosen: Any, page: int) -> Stored:
        try:
            return np.asarray(chosen.asarray())
        except (ValueError, ImportError) as error:
            # Only for a codec that is missing: over damaged data Pillow's library writes to the terminal.
            if not isinstance(error, ImportError) and "imagecodecs" not in str(error):
                raise
            from PIL import Image

            with without_warnings(), Image.open(self.path) as picture:
                picture.seek(page)
                values = np.asarray(picture)
            if values.dtype.newbyteorder("=") != self.dtype:
                raise
            return values

    def _read_plain(self, page: int, start: int) -> Stored:
        raw = self._tiff.filehandle
        at = start + page * self._bytes
        if hasattr(os, "pread"):
            data = os.pread(raw.fileno(), self._bytes, at)
        else:  # such systems have one position in a file for all threads
            with self._lock:
                raw.seek(at)
                data = raw.read(self._bytes)
        if len(data) != self._bytes:
            raise FrameError(f"{printable(self.path)} is cut off in page {page}.", hint=AGAIN)
        return np.frombuffer(data, self.dtype.newbyteorder(self._tiff.byteorder)).reshape(self.shape)

    def time(self, page: int) -> str | None:
        """Return the page's DateTime tag as ISO 8601 text (local time, as stored), or None without one."""
        with self._lock, contextlib.suppress(Exception):
            if page < len(self._tiff.pages):
                one: Any = self._tiff.pages[page]
                stamp = datetime.strptime(str(one.tags["DateTime"].value), "%Y:%m:%d %H:%M:%S")  # noqa: DTZ007
                return stamp.isoformat()
        return None

    def facts(self) -> list[tuple[str, str]]:
        """Return kind, size, numbers, and how they are stored."""
        first: Any = self._tiff.pages.first
        order = "little-endian" if self._tiff.byteorder == "<" else "big-endian"
        packing = getattr(first.compression, "name", str(first.compression)).lower()
        rows = [*super().facts(), ("stored", f"{'tiles' if first.is_tiled else 'strips'}, {packing}, {order}")]
        if first.description:
            rows.append(("description", printable(first.description[:120])))
        return rows

    def close(self) -> None:
        """Close the file."""
        self._tiff.close()


def _stack_of(tiff: Any, first: Any, shape: tuple[int, int]) -> tuple[int, int | None]:
    """Return how many pages a contiguous uncompressed stack has and where it starts, or 0 and None."""
    plain = int(first.compression) == 1 and first.is_contiguous and first.is_final
    if not plain or len(tiff.series) != 1:
        return 0, None
    series = tiff.series[0]
    count = int(np.prod(series.shape[:-2], dtype=np.float64)) if len(series.shape) > 2 else 1
    uniform = tuple(series.shape[-2:]) == shape and np.dtype(series.dtype) == np.dtype(first.dtype)
    if not uniform or series.dataoffset is None or count < 1:
        return 0, None
    return count, int(series.dataoffset)
