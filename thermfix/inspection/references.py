"""Files that an inspection names: relative, inside its folder, there, and regular files."""

from pathlib import Path, PurePosixPath, PureWindowsPath

from thermfix.errors import InspectionError
from thermfix.files import printable
from thermfix.inspection.faults import Faults
from thermfix.inspection.lines import KeyPath
from thermfix.inspection.refusing import OPEN
from thermfix.inspection.tables import read_table
from thermfix.model import Table


class References:
    """Checks the files one inspection names and remembers which of them are tables."""

    def __init__(self, folder: Path, faults: Faults) -> None:
        self.folder, self.faults = folder, faults
        self.tables: set[str] = set()
        self._root = folder.resolve()

    def file(self, path: KeyPath, name: str) -> str | None:
        """Return the name of a file inside the folder, written with single slashes, or note why it is refused."""
        if wrong := _wrong_name(name) or self._wrong_place(name):
            self.faults.follow(path, wrong)
            return None
        return str(PurePosixPath(name))

    def table(self, path: KeyPath, name: str, columns: tuple[str, ...], rising: tuple[str, ...]) -> Table | None:
        """Return the table of a file, or note everything that is wrong with it at the key that names it."""
        file = self.file(path, name)
        if file is None:
            return None
        self.tables.add(file)
        try:
            return read_table(self.folder / file, columns, rising=rising, source=file)
        except InspectionError as error:
            for fault in error.faults:
                line = f", line {fault.line}" if fault.line else ""
                self.faults.add(path, f"{printable(file)}{line}: {fault.message}")
            return None

    def _wrong_place(self, name: str) -> str:
        try:
            target = (self.folder / name).resolve()
            if not target.is_relative_to(self._root):
                return f"{_quoted(name)} leads out of the inspection's folder."
            if not target.exists():
                return f"there is no file {_quoted(name)} in the inspection's folder."
            return "" if target.is_file() else f"{_quoted(name)} is not a regular file."
        except (OSError, RuntimeError, ValueError):
            return f"{_quoted(name)} cannot be looked up."


def _wrong_name(name: str) -> str:
    """Return why a name cannot be that of a file inside the folder, or nothing."""
    if name == OPEN:
        return "is still open (“?”): name the file."
    if not name.strip():
        return "must name a file."
    if printable(name) != name:
        return f"{_quoted(name)} holds control characters."
    if "\\" in name:
        return f"{_quoted(name)}: write / between folders, not a backslash."
    if PurePosixPath(name).is_absolute() or PureWindowsPath(name).drive:
        return f"{_quoted(name)} must be relative to the inspection's folder."
    if ".." in PurePosixPath(name).parts:
        return f"{_quoted(name)} must not lead upward with “..”."
    return ""


def _quoted(name: str) -> str:
    return f"“{printable(name)}”"
