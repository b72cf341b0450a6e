"""Speed of the table writers as multiples of numpy.savetxt writing the same text, measured in one run.

Both write new files on the same disk. numpy.savetxt does not wait until the bytes are on the disk, while
our writers do (a wait of the disk's, not of the writer's): that wait is left out of the ratio that is
held to the mark, and printed beside it. Run with ``pytest -m bench -s`` to see the figures.
"""

import itertools
import os
from timeit import timeit

import numpy as np
import pytest

from thermfix.correction.results import RegionPixels
from thermfix.export import write_grid, write_pixels
from thermfix.export.columns import PIXELS, header

pytestmark = pytest.mark.bench

SHAPE = (512, 640)
GRID_MARK, TABLE_MARK = 12, 25


@pytest.fixture(scope="module")
def surface_k():
    """A wall at 21 °C with a warm gradient, three hot parts and 0.05 K of noise."""
    y, x = np.mgrid[: SHAPE[0], : SHAPE[1]]
    kelvin = 294.0 + 0.01 * y + np.random.default_rng(5).normal(0, 0.05, SHAPE)
    for column, row, size, rise in ((120, 90, 40, 35.0), (400, 300, 70, 90.0), (560, 130, 25, 12.0)):
        kelvin += rise * np.exp(-((x - column) ** 2 + (y - row) ** 2) / (2 * size**2))
    return kelvin.astype(np.float32)


@pytest.fixture(scope="module")
def regions(surface_k):
    """All pixels of the frame in four regions."""
    y, x = np.divmod(np.arange(surface_k.size), SHAPE[1])
    flat = surface_k.ravel()
    edges = (0, 60_000, 150_000, 152_000, flat.size)
    return [
        RegionPixels(
            region=name,
            x=x[low:high],
            y=y[low:high],
            apparent_k=flat[low:high] - np.float32(1.5),
            surface_k=flat[low:high],
            u_k=np.sqrt(flat[low:high] / 200),
        )
        for name, (low, high) in zip(("wall", "bus bar L1", "fuse", "tank"), itertools.pairwise(edges), strict=True)
    ]


def milliseconds(function, path):
    """Time of writing a file that is not there yet."""
    path.unlink(missing_ok=True)
    return 1e3 * timeit(lambda: function(path), number=1)


def compare(name, ours, theirs, mark, folder, monkeypatch):
    """Least times of three rounds in which all take turns, so that a busy moment hits all alike."""
    path, reference = folder / "ours.csv", folder / "theirs.csv"
    waiting, alone, numpy = [], [], []
    for _ in range(3):
        waiting.append(milliseconds(ours, path))
        with monkeypatch.context() as patched:
            patched.setattr(os, "fsync", lambda handle: None)
            alone += [milliseconds(ours, path) for _ in range(4)]
        numpy.append(milliseconds(theirs, reference))
    assert path.read_bytes() == reference.read_bytes()
    ratio = min(numpy) / min(alone)
    print(f"\n{name}: numpy.savetxt {min(numpy):.0f} ms = {ratio:.1f} × {min(alone):.1f} ms (mark {mark})", end="")
    print(f"; {min(waiting):.1f} ms with the wait for the disk")
    assert ratio >= mark


def test_grid(surface_k, tmp_path, monkeypatch):
    celsius = surface_k.astype(np.float64) - 273.15
    compare(
        "grid",
        lambda path: write_grid(path, surface_k),
        lambda path: np.savetxt(path, celsius, fmt="%.2f", delimiter=","),
        GRID_MARK,
        tmp_path,
        monkeypatch,
    )


def test_long_table(regions, tmp_path, monkeypatch):
    tables = [
        (one.region, np.column_stack((one.x, one.y, one.apparent_k - 273.15, one.surface_k - 273.15, one.u_k)))
        for one in (as_float64(region) for region in regions)
    ]

    def theirs(path):
        with path.open("w", encoding="utf-8") as stream:
            stream.write(header(PIXELS).decode())
            for name, table in tables:
                np.savetxt(stream, table, fmt=f"%d,%d,{name},%.2f,%.2f,%.3f")

    compare("long table", lambda path: write_pixels(path, regions), theirs, TABLE_MARK, tmp_path, monkeypatch)


def as_float64(one):
    return RegionPixels(
        region=one.region,
        x=one.x,
        y=one.y,
        apparent_k=one.apparent_k.astype(np.float64),
        surface_k=one.surface_k.astype(np.float64),
        u_k=one.u_k,
    )
