"""What all readers of values share: refusals in plain words, strict tables, and fields read by a function."""

from collections.abc import Callable
from dataclasses import dataclass
from datetime import date, time
from typing import Any

from pydantic import BaseModel, ConfigDict, GetCoreSchemaHandler
from pydantic_core import CoreSchema, PydanticCustomError, core_schema

OPEN = "?"
"""Stands in a starter file for what only the person can know."""


class Strict(BaseModel):
    """A table of the file: no other keys, no types bent to fit."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True)


def refuse(sentence: str, *at: str | int) -> PydanticCustomError:
    """Return the refusal of a value; ``at`` leads on to the part of it that is wrong."""
    return PydanticCustomError("thermfix", "refused", {"sentence": sentence, "at": at})


def kind_of(value: object) -> str:
    """Return what a value of the file is, in plain words.

    >>> kind_of("20"), kind_of(True), kind_of([1])
    ('text', 'true', 'a list')
    """
    if isinstance(value, bool):
        return "true" if value else "false"
    kinds: dict[type, str] = {str: "text", int: "a number", float: "a number", list: "a list", dict: "a table"}
    if isinstance(value, date | time):
        return "a date or time"
    return kinds.get(type(value), "something else")


@dataclass(frozen=True, slots=True)
class Reader:
    """Marks a field as read by one function, which returns the value or refuses it."""

    function: Callable[[Any], Any]

    def __get_pydantic_core_schema__(self, source: object, handler: GetCoreSchemaHandler) -> CoreSchema:
        """Return the schema that calls the function and nothing else."""
        return core_schema.no_info_plain_validator_function(self.function)
