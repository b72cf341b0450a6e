"""What is drawn over a picture: outlines and names of regions, points being placed, the pointer.

Everything is drawn in dots, as palette indices beyond the levels of the colour scale, so that it costs
no more to paint than the picture. Lines turn black on light colours and white on dark ones.
"""

import math
from dataclasses import dataclass, field
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray
from rich.cells import cell_len, get_character_cell_size

from thermfix.model.shapes import XY, Ellipse, Line, Point, Polygon, Rectangle, Shape
from thermfix.tui.picture.palette import DARK, LIGHT, PAPER, SELECTION
from thermfix.tui.picture.resample import Window

ELLIPSE_CORNERS = 72
"""Corners of the polygon that stands for an ellipse: at the largest zoom, half a dot off at most for 100 px across."""

INSET = 0.6
"""Dots that a closed outline is drawn inward of its edge, so that it lies on pixels of its own."""


class Role(StrEnum):
    """What an outline is, which decides how it looks."""

    REGION = "region"
    SELECTED = "selected"
    DRAFT = "draft"


@dataclass(frozen=True, slots=True)
class Outline:
    """A line through points of the image, with the name to write at it; in pixels.

    A draft is a shape being drawn: its points are marked too.
    """

    points: tuple[XY, ...]
    name: str = ""
    closed: bool = True
    role: Role = Role.REGION


@dataclass(slots=True)
class Drawing:
    """A picture in dots (palette indices, two lines of dots a cell), and the letters that replace cells of it.

    ``letters`` has, by line of cells, the text of each replaced cell by its column; the second cell of a
    wide letter is empty.
    """

    dots: NDArray[np.uint8]
    letters: dict[int, dict[int, str]] = field(default_factory=dict)


def outline_of(shape: Shape, name: str = "", role: Role = Role.REGION) -> Outline:
    """Return the outline of a shape of the inspection file."""
    match shape:
        case Rectangle(x0, y0, x1, y1):
            return Outline(((x0, y0), (x1, y0), (x1, y1), (x0, y1)), name, True, role)
        case Ellipse(cx, cy, rx, ry):
            turns = [2 * math.pi * step / ELLIPSE_CORNERS for step in range(ELLIPSE_CORNERS)]
            return Outline(tuple((cx + rx * math.cos(a), cy + ry * math.sin(a)) for a in turns), name, True, role)
        case Polygon(corners):
            return Outline(corners, name, True, role)
        case Line(points):
            return Outline(points, name, False, role)
        case Point(x, y):
            return Outline(((x, y),), name, False, role)


def draw_outline(drawing: Drawing, window: Window, outline: Outline, lightness: NDArray[np.float64]) -> None:
    """Draw the line of an outline; ``lightness`` is that of each palette index, 0 to 1."""
    points = _in_dots(outline, window)
    if not len(points):
        return
    ends = np.roll(points, -1, axis=0) if outline.closed else points[1:]
    for start, end in zip(points, ends, strict=False):
        _paint(drawing.dots, _along(start, end, drawing.dots.shape), outline.role, lightness)
    if len(points) == 1 or outline.role is Role.DRAFT:
        for point in points:
            _paint(drawing.dots, np.floor(point) + _MARK, outline.role, lightness)


def draw_name(drawing: Drawing, window: Window, outline: Outline) -> None:
    """Write the name of an outline above its top left corner, or within it where there is no room above."""
    points = _in_dots(outline, window)
    if not outline.name or not len(points):
        return
    lines, columns = drawing.dots.shape[0] // 2, drawing.dots.shape[1]
    (left, top), (right, bottom) = np.floor(points.min(axis=0)), np.floor(points.max(axis=0))
    if right < 0 or bottom < 0 or left >= columns or top >= 2 * lines:
        return
    line = int(top // 2) - 1
    line = line if line >= 0 else max(0, int(top // 2) + 1)
    text = _fitted(outline.name, columns)
    column = max(0, min(int(left), columns - cell_len(text)))
    if text and line < lines:
        _write(drawing, line, column, text, outline.role)


def draw_pointer(drawing: Drawing, window: Window, pixel: tuple[int, int], lightness: NDArray[np.float64]) -> None:
    """Draw a cross whose arms point at a pixel and leave it free."""
    (x0, y0), (x1, y1) = (window.cell_at(pixel[0] + more, pixel[1] + more) for more in (0, 1))
    left, top = math.floor(x0), math.floor(2 * y0)
    right, bottom = max(left, math.ceil(x1) - 1), max(top, math.ceil(2 * y1) - 1)
    across, down = (left + right) // 2, (top + bottom) // 2
    arms = [
        spot
        for step in (2, 3, 4)
        for spot in ((left - step, down), (right + step, down), (across, top - step), (across, bottom + step))
    ]
    _paint(drawing.dots, np.array(arms, float), Role.REGION, lightness)


_MARK = np.array([(0, 0), (1, 0), (-1, 0), (0, 1), (0, -1)], float)


def _in_dots(outline: Outline, window: Window) -> NDArray[np.float64]:
    """Return the points in dots, those of a closed outline a little inward."""
    points = np.asarray(outline.points, float).reshape(-1, 2)
    points = points[np.isfinite(points).all(axis=1)]
    dots = (points - (window.left, window.top)) / (window.step_x, window.step_y)
    if outline.closed and len(dots) > 2:
        middle = (dots.min(axis=0) + dots.max(axis=0)) / 2
        dots -= np.sign(dots - middle) * np.minimum(INSET, np.abs(dots - middle))
    return dots


def _along(start: NDArray[np.float64], end: NDArray[np.float64], shape: tuple[int, ...]) -> NDArray[np.float64]:
    """Return the dots of a straight line, of which only the part near the picture is walked."""
    towards = end - start
    first, last = 0.0, 1.0
    for axis, size in ((0, shape[1]), (1, shape[0])):
        if towards[axis]:
            entry, leave = sorted((bound - start[axis]) / towards[axis] for bound in (-1.0, size + 1.0))
            first, last = max(first, entry), min(last, leave)
        elif not -1 <= start[axis] <= size + 1:
            return np.empty((0, 2))
    if first > last:
        return np.empty((0, 2))
    near, far = start + first * towards, start + last * towards
    steps = int(np.abs(far - near).max()) + 1
    walked: NDArray[np.float64] = near + np.linspace(0, 1, 2 * steps + 1)[:, None] * (far - near)
    return walked


def _paint(dots: NDArray[np.uint8], spots: NDArray[np.float64], role: Role, lightness: NDArray[np.float64]) -> None:
    """Set the dots at some spots, leaving out those beyond the picture."""
    inside = ((spots >= 0) & (spots < (dots.shape[1], dots.shape[0]))).all(axis=1)
    x, y = np.floor(spots[inside]).astype(int).T
    below = dots[y, x]
    fixed = (below == LIGHT) | (below == DARK) | (below == SELECTION)
    contrast = np.where(lightness[below] > 0.55, DARK, LIGHT)
    dots[y, x] = np.where(fixed, below, contrast) if role is Role.REGION else SELECTION


def _fitted(name: str, columns: int) -> str:
    """Return a name with a blank on each side, cut to the picture's width."""
    text = f" {name} "
    if cell_len(text) <= columns:
        return text
    while text and cell_len(text) > columns - 1:
        text = text[:-1]
    return f"{text}…" if columns > 2 else ""


def _write(drawing: Drawing, line: int, column: int, text: str, role: Role) -> None:
    """Put letters in the place of cells, taking the colours of those cells too."""
    letters = drawing.letters.setdefault(line, {})
    columns = drawing.dots.shape[1]
    start = column
    for letter in text:
        width = get_character_cell_size(letter)
        if not width:
            if column > start:
                letters[max(place for place in letters if place < column and letters[place])] += letter
            continue
        if column + width > columns:
            break
        _clear_wide(letters, column, width)
        letters[column] = letter
        if width == 2:
            letters[column + 1] = ""
        column += width
    ink, paper = (PAPER, SELECTION) if role is Role.SELECTED else (LIGHT, DARK)
    drawing.dots[2 * line, start:column] = ink
    drawing.dots[2 * line + 1, start:column] = paper


def _clear_wide(letters: dict[int, str], column: int, width: int) -> None:
    """Blank the halves of wide letters that a new letter would cut in two."""
    if letters.get(column) == "" and column - 1 in letters:
        letters[column - 1] = " "
    if letters.get(column + width) == "":
        letters[column + width] = " "
