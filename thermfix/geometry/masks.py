"""Which pixels a shape holds. Pixel (i, j) covers [i, i+1) × [j, j+1); it belongs to a shape if its centre does.

Every function takes the frame as (rows, columns) and returns ``x, y, total``: integer positions inside
the frame in row order (a line: in path order), and how many pixels the shape would have if the frame
did not end, so that a clipped or lost shape can be told.
"""

from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError

Index = NDArray[np.intp]
Pixels = tuple[Index, Index, int]
XY = tuple[float, float]

FARTHEST_PX = 1e6
"""Coordinates beyond this are refused: no frame is that large, and sizes would overflow."""


def rectangle_pixels(frame: tuple[int, int], x0: float, y0: float, x1: float, y1: float) -> Pixels:
    """Return the pixels of an axis-parallel rectangle. [px]."""
    _check((x0, y0), (x1, y1))
    left, right = _centres(x0, x1)
    top, bottom = _centres(y0, y1)
    total = max(right - left, 0) * max(bottom - top, 0)
    x, y = _box(frame, left, top, right, bottom)
    return x, y, total


def ellipse_pixels(frame: tuple[int, int], cx: float, cy: float, rx: float, ry: float) -> Pixels:
    """Return the pixels of an axis-parallel ellipse of centre and half axes. [px], rx and ry > 0."""
    _check((cx, cy), (rx, ry))
    left, right = _centres(cx - rx, cx + rx)
    top, bottom = _centres(cy - ry, cy + ry)
    rows = np.arange(top, bottom) + 0.5
    half = rx * np.sqrt(np.clip(1 - ((rows - cy) / ry) ** 2, 0, None))
    total = int(np.maximum(np.floor(cx + half - 0.5) - np.ceil(cx - half - 0.5) + 1, 0).sum())
    x, y = _box(frame, left, top, right + 1, bottom + 1)
    inside = ((x + 0.5 - cx) / rx) ** 2 + ((y + 0.5 - cy) / ry) ** 2 <= 1
    return x[inside], y[inside], max(total, int(inside.sum()))


def polygon_pixels(frame: tuple[int, int], corners: Sequence[XY]) -> Pixels:
    """Return the pixels of a closed polygon by the even-odd rule. [px], three corners or more."""
    if len(corners) < 3:
        raise InputError(f"A polygon needs 3 corners or more, not {len(corners)}.")
    _check(*corners)
    points = np.array(corners, dtype=np.float64)
    top, bottom = _centres(points[:, 1].min(), points[:, 1].max())
    x, y, total = [], [], 0
    columns, rows = frame[1], frame[0]
    for row in range(top, bottom):
        starts, ends = _spans(points, row + 0.5)
        total += int(np.maximum(ends - starts, 0).sum())
        if not 0 <= row < rows:
            continue
        for start, end in zip(np.clip(starts, 0, columns), np.clip(ends, 0, columns), strict=True):
            x.append(np.arange(start, end, dtype=np.intp))
            y.append(np.full(max(end - start, 0), row, dtype=np.intp))
    return _joined(x), _joined(y), total


def line_pixels(frame: tuple[int, int], points: Sequence[XY]) -> Pixels:
    """Return one pixel per step along the longer axis of each stretch of an open line. [px]."""
    if len(points) < 2:
        raise InputError(f"A line needs 2 points or more, not {len(points)}.")
    _check(*points)
    path: list[NDArray[np.float64]] = []
    for (x0, y0), (x1, y1) in pairwise(points):
        steps = int(max(abs(np.floor(x1) - np.floor(x0)), abs(np.floor(y1) - np.floor(y0)), 0))
        share = np.linspace(0, 1, steps + 1)
        path.append(np.stack([x0 + share * (x1 - x0), y0 + share * (y1 - y0)], axis=1))
    cells = np.floor(np.concatenate(path)).astype(np.intp)
    _, first = np.unique(cells, axis=0, return_index=True)
    cells = cells[np.sort(first)]
    x, y = cells[:, 0], cells[:, 1]
    inside = (x >= 0) & (x < frame[1]) & (y >= 0) & (y < frame[0])
    return x[inside], y[inside], int(x.size)


def point_pixels(frame: tuple[int, int], x: float, y: float) -> Pixels:
    """Return the one pixel that holds a point. [px]."""
    _check((x, y))
    return line_pixels(frame, [(x, y), (x, y)])


def _check(*points: XY) -> None:
    for x, y in points:
        if not (abs(x) <= FARTHEST_PX and abs(y) <= FARTHEST_PX):
            raise InputError(f"The coordinates ({x:g}, {y:g}) px lie beyond ±{FARTHEST_PX:g} px.")


def _centres(low: float, high: float) -> tuple[int, int]:
    """Return the half-open range of pixels whose centres lie within [low, high)."""
    return int(np.ceil(low - 0.5)), int(np.ceil(high - 0.5))


def _box(frame: tuple[int, int], left: int, top: int, right: int, bottom: int) -> tuple[Index, Index]:
    columns = np.arange(max(left, 0), min(right, frame[1]), dtype=np.intp)
    rows = np.arange(max(top, 0), min(bottom, frame[0]), dtype=np.intp)
    y, x = np.meshgrid(rows, columns, indexing="ij")
    return x.ravel(), y.ravel()


def _spans(points: NDArray[np.float64], height: float) -> tuple[Index, Index]:
    """Return the half-open pixel ranges of one row that lie inside a polygon (even-odd)."""
    start, end = points, np.roll(points, -1, axis=0)
    crosses = (start[:, 1] <= height) != (end[:, 1] <= height)
    a, b = start[crosses], end[crosses]
    cuts = np.sort(a[:, 0] + (height - a[:, 1]) / (b[:, 1] - a[:, 1]) * (b[:, 0] - a[:, 0]))
    pixels = np.ceil(cuts - 0.5).astype(np.intp)
    return pixels[0::2], pixels[1::2]


def _joined(parts: list[Index]) -> Index:
    return np.concatenate(parts) if parts else np.empty(0, np.intp)
