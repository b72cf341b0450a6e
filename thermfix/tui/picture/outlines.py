"""Outlines of the shapes of an inspection, apart from the picture so that its first paint waits for no model."""

import math

from thermfix.model.shapes import Ellipse, Line, Point, Polygon, Rectangle, Shape
from thermfix.tui.picture.overlays import Outline, Role

ELLIPSE_CORNERS = 72
"""Corners of the polygon that stands for an ellipse: at the largest zoom, half a dot off at most for 100 px across."""


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
