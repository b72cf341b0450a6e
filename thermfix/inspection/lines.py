"""Finds the line of every key and list element of a TOML text."""

import re
import tomllib
from bisect import bisect_right
from collections.abc import Mapping

KeyPath = tuple[str | int, ...]
"""Keys from the top of a document down; an integer is a place in a list, from 0."""

_SPACE = re.compile(r"[ \t]*")
_BLANK = re.compile(r"(?:[ \t\r\n]|#[^\n]*)*")
_STRING = re.compile(
    r'"""(?:[^\\]|\\.)*?"{3,5}'
    r"|'''.*?'{3,5}"
    r'|"(?:[^"\\\n]|\\.)*"'
    r"|'[^'\n]*'",
    re.DOTALL,
)
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_SCALAR = re.compile(r"[^,\]}#\n]*")


def key_lines(text: str) -> dict[KeyPath, int]:
    """Return the line, from 1, of every key, table and list element of a valid TOML text.

    A key that is only a stop on the way (the ``a`` of ``a.b = 1`` or ``[a.b]``) has the line where it
    is first met. What is returned for a text that is not valid TOML means nothing.
    """
    return _Walk(text).lines


def line_of(lines: Mapping[KeyPath, int], path: KeyPath) -> int:
    """Return the line of a key, or of the nearest key around it, or 0."""
    for end in range(len(path), 0, -1):
        if path[:end] in lines:
            return lines[path[:end]]
    return 0


class _Walk:
    """One pass over a text, reading no more of it than tells where things stand."""

    def __init__(self, text: str) -> None:
        self.text, self.at = text, 0
        self.starts = [0, *(match.end() for match in re.finditer("\n", text))]
        self.lines: dict[KeyPath, int] = {}
        self.tables: dict[KeyPath, int] = {}  # arrays of tables: place of their last element
        around: KeyPath = ()
        self._skip(_BLANK)
        while self.at < len(text):
            before = self.at
            if text[self.at] == "[":
                around = self._header()
            else:
                self._pair(around)
            self._skip(_BLANK)
            if self.at == before:
                break  # not TOML

    def _skip(self, pattern: re.Pattern[str]) -> str:
        match = pattern.match(self.text, self.at)
        if match is None:
            return ""
        self.at = match.end()
        return match.group()

    def _note(self, path: KeyPath, line: int | None = None) -> None:
        self.lines.setdefault(path, line or bisect_right(self.starts, self.at))

    def _next(self) -> str:
        return self.text[self.at : self.at + 1]

    def _key(self) -> tuple[str, ...]:
        parts = []
        while True:
            self._skip(_SPACE)
            if self._next() in ('"', "'"):
                parts.append(tomllib.loads(f"key = {self._skip(_STRING)}")["key"])
            else:
                parts.append(self._skip(_BARE_KEY))
            self._skip(_SPACE)
            if self._next() != ".":
                return tuple(parts)
            self.at += 1

    def _header(self) -> KeyPath:
        line = bisect_right(self.starts, self.at)
        many = self.text.startswith("[[", self.at)
        self.at += 2 if many else 1
        *parents, last = self._key()
        self.at += 2 if many else 1
        path: KeyPath = ()
        for part in parents:
            path = self._last_of((*path, part), line)
        path = (*path, last)
        if many:
            self.tables[path] = self.tables.get(path, -1) + 1
        return self._last_of(path, line)

    def _last_of(self, path: KeyPath, line: int) -> KeyPath:
        """Note a table; of an array of tables, return its last element."""
        self._note(path, line)
        if path in self.tables:
            path = (*path, self.tables[path])
            self._note(path, line)
        return path

    def _pair(self, around: KeyPath) -> None:
        line = bisect_right(self.starts, self.at)
        path = around
        for part in self._key():
            path = (*path, part)
            self._note(path, line)
        self.at += 1  # the equals sign
        self._skip(_SPACE)
        self._value(path)

    def _value(self, path: KeyPath) -> None:
        first = self._next()
        if first == "[":
            self._list(path)
        elif first == "{":
            self._inline(path)
        elif first in ('"', "'"):
            self._skip(_STRING)
        else:
            self._skip(_SCALAR)

    def _list(self, path: KeyPath) -> None:
        self.at += 1
        self._skip(_BLANK)
        place = 0
        while self._next() not in ("]", ""):
            before = self.at
            self._note((*path, place))
            self._value((*path, place))
            self._separator()
            place += 1
            if self.at == before:
                break  # not TOML
        self.at += 1

    def _inline(self, path: KeyPath) -> None:
        self.at += 1
        self._skip(_BLANK)
        while self._next() not in ("}", ""):
            before = self.at
            self._pair(path)
            self._separator()
            if self.at == before:
                break  # not TOML
        self.at += 1

    def _separator(self) -> None:
        self._skip(_BLANK)
        if self._next() == ",":
            self.at += 1
            self._skip(_BLANK)
