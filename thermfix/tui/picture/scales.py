"""Colour scales: published, perceptually uniform, 256 colours each, and the 64 levels a picture uses of one.

The colours stand in ``scales.csv`` as they come from the cmap library (a test holds the two together),
because importing that library takes longer than everything else the first picture needs.
"""

from functools import cache
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError

RGB = tuple[int, int, int]
"""A colour: red, green, blue, 0–255 each."""

SCALE_NAMES = ("inferno", "magma", "viridis", "cividis", "batlow", "grey")
"""The scales by their published names (grey is uniform in lightness)."""

DEFAULT_SCALE = "inferno"
LEVELS = 64
"""Colours a picture shows of a scale: more cannot be told apart, and each pair of them is prebuilt."""

NO_LEVEL = LEVELS
"""The level of a value that is not a number."""

_SELECTION: dict[str, RGB] = {
    "inferno": (0, 230, 255),
    "magma": (0, 230, 255),
    "viridis": (255, 70, 200),
    "cividis": (255, 70, 200),
    "batlow": (0, 230, 255),
    "grey": (255, 190, 0),
}


@cache
def _table() -> dict[str, NDArray[np.uint8]]:
    """Return all scales of ``scales.csv``, each of shape (256, 3)."""
    text = Path(__file__).with_name("scales.csv").read_text(encoding="utf-8")
    header, *rows = [line.split(",") for line in text.splitlines() if not line.startswith("#")]
    colours = np.array([[list(bytes.fromhex(cell)) for cell in row] for row in rows], np.uint8)
    return {name: colours[:, column] for column, name in enumerate(header)}


def scale_colours(name: str) -> NDArray[np.uint8]:
    """Return the 256 colours of a scale, cold to hot.

    Parameters
    ----------
    name : str
        One of SCALE_NAMES.

    Returns
    -------
    ndarray of uint8, shape (256, 3)
        Red, green, blue.

    Raises
    ------
    InputError
        If there is no scale of that name.
    """
    if name not in SCALE_NAMES:
        raise InputError(f"there is no colour scale {name!r}.", hint=f"Choose one of {', '.join(SCALE_NAMES)}.")
    return _table()[name]


def level_colours(name: str) -> NDArray[np.uint8]:
    """Return the LEVELS colours of a scale that a picture uses, evenly spaced, both ends kept; shape (LEVELS, 3)."""
    colours: NDArray[np.uint8] = scale_colours(name)[np.linspace(0, 255, LEVELS).round().astype(int)]
    return colours


def selection_colour(name: str) -> RGB:
    """Return the colour in which the selected region stands out from a scale."""
    scale_colours(name)
    return _SELECTION[name]


def to_levels(values: NDArray[np.floating], low: float, high: float) -> NDArray[np.uint8]:
    """Return the level of each value: LEVELS equal steps from low to high, the ends taking what lies beyond.

    Parameters
    ----------
    values : ndarray, shape (...)
        In the unit of the two limits; NaN for no value.
    low, high : float
        Ends of the colour scale. Where they are equal, values on them take the middle.

    Returns
    -------
    ndarray of uint8, shape (...)
        0 to LEVELS − 1; NO_LEVEL where the value is NaN.
    """
    with np.errstate(invalid="ignore", over="ignore", divide="ignore"):
        if high > low:
            # Half of each first: the difference of two huge numbers of opposite sign would overflow.
            steps = (values * 0.5 - low * 0.5) * (LEVELS / (high * 0.5 - low * 0.5))
        else:
            steps = np.sign(values - low) * LEVELS + LEVELS // 2
        np.clip(steps, 0, LEVELS - 1, out=steps)
        missing = np.isnan(steps)
        steps[missing] = NO_LEVEL
        levels: NDArray[np.uint8] = steps.astype(np.uint8)
        return levels
