"""A full disk half way through: the old file stays, no piece of the new one does, and the message says why."""

import contextlib
import errno
import os

import numpy as np
import pytest

from thermfix.errors import InputError
from thermfix.export import write_grid, write_pixels, write_record, write_regions, write_surface_tiff, write_trend
from thermfix.files import atomic_write


class Full:
    """A stream that takes so many bytes and no more."""

    def __init__(self, stream, room):
        self._stream, self._room = stream, room

    def write(self, data):
        if len(data) > self._room:
            self._stream.write(bytes(data)[: self._room])
            raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))
        self._room -= len(data)
        return self._stream.write(data)


@contextlib.contextmanager
def on_a_full_disk(path, *, force=True):
    with atomic_write(path, force=force) as stream:
        yield Full(stream, 40)


@pytest.mark.parametrize("module", ["grid", "pixels", "regions", "trend", "tiff", "record"])
def test_the_old_file_stays(module, tmp_path, monkeypatch, readings, make_pixels):
    home = "tables" if module in ("regions", "trend") else module
    monkeypatch.setattr(f"thermfix.export.{home}.atomic_write", on_a_full_disk)
    surface_k = np.full((30, 40), 300.0)
    path = tmp_path / "result"
    path.write_bytes(b"old")
    write = {
        "grid": lambda: write_grid(path, surface_k, force=True),
        "pixels": lambda: write_pixels(path, [make_pixels("wall", 500)], force=True),
        "regions": lambda: write_regions(path, [("a.tif", 0, one) for one in readings], force=True),
        "trend": lambda: write_trend(path, [("a.tif", 0, "", one) for one in readings], force=True),
        "tiff": lambda: write_surface_tiff(path, surface_k, None, force=True),
        "record": lambda: write_record(path, {"frames": ["a.tif"] * 50}, force=True),
    }[module]
    with pytest.raises(InputError, match="No space left") as caught:
        write()
    assert caught.value.hint
    assert path.read_bytes() == b"old"
    assert [one.name for one in tmp_path.iterdir()] == ["result"]


def test_rows_that_stop_half_way_leave_the_old_file(tmp_path, readings):
    def rows():
        yield "a.tif", 0, readings[0]
        raise RuntimeError("the frame could not be read on")

    path = tmp_path / "regions.csv"
    path.write_bytes(b"old")
    with pytest.raises(RuntimeError):
        write_regions(path, rows(), force=True)
    assert path.read_bytes() == b"old"
    assert [one.name for one in tmp_path.iterdir()] == ["regions.csv"]
