"""What a picture asks of its owner. Positions are in pixels of the image, x right and y down."""

from typing import TYPE_CHECKING

from textual.message import Message

from thermfix.tui.picture.resample import Viewport

if TYPE_CHECKING:
    from thermfix.tui.picture.picture import Picture


class PictureMessage(Message):
    """Base of all of them; ``control`` is the picture."""

    def __init__(self, picture: "Picture") -> None:
        super().__init__()
        self.picture = picture

    @property
    def control(self) -> "Picture":
        """The picture that asks."""
        return self.picture


class PointerMoved(PictureMessage):
    """The pointer should be on pixel (x, y)."""

    def __init__(self, picture: "Picture", x: int, y: int) -> None:
        super().__init__(picture)
        self.x, self.y = x, y

    def can_replace(self, message: Message) -> bool:
        """Return whether an older message may be dropped for this one."""
        return isinstance(message, PointerMoved) and message.picture is self.picture


class ViewportAsked(PictureMessage):
    """Another part should be shown; None is the whole frame."""

    def __init__(self, picture: "Picture", viewport: Viewport | None) -> None:
        super().__init__(picture)
        self.viewport = viewport

    def can_replace(self, message: Message) -> bool:
        """Return whether an older message may be dropped for this one."""
        return isinstance(message, ViewportAsked) and message.picture is self.picture


class Clicked(PictureMessage):
    """A point was pressed, by the mouse or by Enter on the pointer; ``times`` is 2 for a double click."""

    def __init__(self, picture: "Picture", x: float, y: float, times: int = 1, shift: bool = False) -> None:
        super().__init__(picture)
        self.x, self.y, self.times, self.shift = x, y, times, shift


class Dragged(PictureMessage):
    """The mouse moved from (x0, y0) to (x, y) with its left button down; more is to come."""

    def __init__(self, picture: "Picture", x0: float, y0: float, x: float, y: float, shift: bool = False) -> None:
        super().__init__(picture)
        self.x0, self.y0, self.x, self.y, self.shift = x0, y0, x, y, shift


class DragStarted(Dragged):
    """The first of them."""


class DragEnded(Dragged):
    """The button was let go."""
