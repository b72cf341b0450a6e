"""What stored numbers look like, and what they could mean: suggested, never assumed."""

import numpy as np
from numpy.typing import NDArray

from thermfix.frames.frame_file import Stored


def describe_values(values: Stored) -> list[tuple[str, str]]:
    """Return lowest, highest, mean and median of the numbers, and how many are none or at the end of their type."""
    finite = _finite(values)
    missing = values.size - finite.size
    if finite.size == 0:
        return [("values", "none: no pixel holds a number")]
    rows = [
        ("lowest", f"{finite.min():.6g}"),
        ("highest", f"{finite.max():.6g}"),
        ("mean", f"{finite.mean(dtype=np.float64):.6g}"),
        ("median", f"{np.median(finite):.6g}"),
        ("no number", f"{missing} of {values.size} pixels"),
    ]
    if values.dtype.kind in "iu":
        limits = np.iinfo(values.dtype.str)
        rows += [
            ("at the highest number", _at_limit(values, limits.max, "saturated?")),
            ("at the lowest number", _at_limit(values, limits.min, "no signal?")),
        ]
    return rows


def _at_limit(values: Stored, limit: int, meaning: str) -> str:
    count = int((values == limit).sum())
    return f"{count} pixels are {limit}" + (f", {count / values.size:.2%} ({meaning})" if count else "")


def unit_hints(values: Stored) -> list[str]:
    """Return what the numbers could mean, as sentences for a person to judge."""
    finite = _finite(values)
    if finite.size == 0:
        return []
    low, high = (float(v) for v in np.percentile(finite, [1, 99]))
    span = f"most values lie between {low:.5g} and {high:.5g}"
    hints = [f"{span}: they could be {meaning}" for meaning, a, b in _MEANINGS if a <= low and high <= b]
    return hints or [f"{span}: they could be raw counts, which need a calibration"]


_MEANINGS = (
    ('°C (unit = "C")', -60, 200),
    ('K (unit = "K")', 210, 700),
    ('°F (unit = "F")', 32, 300),
    ('hundredths of a kelvin (unit = "K", scale = 0.01)', 21_000, 65_535),
    ('tenths of a kelvin (unit = "K", scale = 0.1)', 2_100, 7_000),
    ('hundredths of a °C (unit = "C", scale = 0.01)', 700, 20_000),
)


def _finite(values: Stored) -> NDArray[np.float64]:
    numbers = values.astype(np.float64)
    return numbers[np.isfinite(numbers)]
