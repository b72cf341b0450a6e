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

from thermfix.tui.picture.palette import DARK, LIGHT, PAPER, SELECTION
from thermfix.tui.picture.resample import Window

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

    points: tuple[tuple[float, float], ...]
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


def draw_outlines(
    drawing: Drawing, window: Window, outlines: tuple[Outline, ...], lightness: NDArray[np.float64]
) -> None:
    """Draw the lines of outlines, drafts and the selected one over the others.

    ``lightness`` is that of each palette index, 0 to 1.
    """
    regions = [outline for outline in outlines if outline.role is Role.REGION]
    others = [outline for outline in outlines if outline.role is not Role.REGION]
    for role, group in ((Role.REGION, regions), (Role.SELECTED, others)):
        starts, ends, marks = [_NOTHING], [_NOTHING], [_NOTHING]
        for outline in group:
            points = _in_dots(outline, window)
            starts.append(points if outline.closed else points[:-1])
            ends.append(np.concatenate((points[1:], points[:1])) if outline.closed else points[1:])
            if len(points) == 1 or outline.role is Role.DRAFT:
                marks.append((np.floor(points)[:, None] + _MARK).reshape(-1, 2))
        lines = _along(np.concatenate(starts), np.concatenate(ends), drawing.dots.shape)
        _paint(drawing.dots, np.concatenate((lines, *marks)), role, lightness)


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


_NOTHING = np.empty((0, 2))
_MARK = np.array([(0, 0), (1, 0), (-1, 0), (0, 1), (0, -1)], float)


def _in_dots(outline: Outline, window: Window) -> NDArray[np.float64]:
    """Return the points in dots, those of a closed outline a little inward."""
    points = np.asarray(outline.points, float).reshape(-1, 2)
    points = points[np.isfinite(points).all(axis=1)]
    dots: NDArray[np.float64] = (points - (window.left, window.top)) / (window.step_x, window.step_y)
    if outline.closed and len(dots) > 2:
        middle = (dots.min(axis=0) + dots.max(axis=0)) / 2
        dots -= np.sign(dots - middle) * np.minimum(INSET, np.abs(dots - middle))
    return dots


def _along(starts: NDArray[np.float64], ends: NDArray[np.float64], shape: tuple[int, ...]) -> NDArray[np.float64]:
    """Return the dots of straight lines, of which only the parts near the picture are walked."""
    towards = ends - starts
    bounds = np.array([[-1.0, -1.0], [shape[1] + 1.0, shape[0] + 1.0]])
    with np.errstate(divide="ignore", invalid="ignore"):
        crossings = (bounds[:, None] - starts) / towards
    # Where a line runs along an axis it never crosses the other two bounds: it is between them, or nowhere.
    still = towards == 0
    between = (starts >= bounds[0]) & (starts <= bounds[1])
    entry = np.where(still, np.where(between, 0.0, 2.0), crossings.min(axis=0)).max(axis=1).clip(0, None)
    leave = np.where(still, 1.0, crossings.max(axis=0)).min(axis=1).clip(None, 1)
    seen = entry <= leave
    near = starts[seen] + entry[seen, None] * towards[seen]
    walk = (leave - entry)[seen, None] * towards[seen]
    steps = np.ceil(np.abs(walk).max(axis=1, initial=0)).astype(int) + 2
    share = (np.arange(steps.sum()) - np.repeat(np.cumsum(steps) - steps, steps)) / np.repeat(steps - 1, steps)
    walked: NDArray[np.float64] = np.repeat(near, steps, axis=0) + share[:, None] * np.repeat(walk, steps, axis=0)
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
