"""From a frame to the dots of a picture: which pixels each dot shows, and back.

Two dots, one over the other, make a cell of the terminal. A dot shows the mean of the pixels it
covers, or the one pixel that covers it. Positions in the image are in pixels, x right and y down,
pixel (i, j) covering [i, i+1) × [j, j+1); positions on the screen are in cells.
"""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

CELL_ASPECT = 2.0
"""Height of a terminal cell over its width, where the terminal does not say."""

_STEPS = (1, 2, 3, 4, 6, 8, 12, 16, 24, 32)
ZOOM_STEPS = sorted({*_STEPS, *(1 / step for step in (*_STEPS[1:], 48, 64, 96, 128))})
"""Cells across one pixel: whole numbers, so that pixels come out equally wide, and their inverses."""

_KEEP = 4
"""Pixels that a dot must still cover, each way, in the shrunken frame it is taken from."""


@dataclass(frozen=True, slots=True)
class Viewport:
    """The point of the image in the middle of the picture, and cells across one pixel."""

    x: float
    y: float
    zoom: float


@dataclass(frozen=True, slots=True)
class Window:
    """What a picture of some size shows: position of its top left corner, pixels across and down a dot.

    ``shape`` is (rows, cols) of the frame; ``columns`` and ``lines`` are the size in cells.
    """

    shape: tuple[int, int]
    columns: int
    lines: int
    left: float
    top: float
    step_x: float
    step_y: float

    def pixel_at(self, column: float, line: float) -> tuple[float, float]:
        """Return the position in the image of a position on the screen."""
        return self.left + column * self.step_x, self.top + line * 2 * self.step_y

    def cell_at(self, x: float, y: float) -> tuple[float, float]:
        """Return the position on the screen of a position in the image."""
        return (x - self.left) / self.step_x, (y - self.top) / (2 * self.step_y)

    @property
    def viewport(self) -> Viewport:
        """The viewport that gives this window."""
        x, y = self.pixel_at(self.columns / 2, self.lines / 2)
        return Viewport(x, y, 1 / self.step_x)


def fit_zoom(shape: tuple[int, int], columns: int, lines: int, cell_aspect: float = CELL_ASPECT) -> float:
    """Return the cells across one pixel at which the whole frame just fits."""
    rows, cols = shape
    return min(max(columns, 1) / max(cols, 1), max(lines, 1) * cell_aspect / max(rows, 1))


def window_of(
    shape: tuple[int, int],
    columns: int,
    lines: int,
    viewport: Viewport | None = None,
    cell_aspect: float = CELL_ASPECT,
) -> Window:
    """Return what a picture shows.

    Parameters
    ----------
    shape : tuple of int
        Rows and columns of the frame.
    columns, lines : int
        Size of the picture in cells.
    viewport : Viewport, optional
        The whole frame when left out. Its centre moves so far that no room is wasted outside the frame.
    cell_aspect : float
        Height of a cell over its width. [1]

    Returns
    -------
    Window
    """
    rows, cols = shape
    wanted = viewport or Viewport(cols / 2, rows / 2, fit_zoom(shape, columns, lines, cell_aspect))
    step_x = 1 / wanted.zoom
    step_y = step_x * cell_aspect / 2
    return Window(
        shape=shape,
        columns=columns,
        lines=lines,
        left=_edge(wanted.x, columns * step_x, cols),
        top=_edge(wanted.y, lines * 2 * step_y, rows),
        step_x=step_x,
        step_y=step_y,
    )


def _edge(centre: float, seen: float, size: int) -> float:
    """Return where the view begins: within the frame, or around all of it."""
    if seen >= size:
        return (size - seen) / 2
    return min(max(centre - seen / 2, 0.0), size - seen)


def zoomed(window: Window, column: float, line: float, zoom: float) -> Viewport:
    """Return the viewport of another zoom that keeps the pixel under a position on the screen where it is."""
    x, y = window.pixel_at(column, line)
    shrink = 1 / (zoom * window.step_x)
    centre_x, centre_y = window.pixel_at(window.columns / 2, window.lines / 2)
    return Viewport(x + (centre_x - x) * shrink, y + (centre_y - y) * shrink, zoom)


def next_zoom(zoom: float, steps: int) -> float:
    """Return the zoom so many steps further in (or out, if negative)."""
    near = zoom * 1e-6
    larger = [step for step in ZOOM_STEPS if step > zoom + near]
    smaller = [step for step in reversed(ZOOM_STEPS) if step < zoom - near]
    ladder = larger if steps > 0 else smaller
    return ladder[min(abs(steps), len(ladder)) - 1] if steps and ladder else zoom


class Source:
    """A frame with its shrunken copies, which are made when a picture first needs them.

    Each copy halves the one before: a dot that covers many pixels is the mean of few of its copy's.
    Around missing values that mean weighs the pixels left slightly unevenly.
    """

    def __init__(self, values: NDArray[np.floating]) -> None:
        self.values = values
        self._copies = [values if np.issubdtype(values.dtype, np.floating) else values.astype(np.float32)]

    def copy(self, halvings: int) -> NDArray[np.floating]:
        """Return the frame shrunk so many times by two, each way."""
        while len(self._copies) <= halvings:
            self._copies.append(_halved(self._copies[-1]))
        return self._copies[halvings]

    def sample(self, window: Window) -> tuple[NDArray[np.floating], slice, slice]:
        """Return the dots of a window that lie in the frame, and which lines and columns of dots these are.

        Returns
        -------
        dots : ndarray, shape (n, m)
            Value of each dot; NaN for no value.
        lines, columns : slice
            Where they belong in the picture's dots, 2 × ``window.lines`` by ``window.columns``.
        """
        halvings = max(0, int(math.log2(max(1.0, min(window.step_x, window.step_y) / _KEEP))))
        values, scale = self.copy(halvings), 2**halvings
        across = _Axis(window.left / scale, window.step_x / scale, window.columns, values.shape[1])
        down = _Axis(window.top / scale, window.step_y / scale, 2 * window.lines, values.shape[0])
        if not across.count or not down.count:
            return np.empty((0, 0), np.float32), slice(0, 0), slice(0, 0)
        part = values[down.pixels, across.pixels]
        return _reduced(part, down, across), down.dots, across.dots


class _Axis:
    """Dots along one axis: those inside the frame, and the pixels of each.

    ``starts`` are the first pixels of blocks where a dot covers more than one pixel, or else the one
    pixel of each dot; both counted from the start of ``pixels``.
    """

    def __init__(self, begin: float, step: float, dots: int, size: int) -> None:
        centres = begin + (np.arange(dots) + 0.5) * step
        inside = np.flatnonzero((centres >= 0) & (centres < size))
        self.count = len(inside)
        self.blocks = step > 1
        if not self.count:
            return
        first, last = int(inside[0]), int(inside[-1]) + 1
        self.dots = slice(first, last)
        if self.blocks:
            edges = np.floor(begin + np.arange(first, last + 1) * step + 0.5).clip(0, size).astype(int)
            self.pixels = slice(int(edges[0]), max(int(edges[-1]), int(edges[-2]) + 1))
            self.starts = edges[:-1] - edges[0]
        else:
            taken = centres[first:last].astype(int)
            self.pixels = slice(int(taken[0]), int(taken[-1]) + 1)
            self.starts = taken - taken[0]


def _reduced(part: NDArray[np.floating], down: _Axis, across: _Axis) -> NDArray[np.floating]:
    """Return the mean of each block, leaving out missing values; NaN where all are missing."""
    if not (down.blocks or across.blocks):
        return np.asarray(part[down.starts[:, None], across.starts])
    with np.errstate(invalid="ignore", over="ignore"):
        sums = _summed(part, down, across)
        missing = np.isnan(part)
        if not missing.any():
            return np.asarray(sums / (_sizes(down, part.shape[0])[:, None] * _sizes(across, part.shape[1])))
        counts = _summed((~missing).astype(np.float32), down, across)
        sums = _summed(np.where(missing, part.dtype.type(0), part), down, across)
        return np.where(counts > 0, sums / np.maximum(counts, 1), np.float32(np.nan))


def _sizes(axis: _Axis, size: int) -> NDArray[np.float32]:
    """Return how many pixels each dot takes along an axis."""
    return np.diff(axis.starts, append=size).astype(np.float32) if axis.blocks else np.ones(axis.count, np.float32)


def _summed(part: NDArray[np.floating], down: _Axis, across: _Axis) -> NDArray[np.floating]:
    """Return the sums of blocks along both axes (or the pixels themselves along one without blocks)."""
    part = np.add.reduceat(part, down.starts, axis=0) if down.blocks else part[down.starts]
    return np.add.reduceat(part, across.starts, axis=1) if across.blocks else part[:, across.starts]


def _halved(values: NDArray[np.floating]) -> NDArray[np.floating]:
    """Return the means of 2 × 2 pixels, leaving out missing values; an odd last row or column stays alone."""
    rows, cols = values.shape
    if rows % 2 or cols % 2:
        values = np.pad(values, ((0, rows % 2), (0, cols % 2)), constant_values=np.nan)
    with np.errstate(invalid="ignore", over="ignore"):
        quarters = (values[0::2, 0::2], values[0::2, 1::2], values[1::2, 0::2], values[1::2, 1::2])
        mean = (quarters[0] + quarters[1] + quarters[2] + quarters[3]) * values.dtype.type(0.25)
        gaps = np.isnan(mean)
        if gaps.any():
            near = np.stack([quarter[gaps] for quarter in quarters])
            there = ~np.isnan(near)
            counts = there.sum(axis=0)
            mean[gaps] = np.where(counts > 0, np.where(there, near, 0).sum(axis=0) / np.maximum(counts, 1), np.nan)
    return np.asarray(mean)
