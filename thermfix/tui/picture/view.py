"""What a picture shows: one frozen view, made by the owner of the widget and never by the widget itself."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.tui.picture.overlays import Drawing, Outline, Role, draw_name, draw_outlines, draw_pointer
from thermfix.tui.picture.palette import GAP, GAP_OTHER, OUTSIDE, Palette
from thermfix.tui.picture.ranges import ColourRange
from thermfix.tui.picture.resample import CELL_ASPECT, Source, Viewport, Window, window_of
from thermfix.tui.picture.scales import DEFAULT_SCALE, to_levels


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class PictureView:
    """A frame and how to show it.

    ``values`` has shape (rows, cols), NaN for no value, and must not be written to afterwards; ``ends``
    of the colour scale are in its unit. Without a viewport the whole frame is fitted, whatever the size
    of the widget. The pointer is a pixel (x, y).
    """

    values: NDArray[np.floating]
    ends: ColourRange | None
    scale: str = DEFAULT_SCALE
    viewport: Viewport | None = None
    pointer: tuple[int, int] | None = None
    outlines: tuple[Outline, ...] = ()
    cell_aspect: float = CELL_ASPECT

    @property
    def shape(self) -> tuple[int, int]:
        """Rows and columns of the frame."""
        rows, cols = self.values.shape
        return rows, cols

    def window(self, columns: int, lines: int) -> Window:
        """Return what a widget of some size shows of it."""
        return window_of(self.shape, columns, lines, self.viewport, self.cell_aspect)


class Painter:
    """Draws views, keeping from one to the next what has not changed."""

    def __init__(self) -> None:
        self._source = Source(np.empty((0, 0), np.float32))
        self._frame_key: tuple[object, ...] = ()
        self._frame = np.empty((0, 0), np.uint8)
        self._over_key: tuple[object, ...] = ()
        self._over = Drawing(self._frame)

    def draw(self, view: PictureView, columns: int, lines: int, palette: Palette) -> Drawing:
        """Return the drawing of a view in a widget of some size."""
        window = view.window(columns, lines)
        key: tuple[object, ...] = (view.values, window, view.ends)
        if not _same(key, self._frame_key):
            self._frame, self._frame_key = self._frame_dots(view, window), key
            self._over_key = ()
        key = (view.outlines, palette)
        if not _same(key, self._over_key):
            self._over, self._over_key = _with_outlines(self._frame, view.outlines, window, palette), key
        drawing = Drawing(self._over.dots.copy(), self._over.letters)
        if view.pointer is not None:
            draw_pointer(drawing, window, view.pointer, palette.lightness)
            # The letters of names stay readable under the arms of the pointer.
            for line, letters in drawing.letters.items():
                cells = list(letters)
                drawing.dots[2 * line : 2 * line + 2, cells] = self._over.dots[2 * line : 2 * line + 2, cells]
        return drawing

    def _frame_dots(self, view: PictureView, window: Window) -> NDArray[np.uint8]:
        """Return the frame alone as dots."""
        if view.values is not self._source.values:
            self._source = Source(view.values)
        dots = np.full((2 * window.lines, window.columns), OUTSIDE, np.uint8)
        values, lines, columns = self._source.sample(window)
        if values.size:
            ends = view.ends or ColourRange(-np.inf, np.inf)
            dots[lines, columns] = to_levels(values, ends.low, ends.high)
        gaps = dots == GAP
        if gaps.any():
            y, x = np.nonzero(gaps)
            dots[y, x] = np.where((y // 2 + x // 2) % 2, GAP, GAP_OTHER)
        return dots


def _same(one: tuple[object, ...], other: tuple[object, ...]) -> bool:
    """Return whether two keys are equal, arrays by identity."""
    return len(one) == len(other) and all(
        mine is its or (not isinstance(mine, np.ndarray) and mine == its) for mine, its in zip(one, other, strict=True)
    )


def _with_outlines(
    frame: NDArray[np.uint8], outlines: tuple[Outline, ...], window: Window, palette: Palette
) -> Drawing:
    """Return the frame with its outlines and names, the selected one and drafts over the others."""
    drawing = Drawing(frame.copy() if outlines else frame)
    if not frame.size:
        return drawing
    draw_outlines(drawing, window, outlines, palette.lightness)
    for outline in sorted(outlines, key=lambda outline: outline.role is not Role.REGION):
        draw_name(drawing, window, outline)
    return drawing
