"""The chain of directories of a TIFF, followed to its end: a file that was cut off loses pages without a word."""

import os
import struct
from pathlib import Path

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.limits import MOST_PAGES


def check_chain(path: Path) -> None:
    """Refuse a TIFF whose chain of pages leads beyond its end or back into itself.

    Raises
    ------
    FrameError
        If it does, or holds more pages than can be read.
    """
    size = path.stat().st_size
    descriptor = os.open(path, os.O_RDONLY)
    try:
        _follow(path, descriptor, size)
    finally:
        os.close(descriptor)


def _follow(path: Path, descriptor: int, size: int) -> None:
    head = os.pread(descriptor, 16, 0)
    order = "<" if head[:2] == b"II" else ">"
    big = head[2:4] in (b"+\0", b"\0+")
    count_form, offset_form, entry = (f"{order}Q", f"{order}Q", 20) if big else (f"{order}H", f"{order}I", 12)
    count_size, offset_size = struct.calcsize(count_form), struct.calcsize(offset_form)
    start = 8 if big else 4
    (at,) = struct.unpack(offset_form, head[start : start + offset_size])
    seen: set[int] = set()
    while at:
        if at in seen or len(seen) >= MOST_PAGES:
            raise FrameError(f"{printable(path)} is damaged: its chain of pages does not end.", hint=_AGAIN)
        seen.add(at)
        if at + count_size > size:
            raise _cut_off(path, len(seen))
        counted = os.pread(descriptor, count_size, at)
        end = at + count_size + struct.unpack(count_form, counted)[0] * entry
        after = os.pread(descriptor, offset_size, end) if end < size else b""
        if len(after) < offset_size:
            raise _cut_off(path, len(seen))
        (at,) = struct.unpack(offset_form, after)


def _cut_off(path: Path, page: int) -> FrameError:
    return FrameError(f"{printable(path)} is cut off: the file ends before its page {page}.", hint=_AGAIN)


_AGAIN = "Export or copy the file again."
