"""Reasons to distrust a reading, or to have none: one table of codes, rules, plain sentences and what to do."""

from dataclasses import dataclass
from enum import IntEnum


class Reason(IntEnum):
    """Why a pixel has no surface temperature (0 = it has one)."""

    READ = 0
    NO_VALUE = 1
    OUTSIDE_CALIBRATION = 2
    NO_EMISSION = 3
    OUTSIDE_RANGE = 4
    TOO_OBLIQUE = 5
    TOO_SMALL = 6


@dataclass(frozen=True, slots=True)
class Caution:
    """A coded reason to distrust a reading: what was found and what to do about it."""

    code: str
    sentence: str
    advice: str
