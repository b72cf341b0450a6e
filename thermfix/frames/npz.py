"""NPZ archives of arrays, read a page at a time and without pickles."""

import threading
import zipfile
from pathlib import Path
from typing import IO

import numpy as np

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.decoding import decoding
from thermfix.frames.frame_file import FrameFile, Stored
from thermfix.frames.numpy_files import SAVE_AGAIN, ArrayHeader, read_header

_DAMAGED = "it is a damaged NPZ file, or another kind of archive"
_MOST_MEMBERS = 100_000
# A member whose pages lie scattered through it is taken as a whole.
_MOST_WHOLE_BYTES = 512 * 2**20


class NpzFrameFile(FrameFile):
    """An NPZ archive: each 2-D array is a page in stored order, a 3-D array is several."""

    def __init__(self, path: Path) -> None:
        self._lock = threading.Lock()
        self._stream: tuple[str, IO[bytes]] | None = None
        with decoding(path, _DAMAGED, SAVE_AGAIN):
            self._archive = zipfile.ZipFile(path)
        try:
            with decoding(path, _DAMAGED, SAVE_AGAIN):
                self._members = _members(path, self._archive)
                first = next(iter(self._members.values()))
                counts = [one.shape[0] if len(one.shape) == 3 else 1 for one in self._members.values()]
                self._names = list(self._members)
                self._ends = np.cumsum(counts)
                super().__init__(path, "NPZ", sum(counts), first.shape[-2:], first.dtype)
        except BaseException:
            self._archive.close()
            raise

    def _read(self, page: int) -> Stored:
        which = int(np.searchsorted(self._ends, page, side="right"))
        name = self._names[which]
        header = self._members[name]
        index = page - int(self._ends[which - 1]) if which else page
        with self._lock, decoding(self.path, f"{printable(name)} in it is damaged", SAVE_AGAIN):
            if len(header.shape) == 3 and header.fortran:
                pages: Stored = self._whole(name, header)
                return np.asarray(pages[index])
            data = self._bytes(name, header.start + index * self._page_bytes, self._page_bytes)
            page_values: Stored = np.frombuffer(data, header.dtype)
            return page_values.reshape(self.shape, order="F" if header.fortran else "C")

    @property
    def _page_bytes(self) -> int:
        return self.shape[0] * self.shape[1] * self.dtype.itemsize

    def _whole(self, name: str, header: ArrayHeader) -> Stored:
        if header.bytes > _MOST_WHOLE_BYTES:
            raise FrameError(
                f"{printable(self.path)} holds {printable(name)} in column order, {header.bytes:,} bytes; "
                f"{_MOST_WHOLE_BYTES:,} can be read.",
                hint="Save it in row order (numpy.ascontiguousarray), or as NPY.",
            )
        return np.frombuffer(self._bytes(name, header.start, header.bytes), header.dtype).reshape(
            header.shape, order="F"
        )

    def _bytes(self, name: str, start: int, count: int) -> bytes:
        """Return bytes of a member; the stream stays open, so that pages in order are unpacked once."""
        try:
            if self._stream is None or self._stream[0] != name:
                self._close_stream()
                self._stream = (name, self._archive.open(name))
            stream = self._stream[1]
            stream.seek(start)
            data = stream.read(count)
            if start + count == self._archive.getinfo(name).file_size:
                stream.read(1)  # the check sum is compared at the end
        except BaseException:
            self._close_stream()
            raise
        return data

    def _close_stream(self) -> None:
        if self._stream is not None:
            self._stream[1].close()
        self._stream = None

    def close(self) -> None:
        """Close the archive."""
        with self._lock:
            self._close_stream()
            self._archive.close()


def _members(path: Path, archive: zipfile.ZipFile) -> dict[str, ArrayHeader]:
    """Return the arrays of an archive by name, all of one shape and type of page."""
    names = archive.namelist()
    if not 0 < len(names) <= _MOST_MEMBERS or not all(name.endswith(".npy") for name in names):
        raise FrameError(
            f"{printable(path)} is a damaged NPZ file, or an archive with more in it than arrays.", hint=SAVE_AGAIN
        )
    found = {name: _member(path, archive, name) for name in names}
    kinds = {(one.shape[-2:], one.dtype) for one in found.values()}
    if len(kinds) > 1 or any(len(one.shape) not in (2, 3) for one in found.values()):
        named = ", ".join(f"{printable(name)} {one.shape} {one.dtype}" for name, one in list(found.items())[:6])
        raise FrameError(
            f"{printable(path)} holds arrays that are not all frames of one size and type: {named}.",
            hint="Save the frames alone, all of one shape.",
        )
    return found


def _member(path: Path, archive: zipfile.ZipFile, name: str) -> ArrayHeader:
    with archive.open(name) as stream:
        header = read_header(path, stream)
    if header.start + header.bytes > archive.getinfo(name).file_size:
        raise FrameError(f"{printable(path)}: {printable(name)} claims more numbers than it holds.", hint=SAVE_AGAIN)
    return header
