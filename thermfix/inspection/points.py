"""How places and lengths in the image are read. Pixels: x right, y down."""

from thermfix.geometry.masks import FARTHEST_PX
from thermfix.inspection.refusing import kind_of, refuse
from thermfix.model import XY


def xy(value: object, *at: str | int) -> XY:
    """Return one point of the image. [px]."""
    if not isinstance(value, list) or len(value) != 2:
        raise refuse("must be a point [x, y].", *at)
    return coordinate(value[0], *at, 0), coordinate(value[1], *at, 1)


def coordinate(value: object, *at: str | int) -> float:
    """Return one coordinate or length in the image. [px]."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise refuse(f"must be a number of pixels, not {kind_of(value)}.", *at)
    if not -FARTHEST_PX <= value <= FARTHEST_PX:
        raise refuse(f"must lie in −{FARTHEST_PX:g} to {FARTHEST_PX:g} pixels.", *at)
    return float(value)


def points(value: object, fewest: int, what: str) -> tuple[XY, ...]:
    """Return a list of points, at least so many."""
    if not isinstance(value, list):
        raise refuse(f"must be a list of points [[x, y], …], not {kind_of(value)}.")
    found = tuple(xy(one, place) for place, one in enumerate(value))
    if len(found) < fewest:
        raise refuse(f"needs {fewest} {what} or more, not {len(found)}.")
    return found
