"""Shapes of regions, in pixels: x right, y down, pixel (i, j) covers [i, i+1) × [j, j+1)."""

from dataclasses import dataclass

XY = tuple[float, float]
"""A point of the image. [px]"""


@dataclass(frozen=True, slots=True)
class Rectangle:
    """Axis-parallel rectangle between two corners, x0 < x1 and y0 < y1."""

    x0: float
    y0: float
    x1: float
    y1: float


@dataclass(frozen=True, slots=True)
class Ellipse:
    """Axis-parallel ellipse: centre and half axes."""

    cx: float
    cy: float
    rx: float
    ry: float


@dataclass(frozen=True, slots=True)
class Polygon:
    """Closed polygon of three or more corners (even-odd rule)."""

    corners: tuple[XY, ...]


@dataclass(frozen=True, slots=True)
class Line:
    """Open line through two or more points: one pixel per step along its longer axis."""

    points: tuple[XY, ...]


@dataclass(frozen=True, slots=True)
class Point:
    """The one pixel that holds the point."""

    x: float
    y: float


Shape = Rectangle | Ellipse | Polygon | Line | Point
