"""The colour scale beside a picture: its colours, their numbers, the unit, and how the range was chosen."""

from dataclasses import dataclass

import numpy as np
from rich.cells import set_cell_size
from rich.segment import Segment
from textual.reactive import reactive
from textual.strip import Strip
from textual.widget import Widget

from thermfix.tui.picture.overlays import Drawing
from thermfix.tui.picture.palette import SHOWN_SYSTEMS, palette_of
from thermfix.tui.picture.ranges import ColourRange, decimals_for, ticks
from thermfix.tui.picture.scales import DEFAULT_SCALE, LEVELS
from thermfix.tui.picture.strips import picture_segments, shaded_segments

BAR = 2
"""Width of the colours in cells."""

SPACING = 3
"""Lines there should be from one number to the next, at least."""


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class ColourBarView:
    """Ends of the scale in a unit, how they were chosen, and the value under the pointer (None: no mark)."""

    ends: ColourRange | None
    scale: str = DEFAULT_SCALE
    unit: str = "°C"
    mode: str = ""
    value: float | None = None


class ColourBar(Widget):
    """A vertical colour scale, hot at the top."""

    ALLOW_SELECT = False
    DEFAULT_CSS = "ColourBar { width: 10; height: 1fr; }"

    view: reactive[ColourBarView | None] = reactive(None, init=False)

    def render_line(self, y: int) -> Strip:
        """Return one line: unit, colours with a number where there is one, or mode."""
        width, height, view = self.size.width, self.size.height, self.view
        if view is None:
            return Strip.blank(width, self.rich_style)
        first, count = (1, height - 2) if height >= 2 * SPACING else (0, height)
        if not first <= y < first + count:
            text = view.unit if y < first else view.mode
            return Strip([Segment(set_cell_size(text, width), self.rich_style)], width)
        notes = bar_notes(view, count)
        text = set_cell_size(notes.get(y - first, ""), max(0, width - BAR))
        return Strip([*self._colours(view, y - first, count), Segment(text, self.rich_style)], width + BAR).crop(
            0, width
        )

    def _colours(self, view: ColourBarView, line: int, count: int) -> list[Segment]:
        """Return the colours of one line of the bar."""
        levels = np.linspace(LEVELS - 1, 0, 2 * count).round().astype(np.uint8)
        drawing = Drawing(np.repeat(levels[2 * line : 2 * line + 2, None], BAR, axis=1))
        if self.app.no_color or self.app.console.color_system not in SHOWN_SYSTEMS:
            return shaded_segments(drawing, 0, self.rich_style, grey=not self.app.no_color)
        return picture_segments(drawing, palette_of(view.scale, self.background_colors[1].rgb), 0)


def bar_notes(view: ColourBarView, count: int) -> dict[int, str]:
    """Return what stands beside the colours, by line: both ends, round numbers between, the pointer's value.

    Parameters
    ----------
    view : ColourBarView
        What to show.
    count : int
        Lines of the bar.

    Returns
    -------
    dict
        Text by line from the top. The line of the pointer's value has a mark before its number.
    """
    ends = view.ends
    if ends is None or count < 1:
        return {}
    decimals = decimals_for(ends)
    notes = {count - 1: ends.low, 0: ends.high}
    for number in ticks(ends, max(0, (count - 1) // SPACING)):
        line = _line_of(number, ends, count)
        if all(abs(line - taken) >= 2 for taken in notes):
            notes[line] = number
    texts = {line: f"  {_written(number, decimals)}" for line, number in notes.items()}
    if view.value is not None and np.isfinite(view.value):
        line = _line_of(view.value, ends, count)
        texts[line] = f"◀ {_written(view.value, decimals)}"
    return texts


def _line_of(number: float, ends: ColourRange, count: int) -> int:
    """Return the line of the bar that shows a number, its ends taking what lies beyond."""
    share = (ends.high / 2 - number / 2) / (ends.high / 2 - ends.low / 2)
    return int(min(max(share, 0.0) * count, count - 1))


def _written(number: float, decimals: int) -> str:
    """Return a number in at most seven characters, with a real minus sign."""
    text = f"{number:.{decimals}f}"
    if len(text) > 6:
        text = f"{number:.4g}" if abs(number) < 1e5 else f"{number:.1e}"
    return text.replace("-", "−")
