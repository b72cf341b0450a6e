"""From a drawing to the lines of the terminal, by the fastest way that the terminal and the theme allow.

Where nothing but colours is asked for, a line is written as prebuilt escape codes: a colour is named
only where it changes, and a cell of one colour is a blank. Textual then needs the line's segments only
when it has to cut it (something lies over the picture) or to take a screenshot; they are made then.
Without colours, or with sixteen, a cell is a shade of grey made of its letter.
"""

from collections.abc import Callable
from functools import cache

import numpy as np
from numpy.typing import NDArray
from rich.color import Color, ColorSystem
from rich.console import Console
from rich.segment import Segment
from rich.style import Style
from textual.strip import Strip

from thermfix.tui.picture.overlays import Drawing
from thermfix.tui.picture.palette import (
    BACKGROUND,
    BOTH,
    COLOURS,
    DARK,
    FOREGROUND,
    GAP,
    GAP_OTHER,
    LIGHT,
    OUTSIDE,
    PAPER,
    SELECTION,
    SPACE,
    SPACE_BACKGROUND,
    Palette,
)
from thermfix.tui.picture.scales import LEVELS

RESET = "\x1b[0m"
BLOCKS = " ░▒▓█"
"""Letters that cover a cell by quarters."""

GREYS = (0, 128, 192, 255)
"""The greys among the sixteen colours of a terminal."""

_SIGNS = {GAP: "x", OUTSIDE: " ", LIGHT: "•", SELECTION: "#"}


class PictureStrip(Strip):
    """A line of a picture: escape codes for one colour system, and its segments when they are asked for."""

    __slots__ = ("_codes", "_made", "_make", "_system_name")

    def __init__(self, codes: str, system: str, make: Callable[[], list[Segment]], columns: int) -> None:
        super().__init__((), columns)
        self._made: list[Segment] | None = None
        self._codes, self._system_name, self._make = codes, system, make

    @property
    def _segments(self) -> list[Segment]:
        if self._made is None:
            self._made = self._make()
        return self._made

    @_segments.setter
    def _segments(self, segments: list[Segment]) -> None:
        self._made = segments

    def render(self, console: Console) -> str:
        """Return the escape codes, as long as the terminal is the one they were made for."""
        if console.color_system == self._system_name:
            return self._codes
        return super().render(console)


def picture_lines(drawing: Drawing, palette: Palette, system: ColorSystem) -> list[str]:
    """Return each line of cells as a string of escape codes.

    Parameters
    ----------
    drawing : Drawing
        2 n lines of dots.
    palette : Palette
        Their colours.
    system : ColorSystem
        What the terminal can show.

    Returns
    -------
    list of str
        n strings; each begins with all the colours it needs and ends by resetting them.
    """
    codes, first = palette.codes(system)
    dots = first[drawing.dots]
    cells = codes[_kinds(dots[0::2], dots[1::2])].tolist()
    for line, letters in drawing.letters.items():
        if line < len(cells):
            for column, letter in letters.items():
                cells[line][column] = cells[line][column][:-1] + letter
    return ["".join(row) + RESET for row in cells]


def _kinds(top: NDArray[np.uint8], bottom: NDArray[np.uint8]) -> NDArray[np.intp]:
    """Return the prebuilt cell of each cell: the shortest that turns the colours in force into those wanted."""
    lines, columns = top.shape
    flat = top == bottom
    new_back = np.ones((lines, columns), bool)
    new_back[:, 1:] = bottom[:, 1:] != bottom[:, :-1]
    # The foreground in force is that of the last cell that was not of one colour.
    last = np.where(flat, -1, np.arange(columns))
    np.maximum.accumulate(last, axis=1, out=last)
    before = np.full((lines, columns), -1, np.intp)
    before[:, 1:] = last[:, :-1]
    in_force = np.where(before < 0, -1, np.take_along_axis(top.astype(np.intp), np.maximum(before, 0), axis=1))
    new_fore = ~flat & (in_force != top)
    top, bottom = top.astype(np.intp), bottom.astype(np.intp)
    return np.select(
        [flat & new_back, flat, new_fore & new_back, new_fore, new_back],
        [SPACE_BACKGROUND + bottom, SPACE, BOTH + top * COLOURS + bottom, FOREGROUND + top, BACKGROUND + bottom],
        0,
    )


def picture_segments(drawing: Drawing, palette: Palette, line: int) -> list[Segment]:
    """Return one line of cells as segments, the same cells as in ``picture_lines``."""
    top, bottom = drawing.dots[2 * line].tolist(), drawing.dots[2 * line + 1].tolist()
    letters = drawing.letters.get(line)
    segment = palette.segment
    if not letters:
        return [segment(*pair) for pair in zip(top, bottom, strict=True)]
    made = [segment(pair[0], pair[1], letters.get(at, "▀")) for at, pair in enumerate(zip(top, bottom, strict=True))]
    return [one for one in made if one.text]


def shaded_segments(drawing: Drawing, line: int, style: Style, grey: bool) -> list[Segment]:
    """Return one line of cells as letters that cover more of the cell the hotter it is.

    Parameters
    ----------
    drawing : Drawing
        The picture.
    line : int
        Line of cells.
    style : Style
        Of the text of the screen; without grey it is the only one used.
    grey : bool
        With the four greys of a terminal of sixteen colours: 13 shades; without, 5.

    Returns
    -------
    list of Segment
        One for each run of equal style.
    """
    top, bottom = drawing.dots[2 * line], drawing.dots[2 * line + 1]
    letters = drawing.letters.get(line, {})
    made: list[Segment] = []
    for column, (above, below) in enumerate(zip(top.tolist(), bottom.tolist(), strict=True)):
        text, pen = (letters[column], style) if column in letters else _shade(above, below, style, grey)
        if made and made[-1].style == pen:
            made[-1] = Segment(made[-1].text + text, pen)
        else:
            made.append(Segment(text, pen))
    return [one for one in made if one.text]


@cache
def shades(grey: bool) -> tuple[tuple[str, int, int], ...]:
    """Return the shades from cold to hot: letter, grey of the letter, grey of the ground."""
    if not grey:
        return tuple((letter, 255, 0) for letter in BLOCKS)
    pairs = zip(GREYS[1:], GREYS[:-1], strict=True)
    steps = ((letter, fore, back) for fore, back in pairs for letter in BLOCKS[1:])
    return ((" ", GREYS[1], GREYS[0]), *steps)


def _shade(above: int, below: int, style: Style, grey: bool) -> tuple[str, Style]:
    """Return the letter of a cell and its style."""
    if OUTSIDE in (above, below) and min(above, below) < LEVELS:
        above = below = min(above, below)
    if max(above, below) >= LEVELS:
        return _sign(above, below), style
    ramp = shades(grey)
    letter, fore, back = ramp[(above + below) * len(ramp) // (2 * LEVELS)]
    return letter, _grey_style(fore, back) if grey else style


@cache
def _grey_style(fore: int, back: int) -> Style:
    return Style(color=Color.from_rgb(fore, fore, fore), bgcolor=Color.from_rgb(back, back, back))


def _sign(above: int, below: int) -> str:
    """Return the letter of a cell in which something is drawn or missing; what is drawn goes first."""
    same = {DARK: LIGHT, GAP_OTHER: GAP, PAPER: SELECTION}
    found = {same.get(index, index) for index in (above, below)}
    return next(_SIGNS[index] for index in (SELECTION, LIGHT, GAP, OUTSIDE) if index in found)
