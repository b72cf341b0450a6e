"""Size of what pixels cover, in metres."""

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def extent_m(points_m: Array, footprint_m2: Array) -> tuple[float, float]:
    """Return length and width of a set of surface points: the sides of the smallest box around them.

    Parameters
    ----------
    points_m : ndarray, shape (n, 3), n ≥ 1
        Where each pixel's line of sight meets the surface. [m].
    footprint_m2 : ndarray, shape (n,)
        Area of surface in each pixel, whose side is added once to each extent. [m²].

    Returns
    -------
    tuple of float
        Length and width. [m], length ≥ width. Good to about the side of one pixel's footprint.

    Notes
    -----
    The points are laid on the plane of their two largest spreads; the box of least area is found by turning
    it in steps of 1°, then of 0.02° about the best. The axes of largest spread alone would not do: those of a
    square point anywhere, its diagonal included.
    """
    side = float(np.sqrt(footprint_m2.mean()))
    centred = points_m - points_m.mean(axis=0)
    axes = np.linalg.eigh(centred.T @ centred)[1][:, :0:-1]
    flat = centred @ axes
    best = min(np.arange(0.0, 90.0), key=lambda turn: _area(_box(flat, turn, side)))
    best = min(best + np.arange(-1.0, 1.001, 0.02), key=lambda turn: _area(_box(flat, turn, side)))
    sides = _box(flat, best, side)
    return max(sides), min(sides)


def _box(flat: Array, turn_deg: float, side: float) -> tuple[float, float]:
    a = np.radians(turn_deg)
    along, across = (flat @ way for way in (np.array([np.cos(a), np.sin(a)]), np.array([-np.sin(a), np.cos(a)])))
    return float(np.ptp(along)) + side, float(np.ptp(across)) + side


def _area(sides: tuple[float, float]) -> float:
    return sides[0] * sides[1]
