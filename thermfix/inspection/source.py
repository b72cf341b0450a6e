"""From the bytes of an inspection file to its text and plain data, or to the one fault that stops it."""

import re
import tomllib
from pathlib import Path
from typing import Any

from thermfix.errors import Fault, InspectionError
from thermfix.files import printable

MOST_BYTES = 4 * 2**20
"""Largest inspection file that is read. [bytes]."""

_PLACE = re.compile(r" \(at (?:line (\d+), column (\d+)|end of document)\)$")


def read_text(file: Path) -> str:
    """Return the text of an inspection file with its line ends and byte order mark as they are.

    Raises
    ------
    InspectionError
        If it is not a readable regular file, is larger than `MOST_BYTES`, or is not UTF-8.
    """
    try:
        if not file.is_file():
            raise _stopped(file, "there is no such file", hint="thermfix new FOLDER writes a starter.")
        if file.stat().st_size > MOST_BYTES:
            raise _stopped(file, f"it is larger than {MOST_BYTES // 2**20} MiB, more than an inspection can need")
        data = file.read_bytes()
    except (OSError, ValueError) as error:
        if isinstance(error, InspectionError):
            raise
        reason = error.strerror if isinstance(error, OSError) else "its path is not usable"
        raise _stopped(file, f"it cannot be read ({reason})") from error
    return decode(data, file)


def decode(data: bytes, file: Path) -> str:
    """Return UTF-8 bytes as text, or raise ``InspectionError`` with the line that is not UTF-8."""
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise _stopped(file, "the text is not UTF-8", line, hint="Save the file as UTF-8 in your editor.") from error


def parse(text: str, file: Path) -> dict[str, Any]:
    """Return the plain data of a TOML text; a byte order mark at its start is passed over.

    Raises
    ------
    InspectionError
        With line and column, if the text is not valid TOML or too long.
    """
    if len(text) > MOST_BYTES:
        raise _stopped(file, f"it is larger than {MOST_BYTES // 2**20} MiB, more than an inspection can need")
    try:
        return tomllib.loads(text.removeprefix("\ufeff"))
    except RecursionError as error:
        raise _stopped(file, "lists or tables are nested too deeply") from error
    except ValueError as error:
        said = str(error)
        place = _PLACE.search(said)
        what = _PLACE.sub("", said)
        if place is None:  # not from the grammar: a whole number of thousands of digits
            raise _stopped(file, f"a value cannot be read ({what.split(';')[0]})") from error
        line, column = (int(n) for n in place.groups()) if place.group(1) else (text.count("\n") + 1, 0)
        where = f"at column {column}" if column else "at the end"
        raise _stopped(file, f"not valid TOML {where}: {what}", line) from error


def _stopped(file: Path, why: str, line: int = 0, hint: str = "") -> InspectionError:
    fault = Fault(line, "", f"{printable(why)}.")
    return InspectionError(f"{printable(file)} cannot be used:", faults=(fault,), hint=hint)
