"""The picture of a frame: shows the view it is given, and asks by messages.

The view is drawn when it is set; only lines that come out different are painted again.
"""

from collections.abc import Iterator
from dataclasses import replace
from itertools import groupby

from rich.color import ColorSystem
from textual import events
from textual.binding import Binding, BindingType
from textual.filter import ANSIToTruecolor
from textual.geometry import Region, Spacing
from textual.reactive import reactive
from textual.strip import Strip
from textual.widget import Widget

from thermfix.tui.picture.messages import Clicked, DragEnded, Dragged, DragStarted, PointerMoved, ViewportAsked
from thermfix.tui.picture.overlays import Drawing
from thermfix.tui.picture.palette import SHOWN_SYSTEMS, Palette, palette_of
from thermfix.tui.picture.resample import Viewport, Window, fit_zoom, next_zoom, zoomed
from thermfix.tui.picture.scales import DEFAULT_SCALE, RGB
from thermfix.tui.picture.strips import PictureStrip, picture_lines, picture_segments, shaded_segments
from thermfix.tui.picture.view import Painter, PictureView

JUMP = 10
"""Pixels of a long step of the pointer."""

PAN = 0.25
"""Share of the picture's width or height that one step moves the view."""

_WAYS = {"left": (-1, 0), "right": (1, 0), "up": (0, -1), "down": (0, 1)}


def _arrows(keys: str, action: str, size: int, what: str, name: str) -> list[BindingType]:
    """Return a binding for each arrow key."""
    return [
        Binding(
            ",".join(f"{key}{way}" for key in keys.split(",")),
            f"{action}({dx * size}, {dy * size})",
            f"{what} {way}",
            show=False,
            id=f"picture.{name}_{way}",
            tooltip=f"{what} {way}",
        )
        for way, (dx, dy) in _WAYS.items()
    ]


class Picture(Widget, can_focus=True):
    """A frame in colours, with zoom and pan, regions outlined on it, and a pointer."""

    ALLOW_SELECT = False
    HELP = """\
The frame in colours. The arrow keys move the pointer by one pixel, with Shift or Ctrl by ten; the mouse
moves it too. Plus and minus zoom at the pointer, as the wheel does; 0 shows the whole frame. Alt with
the arrow keys moves the view, as dragging with the middle button (or with Alt) does. Enter presses the
pixel under the pointer; drag with the left button to draw.
"""
    DEFAULT_CSS = "Picture { width: 1fr; height: 1fr; }"

    BINDINGS = [
        *_arrows("", "point", 1, "Pointer", "point"),
        *_arrows("shift+,ctrl+", "point", JUMP, f"Pointer {JUMP} px", "jump"),
        *_arrows("alt+", "pan", 1, "View", "pan"),
        Binding("plus,equals_sign", "zoom(1)", "Zoom in", id="picture.zoom_in", tooltip="Zoom in at the pointer"),
        Binding("minus", "zoom(-1)", "Zoom out", id="picture.zoom_out", tooltip="Zoom out at the pointer"),
        Binding("0", "fit", "Whole frame", id="picture.fit", tooltip="Show the whole frame"),
        Binding("enter,space", "press", "Press", id="picture.press", show=False, tooltip="Press the pixel pointed at"),
    ]

    view: reactive[PictureView | None] = reactive(None, repaint=False, init=False)

    fast = True
    """Write escape codes of our own where possible; off, everything goes through Textual's segments."""

    def __init__(
        self, *, name: str | None = None, id: str | None = None, classes: str | None = None, disabled: bool = False
    ) -> None:
        super().__init__(name=name, id=id, classes=classes, disabled=disabled)
        self._painter = Painter()
        self._drawing: Drawing | None = None
        self._palette: Palette | None = None
        self._drawn_size = (-1, -1)
        self._strips: list[Strip] | None = None
        self._wished: PictureView | None = None
        self._drag: tuple[float, float] | None = None
        self._dragging = False
        self._panning: tuple[Window, float, float] | None = None

    # -- showing ------------------------------------------------------------------------------------

    def watch_view(self, view: PictureView | None) -> None:
        """Draw the view, and have the lines that changed painted."""
        self._wished = None
        before, size, palette = self._drawing, self._drawn_size, self._palette
        self._draw()
        now = self._drawing
        same = before is not None and now is not None and size == self._drawn_size and palette is self._palette
        if not (same and self.is_mounted and before and now):
            self.refresh()
            return
        changed = (before.dots != now.dots).any(axis=1).reshape(-1, 2).any(axis=1).tolist()
        for line in before.letters.keys() | now.letters.keys():
            if line < len(changed):
                changed[line] |= before.letters.get(line) != now.letters.get(line)
        if regions := list(_runs(changed, size[0], self.gutter)):
            self.refresh(*regions)

    def notify_style_update(self) -> None:
        """Draw again: the theme decides what lies around the frame."""
        self._drawn_size = (-1, -1)
        super().notify_style_update()

    def _draw(self) -> None:
        """Draw the view for the present size and background."""
        columns, lines = self._drawn_size = (self.size.width, self.size.height)
        self._palette = palette_of(self.view.scale if self.view else DEFAULT_SCALE, self._background)
        self._drawing = self._painter.draw(self.view, columns, lines, self._palette) if self.view else None
        self._strips = None

    @property
    def _background(self) -> RGB:
        return self.background_colors[1].rgb

    @property
    def _system(self) -> ColorSystem | None:
        """What the terminal shows of our colours: all, 256 of them, or (None) only shades of grey."""
        return None if self.app.no_color else SHOWN_SYSTEMS.get(self.app.console.color_system or "")

    def _plain(self) -> bool:
        """Return whether nothing is to be done to the lines but to write them."""
        styles = self.styles
        return (
            self.fast
            and not self.gutter.totals[0] + self.gutter.totals[1]
            and not any(kind for kind, _ in styles.outline)
            and not (styles.has_rule("hatch") or styles.tint.a)
            and self.opacity == styles.text_opacity == 1
            and all(isinstance(one, ANSIToTruecolor) for one in self.get_line_filters())
        )

    def render_lines(self, crop: Region) -> list[Strip]:
        """Return the lines within a region of the widget."""
        if self._drawn_size != (self.size.width, self.size.height):
            self._draw()
        system = self._system
        if self._drawing is None or self._palette is None or system is None or not self._plain():
            return super().render_lines(crop)
        if self._strips is None:
            self._strips = self._made_strips(self._drawing, self._palette, system)
        strips = self._strips[crop.y : crop.bottom]
        if crop.column_span != (0, self.size.width):
            strips = [strip.crop(*crop.column_span) for strip in strips]
        return strips

    def _made_strips(self, drawing: Drawing, palette: Palette, system: ColorSystem) -> list[Strip]:
        """Return all lines as escape codes."""
        name = self.app.console.color_system or ""
        return [
            PictureStrip(codes, name, lambda line=line: picture_segments(drawing, palette, line), self.size.width)  # type: ignore[misc]
            for line, codes in enumerate(picture_lines(drawing, palette, system))
        ]

    def render_line(self, y: int) -> Strip:
        """Return one line as segments: the way that works with any style, filter and terminal."""
        drawing, palette, style = self._drawing, self._palette, self.rich_style
        if drawing is None or palette is None or 2 * y >= len(drawing.dots):
            return Strip.blank(self.size.width, style)
        system = self._system
        if system is None:
            return Strip(shaded_segments(drawing, y, style, grey=not self.app.no_color), self.size.width)
        return Strip(picture_segments(drawing, palette, y), self.size.width)

    # -- asking -------------------------------------------------------------------------------------

    def _wish(self) -> PictureView | None:
        """Return the view with what was asked for since it was set, so that quick keys add up."""
        view = self._wished or self.view
        return view if view is not None and view.values.size and self.size.area else None

    def _window(self, view: PictureView) -> Window:
        return view.window(self.size.width, self.size.height)

    def _ask_pointer(self, x: int, y: int) -> None:
        view = self._wish()
        if view is not None and (x, y) != view.pointer:
            self._wished = replace(view, pointer=(x, y))
            self.post_message(PointerMoved(self, x, y))

    def _ask_viewport(self, viewport: Viewport | None) -> None:
        view = self._wish()
        if view is None:
            return
        if viewport is not None:
            whole = fit_zoom(view.shape, self.size.width, self.size.height, view.cell_aspect)
            viewport = viewport if viewport.zoom > whole * 1.000001 else None
        wished = replace(view, viewport=viewport)
        if viewport is not None:
            viewport = self._window(wished).viewport
        if viewport != view.viewport:
            self._wished = replace(view, viewport=viewport)
            self.post_message(ViewportAsked(self, viewport))

    def action_point(self, dx: int, dy: int) -> None:
        """Move the pointer by some pixels, and the view with it at its edge."""
        view = self._wish()
        if view is None:
            return
        window, (rows, cols) = self._window(view), view.shape
        x, y = view.pointer or (int(place) for place in (window.viewport.x, window.viewport.y))
        x, y = min(max(x + dx, 0), cols - 1), min(max(y + dy, 0), rows - 1)
        self._ask_pointer(x, y)
        near, far = window.cell_at(x, y), window.cell_at(x + 1, y + 1)
        right, down = _beyond(near[0], far[0], window.columns), _beyond(near[1], far[1], window.lines)
        if right or down:
            centre = window.pixel_at(window.columns / 2 + right, window.lines / 2 + down)
            self._ask_viewport(Viewport(*centre, window.viewport.zoom))

    def action_pan(self, dx: int, dy: int) -> None:
        """Move the view by a quarter of its size."""
        if (view := self._wish()) is not None:
            window = self._window(view)
            centre = window.pixel_at(window.columns * (0.5 + PAN * dx), window.lines * (0.5 + PAN * dy))
            self._ask_viewport(Viewport(*centre, window.viewport.zoom))

    def action_zoom(self, steps: int) -> None:
        """Zoom in or out; the pixel pointed at stays where it is."""
        if (view := self._wish()) is not None:
            window = self._window(view)
            place = window.columns / 2, window.lines / 2
            if view.pointer is not None:
                x, y = window.cell_at(view.pointer[0] + 0.5, view.pointer[1] + 0.5)
                place = (x, y) if 0 <= x <= window.columns and 0 <= y <= window.lines else place
            self._zoom(window, *place, steps)

    def action_fit(self) -> None:
        """Show the whole frame."""
        self._ask_viewport(None)

    def action_press(self) -> None:
        """Press the pixel pointed at."""
        view = self._wish()
        if view is not None and view.pointer is not None:
            self.post_message(Clicked(self, view.pointer[0] + 0.5, view.pointer[1] + 0.5))

    def _zoom(self, window: Window, column: float, line: float, steps: int) -> None:
        now = window.viewport.zoom
        if (zoom := next_zoom(now, steps)) != now:
            self._ask_viewport(zoomed(window, column, line, zoom))

    # -- the mouse ----------------------------------------------------------------------------------

    def _place(self, event: events.MouseEvent) -> tuple[float, float]:
        """Return where in the widget the mouse is, in cells: the middle of the upper dot unless known better."""
        column, line = event.pointer_x - self.gutter.left, event.pointer_y - self.gutter.top
        exact = column != int(column) or line != int(line)
        return (column, line) if exact else (column + 0.5, line + 0.25)

    def _point(self, event: events.MouseEvent) -> tuple[float, float] | None:
        """Return where in the frame the mouse is, its nearest edge when beyond."""
        if (view := self._wish()) is None:
            return None
        x, y = self._window(view).pixel_at(*self._place(event))
        rows, cols = view.shape
        return min(max(x, 0.0), float(cols)), min(max(y, 0.0), float(rows))

    def on_mouse_down(self, event: events.MouseDown) -> None:
        """Begin to draw, or to move the view."""
        view, point = self._wish(), self._point(event)
        if view is None or point is None:
            return
        self._dragging = False
        if event.button == 2 or (event.button == 1 and event.meta):
            self._panning = (self._window(view), *self._place(event))
        elif event.button == 1:
            self._drag = point
        self.capture_mouse()

    def on_mouse_move(self, event: events.MouseMove) -> None:
        """Move the pointer, what is being drawn, or the view."""
        if self._panning is not None:
            window, *start = self._panning
            now = self._place(event)
            centre = window.pixel_at(window.columns / 2 + start[0] - now[0], window.lines / 2 + start[1] - now[1])
            self._ask_viewport(Viewport(*centre, window.viewport.zoom))
            return
        if (view := self._wish()) is None or (point := self._point(event)) is None:
            return
        x, y = self._window(view).pixel_at(*self._place(event))
        rows, cols = view.shape
        if self._drag is not None:
            kind = Dragged if self._dragging else DragStarted
            if self._dragging or point != self._drag:
                self._dragging = True
                self.post_message(kind(self, *self._drag, *point, event.shift))
        if self._drag is not None or (0 <= x < cols and 0 <= y < rows):
            self._ask_pointer(min(int(point[0]), cols - 1), min(int(point[1]), rows - 1))

    def on_mouse_up(self, event: events.MouseUp) -> None:
        """End what the button began."""
        self.release_mouse()
        point = self._point(event)
        if self._dragging and self._drag is not None and point is not None:
            self.post_message(DragEnded(self, *self._drag, *point, event.shift))
        elif self._panning is not None:
            self._dragging = True
        self._drag = self._panning = None

    def on_click(self, event: events.Click) -> None:
        """Press a point, unless the button was used to drag."""
        point = self._point(event)
        if event.button == 1 and not self._dragging and point is not None:
            self.post_message(Clicked(self, *point, event.chain, event.shift))
        self._dragging = False

    def on_mouse_scroll_up(self, event: events.MouseScrollUp) -> None:
        """Zoom in at the mouse."""
        self._wheel(event, 1)

    def on_mouse_scroll_down(self, event: events.MouseScrollDown) -> None:
        """Zoom out at the mouse."""
        self._wheel(event, -1)

    def _wheel(self, event: events.MouseEvent, steps: int) -> None:
        event.stop()
        if (view := self._wish()) is not None:
            self._zoom(self._window(view), *self._place(event), steps)


def _beyond(near: float, far: float, size: int) -> float:
    """Return by how many cells an interval lies beyond 0 to size, negative before it."""
    return near if near < 0 else max(0.0, far - size)


def _runs(changed: list[bool], columns: int, gutter: Spacing) -> Iterator[Region]:
    """Yield the regions of consecutive changed lines."""
    line = 0
    for wanted, run in groupby(changed):
        length = len(list(run))
        if wanted:
            yield Region(gutter.left, gutter.top + line, columns, length)
        line += length
