"""An inspection file being edited: comments, key order and line ends survive."""

from collections.abc import Mapping, MutableMapping
from pathlib import Path
from typing import Any

import tomlkit
from tomlkit.exceptions import TOMLKitError
from tomlkit.items import AoT, Array, InlineTable, Table

from thermfix.errors import InputError
from thermfix.files import atomic_write
from thermfix.inspection.faults import key_text
from thermfix.inspection.lines import KeyPath
from thermfix.inspection.listing import frames_in
from thermfix.inspection.reading import read_inspection
from thermfix.inspection.source import parse, read_text
from thermfix.inspection.writing import toml_value
from thermfix.model import Inspection

_BYTE_ORDER_MARK = "\ufeff"
_LISTS_OF_TABLES = ("regions", "frames")


class InspectionDocument:
    """The text of an inspection file, edited key by key.

    A path leads to a key: names, and places in lists from 0, as ``("frames", 2, "regions", 1, "emissivity")``.
    """

    def __init__(self, text: str, file: Path) -> None:
        """Take the text of ``file`` (which need not exist), or raise ``InspectionError`` if it is not TOML."""
        parse(text, file)
        self.file = file
        self._start: str | None = text  # the text as it was given, until something changes
        self._mark = _BYTE_ORDER_MARK if text.startswith(_BYTE_ORDER_MARK) else ""
        body = text.removeprefix(_BYTE_ORDER_MARK)
        breaks = body.count("\n")
        self._crlf = breaks > 0 and body.count("\r\n") == breaks
        body = body.replace("\r\n", "\n") if self._crlf else body
        try:
            self._document = tomlkit.parse(body if body.endswith("\n") or not body else body + "\n")
        except (TOMLKitError, ValueError, RecursionError) as error:
            raise InputError(f"The file cannot be edited here: {error}.", hint="Edit it as text.") from error

    @classmethod
    def open(cls, file: Path) -> "InspectionDocument":
        """Open a file; raise ``InspectionError`` if it cannot be read or is not TOML."""
        return cls(read_text(file), file)

    def get(self, path: KeyPath, default: Any = None) -> Any:
        """Return the plain value at a path, or the default if nothing is there."""
        found: Any = self._document
        for part in path:
            if not _holds(found, part):
                return default
            found = found[part]
        return found.unwrap() if hasattr(found, "unwrap") else found

    def set(self, path: KeyPath, value: Any) -> None:
        """Put a plain value at a path; the comment beside the key stays.

        Tables on the way are made where they are missing, and so is an element of ``regions`` or ``frames``
        one place past the last.

        Raises
        ------
        InputError
            If the path does not lead to a key, or the value has no form in TOML.
        """
        item = tomlkit.value(toml_value(value))
        *above, last = path or ("",)
        if not isinstance(last, str) or not last:
            raise InputError(f"{key_text(path) or 'The path'} does not lead to a key.")
        holder = self._holder(tuple(above))
        holder[last] = item
        self._start = None

    def remove(self, path: KeyPath) -> None:
        """Take out a key, or an element of a list; nothing happens if it is not there.

        A list of tables that loses its last element goes as a whole.
        """
        holder: Any = self._document
        for part in path[:-1]:
            if not _holds(holder, part):
                return
            holder = holder[part]
        if not path or not _holds(holder, path[-1]):
            return
        del holder[path[-1]]
        if isinstance(holder, AoT | Array) and len(holder) == 0 and path[-2] in _LISTS_OF_TABLES:
            self.remove(path[:-1])
        self._start = None

    def add_region(self, frame_index: int | None, region: Mapping[str, Any]) -> KeyPath:
        """Append a region to a frame, or to those of every frame (None); return the path of the new region.

        Raises
        ------
        InputError
            If there is no such frame, or a value has no form in TOML.
        """
        above: KeyPath = ("regions",) if frame_index is None else ("frames", frame_index, "regions")
        if frame_index is not None and not isinstance(self.get(("frames", frame_index)), dict):
            raise InputError(f"There is no frame {frame_index} in the inspection.")
        for value in region.values():
            toml_value(value)  # refuse before anything changes
        path: KeyPath = (*above, len(self.get(above) or ()))
        for key, value in region.items():
            self.set((*path, key), value)
        made = self._holder(path)
        if isinstance(made, Table):
            made.add(tomlkit.nl())
        return path

    def frame_index(self, file: str) -> int:
        """Return the place of a frame in ``frames``; it is added if it is not listed.

        If no frame is listed, which stands for all in the folder, all are listed first.
        """
        frames = self.get(("frames",))
        if frames is None:
            frames = []
            for name in frames_in(self.file.parent, self._tables()):
                self.set(("frames", len(frames), "file"), name)
                frames.append({"file": name})
        for place, frame in enumerate(frames):
            if isinstance(frame, dict) and frame.get("file") == file:
                return place
        self.set(("frames", len(frames), "file"), file)
        return len(frames)

    def text(self) -> str:
        """Return the text; untouched, it is the one that was opened, byte by byte."""
        if self._start is not None:
            return self._start
        text = self._document.as_string()
        return self._mark + (text.replace("\n", "\r\n") if self._crlf else text)

    def inspection(self) -> Inspection:
        """Return the inspection that the text says, without writing it; ``InspectionError`` if it is faulty."""
        return read_inspection(self.text(), self.file)

    def save(self, file: Path | None = None) -> None:
        """Write the text atomically, to where it was opened unless told otherwise.

        Raises
        ------
        InputError
            If the file cannot be written.
        """
        file = file or self.file
        text = self.text()
        # The written text must say what was edited, whatever the library that keeps comments does.
        if parse(text, file) != self._document.unwrap():
            raise InputError("The edited text does not say what was set; nothing was written.", hint="Edit it as text.")
        with atomic_write(file) as stream:
            stream.write(text.encode("utf-8"))

    def _tables(self) -> frozenset[str]:
        """Return the files that are named for another purpose than being a frame."""
        materials = self.get(("materials",)) or {}
        named = [self.get(("camera", "response")), self.get(("camera", "calibration", "file"))]
        if isinstance(materials, dict):
            named += [one.get(key) for one in materials.values() if isinstance(one, dict) for key in ("nk", "spectrum")]
        return frozenset(name for name in named if isinstance(name, str))

    def _holder(self, path: KeyPath) -> Any:
        """Return the table at a path, made with all above it where it is missing."""
        around: Any = self._document
        holder: Any = self._document
        for place, part in enumerate(path):
            if not _holds(holder, part):
                self._make(holder, part, path[: place + 1], path[place + 1 : place + 2], around)
            around, holder = holder, holder[part]
        if not isinstance(holder, Mapping):
            raise InputError(f"{key_text(path)} is not a table, so that nothing can be set in it.")
        return holder

    def _make(self, holder: Any, part: str | int, path: KeyPath, following: KeyPath, around: Any) -> None:
        """Make an empty table, or a list of tables, in a table or a list."""
        if isinstance(holder, AoT | Array) and part == len(holder):
            before = holder[-1] if len(holder) else around
            holder.append(tomlkit.inline_table() if isinstance(holder, Array) else _table_after(before))
        elif isinstance(holder, MutableMapping) and isinstance(part, str):
            inline = isinstance(holder, InlineTable)
            if following and isinstance(following[0], int):
                holder[part] = tomlkit.array() if inline else tomlkit.aot()
            else:
                # In a list of tables a short table reads best on its key's line.
                inline = inline or path[0] in _LISTS_OF_TABLES
                holder[part] = tomlkit.inline_table() if inline else _table_after(holder)
        else:
            raise InputError(f"{key_text(path)} is not there.")


def _holds(holder: Any, part: str | int) -> bool:
    """Return whether a table has a key, or a list a place."""
    if isinstance(part, str):
        return isinstance(holder, Mapping) and part in holder
    return isinstance(holder, list) and 0 <= part < len(holder)


def _table_after(before: Any) -> Table:
    """Return a new table that an empty line parts from what stands before it."""
    table = tomlkit.table()
    text = before.as_string()
    table.trivia.indent = "" if not text or text.endswith("\n\n") else "\n"
    return table
