"""How single values of the file are read: numbers in their ranges, names, words; or refused in plain words."""

from typing import Any

from thermfix.errors import OutOfRange
from thermfix.files import printable
from thermfix.inspection.refusing import OPEN, Reader, kind_of, refuse
from thermfix.quantities import QUANTITIES, Quantity

LONGEST_NAME = 80


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
