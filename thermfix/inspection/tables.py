"""Reads the small CSV tables that an inspection names: responses, blackbody shots, optical constants, spectra."""

import hashlib
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import Fault, InspectionError
from thermfix.files import printable
from thermfix.model import Table
from thermfix.quantities import QUANTITIES, ZERO_C_K

MOST_BYTES = 16 * 2**20
"""Largest table file that is read. [bytes]."""

_MOST_FAULTS = 20
_NUMBER = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?", re.ASCII)


@dataclass(frozen=True, slots=True)
class _Limits:
    """What one column may hold, both ends included; ``some`` = not 0 everywhere."""

    low: float
    high: float
    some: bool = False


_TRUE_C = QUANTITIES["true_c"]
_LIMITS = {
    "wavelength_um": _Limits(1e-3, 1e6),
    "response": _Limits(0, 1, some=True),
    "temperature_c": _Limits(_TRUE_C.low, _TRUE_C.high),
    "counts": _Limits(-1e15, 1e15),
    "n": _Limits(1e-6, 1e6),
    "k": _Limits(0, 1e6),
    "emissivity": _Limits(0, 1, some=True),
}


def read_table(
    path: Path, columns: Sequence[str], *, rising: Sequence[str] = ("wavelength_um",), source: str = ""
) -> Table:
    """Return the columns of a CSV file that has exactly these.

    Parameters
    ----------
    path : Path
        File with a header of the column names, numbers with a decimal point, comment lines after ``#``.
    columns : sequence of str
        Names of the header, in order. ``temperature_c`` [°C] is returned as ``temperature_k`` [K].
    rising : sequence of str
        Those of them whose numbers must rise from row to row.
    source : str
        What the table calls its origin; the file's name if empty.

    Returns
    -------
    Table
        Read-only float64 columns of at least two rows, and the file's SHA-256.

    Raises
    ------
    InspectionError
        With one fault per wrong line (the first 20), if anything in the file is not as described, or
        it is larger than `MOST_BYTES`.
    """
    data = _bytes_of(path)
    faults: list[Fault] = []
    rows = list(_rows(_text(data, path), columns, faults))
    values = np.array([row for _, row in rows], dtype=np.float64).reshape(len(rows), len(columns)).T.copy()
    if not faults:
        faults += _wrong_columns(values, [line for line, _ in rows], columns, rising)
    if faults:
        more = len(faults) - _MOST_FAULTS
        shown = faults[:_MOST_FAULTS] + ([Fault(0, "", f"and {more} more lines are wrong.")] if more > 0 else [])
        raise InspectionError(f"The table {printable(path.name)} cannot be used:", faults=tuple(shown))
    named = dict(zip(columns, values, strict=True))
    if "temperature_c" in named:
        named = {name.replace("temperature_c", "temperature_k"): column for name, column in named.items()}
        named["temperature_k"] = named["temperature_k"] + ZERO_C_K
    for column in named.values():
        column.setflags(write=False)
    return Table(columns=named, source=source or path.name, sha256=hashlib.sha256(data).hexdigest())


def _bytes_of(path: Path) -> bytes:
    try:
        if not path.is_file():
            raise _stopped(path, "there is no such file")
        if path.stat().st_size > MOST_BYTES:
            raise _stopped(path, f"it is larger than {MOST_BYTES // 2**20} MiB, more than a table can need")
        return path.read_bytes()
    except OSError as error:
        raise _stopped(path, f"it cannot be read ({error.strerror})") from error


def _text(data: bytes, path: Path) -> str:
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise _stopped(path, "the text is not UTF-8", data.count(b"\n", 0, error.start) + 1) from error


def _stopped(path: Path, why: str, line: int = 0) -> InspectionError:
    return InspectionError(f"The table {printable(path.name)} cannot be used:", faults=(Fault(line, "", f"{why}."),))


def _rows(text: str, columns: Sequence[str], faults: list[Fault]) -> Iterator[tuple[int, list[float]]]:
    """Yield line and numbers of every good row; note what is wrong with the others."""
    header = ",".join(columns)
    met_header, count = False, 0
    for line, content in enumerate(text.replace("\r\n", "\n").split("\n"), start=1):
        cells = [cell.strip() for cell in content.split(",")]
        if not content.strip() or content.lstrip().startswith("#"):
            continue
        if not met_header:
            met_header = True
            if cells != list(columns):
                faults.append(Fault(line, "", f"the header must be {header}, not {printable(content.strip()[:80])}."))
                return
            continue
        count += 1
        if wrong := _wrong_row(cells, columns):
            faults.append(Fault(line, "", wrong))
        else:
            yield line, [float(cell) for cell in cells]
    if not met_header:
        faults.append(Fault(0, "", f"it holds no table; its header must be {header}."))
    elif count < 2:
        faults.append(Fault(0, "", f"it needs at least 2 rows of numbers, not {count}."))


def _wrong_row(cells: list[str], columns: Sequence[str]) -> str:
    """Return what is wrong with one row, or nothing."""
    if len(cells) != len(columns):
        hint = " (decimal points, not commas)" if len(cells) == 2 * len(columns) else ""
        return f"needs {len(columns)} numbers, not {len(cells)}{hint}."
    for name, cell in zip(columns, cells, strict=True):
        limits = _LIMITS[name]
        if not _NUMBER.fullmatch(cell):
            return f"{name} must be a number with a decimal point, not “{printable(cell[:40])}”."
        if not limits.low <= float(cell) <= limits.high:
            return f"{name} is {float(cell):g}; it must lie in {limits.low:g} to {limits.high:g}."
    return ""


def _wrong_columns(
    values: NDArray[np.float64], lines: list[int], columns: Sequence[str], rising: Sequence[str]
) -> Iterator[Fault]:
    """Yield what is wrong with columns of numbers that are right one by one."""
    for name, column in zip(columns, values, strict=True):
        if _LIMITS[name].some and not column.any():
            yield Fault(0, "", f"{name} is 0 in every row.")
        if name in rising:
            for place in np.flatnonzero(np.diff(column) <= 0):
                before, after = column[place], column[place + 1]
                yield Fault(lines[place + 1], "", f"{name} must rise from row to row; {after:g} follows {before:g}.")
