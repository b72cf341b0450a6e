"""<frame>.surface.tif: surface temperature and its uncertainty as two pages of float32."""

import io
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError
from thermfix.files import atomic_write
from thermfix.quantities import ZERO_C_K

_SURFACE = "Surface temperature in degrees Celsius. Not a number where there is no reading."
_UNCERTAINTY = "Standard uncertainty of the surface temperature in kelvin. Not a number where it is not known."


def write_surface_tiff(
    path: Path, surface_k: NDArray[np.floating], u_k: NDArray[np.floating] | None, *, force: bool = False
) -> None:
    """Write a TIFF: page 0 surface temperature in °C, page 1 its standard uncertainty in kelvin.

    Parameters
    ----------
    path : Path
        File to write; it appears complete or not at all.
    surface_k : ndarray, shape (rows, columns)
        Surface temperature. [K], NaN = no reading.
    u_k : ndarray, same shape, or None
        Standard uncertainty. [K]; None gives a page of NaN.
    force : bool
        Overwrite the file if it exists.

    Raises
    ------
    InputError
        If the shapes do not fit, the file exists and ``force`` is False, or it cannot be written.

    Notes
    -----
    float32, not compressed (any reader opens it), the page's meaning in its ImageDescription. The same
    arrays give the same bytes.
    """
    if surface_k.ndim != 2 or not surface_k.size or (u_k is not None and u_k.shape != surface_k.shape):
        raise InputError(
            f"A page of a TIFF has rows and columns, not the shape {surface_k.shape}.",
            hint="Write one page, with an uncertainty of the same shape.",
        )
    import tifffile  # takes half a second to load, and most runs write no TIFF

    celsius = (surface_k.astype(np.float64) - ZERO_C_K).astype(np.float32)
    uncertainty = np.full(surface_k.shape, np.nan, np.float32) if u_k is None else u_k.astype(np.float32)
    # In memory first: the library seeks and reads back, which the stream to be replaced does not allow.
    whole = io.BytesIO()
    with tifffile.TiffWriter(whole) as tiff:
        for page, words in ((celsius, _SURFACE), (uncertainty, _UNCERTAINTY)):
            tiff.write(page, photometric="minisblack", metadata=None, description=words, software="thermfix")
    with atomic_write(path, force=force) as stream:
        stream.write(whole.getbuffer())
