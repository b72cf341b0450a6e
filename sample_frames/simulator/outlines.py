"""Which points of the image an outline holds. Pixels: x right, y down, pixel (i, j) covers [i, i+1) × [j, j+1)."""

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from simulator.radiation import Array

Mask = NDArray[np.bool_]
Outline = Callable[[Array, Array], Mask]
"""Coordinates x, y of one shape to whether each point lies inside."""


def everywhere(x: Array, y: Array) -> Mask:
    """Hold every point."""
    return np.ones(np.broadcast_shapes(x.shape, y.shape), dtype=np.bool_)


def box(left: float, top: float, right: float, bottom: float) -> Outline:
    """Return an axis-parallel rectangle."""
    return lambda x, y: (x >= left) & (x < right) & (y >= top) & (y < bottom)


def oval(cx: float, cy: float, rx: float, ry: float) -> Outline:
    """Return an ellipse of centre and half axes."""
    return lambda x, y: ((x - cx) / rx) ** 2 + ((y - cy) / ry) ** 2 < 1


def disc(cx: float, cy: float, radius: float) -> Outline:
    """Return a circle."""
    return oval(cx, cy, radius, radius)


def sector(cx: float, cy: float, inner: float, outer: float) -> Outline:
    """Return the quarter of a ring to the upper right of its centre: an elbow."""

    def inside(x: Array, y: Array) -> Mask:
        square = (x - cx) ** 2 + (y - cy) ** 2
        return (square >= inner**2) & (square < outer**2) & (x >= cx) & (y < cy)

    return inside


def polygon(corners: Sequence[Sequence[float]]) -> Outline:
    """Return a closed polygon (even-odd rule)."""

    def inside(x: Array, y: Array) -> Mask:
        odd = np.zeros(np.broadcast_shapes(x.shape, y.shape), dtype=np.bool_)
        for (xa, ya), (xb, yb) in zip(corners, [*corners[1:], corners[0]], strict=True):
            if ya != yb:
                odd ^= ((ya <= y) != (yb <= y)) & (x < xa + (y - ya) / (yb - ya) * (xb - xa))
        return odd

    return inside


def from_file(shape: dict[str, Any]) -> Outline:
    """Return the outline of a ``shape = { … }`` of an inspection file."""
    ((kind, values),) = shape.items()
    return polygon(values) if kind == "polygon" else {"rectangle": box, "ellipse": oval}[kind](*values)
