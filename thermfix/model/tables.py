"""A small table read from a file that an inspection or a material names."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Table:
    """Named float64 columns of equal length, and where they came from.

    ``source`` is the path relative to the inspection (or the library's entry); ``sha256`` is of the file.
    """

    columns: dict[str, NDArray[np.float64]]
    source: str
    sha256: str = ""
