"""Size of what pixels cover, in metres."""

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def extent_m(points_m: Array, footprint_m2: Array) -> tuple[float, float]:
    """Return length and width of a set of surface points: their extents along and across their longest axis.

    Parameters
    ----------
    points_m : ndarray, shape (n, 3)
        Where each pixel's line of sight meets the surface. [m].
    footprint_m2 : ndarray, shape (n,)
        Area of surface in each pixel, whose side is added once to each extent. [m²].

    Returns
    -------
    tuple of float
        Length and width. [m], length ≥ width.
    """
    side = float(np.sqrt(footprint_m2.mean()))
    centred = points_m - points_m.mean(axis=0)
    axes = np.linalg.svd(centred, full_matrices=False)[2][:2] if len(points_m) > 2 else np.eye(3)[:2]
    across = [float(np.ptp(centred @ axis)) + side for axis in axes]
    return max(across), min(across)
