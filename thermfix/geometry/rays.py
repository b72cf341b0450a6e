"""Lines of sight of a pinhole camera at the frame's centre: x right, y down, z forward, tan mapping."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
FieldOfView = tuple[float, float]


def focal_px(frame: tuple[int, int], field_of_view_deg: FieldOfView) -> tuple[float, float]:
    """Return the focal lengths across and down, in pixels, of a frame (rows, columns) and its full angles [deg]."""
    rows, columns = frame
    across, down = np.radians(field_of_view_deg) / 2
    return float(columns / 2 / np.tan(across)), float(rows / 2 / np.tan(down))


def rays(frame: tuple[int, int], field_of_view_deg: FieldOfView | None, x: ArrayLike, y: ArrayLike) -> Array:
    """Return unit vectors from the camera through image points.

    Parameters
    ----------
    frame : tuple
        Rows and columns.
    field_of_view_deg : tuple or None
        Full angles across and down. [deg]. None: all rays are parallel to the optical axis.
    x, y : array_like, shape (n,)
        Image points; the centre of pixel (i, j) is (i + 0.5, j + 0.5). [px].

    Returns
    -------
    ndarray, shape (n, 3)
        Unit vectors.
    """
    px, py = np.broadcast_arrays(np.asarray(x, dtype=np.float64), np.asarray(y, dtype=np.float64))
    if field_of_view_deg is None:
        return np.stack([np.zeros(px.shape), np.zeros(px.shape), np.ones(px.shape)], axis=-1)
    across, down = _slopes(frame, field_of_view_deg, px, py)
    forward = 1 / np.sqrt(1 + across**2 + down**2)
    return np.stack([across * forward, down * forward, forward], axis=-1)


def pixel_solid_angle_sr(frame: tuple[int, int], field_of_view_deg: FieldOfView, x: ArrayLike, y: ArrayLike) -> Array:
    r"""Return the solid angle of pixels centred at image points. [sr], shape (n,).

    Notes
    -----
    .. math:: \Omega = \frac{\cos^3\alpha}{f_x f_y}

    with α the angle from the optical axis: exact to second order in the pixel's size.
    """
    fx, fy = focal_px(frame, field_of_view_deg)
    across, down = _slopes(frame, field_of_view_deg, np.asarray(x, dtype=np.float64), np.asarray(y, dtype=np.float64))
    square = 1 + across**2 + down**2
    return np.asarray(1 / (square * np.sqrt(square) * (fx * fy)))


def _slopes(frame: tuple[int, int], field_of_view_deg: FieldOfView, x: Array, y: Array) -> tuple[Array, Array]:
    """Return how far a line of sight goes right and down for one step forward."""
    fx, fy = focal_px(frame, field_of_view_deg)
    return (x - frame[1] / 2) * (1 / fx), (y - frame[0] / 2) * (1 / fy)
