"""NPY and NPZ arrays, without pickles."""

import zipfile
from pathlib import Path
from typing import Any

import numpy as np
from numpy.lib import format as npy_format

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.frame_file import FrameFile, Stored

_AGAIN = "Save it with numpy.save, without pickled objects."


class NpyFrameFile(FrameFile):
    """An NPY array: 2-D is one page, 3-D is pages. Mapped, so that memory stays flat."""

    def __init__(self, path: Path) -> None:
        try:
            with path.open("rb") as stream:
                shape, _, dtype = _header(stream)
                start = stream.tell()
            _refuse_objects(path, dtype)
            if int(np.prod(shape, dtype=np.float64)) * dtype.itemsize > path.stat().st_size - start:
                raise FrameError(f"{printable(path)} is cut off: it claims an array of shape {shape}.", hint=_AGAIN)
            self._array = np.load(path, mmap_mode="r", allow_pickle=False)
        except FrameError:
            raise
        except Exception as error:
            raise FrameError(f"{printable(path)} is a damaged NPY file.", hint=_AGAIN) from error
        pages = shape[0] if len(shape) == 3 else 1
        super().__init__(path, "NPY", pages, shape[-2:] if len(shape) == 3 else shape, dtype)

    def _read(self, page: int) -> Stored:
        return np.array(self._array[page] if self._array.ndim == 3 else self._array)

    def close(self) -> None:
        """Let go of the mapping."""
        del self._array


class NpzFrameFile(FrameFile):
    """An NPZ archive: each 2-D array is a page in stored order, a 3-D array is several."""

    def __init__(self, path: Path) -> None:
        try:
            with zipfile.ZipFile(path) as archive:
                members = [(name, *_member_header(archive, name, path)) for name in archive.namelist()]
        except FrameError:
            raise
        except Exception as error:
            raise FrameError(f"{printable(path)} is a damaged NPZ file.", hint=_AGAIN) from error
        if not members:
            raise FrameError(f"{printable(path)} holds no arrays.", hint=_AGAIN)
        kinds = {(shape[-2:], dtype) for _, shape, dtype in members}
        if len(kinds) > 1 or any(len(shape) not in (2, 3) for _, shape, _ in members):
            named = ", ".join(f"{printable(name)} {shape}" for name, shape, _ in members[:6])
            raise FrameError(
                f"{printable(path)} holds arrays that are not all frames of one size and type: {named}.",
                hint="Save the frames alone, all of one shape.",
            )
        self._pages = [
            (name, i if len(shape) == 3 else None)
            for name, shape, _ in members
            for i in range(shape[0] if len(shape) == 3 else 1)
        ]
        self._last: tuple[str, Stored] | None = None
        super().__init__(path, "NPZ", len(self._pages), members[0][1][-2:], members[0][2])

    def _read(self, page: int) -> Stored:
        name, index = self._pages[page]
        last = self._last
        if last is None or last[0] != name:
            try:
                with np.load(self.path, allow_pickle=False) as archive:
                    last = (name, archive[name.removesuffix(".npy")])
            except Exception as error:
                raise FrameError(f"{printable(self.path)} is damaged in {printable(name)}.", hint=_AGAIN) from error
            self._last = last
        return np.array(last[1] if index is None else last[1][index])


def _header(stream: Any) -> tuple[tuple[int, ...], bool, np.dtype[Any]]:
    version = npy_format.read_magic(stream)
    if version == (1, 0):
        return npy_format.read_array_header_1_0(stream)
    return npy_format.read_array_header_2_0(stream)


def _member_header(archive: zipfile.ZipFile, name: str, path: Path) -> tuple[tuple[int, ...], np.dtype[Any]]:
    with archive.open(name) as stream:
        shape, _, dtype = _header(stream)
    _refuse_objects(path, dtype)
    claimed = int(np.prod(shape, dtype=np.float64)) * dtype.itemsize
    if claimed > archive.getinfo(name).file_size:
        raise FrameError(f"{printable(path)}: {printable(name)} claims more numbers than it holds.", hint=_AGAIN)
    return shape, dtype


def _refuse_objects(path: Path, dtype: np.dtype[Any]) -> None:
    if dtype.hasobject:
        raise FrameError(f"{printable(path)} holds Python objects, which are never loaded.", hint=_AGAIN)
