"""Grids of numbers in text; `thermfix.frames.text_layout` has the rules by which they are understood."""

from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames.frame_file import FrameFile, Stored
from thermfix.frames.limits import MOST_LINE_BYTES, MOST_PIXELS, MOST_TEXT_BYTES
from thermfix.frames.text_layout import EMPTY, NUMBER, Layout, find_layout

_NAMES = {"\t": "tab", ";": "semicolon", ",": "comma", " ": "blank"}
_FULL_GRID = "A frame is a full grid; export it again."
_GRID = "A text frame is a grid of numbers separated by comma, semicolon, tab or blanks."


class TextFrameFile(FrameFile):
    """A text grid. It is read as a whole when opened, because only then its size is known."""

    def __init__(self, path: Path) -> None:
        if path.stat().st_size > MOST_TEXT_BYTES:
            raise FrameError(
                f"{printable(path)} is larger than {MOST_TEXT_BYTES // 2**20} MiB of text.", hint="Export it as NPY."
            )
        lines = _lines(path)
        layout = find_layout(lines)
        if layout is None:
            raise FrameError(f"{printable(path)} holds no line of numbers near its beginning.", hint=_GRID)
        self._layout = layout
        self._grid = _grid(path, lines, layout)
        super().__init__(path, "text", 1, self._grid.shape, self._grid.dtype)

    def _read(self, page: int) -> Stored:
        return self._grid.copy()

    def facts(self) -> list[tuple[str, str]]:
        """Return kind, size, numbers, and how the text was understood."""
        return [
            *super().facts(),
            ("header lines", str(self._layout.header)),
            ("delimiter", _NAMES[self._layout.delimiter]),
            ("decimal mark", "comma" if self._layout.decimal_comma else "point"),
        ]


def _lines(path: Path) -> list[str]:
    try:
        text = _decoded(path.read_bytes())
    except OSError as error:
        raise FrameError(f"{printable(path)} cannot be read: {error.strerror}.") from error
    except UnicodeError:
        raise FrameError(
            f"{printable(path)} is neither text nor a frame that can be read.",
            hint="TIFF, PNG, NPY, NPZ and CSV can be read.",
        ) from None
    lines = text.removeprefix("\ufeff").replace("\r\n", "\n").replace("\r", "\n").split("\n")
    longest = max(map(len, lines))
    if longest > MOST_LINE_BYTES:
        raise FrameError(
            f"{printable(path)} has a line of {longest:,} characters; {MOST_LINE_BYTES:,} can be read.", hint=_GRID
        )
    return lines


def _decoded(data: bytes) -> str:
    """Return the text: UTF-16 by its mark or its zero bytes, else UTF-8, else Latin-1 (a degree sign in a header)."""
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        return data.decode("utf-16")
    if b"\x00" in data[:64]:
        wide = "utf-16-le" if b"\x00" not in data[:64:2] else "utf-16-be"
        return data.decode(wide)
    if b"\x00" in data:
        raise UnicodeError
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError:
        return data.decode("latin-1")


def _grid(path: Path, lines: list[str], layout: Layout) -> NDArray[np.float64]:
    body = [(i, line) for i, line in enumerate(lines[layout.header :], layout.header + 1) if not layout.blank(line)]
    width = len(layout.cells(body[0][1]))
    if width * len(body) > MOST_PIXELS:
        raise FrameError(f"{printable(path)} holds {width} × {len(body)} numbers; {MOST_PIXELS:,} can be read.")
    if layout.decimal_comma:
        _refuse_both_marks(path, body)
    fast = _all_at_once([line for _, line in body], layout, width)
    if fast is not None:
        return fast
    # Empty cells, words or quotation marks; also finds the line to name when something is wrong.
    return np.array([_row(path, number, line, layout, width) for number, line in body], dtype=np.float64)


def _refuse_both_marks(path: Path, body: list[tuple[int, str]]) -> None:
    number = next((i for i, line in body if "." in line), None)
    if number is not None:
        raise FrameError(
            f"{printable(path)}, line {number}: there are decimal points and commas in one grid.",
            hint="Export the numbers with one decimal mark and without marks between thousands.",
        )


def _all_at_once(lines: list[str], layout: Layout, width: int) -> NDArray[np.float64] | None:
    """Return the grid read by numpy, or None if it is not a plain full one of finite numbers."""
    if layout.ends_lines:
        lines = [line.rstrip(" ")[:-1] for line in lines]
    if layout.decimal_comma:
        lines = [line.replace(",", ".") for line in lines]
    try:
        delimiter = None if layout.delimiter == " " else layout.delimiter
        grid = np.loadtxt(lines, delimiter=delimiter, ndmin=2, comments=None, dtype=np.float64)
    except ValueError:
        return None
    return grid if grid.shape == (len(lines), width) else None


def _row(path: Path, number: int, line: str, layout: Layout, width: int) -> list[float]:
    cells = layout.cells(line)
    if len(cells) != width:
        raise FrameError(
            f"{printable(path)}, line {number}: {len(cells)} values, but the first line of numbers has {width}.",
            hint=_FULL_GRID,
        )
    return [_number(path, number, i, cell, layout.decimal_comma) for i, cell in enumerate(cells, start=1)]


def _number(path: Path, line: int, place: int, cell: str, decimal_comma: bool) -> float:
    if cell.lower() in EMPTY:
        return float("nan")
    if not NUMBER.fullmatch(cell):
        raise FrameError(
            f"{printable(path)}, line {line}, value {place}: “{printable(cell[:40])}” is not a number.", hint=_GRID
        )
    return float(cell.replace(",", ".") if decimal_comma else cell)
