"""An open frame file: pages of stored numbers, read one at a time and never changed."""

from abc import ABC, abstractmethod
from pathlib import Path
from types import TracebackType
from typing import Any

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.limits import MOST_PAGES, MOST_PIXELS

Stored = NDArray[np.generic]


class FrameFile(ABC):
    """Pages of one shape and dtype.

    Attributes
    ----------
    path : Path
        The file.
    kind : str
        TIFF, BigTIFF, PNG, NPY, NPZ or text.
    pages : int
        Number of pages.
    shape : tuple
        Rows and columns of every page.
    dtype : numpy dtype
        As the numbers are stored, in native byte order.
    """

    def __init__(self, path: Path, kind: str, pages: int, shape: tuple[int, ...], dtype: np.dtype[Any]) -> None:
        name = printable(path)
        if len(shape) != 2:
            raise FrameError(
                f"{name} holds an array of shape {shape}; a frame has rows and columns.", hint="Export a 2-D array."
            )
        if dtype.kind not in "iuf" or dtype.itemsize > 8:
            raise FrameError(
                f"{name} holds numbers of type {dtype}; they must be integers or floating-point numbers.",
                hint="Export the radiometric data as real numbers.",
            )
        if not 0 < shape[0] * shape[1] <= MOST_PIXELS:
            raise FrameError(
                f"{name} claims {shape[1]} × {shape[0]} pixels; 1 to {MOST_PIXELS:,} can be read.",
                hint="Export the frame again, or cut it into smaller ones.",
            )
        if not 0 < pages <= MOST_PAGES:
            raise FrameError(
                f"{name} claims {pages:,} pages; 1 to {MOST_PAGES:,} can be read.", hint="Export the frames again."
            )
        self.path, self.kind, self.pages = path, kind, pages
        self.shape = (int(shape[0]), int(shape[1]))
        self.dtype = dtype.newbyteorder("=")

    def read(self, page: int = 0) -> Stored:
        """Return one page, shape (rows, columns), native byte order. Threads may read at the same time.

        Raises
        ------
        FrameError
            If there is no such page or it cannot be decoded.
        """
        if not 0 <= page < self.pages:
            raise FrameError(
                f"{printable(self.path)} has pages 0 to {self.pages - 1}, not {page}.", hint="Pages count from 0."
            )
        values = self._read(page)
        if values.shape != self.shape:
            raise FrameError(
                f"Page {page} of {printable(self.path)} has shape {values.shape}, not {self.shape}.",
                hint="Pages of one file must be of one size.",
            )
        if values.dtype.newbyteorder("=") != self.dtype:
            raise FrameError(
                f"Page {page} of {printable(self.path)} holds numbers of type {values.dtype}, not {self.dtype}.",
                hint="Pages of one file must be of one type.",
            )
        return np.ascontiguousarray(values, dtype=self.dtype)

    @abstractmethod
    def _read(self, page: int) -> Stored:
        """Return one page in any byte order and layout."""

    def time(self, page: int) -> str | None:
        """Return when a page was taken as ISO 8601 text, or None where the file does not say."""
        return None

    def facts(self) -> list[tuple[str, str]]:
        """Return what there is to say about the file, as (what, value)."""
        return [
            ("kind", self.kind),
            ("size", f"{self.shape[1]} × {self.shape[0]} pixels"),
            ("pages", str(self.pages)),
            ("numbers", str(self.dtype)),
        ]

    def close(self) -> None:
        """Close the file; formats that are read as a whole have nothing to close."""
        return

    def __enter__(self) -> "FrameFile":
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()
