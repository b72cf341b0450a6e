"""Collects the faults of an inspection file, each at its key, and raises them all at once."""

import re
from collections.abc import Mapping
from pathlib import Path

from thermfix.errors import Fault, InspectionError
from thermfix.files import printable
from thermfix.inspection.lines import KeyPath, line_of

_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")


class Faults:
    """Faults found so far. A fault that only follows from another one at the same key is left out."""

    def __init__(self) -> None:
        self._found: dict[tuple[KeyPath, str], None] = {}
        self._at: set[KeyPath] = set()
        self._above: set[KeyPath] = set()

    def __bool__(self) -> bool:
        return bool(self._found)

    def add(self, path: KeyPath, sentence: str) -> None:
        """Note one fault."""
        self._found[path, sentence] = None
        self._at.add(path)
        self._above.update(path[:end] for end in range(len(path) + 1))

    def follow(self, path: KeyPath, sentence: str) -> None:
        """Note a fault unless the key, a key around it or a key in it is faulty already."""
        if not self.mars(path):
            self.add(path, sentence)

    def mars(self, path: KeyPath) -> bool:
        """Return whether a fault lies at the key, around it or in it."""
        return path in self._above or any(path[:end] in self._at for end in range(len(path) + 1))

    def error(self, file: Path, lines: Mapping[KeyPath, int]) -> InspectionError:
        """Return the error that holds all faults in the order of their lines."""
        found = sorted(Fault(line_of(lines, path), key_text(path), sentence) for path, sentence in self._found)
        count = "one fault" if len(found) == 1 else f"{len(found)} faults"
        return InspectionError(
            f"{printable(file)} has {count}:", faults=tuple(found), hint="Correct the file, then run: thermfix check"
        )


def is_bare_key(key: str) -> bool:
    """Return whether a key needs no quotes."""
    return _BARE_KEY.fullmatch(key) is not None


def key_text(path: KeyPath) -> str:
    """Return a key path as it would be written, list places from 0.

    >>> key_text(("frames", 2, "regions", 1, "emissivity"))
    'frames[2].regions[1].emissivity'
    >>> key_text(("materials", "glazed tile", "nk"))
    'materials."glazed tile".nk'
    """
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part}]"
        else:
            text += "." if text else ""
            text += part if is_bare_key(part) else f'"{printable(part)}"'
    return text
