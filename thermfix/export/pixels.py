"""<frame>.pixels.csv: every pixel of every region, one to a row."""

from collections.abc import Sequence
from pathlib import Path

import numpy as np

from thermfix.correction.results import RegionPixels
from thermfix.export.columns import PIXELS, header
from thermfix.export.digits import BLOCK, Words, check_decimals, number_column, text_column
from thermfix.export.quoting import quoted
from thermfix.files import atomic_write
from thermfix.quantities import ZERO_C_K

_U_DECIMALS = next(column.decimals or 0 for column in PIXELS if column.name == "u_k")


def write_pixels(path: Path, pixels: Sequence[RegionPixels], *, decimals: int = 2, force: bool = False) -> None:
    """Write the pixels of the regions as a table of ``columns.PIXELS``.

    Parameters
    ----------
    path : Path
        File to write; it appears complete or not at all.
    pixels : sequence of RegionPixels
        One per region, in the order to write them. A pixel in two regions gets two rows.
    decimals : int
        Digits after the point of the two temperatures, 0 to 6; the uncertainty has three.
    force : bool
        Overwrite the file if it exists.

    Raises
    ------
    InputError
        If a value is infinite, a name holds a NUL, the file exists and ``force`` is False, or it
        cannot be written.
    OutOfRange
        If ``decimals`` lies outside 0 to 6.
    """
    check_decimals(decimals)
    with atomic_write(path, force=force) as stream:
        stream.write(header(PIXELS))
        for region in pixels:
            name = text_column([quoted(region.region)], b",")
            for start in range(0, len(region.x), BLOCK):
                stream.write(_rows(region, slice(start, start + BLOCK), name, decimals))


def _rows(region: RegionPixels, part: slice, name: Words, decimals: int) -> bytearray:
    """Return the rows of some pixels of a region; ``name`` is its name as one row of words."""
    columns = (
        number_column(region.x[part].astype(np.float64), 0, b","),
        number_column(region.y[part].astype(np.float64), 0, b","),
        name,
        number_column(region.apparent_k[part].astype(np.float64) - ZERO_C_K, decimals, b","),
        number_column(region.surface_k[part].astype(np.float64) - ZERO_C_K, decimals, b","),
        number_column(region.u_k[part].astype(np.float64), _U_DECIMALS, b"\n"),
    )
    width = sum(column.shape[1] for column in columns)
    # The columns go straight into the buffer whose NULs are dropped: one copy less of all the text.
    buffer = bytearray(8 * width * len(columns[0]))
    words = np.frombuffer(buffer, np.uint64).reshape(-1, width)
    left = 0
    for column in columns:
        words[:, left : left + column.shape[1]] = column
        left += column.shape[1]
    return buffer.translate(None, b"\0")
