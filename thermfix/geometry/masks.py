"""Which pixels a shape holds. Pixel (i, j) covers [i, i+1) × [j, j+1); it belongs to a shape if its centre does.

Every function takes the frame as (rows, columns) and returns ``x, y, total``: integer positions inside
the frame in row order (a line: in path order), and how many pixels the shape would have if the frame
did not end, so that a clipped or lost shape can be told.
"""

from collections.abc import Iterator, Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError

Index = NDArray[np.intp]
Pixels = tuple[Index, Index, int]
XY = tuple[float, float]

FARTHEST_PX = 1e6
"""Coordinates beyond this are refused: no frame is that large, and sizes would overflow."""

_MOST_ROWS = 4096
_BLOCK = 1 << 19


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
    """Return the pixels of a closed polygon by the even-odd rule. [px], three corners or more.

    More than 4096 rows outside the frame are not all counted: evenly spread ones stand for them in the total.
    """
    if len(corners) < 3:
        raise InputError(f"A polygon needs 3 corners or more, not {len(corners)}.")
    _check(*corners)
    points = np.array(corners, dtype=np.float64)
    top, bottom = _centres(points[:, 1].min(), points[:, 1].max())
    first, last = (min(max(edge, 0), frame[0]) for edge in (top, bottom))
    inside = np.zeros((max(last - first, 0), frame[1]), dtype=bool)
    total = 0
    for rows, starts, ends in _spans(points, np.arange(first, last)):
        total += int((ends - starts).sum())
        inside[rows[0] - first : rows[-1] + 1 - first] = _filled(starts, ends, frame[1])
    y, x = np.nonzero(inside)
    for one in ((top, min(bottom, first)), (max(top, last), bottom)):
        total += _counted(points, *one)
    return x, y + first, total


def line_pixels(frame: tuple[int, int], points: Sequence[XY]) -> Pixels:
    """Return one pixel per step along the longer axis of each stretch of an open line. [px].

    Pixels that the line passes more than once count once, but for those outside the frame.
    """
    if len(points) < 2:
        raise InputError(f"A line needs 2 points or more, not {len(points)}.")
    _check(*points)
    path, outside = [], 0
    for index, (start, end) in enumerate(pairwise(points)):
        cells, lost = _stretch(frame, start, end, skip_first=index > 0)
        path.append(cells)
        outside += lost
    cells = np.concatenate(path)
    _, first = np.unique(cells, axis=0, return_index=True)
    cells = cells[np.sort(first)]
    return cells[:, 0], cells[:, 1], len(cells) + outside


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


def _spans(points: NDArray[np.float64], rows: Index) -> Iterator[tuple[Index, Index, Index]]:
    """Yield blocks of rows with the half-open pixel ranges in them that lie inside a polygon (even-odd)."""
    start, end = points, np.roll(points, -1, axis=0)
    rise = np.where(end[:, 1] == start[:, 1], 1.0, end[:, 1] - start[:, 1])
    block = max(_BLOCK // len(points), 1)
    for i in range(0, len(rows), block):
        part = rows[i : i + block]
        height = part[:, None] + 0.5
        crosses = (start[:, 1] <= height) != (end[:, 1] <= height)
        cuts = start[:, 0] + (height - start[:, 1]) / rise * (end[:, 0] - start[:, 0])
        cuts = np.sort(np.where(crosses, cuts, 2 * FARTHEST_PX), axis=1)
        pixels = np.ceil(cuts - 0.5).astype(np.intp)
        pairs = len(points) // 2 * 2  # edges are crossed in pairs: an odd one out is never crossed
        yield part, pixels[:, 0:pairs:2], pixels[:, 1:pairs:2]


def _filled(starts: Index, ends: Index, columns: int) -> NDArray[np.bool_]:
    """Return rows of pixels with disjoint ranges set, cut off at the frame."""
    turns = np.zeros((len(starts), columns + 1), dtype=np.int32)
    rows = np.arange(len(starts))[:, None]
    np.add.at(turns, (rows, np.clip(starts, 0, columns)), 1)
    np.add.at(turns, (rows, np.clip(ends, 0, columns)), -1)
    return np.asarray(np.cumsum(turns[:, :-1], axis=1) > 0)


def _counted(points: NDArray[np.float64], top: int, bottom: int) -> int:
    """Return how many pixels of a polygon lie in these rows; beyond `_MOST_ROWS` by sampled rows."""
    count = bottom - top
    if count <= 0:
        return 0
    rows = np.linspace(top, bottom - 1, min(count, _MOST_ROWS)).astype(np.intp)
    found = sum(int((ends - starts).sum()) for _, starts, ends in _spans(points, rows))
    return round(found * count / len(rows))


def _stretch(frame: tuple[int, int], start: XY, end: XY, *, skip_first: bool) -> tuple[Index, int]:
    """Return the cells (n, 2) of one stretch inside the frame, and how many of its steps lie outside.

    The first cell of a later stretch is the last of the one before.
    """
    origin, way = np.array(start), np.array(end) - np.array(start)
    count = int(np.abs(np.floor(end) - np.floor(start)).max())
    steps = np.arange(count + 1)[int(skip_first) :] if count <= _MOST_ROWS else _near(frame, origin, way, count)
    # Multiplied before divided: whole numbers stay whole, and no pixel is missed or met twice.
    cells = np.floor(origin + steps[:, None] * way / max(count, 1)).astype(np.intp)
    inside = ((cells >= 0) & (cells < (frame[1], frame[0]))).all(axis=1)
    return cells[inside], count + int(not skip_first) - int(inside.sum())


def _near(frame: tuple[int, int], origin: NDArray[np.float64], way: NDArray[np.float64], count: int) -> Index:
    """Return the steps of a long stretch at which it may lie inside the frame."""
    size = np.array([frame[1], frame[0]])
    low, high = 0.0, float(count)
    for axis in (0, 1):
        if way[axis] == 0:
            continue
        ends = np.sort((np.array([0, size[axis]]) - origin[axis]) / way[axis] * count)
        low, high = max(low, float(ends[0]) - 1), min(high, float(ends[1]) + 1)
    return np.arange(int(low), int(max(high, low)) + 1, dtype=np.intp)
