"""Writing to the two streams: data to stdout, everything else to stderr."""

import sys
from collections.abc import Sequence

from thermfix.files import printable


def data(line: str = "") -> None:
    """Write one line of data to stdout."""
    sys.stdout.write(line + "\n")


def say(line: str = "") -> None:
    """Write one line for people to stderr."""
    sys.stderr.write(line + "\n")


def columns(rows: Sequence[Sequence[str]], right: Sequence[int] = ()) -> list[str]:
    """Return rows of text as lines with aligned columns; those numbered in ``right`` end flush.

    Control characters from files are escaped.
    """
    safe = [[printable(cell) for cell in row] for row in rows]
    widths = [max(len(row[i]) for row in safe) for i in range(len(safe[0]))] if safe else []
    return [
        "  ".join(
            cell.rjust(width) if i in right else cell.ljust(width)
            for i, (cell, width) in enumerate(zip(row, widths, strict=True))
        ).rstrip()
        for row in safe
    ]


class Progress:
    """A counter on stderr while a terminal watches; silent otherwise."""

    def __init__(self, what: str) -> None:
        self._what = what
        self._on = sys.stderr.isatty()

    def __call__(self, done: int, total: int) -> None:
        """Show how many of how many are done; the line goes away at the end."""
        if self._on and total > 1:
            sys.stderr.write(f"\r{done}/{total} {self._what}" if done < total else "\r\x1b[K")
            sys.stderr.flush()
