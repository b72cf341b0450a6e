"""How single values of the file are read: numbers in their ranges, points, names; plain sentences for what is wrong."""

from collections.abc import Callable
from dataclasses import dataclass
from datetime import date, time
from typing import Any

from pydantic import BaseModel, ConfigDict, GetCoreSchemaHandler
from pydantic_core import CoreSchema, PydanticCustomError, core_schema

from thermfix.errors import OutOfRange
from thermfix.files import printable
from thermfix.geometry.masks import FARTHEST_PX
from thermfix.model import XY
from thermfix.quantities import QUANTITIES, Quantity

OPEN = "?"
"""Stands in a starter file for what only the person can know."""

LONGEST_NAME = 80


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


def number(value: object) -> float:
    """Return a bare number as a float; whole numbers count, true and false do not."""
    if value == OPEN:
        raise refuse("is still open (“?”): fill in the number.")
    if isinstance(value, bool) or not isinstance(value, int | float):
        if isinstance(value, dict) and "value" in value:
            raise refuse("must be a bare number: no uncertainty of it is used.")
        raise refuse(f"must be a number, not {kind_of(value)}.")
    try:
        return float(value)
    except OverflowError:
        raise refuse("is too large a number.") from None


def in_range(quantity: Quantity, value: float, *at: str | int) -> float:
    """Return a number that lies in the range of its quantity, or refuse it."""
    try:
        return quantity.check(value)
    except OutOfRange as error:
        if quantity.low_open and value == quantity.low:
            raise refuse(
                f"{quantity.key} is {value:g}; it must lie above {quantity.low:g}, "
                f"up to {quantity.high:g} [{quantity.unit}].",
                *at,
            ) from None
        raise refuse(str(error), *at) from None


def standard_uncertainty(quantity: Quantity, u: float) -> float:
    """Return a standard uncertainty from 0 to the width of its quantity's range, or refuse it."""
    if not 0 <= u <= quantity.high - quantity.low:
        raise refuse(f"u is {u:g}; a standard uncertainty must lie in 0 to {quantity.high - quantity.low:g}.", "u")
    return u


def xy(value: object, *at: str | int) -> XY:
    """Return one point of the image. [px]."""
    if not isinstance(value, list) or len(value) != 2:
        raise refuse("must be a point [x, y].", *at)
    return coordinate(value[0], *at, 0), coordinate(value[1], *at, 1)


def coordinate(value: object, *at: str | int) -> float:
    """Return one coordinate or length in the image. [px]."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise refuse(f"must be a number of pixels, not {kind_of(value)}.", *at)
    if not -FARTHEST_PX <= value <= FARTHEST_PX:
        raise refuse(f"must lie in −{FARTHEST_PX:g} to {FARTHEST_PX:g} pixels.", *at)
    return float(value)


def points(value: object, fewest: int, what: str) -> tuple[XY, ...]:
    """Return a list of points, at least so many."""
    if not isinstance(value, list):
        raise refuse(f"must be a list of points [[x, y], …], not {kind_of(value)}.")
    found = tuple(xy(one, place) for place, one in enumerate(value))
    if len(found) < fewest:
        raise refuse(f"needs {fewest} {what} or more, not {len(found)}.")
    return found


def numbers(value: object, count: int, what: str) -> list[Any]:
    """Return a list of so many things."""
    if value == OPEN:
        raise refuse(f"is still open (“?”): fill in {what}.")
    if not isinstance(value, list) or len(value) != count:
        found = f"a list of {len(value)}" if isinstance(value, list) else kind_of(value)
        raise refuse(f"must be a list of {count} numbers, {what}, not {found}.")
    return value


def name(value: object) -> str:
    """Return a name of 1 to 80 characters, none of which controls a terminal."""
    text = words(value)
    if not text.strip():
        raise refuse("must not be empty.")
    if len(text) > LONGEST_NAME:
        raise refuse(f"has {len(text)} characters; at most {LONGEST_NAME} are allowed.")
    if printable(text) != text:
        raise refuse("must not hold control characters or line ends.")
    return text


def words(value: object) -> str:
    """Return any text."""
    if not isinstance(value, str):
        raise refuse(f"must be text in quotes, not {kind_of(value)}.")
    return value


@dataclass(frozen=True, slots=True)
class Reader:
    """Marks a field as read by one function, which returns the value or refuses it."""

    function: Callable[[Any], Any]

    def __get_pydantic_core_schema__(self, source: object, handler: GetCoreSchemaHandler) -> CoreSchema:
        """Return the schema that calls the function and nothing else."""
        return core_schema.no_info_plain_validator_function(self.function)


def bare(key: str | Quantity) -> Reader:
    """Return the reader of a bare number that lies in the range of its quantity."""
    quantity = QUANTITIES[key] if isinstance(key, str) else key
    return Reader(lambda value: in_range(quantity, number(value)))


def pair(key: str, what: str, *, rising: bool = False) -> Reader:
    """Return the reader of a list of two numbers, each in the range of its quantity."""

    def read(value: object) -> tuple[float, float]:
        first, second = (in_range(QUANTITIES[key], number(one)) for one in numbers(value, 2, what))
        if rising and not first < second:
            raise refuse(f"the first number, {first:g}, must be smaller than the second, {second:g}.")
        return first, second

    return Reader(read)


def choice(*allowed: str) -> Reader:
    """Return the reader of one word out of a few."""
    listed = " or ".join([", ".join(allowed[:-1]), allowed[-1]]) if len(allowed) > 1 else allowed[0]

    def read(value: object) -> str:
        if value == OPEN:
            raise refuse(f"is still open (“?”): say whether it is {listed}.")
        if not isinstance(value, str) or value not in allowed:
            found = f"“{printable(value)}”" if isinstance(value, str) else kind_of(value)
            raise refuse(f"must be {listed}, not {found}.")
        return value

    return Reader(read)


def truth(value: object) -> bool:
    """Return true or false."""
    if not isinstance(value, bool):
        raise refuse(f"must be true or false, not {kind_of(value)}.")
    return value
