"""A region grown from one pixel by similar values, and the outline of a set of pixels."""

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError, OutOfRange

Mask = NDArray[np.bool_]
Corner = tuple[int, int]

# Sides of pixels walked with the inside on the right (y down): right, down, left, up; the quarter turns are ±1.
_STEPS = ((1, 0), (0, 1), (-1, 0), (0, -1))


def grow(values: NDArray[np.floating], seed_x: int, seed_y: int, tolerance: float) -> Mask:
    """Return the pixels that hang together with a seed, side by side, and differ from its value by no more than this.

    Parameters
    ----------
    values : ndarray, shape (rows, columns)
        Temperatures or any other values; pixels without a number are never in.
    seed_x, seed_y : int
        Pixel to start from. [px], inside the frame.
    tolerance : float
        Largest difference from the seed's value, in the unit of ``values``. ≥ 0.

    Returns
    -------
    ndarray of bool, shape (rows, columns)
        The pixels, the seed among them.

    Raises
    ------
    InputError
        If the seed lies outside the frame or holds no number, or the tolerance is not 0 or more.
    """
    rows, columns = values.shape
    if not (0 <= seed_x < columns and 0 <= seed_y < rows):
        raise InputError(f"The pixel ({seed_x}, {seed_y}) lies outside the frame of {columns} × {rows} pixels.")
    if not 0 <= tolerance < np.inf:
        raise OutOfRange.of("tolerance", tolerance, 0, np.inf, "unit of the frame")
    seed = float(values[seed_y, seed_x])
    if not np.isfinite(seed):
        raise InputError(f"The pixel ({seed_x}, {seed_y}) holds no number.", hint="Start from a pixel with a reading.")
    from scipy.ndimage import label  # costs start-up time; only growing needs it

    with np.errstate(invalid="ignore"):
        similar = np.abs(values.astype(np.float64) - seed) <= tolerance
    parts, _ = label(similar)
    return np.asarray(parts == parts[seed_y, seed_x])


def outline(mask: Mask) -> list[Corner]:
    """Return the corners of the outer edge of a set of pixels, clockwise as seen (y down) from its top left.

    Parameters
    ----------
    mask : ndarray of bool, shape (rows, columns)
        Pixels of one piece, side by side. Of several pieces the one with the first pixel (row by row) is taken.

    Returns
    -------
    list of (x, y)
        Corners of the pixels' own sides where the edge turns; holes are left out. A polygon through them
        holds exactly the piece's pixels and those of its holes.

    Raises
    ------
    InputError
        If no pixel is set.
    """
    rows, columns = np.nonzero(mask)
    if rows.size == 0:
        raise InputError("There is no pixel to draw an outline around.", hint="Choose a region with pixels.")
    # A rim of unset pixels saves asking for the frame's edges.
    inside = np.pad(np.asarray(mask, dtype=bool), 1).tolist()
    start = (int(columns[0]), int(rows[0]))
    (x, y), heading = start, 0
    corners: list[Corner] = []
    while True:
        turn = _turn(inside, x, y, heading)
        if turn or not corners:
            corners.append((x, y))
        heading = (heading + turn) % 4
        x, y = x + _STEPS[heading][0], y + _STEPS[heading][1]
        if (x, y) == start:
            return corners


def _turn(inside: list[list[bool]], x: int, y: int, heading: int) -> int:
    """Return −1 (left), 0 or 1 (right) at a corner, keeping the inside on the right.

    Pixels that touch by a corner alone count as apart, so the walk turns right there.
    """
    dx, dy = _STEPS[heading]
    # Of the two pixels ahead: their places from the corner, in the padded frame.
    ahead_right = inside[y + (dy + dx + 1) // 2][x + (dx - dy + 1) // 2]
    ahead_left = inside[y + (dy - dx + 1) // 2][x + (dx + dy + 1) // 2]
    if not ahead_right:
        return 1
    return -1 if ahead_left else 0
