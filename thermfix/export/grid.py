"""<frame>.surface_c.csv: the grid of surface temperatures."""

from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError
from thermfix.export.digits import BLOCK, check_decimals, number_column
from thermfix.files import atomic_write
from thermfix.quantities import ZERO_C_K


def write_grid(path: Path, surface_k: NDArray[np.floating], *, decimals: int = 2, force: bool = False) -> None:
    """Write surface temperatures in °C as a bare grid.

    Parameters
    ----------
    path : Path
        File to write; it appears complete or not at all.
    surface_k : ndarray, shape (rows, columns)
        Surface temperature. [K], NaN = no reading.
    decimals : int
        Digits after the point, 0 to 6.
    force : bool
        Overwrite the file if it exists.

    Raises
    ------
    InputError
        If the array is not two-dimensional or holds an infinite value, if the file exists and
        ``force`` is False, or if it cannot be written.
    OutOfRange
        If ``decimals`` lies outside 0 to 6.

    Notes
    -----
    No header, commas, one line per row ended by a line feed, empty where there is no reading. Each
    number is that of ``"%.2f"`` applied to ``float64(kelvin) − 273.15``, but for −0.00, written 0.00.
    """
    check_decimals(decimals)
    if surface_k.ndim != 2:
        raise InputError(f"A grid has rows and columns, not the shape {surface_k.shape}.", hint="Write one page.")
    rows, columns = surface_k.shape
    step = max(1, BLOCK // max(1, columns))
    with atomic_write(path, force=force) as stream:
        for start in range(0, rows if columns else 0, step):
            celsius = surface_k[start : start + step].astype(np.float64) - ZERO_C_K
            words = number_column(celsius.ravel(), decimals, b",")
            words.view(np.uint8).reshape(len(celsius), -1)[:, -1] = ord("\n")
            stream.write(words.tobytes().translate(None, b"\0"))
