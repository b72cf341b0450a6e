"""Grids of numbers in text: comma, semicolon, tab or blanks between them, decimal point or comma.

Rules: a tab or a semicolon in the first line of numbers is the delimiter, and commas are then decimal;
else, where blanks stand between numbers, they are the delimiter and commas decimal; else the comma is
the delimiter and the point decimal. Lines above the first line of numbers are headers. Empty cells and
the words nan, na and -- are no number.
"""

import re
from pathlib import Path

import numpy as np

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.frame_file import FrameFile, Stored
from thermfix.frames.limits import MOST_LINE_BYTES, MOST_TEXT_BYTES

_CELL = re.compile(r'"?\s*[-+−]?(?:\d+[.,]?\d*|[.,]\d+)(?:[eE][-+]?\d+)?\s*"?$')
_EMPTY = {"", "nan", "na", "n/a", "--", "-"}
_NAMES = {"\t": "tab", ";": "semicolon", ",": "comma", " ": "blank"}
_SEARCHED = 200


class TextFrameFile(FrameFile):
    """A text grid. It is read as a whole when opened, because only then its size is known."""

    def __init__(self, path: Path) -> None:
        if path.stat().st_size > MOST_TEXT_BYTES:
            raise FrameError(f"{printable(path)} is larger than {MOST_TEXT_BYTES // 2**20} MiB of text.")
        lines = _lines(path, _decoded(path))
        self._header, self._delimiter = _first_numbers(path, lines)
        self._decimal_comma = self._delimiter != "," and any("," in line for line in lines[self._header :])
        self._grid = self._parsed(path, lines)
        super().__init__(path, "text", 1, self._grid.shape, self._grid.dtype)

    def _read(self, page: int) -> Stored:
        return self._grid.copy()

    def facts(self) -> list[tuple[str, str]]:
        """Return kind, size, numbers, and how the text was understood."""
        return [
            *super().facts(),
            ("header lines", str(self._header)),
            ("delimiter", _NAMES[self._delimiter]),
            ("decimal mark", "comma" if self._decimal_comma else "point"),
        ]

    def _parsed(self, path: Path, lines: list[str]) -> np.ndarray[tuple[int, ...], np.dtype[np.float64]]:
        body = [(i, line) for i, line in enumerate(lines[self._header :], self._header + 1) if line.strip()]
        mark = self._delimiter
        blank = None if mark == " " else mark
        width = len(_split(body[0][1], mark))
        ragged = any(line.count(mark) != body[0][1].count(mark) for _, line in body) if blank else False
        text = [line.replace(",", ".") if self._decimal_comma else line for _, line in body]
        if not ragged and not any(c in line for line in text for c in '"−'):
            try:
                trimmed = [line.rstrip(mark + " ") if line.rstrip().endswith(mark) else line for line in text]
                grid = np.loadtxt(trimmed, delimiter=blank, ndmin=2, comments=None, dtype=np.float64)
                if grid.shape[1] == width:
                    return grid
            except ValueError:
                pass  # empty cells or words: read cell by cell, which also finds the line to name
        return np.array([_row(path, number, line, mark, width, self._decimal_comma) for number, line in body])


def _decoded(path: Path) -> str:
    data = path.read_bytes()
    encoding = "utf-16" if data.startswith((b"\xff\xfe", b"\xfe\xff")) else "utf-8-sig"
    try:
        return data.decode(encoding)
    except UnicodeDecodeError:
        if encoding == "utf-8-sig" and b"\x00" not in data:
            return data.decode("latin-1")  # a degree sign in a header; the numbers are plain either way
        raise FrameError(
            f"{printable(path)} is neither text nor a frame that can be read.",
            hint="TIFF, PNG, NPY, NPZ and CSV can be read.",
        ) from None


def _lines(path: Path, text: str) -> list[str]:
    lines = text.replace("\r\n", "\n").replace("\r", "\n").split("\n")
    longest = max(map(len, lines))
    if longest > MOST_LINE_BYTES:
        raise FrameError(f"{printable(path)} has a line of {longest:,} characters; {MOST_LINE_BYTES:,} can be read.")
    return lines


def _first_numbers(path: Path, lines: list[str]) -> tuple[int, str]:
    """Return how many header lines there are, and the delimiter."""
    for i, line in enumerate(lines[:_SEARCHED]):
        for mark in ("\t", ";"):
            if mark in line and _is_row(line, mark, 2):
                return i, mark
        if "," in line and _is_row(line, ",", 2) and ", " not in line.strip().replace(",", ", ", 0):
            return i, _comma_or_blank(line)
        if _is_row(line, " ", 2):
            return i, " "
    for i, line in enumerate(lines[:_SEARCHED]):
        if _CELL.match(line.strip()) and line.strip():
            return i, ";"
    raise FrameError(
        f"{printable(path)} holds no line of numbers in its first {_SEARCHED} lines.",
        hint="A text frame is a grid of numbers separated by comma, semicolon, tab or blanks.",
    )


def _comma_or_blank(line: str) -> str:
    """Return the delimiter of a line with commas: digits around one and blanks between numbers make it decimal."""
    return " " if re.search(r"\d,\d+\s+[-+]?\d", line.strip()) else ","


def _split(line: str, mark: str) -> list[str]:
    if mark == " ":
        return line.split()
    cells = line.strip("\n\r ").split(mark) if mark != "\t" else line.strip("\n\r").split(mark)
    return cells[:-1] if len(cells) > 1 and not cells[-1].strip() else cells


def _is_row(line: str, mark: str, least: int) -> bool:
    cells = _split(line, mark)
    numbers = sum(bool(_CELL.match(cell.strip())) for cell in cells)
    known = all(_CELL.match(cell.strip()) or cell.strip().strip('"').lower() in _EMPTY for cell in cells)
    return len(cells) >= least and known and numbers >= 1


def _row(path: Path, number: int, line: str, mark: str, width: int, decimal_comma: bool) -> list[float]:
    cells = _split(line, mark)
    if len(cells) != width:
        raise FrameError(
            f"{printable(path)}, line {number}: {len(cells)} values, but the first line of numbers has {width}.",
            hint="A frame is a full grid; export it again.",
        )
    return [_number(path, number, i, cell, decimal_comma) for i, cell in enumerate(cells, start=1)]


def _number(path: Path, line: int, place: int, cell: str, decimal_comma: bool) -> float:
    word = cell.strip().strip('"').strip().replace("−", "-")
    if word.lower() in _EMPTY:
        return float("nan")
    try:
        return float(word.replace(",", ".") if decimal_comma else word)
    except ValueError:
        raise FrameError(
            f"{printable(path)}, line {line}, value {place}: “{printable(word[:40])}” is not a number."
        ) from None
