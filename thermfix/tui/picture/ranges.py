"""The range a colour scale spans, and the numbers to write beside it."""

import math
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError, OutOfRange

MOST_SORTED = 1_000_000
"""Values that are sorted for a percentile; of a larger frame, every n-th in both directions."""


class RangeMode(StrEnum):
    """How the ends of the colour scale are chosen."""

    FULL = "full"
    PERCENTILE = "percentile"
    FIXED = "fixed"
    LOCKED = "locked"


@dataclass(frozen=True, slots=True)
class ColourRange:
    """Ends of the colour scale, in the unit of the values shown; low < high."""

    low: float
    high: float


@dataclass(frozen=True, slots=True, kw_only=True)
class RangeChoice:
    """A mode with its numbers: percentiles for one, the ends for fixed and locked.

    Locked is what fixed would be with the numbers of another frame: the same colours then mean the
    same temperatures from frame to frame.
    """

    mode: RangeMode = RangeMode.FULL
    lower_pct: float = 1.0
    upper_pct: float = 99.0
    ends: ColourRange | None = None

    def __post_init__(self) -> None:
        if not 0 <= self.lower_pct < self.upper_pct <= 100:
            raise InputError(
                f"the percentiles are {self.lower_pct:g} and {self.upper_pct:g}; they must rise within 0 to 100.",
                hint="1 and 99 leave out a few dead or saturated pixels.",
            )
        if self.mode in (RangeMode.FIXED, RangeMode.LOCKED) and self.ends is None:
            raise InputError(f"a {self.mode} range needs its two ends.", hint="Give the coldest and the hottest value.")

    @property
    def label(self) -> str:
        """The mode in a few characters, for the foot of the colour scale."""
        if self.mode is RangeMode.PERCENTILE:
            return f"{self.lower_pct:g}–{self.upper_pct:g} %"
        return str(self.mode)


def fixed_range(low: float, high: float) -> RangeChoice:
    """Return the choice of a fixed range.

    Raises
    ------
    OutOfRange, InputError
        If an end is not finite, or low is not below high.
    """
    for name, end in (("the cold end of the colour scale", low), ("the hot end of the colour scale", high)):
        if not math.isfinite(end):
            raise OutOfRange(f"{name} is {end}; it must be a finite number.", hint="Give a temperature.")
    if low >= high:
        raise InputError(
            f"the colour scale would run from {low:g} to {high:g}; its cold end must lie below its hot end.",
            hint="Swap the two numbers, or move one of them.",
        )
    return RangeChoice(mode=RangeMode.FIXED, ends=ColourRange(low, high))


def locked_range(shown: ColourRange) -> RangeChoice:
    """Return the choice that keeps the range now shown for the frames to come."""
    return RangeChoice(mode=RangeMode.LOCKED, ends=shown)


def colour_range(values: NDArray[np.floating], choice: RangeChoice) -> ColourRange | None:
    """Return the ends of the colour scale for a frame.

    Parameters
    ----------
    values : ndarray, shape (rows, cols)
        What the picture shows; values that are not finite do not count.
    choice : RangeChoice
        Mode and its numbers.

    Returns
    -------
    ColourRange or None
        None where the frame holds no value and the choice gives no ends. A frame of one single value
        gets half a unit on each side of it.
    """
    if choice.ends is not None and choice.mode in (RangeMode.FIXED, RangeMode.LOCKED):
        return choice.ends
    if choice.mode is RangeMode.PERCENTILE and values.size > MOST_SORTED:
        stride = math.ceil(math.sqrt(values.size / MOST_SORTED))
        thinned = values[::stride, ::stride]
        values = thinned if np.isfinite(thinned).any() else values
    finite = values[np.isfinite(values)]
    if not finite.size:
        return None
    if choice.mode is RangeMode.PERCENTILE:
        low, high = (float(end) for end in np.percentile(finite, (choice.lower_pct, choice.upper_pct)))
    else:
        low, high = float(finite.min()), float(finite.max())
    return _opened(low, high)


def _opened(low: float, high: float) -> ColourRange:
    """Return a range of some width, however large the numbers are."""
    half = max(0.5, 4 * math.ulp(low))
    return ColourRange(low, high) if low < high else ColourRange(low - half, low + half)


def ticks(ends: ColourRange, most: int) -> list[float]:
    """Return round numbers of a range, at most ``most``, 1, 2 or 5 times a power of ten apart."""
    span = ends.high - ends.low
    if most < 1 or not (0 < span < math.inf):
        return []
    power = math.floor(math.log10(span / most))
    for step in (factor * 10.0 ** (power + more) for more in (0, 1, 2) for factor in (1, 2, 5)):
        first, last = math.ceil(ends.low / step - 1e-9), math.floor(ends.high / step + 1e-9)
        if last - first + 1 <= most:
            return [index * step for index in range(first, last + 1)]
    return []


def decimals_for(ends: ColourRange) -> int:
    """Return how many decimals tell the colours of a range apart, 0 to 4."""
    span = ends.high - ends.low
    return min(4, max(0, math.ceil(1.99 - math.log10(span)))) if 0 < span < math.inf else 0
