"""Colours of a picture by index, and the cells of the terminal prebuilt from pairs of them.

Indices 0 to LEVELS − 1 are the colour scale; the named ones below follow. A cell shows two dots, one
over the other: their pair picks a cell that was made once.
"""

from functools import lru_cache

import numpy as np
from numpy.typing import NDArray
from rich.color import Color, ColorSystem
from rich.segment import Segment
from rich.style import Style

from thermfix.tui.picture.scales import LEVELS, NO_LEVEL, RGB, level_colours, selection_colour

GAP = NO_LEVEL
"""No value; drawn as a weave with GAP_OTHER, so that it cannot be taken for a temperature."""
GAP_OTHER = LEVELS + 1
OUTSIDE = LEVELS + 2
"""Beyond the frame: the background of the screen."""
LIGHT = LEVELS + 3
DARK = LEVELS + 4
SELECTION = LEVELS + 5
PAPER = LEVELS + 6
"""Ink on SELECTION."""
COLOURS = LEVELS + 7

GAP_RGB: tuple[RGB, RGB] = ((98, 98, 104), (122, 122, 128))
UPPER_HALF = "▀"

SPACE, FOREGROUND, BACKGROUND, SPACE_BACKGROUND = 1, 2, 2 + COLOURS, 2 + 2 * COLOURS
BOTH = 2 + 3 * COLOURS
"""Where the kinds of prebuilt cells begin in ``Palette.codes`` (0 repeats both colours of the cell before)."""


SHOWN_SYSTEMS = {"truecolor": ColorSystem.TRUECOLOR, "256": ColorSystem.EIGHT_BIT}
"""Colour systems, by Rich's name, in which the colours of a scale can be told apart."""


class Palette:
    """The colours of one scale on one background, and what is made of them when first needed."""

    def __init__(self, scale: str, background: RGB) -> None:
        extra = [*GAP_RGB, background, (255, 255, 255), (0, 0, 0), selection_colour(scale), (0, 0, 0)]
        self.colours = np.concatenate([level_colours(scale), np.array(extra, np.uint8)])
        linear = (self.colours / 255.0) ** 2.2
        self.lightness: NDArray[np.float64] = (linear @ [0.2126, 0.7152, 0.0722]) ** (1 / 2.2)
        self._segments: dict[tuple[int, int, str], Segment] = {}
        self._codes: dict[ColorSystem, tuple[NDArray[np.object_], NDArray[np.uint8]]] = {}

    def segment(self, top: int, bottom: int, text: str = UPPER_HALF) -> Segment:
        """Return the segment of a cell: two colours, or a text in the first of them on the second."""
        if top == bottom:
            text = " "
        found = self._segments.get((top, bottom, text))
        if found is None:
            fore, back = (Color.from_rgb(*map(int, self.colours[index])) for index in (top, bottom))
            style = Style(color=None if top == bottom else fore, bgcolor=back)
            found = self._segments[top, bottom, text] = Segment(text, style)
        return found

    def codes(self, system: ColorSystem) -> tuple[NDArray[np.object_], NDArray[np.uint8]]:
        """Return the escape codes of cells for a colour system, and the first index of equal colour of each index.

        Returns
        -------
        codes : ndarray of str
            The kinds of cells one after the other: repeat, SPACE, FOREGROUND + top, BACKGROUND + bottom,
            SPACE_BACKGROUND + bottom, BOTH + top × COLOURS + bottom.
        first : ndarray of uint8, shape (COLOURS,)
            Where colours are few, several levels share one.
        """
        if system not in self._codes:
            colours = [Color.from_rgb(*map(int, colour)).downgrade(system) for colour in self.colours]
            fore = [";".join(colour.get_ansi_codes(foreground=True)) for colour in colours]
            back = [";".join(colour.get_ansi_codes(foreground=False)) for colour in colours]
            codes = [UPPER_HALF, " "]
            codes += [f"\x1b[{code}m{UPPER_HALF}" for code in fore]
            codes += [f"\x1b[{code}m{UPPER_HALF}" for code in back]
            codes += [f"\x1b[{code}m " for code in back]
            codes += [f"\x1b[{top};{bottom}m{UPPER_HALF}" for top in fore for bottom in back]
            first = np.array([back.index(code) for code in back], np.uint8)
            # Letters keep a pair of their own, or they would vanish where their two colours became one.
            first[OUTSIDE + 1 :] = np.arange(OUTSIDE + 1, COLOURS)
            self._codes[system] = np.array(codes, object), first
        return self._codes[system]


@lru_cache(maxsize=8)
def palette_of(scale: str, background: RGB) -> Palette:
    """Return the palette of a scale on a background; the last few are kept."""
    return Palette(scale, background)
