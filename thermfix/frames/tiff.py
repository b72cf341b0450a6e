"""TIFF and BigTIFF: integers and floats, strips and tiles, one page or many."""

import contextlib
import logging
import os
import threading
import warnings
from datetime import datetime
from pathlib import Path
from typing import Any

import numpy as np

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.frame_file import FrameFile, Stored
from thermfix.frames.limits import MOST_PIXELS
from thermfix.frames.refusing import refuse_colours

_GREY = (0, 1)  # photometric: white is zero, black is zero


class TiffFrameFile(FrameFile):
    """A TIFF. Uncompressed stacks are read at their known offsets; anything else through tifffile."""

    def __init__(self, path: Path) -> None:
        import tifffile  # costs start-up time

        logging.getLogger("tifffile").setLevel(logging.CRITICAL)
        self._lock = threading.Lock()
        with _decoding(path, "opened"):
            self._tiff = tifffile.TiffFile(path)
        try:
            with _decoding(path, "opened"):
                self._describe(path)
        except BaseException:
            self._tiff.close()
            raise

    def _describe(self, path: Path) -> None:
        tiff = self._tiff
        first: Any = tiff.pages.first
        photometric, samples = int(first.photometric), int(first.samplesperpixel)
        if photometric not in _GREY or samples != 1:
            raise refuse_colours(path, "a colour picture")
        if int(first.compression) in (6, 7, 34892):
            raise refuse_colours(path, "a JPEG picture")
        if first.dtype is None:
            raise FrameError(f"{printable(path)} stores numbers of a kind that cannot be decoded.")
        shape = (int(first.imagelength), int(first.imagewidth))
        if shape[0] * shape[1] <= MOST_PIXELS:
            _check_claimed_size(path, first, shape)
        stack = _stack_of(tiff, first, shape)
        pages = stack if stack else len(tiff.pages)
        super().__init__(path, "BigTIFF" if tiff.is_bigtiff else "TIFF", pages, shape, np.dtype(first.dtype))
        self._bytes = self.shape[0] * self.shape[1] * self.dtype.itemsize
        self._offset = int(first.dataoffsets[0]) if stack and self._plain(first) else None
        self._stack = bool(stack)
        if self._offset is not None and self._offset + pages * self._bytes > path.stat().st_size:
            raise FrameError(f"{printable(path)} is cut off: its pages reach beyond the end of the file.", hint=_AGAIN)

    def _plain(self, first: Any) -> bool:
        return int(first.compression) == 1 and bool(first.is_contiguous)

    def _read(self, page: int) -> Stored:
        if self._offset is not None:
            return self._read_plain(page)
        with self._lock, _decoding(self.path, f"page {page} read"):
            chosen: Any = self._tiff.pages[page]
            if (int(chosen.imagelength), int(chosen.imagewidth)) != self.shape:
                raise FrameError(
                    f"Page {page} of {printable(self.path)} has {chosen.imagewidth} × {chosen.imagelength} pixels, "
                    f"not {self.shape[1]} × {self.shape[0]}.",
                    hint="Pages of one file must be of one size.",
                )
            return np.asarray(self._decoded(chosen, page))

    def _decoded(self, chosen: Any, page: int) -> Stored:
        try:
            return np.asarray(chosen.asarray())
        except (ValueError, RuntimeError, ImportError, KeyError):
            # A codec that is missing or fails here may be in Pillow.
            from PIL import Image

            with Image.open(self.path) as picture:
                picture.seek(page)
                return np.asarray(picture)

    def _read_plain(self, page: int) -> Stored:
        raw = self._tiff.filehandle
        at = (self._offset or 0) + page * self._bytes
        data = os.pread(raw.fileno(), self._bytes, at)
        if len(data) != self._bytes:
            raise FrameError(f"{printable(self.path)} is cut off in page {page}.", hint=_AGAIN)
        order = self._tiff.byteorder
        return np.frombuffer(data, self.dtype.newbyteorder(order)).reshape(self.shape)

    def time(self, page: int) -> str:
        """Return the page's DateTime tag as ISO 8601 text, if it has one."""
        if self._stack and page:
            return ""
        with self._lock, contextlib.suppress(Exception):
            tag = self._tiff.pages[page].tags.get("DateTime")  # type: ignore[union-attr]
            if tag is not None:
                return datetime.strptime(str(tag.value), "%Y:%m:%d %H:%M:%S").isoformat()  # noqa: DTZ007 - local time, as stored
        return ""

    def facts(self) -> list[tuple[str, str]]:
        """Return kind, size, numbers, and how they are stored."""
        first: Any = self._tiff.pages.first
        order = "little-endian" if self._tiff.byteorder == "<" else "big-endian"
        rows = [
            *super().facts(),
            ("stored", f"{'tiles' if first.is_tiled else 'strips'}, {first.compression.name.lower()}, {order}"),
        ]
        if first.description:
            rows.append(("description", printable(first.description[:120])))
        return rows

    def close(self) -> None:
        """Close the file."""
        self._tiff.close()


_AGAIN = "Export or copy the file again."


def _stack_of(tiff: Any, first: Any, shape: tuple[int, int]) -> int:
    """Return the number of pages of a contiguous stack described by one page, or 0."""
    if not tiff.series or len(tiff.series) != 1:
        return 0
    series = tiff.series[0]
    count = int(np.prod(series.shape[:-2], dtype=np.int64)) if len(series.shape) > 2 else 1
    uniform = tuple(series.shape[-2:]) == shape and np.dtype(series.dtype) == np.dtype(first.dtype)
    contiguous = series.dataoffset is not None and int(first.compression) == 1
    return count if uniform and contiguous and count >= 1 else 0


def _check_claimed_size(path: Path, first: Any, shape: tuple[int, int]) -> None:
    """Refuse a file that is far smaller than its claims: uncompressed data must fit, compressed by 5000 at most."""
    claimed = shape[0] * shape[1] * np.dtype(first.dtype).itemsize
    factor = 1 if int(first.compression) == 1 else 5000
    if claimed > factor * path.stat().st_size + 65536:
        raise FrameError(
            f"{printable(path)} claims {shape[1]} × {shape[0]} pixels, more than its "
            f"{path.stat().st_size:,} bytes can hold.",
            hint=_AGAIN,
        )


@contextlib.contextmanager
def _decoding(path: Path, what: str):  # type: ignore[no-untyped-def]
    """Turn whatever a decoder trips over into one sentence; its warnings stay inside."""
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            yield
    except FrameError:
        raise
    except Exception as error:
        raise FrameError(
            f"{printable(path)} cannot be {what}: it is damaged, cut off, or no TIFF that can be decoded "
            f"({printable(type(error).__name__)}).",
            hint=_AGAIN,
        ) from error
