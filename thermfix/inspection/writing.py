"""Writes plain values as TOML, in the style of the inspection file."""

import json
from collections.abc import Mapping
from datetime import date, time

from thermfix.errors import InputError
from thermfix.inspection.faults import is_bare_key
from thermfix.inspection.refusing import kind_of


def toml_key(key: str) -> str:
    """Return a key, in quotes where it needs them."""
    return key if is_bare_key(key) else toml_value(key)


def toml_value(value: object) -> str:
    """Return a value on one line.

    Raises
    ------
    InputError
        If it has no form in TOML.

    Examples
    --------
    >>> toml_value({"value": 0.78, "u": 0.03})
    '{ value = 0.78, u = 0.03 }'
    """
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return _text(value)
    if isinstance(value, int | float):
        # float() takes the type name off numbers of an array.
        return str(int(value)) if isinstance(value, int) else repr(float(value))
    if isinstance(value, date | time):
        return value.isoformat()
    if isinstance(value, Mapping):
        pairs = ", ".join(f"{toml_key(key)} = {toml_value(one)}" for key, one in value.items())
        return f"{{ {pairs} }}" if pairs else "{}"
    if isinstance(value, list | tuple):
        return f"[{', '.join(toml_value(one) for one in value)}]"
    raise InputError(f"{kind_of(value)} of type {type(value).__name__} cannot stand in an inspection file.")


def _text(value: str) -> str:
    try:
        value.encode()
    except UnicodeEncodeError:
        raise InputError("The text holds bytes that are not UTF-8, which an inspection file cannot hold.") from None
    # JSON escapes what TOML wants escaped, but for the delete character.
    return json.dumps(value, ensure_ascii=False).replace("\x7f", "\\u007f")
