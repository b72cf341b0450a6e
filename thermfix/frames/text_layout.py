"""Where the numbers of a text grid begin and what stands between them.

Rules, in order:

* The grid begins at the first line whose cells are all numbers or empty, with at least one number.
  Lines above it are headers, but lines of empty cells right above it belong to the grid (pixels
  without a reading), unless a header line is itself padded with delimiters, as spreadsheets do. So does a
  line right above of the same length with numbers in most of its cells: it is a row with a fault, to be named.
* A tab or semicolon in that line is the delimiter. Else blanks are, where they stand between numbers and no
  comma ends a number. Else the comma is, so that ``1,234`` is two numbers: a decimal comma needs
  another delimiter beside it.
* Beside another delimiter a comma is the decimal mark. A grid with both commas and points is refused.
* A delimiter at the end of every line, in a grid without other empty cells, ends the line. Otherwise it
  begins an empty cell.
* Empty cells and the words nan, na, n/a, - and -- are no number.
"""

import re
from dataclasses import dataclass

NUMBER = re.compile(r"[-+]?(?:(?:\d+[.,]?\d*|[.,]\d+)(?:[eE][-+]?\d+)?|inf|infinity)", re.ASCII | re.IGNORECASE)
EMPTY = frozenset({"", "nan", "+nan", "-nan", "na", "n/a", "--", "-"})

_SEARCHED = 200
_BLANKS = re.compile(r"\d[ ]+[-+.]?\d")


@dataclass(frozen=True, slots=True)
class Layout:
    """Header lines above the grid; delimiter; whether a delimiter also ends each line; decimal comma."""

    header: int
    delimiter: str
    ends_lines: bool
    decimal_comma: bool

    def cells(self, line: str) -> list[str]:
        """Return the cells of one line, without what surrounds the numbers."""
        cells = split(line, self.delimiter)
        return cells[:-1] if self.ends_lines else cells

    def blank(self, line: str) -> bool:
        """Return whether a line holds nothing; tabs are empty cells where tabs divide cells."""
        return not line.strip(" " if self.delimiter == "\t" else None)


def find_layout(lines: list[str]) -> Layout | None:
    """Return the layout of a text grid, or None if none of the first lines is a row of it."""
    found = _first_row(lines, with_number=True) or _first_row(lines, with_number=False)
    if found is None:
        return None
    row, mark = found
    header = _with_empty_rows(lines, row, mark)
    body = lines[header:]
    return Layout(
        header=header,
        delimiter=mark,
        ends_lines=_ends_lines(body, mark),
        decimal_comma=mark != "," and any("," in line for line in body),
    )


def split(line: str, mark: str) -> list[str]:
    """Return the cells of a line, without blanks and quotation marks."""
    if mark == " ":
        return [clean(cell) for cell in line.split()]
    return [clean(cell) for cell in line.split(mark)]


def clean(cell: str) -> str:
    """Return a cell without blanks and quotation marks, its minus sign the plain one."""
    return cell.strip().strip('"').strip().replace("\u2212", "-")


def _first_row(lines: list[str], *, with_number: bool) -> tuple[int, str] | None:
    for i, line in enumerate(lines[:_SEARCHED]):
        mark = _mark_of(line)
        if line.strip(" ") and _is_row(line, mark, with_number=with_number):
            return i, mark
    return None


def _mark_of(line: str) -> str:
    if "\t" in line:
        return "\t"
    if ";" in line:
        return ";"
    # "1,5 2,5" has blanks between numbers; "1, 2" has them only after commas.
    if _BLANKS.search(line) or "," not in line:
        return " "
    return ","


def _is_row(line: str, mark: str, *, with_number: bool) -> bool:
    cells = split(line, mark)
    numbers = sum(bool(NUMBER.fullmatch(cell)) for cell in cells)
    known = numbers + sum(cell.lower() in EMPTY for cell in cells)
    # A lone word or dash is a header; a lone number is a column of them.
    enough = numbers >= 1 if with_number else len(cells) >= 2
    return known == len(cells) and enough


def _with_empty_rows(lines: list[str], row: int, mark: str) -> int:
    """Return the first line of the grid, given the first with a number."""
    width = len(split(lines[row], mark))
    start = row
    while start > 0 and _is_empty_row(lines[start - 1], mark, width):
        start -= 1
    spacers_above = any(mark != " " and line.rstrip(" ").endswith(mark) for line in lines[:start])
    # Only cells without even a word can be a spreadsheet's padding.
    while spacers_above and start < row and not lines[start].strip(mark + " "):
        start += 1
    return start - 1 if start and _is_faulty_row(lines[start - 1], mark, width) else start


def _is_faulty_row(line: str, mark: str, width: int) -> bool:
    cells = split(line, mark)
    return len(cells) == width > 2 and 2 * sum(bool(NUMBER.fullmatch(cell)) for cell in cells) > width


def _is_empty_row(line: str, mark: str, width: int) -> bool:
    cells = split(line, mark)
    return width >= 2 and len(cells) == width and all(cell.lower() in EMPTY for cell in cells)


def _ends_lines(body: list[str], mark: str) -> bool:
    if mark == " ":
        return False
    rows = [row for row in (line.replace(" ", "") for line in body) if row]
    return all(row.endswith(mark) and not row.startswith(mark) and mark * 2 not in row for row in rows)
