"""NPY arrays, and the header that NPY and the members of NPZ share. Pickles are never loaded."""

import math
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
from numpy.lib import format as npy_format

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.decoding import decoding
from thermfix.frames.frame_file import FrameFile, Stored

SAVE_AGAIN = "Save it with numpy.save, without pickled objects."


@dataclass(frozen=True, slots=True)
class ArrayHeader:
    """Shape, order and type of an array, and the byte at which its numbers begin."""

    shape: tuple[int, ...]
    fortran: bool
    dtype: np.dtype[Any]
    start: int

    @property
    def bytes(self) -> int:
        """Bytes the numbers take."""
        return math.prod(self.shape) * self.dtype.itemsize


def read_header(path: Path, stream: Any) -> ArrayHeader:
    """Return the header of the array at the beginning of a stream.

    Raises
    ------
    FrameError
        If the array holds Python objects or its shape makes no sense.
    """
    version = npy_format.read_magic(stream)
    reader = npy_format.read_array_header_1_0 if version == (1, 0) else npy_format.read_array_header_2_0
    shape, fortran, dtype = reader(stream)
    if dtype.hasobject:
        raise FrameError(f"{printable(path)} holds Python objects, which are never loaded.", hint=SAVE_AGAIN)
    if any(length < 0 for length in shape):
        raise FrameError(f"{printable(path)} claims an array of shape {shape}.", hint=SAVE_AGAIN)
    return ArrayHeader(shape, fortran, dtype, stream.tell())


class NpyFrameFile(FrameFile):
    """An NPY array: 2-D is one page, 3-D is pages. Mapped, so that memory stays flat."""

    def __init__(self, path: Path) -> None:
        with decoding(path, "it is a damaged NPY file", SAVE_AGAIN):
            with path.open("rb") as stream:
                header = read_header(path, stream)
            several = len(header.shape) == 3
            shape = header.shape[-2:] if several else header.shape
            super().__init__(path, "NPY", header.shape[0] if several else 1, shape, header.dtype)
            if header.start + header.bytes > path.stat().st_size:
                raise FrameError(
                    f"{printable(path)} is cut off: it claims an array of shape {header.shape}.", hint=SAVE_AGAIN
                )
            self._pages: Stored = np.memmap(
                path, header.dtype, "r", header.start, header.shape, "F" if header.fortran else "C"
            ).reshape(self.pages, *self.shape)

    def _read(self, page: int) -> Stored:
        return np.array(self._pages[page])
