"""Holds the plain data of a file against its tables; says what is wrong in plain words and keeps what is right."""

import copy
import difflib
from collections.abc import Mapping
from typing import Any, get_args

from pydantic import BaseModel, ValidationError
from pydantic_core import ErrorDetails

from thermfix.inspection.faults import Faults
from thermfix.inspection.lines import KeyPath
from thermfix.inspection.refusing import OPEN, kind_of
from thermfix.inspection.schema import InspectionTable

_LISTS_OF_TABLES = ("regions", "frames")
_MOST_ROUNDS = 20

_WANTED = {
    "model_type": "a table",
    "dict_type": "a table",
    "list_type": "a list",
    "datetime_type": "a date and time, as 2026-03-01T08:00:00",
}


def checked(data: Mapping[str, Any], faults: Faults) -> InspectionTable:
    """Return the file's tables without what is faulty, each fault noted at its key.

    What is faulty is taken out and the rest held against the tables again, so that later checks see
    everything that is right and all faults come out in one go.
    """
    left = copy.deepcopy(dict(data))
    for _ in range(_MOST_ROUNDS):
        try:
            return InspectionTable.model_validate(left)
        except ValidationError as error:
            details = error.errors(include_url=False, include_input=False)
        for detail in details:
            path, sentence = _place_and_sentence(detail, left)
            faults.follow(path, sentence)
        for detail in details:
            _take_out(left, _trimmed(detail["loc"], left))
    return InspectionTable()


def _place_and_sentence(detail: ErrorDetails, data: object) -> tuple[KeyPath, str]:
    kind, path = detail["type"], detail["loc"]
    context = detail.get("ctx", {})
    if kind == "missing":
        return path, "is missing."
    if kind == "extra_forbidden":
        return path, unknown_key(path)
    path = _trimmed((*path, *context.get("at", ())), data)
    if kind == "thermfix":
        return path, str(context["sentence"])
    value = _value(data, path)
    if value == OPEN:
        return path, "is still open (“?”): fill it in."
    return path, f"must be {_WANTED.get(kind, 'something else')}, not {kind_of(value)}."


def unknown_key(path: KeyPath) -> str:
    """Return the sentence for a key that no table knows, with the closest known ones."""
    known = list(_table_at(path[:-1]).model_fields)
    close = difflib.get_close_matches(str(path[-1]).lower(), known, n=2, cutoff=0.6)
    if close:
        return f"unknown key; did you mean {' or '.join(close)}?"
    return f"unknown key; known here: {', '.join(known)}."


def _table_at(path: KeyPath) -> type[BaseModel]:
    """Return the table that a path of known keys leads to."""
    table: type[BaseModel] = InspectionTable
    named = False  # the next key is a name the person chose
    for part in path:
        if isinstance(part, int) or named or part not in table.model_fields:
            named = False
            continue
        named = part == "materials" and table is InspectionTable
        table = _table_in(table.model_fields[part].annotation) or table
    return table


def _table_in(annotation: object) -> type[BaseModel] | None:
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return annotation
    return next((found for one in get_args(annotation) if (found := _table_in(one))), None)


def _trimmed(path: KeyPath, data: object) -> KeyPath:
    """Return as much of a path as the data have."""
    for end, part in enumerate(path):
        if isinstance(data, dict) and part in data:
            data = data[str(part)]
        elif isinstance(data, list) and isinstance(part, int) and part < len(data):
            data = data[part]
        else:
            return path[:end]
    return path


def _value(data: Any, path: KeyPath) -> object:
    for part in path:
        data = data[part]
    return data


def _take_out(data: dict[str, Any], path: KeyPath) -> None:
    """Take a faulty value out. Elements of lists of tables stay, emptied, so that places keep their numbers."""
    path = _whole(path)
    if not path:
        data.clear()
        return
    *above, last = path
    try:
        holder = _value(data, tuple(above))
    except (KeyError, IndexError, TypeError):
        return  # went with something around it
    if isinstance(holder, list) and isinstance(last, int) and last < len(holder):
        holder[last] = {}
    elif isinstance(holder, dict):
        holder.pop(last, None)


def _whole(path: KeyPath) -> KeyPath:
    """Return the path up to the key whose value goes as a whole: a list of numbers, not one of them."""
    for end, part in enumerate(path):
        if isinstance(part, int) and path[end - 1] not in _LISTS_OF_TABLES:
            return path[:end]
    return path
