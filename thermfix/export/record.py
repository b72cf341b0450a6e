"""record.json: the record of a run, as JSON any program can read."""

import json
import math
from collections.abc import Mapping
from datetime import date, datetime, time
from enum import Enum
from pathlib import Path, PurePath
from typing import Any

import numpy as np

from thermfix.files import atomic_write, printable


def write_record(path: Path, mapping: Mapping[str, Any], *, force: bool = False) -> None:
    """Write a record as JSON, keys in the order of the mapping.

    Parameters
    ----------
    path : Path
        File to write; it appears complete or not at all.
    mapping : mapping
        Text keys; values may be mappings, sequences, numpy arrays and numbers, paths, dates, enumerations.
    force : bool
        Overwrite the file if it exists.

    Raises
    ------
    InputError
        If the file exists and ``force`` is False, or it cannot be written.
    TypeError
        If a value has no form in JSON.

    Notes
    -----
    UTF-8, two spaces of indent, a line feed at the end. A float is the shortest text that reads back to
    the same number. JSON knows neither NaN nor infinity: both become null. The same mapping gives the
    same bytes.
    """
    text = json.dumps(_plain(mapping, "record"), indent=2, ensure_ascii=False, allow_nan=False) + "\n"
    with atomic_write(path, force=force) as stream:
        # A byte of a file name that is not UTF-8 becomes \udc.., which is how JSON escapes it too.
        stream.write(text.encode("utf-8", "backslashreplace"))


def _plain(value: Any, where: str) -> Any:
    """Return a value in terms of dict, list, str, int, float, bool and None."""
    if isinstance(value, Mapping):
        return {_key(key, where): _plain(one, f"{where}.{key}") for key, one in value.items()}
    if isinstance(value, list | tuple):
        return [_plain(one, f"{where}[{index}]") for index, one in enumerate(value)]
    if isinstance(value, np.ndarray | np.generic):
        return _plain(value.tolist(), where)
    return _scalar(value, where)


def _scalar(value: Any, where: str) -> Any:
    if isinstance(value, Enum):
        return _plain(value.value, where)
    if isinstance(value, float):
        return float(value) if math.isfinite(value) else None
    if value is None or isinstance(value, str | int):
        return value
    if isinstance(value, PurePath):
        return value.as_posix()
    if isinstance(value, datetime | date | time):
        return value.isoformat()
    raise TypeError(f"{printable(where)} is a {type(value).__name__}, which a record cannot hold")


def _key(key: object, where: str) -> str:
    if not isinstance(key, str):
        raise TypeError(f"{printable(where)} has the key {key!r}; a record has text keys")
    return key
