r"""Numbers as fixed-decimal text, by the array: digits are looked up as bytes.

A column of text is an array of eight-byte words, a fixed number of words per value, in which unused
bytes are NUL. Columns are laid side by side, and dropping the NULs leaves the rows of the file.
"""

from functools import lru_cache
from math import ceil, floor

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError, OutOfRange

BLOCK = 16_384
"""Values to format at once: enough to spread the cost of a call, few enough to stay in the cache."""

MOST_DECIMALS = 6

Words = NDArray[np.uint64]
"""A column of text, shape (n, words): eight bytes a word, unused ones NUL."""

_WORD = 8
_PAGE = 16_384
_MOST_PAGES = 8  # one megabyte of ready-made text: 1310 °C at two decimals
_WIDEST = 4  # digits (and sign) before the point that are looked up: −999 to 9999


def check_decimals(decimals: int) -> None:
    """Raise ``OutOfRange`` unless decimals lie in 0 to 6."""
    if not 0 <= decimals <= MOST_DECIMALS:
        raise OutOfRange(
            f"decimals is {decimals}; it must lie in 0 to {MOST_DECIMALS}.", hint="2 suit a thermal camera."
        )


def fixed(value: float, decimals: int) -> str:
    """Return one number as text: empty for NaN, no sign on a zero.

    Raises ``InputError`` for an infinite number.

    >>> fixed(-0.004, 2), fixed(21.5, 2), fixed(float("nan"), 2)
    ('0.00', '21.50', '')
    """
    if value != value:
        return ""
    if value in (float("inf"), float("-inf")):
        raise InputError(
            "An infinite number cannot be written to a table.", hint="Check the values stored in the frame."
        )
    text = f"{value:.{decimals}f}"
    return text[1:] if text.startswith("-") and not text.strip("-0.") else text


def text_column(texts: list[bytes], end: bytes) -> Words:
    """Return texts (free of NUL) as words, shape (len(texts), words), each followed by the byte ``end``."""
    longest = max(map(len, texts), default=0)
    width = _WORD * (longest // _WORD + 1)
    padded = np.array(texts, dtype=f"S{width}").reshape(-1, 1).view(np.uint8)
    padded[:, -1] = ord(end)
    return padded.view(np.uint64)


def number_column(values: NDArray[np.float64], decimals: int, end: bytes) -> Words:
    """Return numbers as words, each followed by the byte ``end``.

    Parameters
    ----------
    values : ndarray, shape (n,), n > 0
        Numbers; NaN becomes an empty text.
    decimals : int
        Digits after the point, 0 to 6.
    end : bytes
        One byte, a comma or a line end. It is the last byte of the last word.

    Returns
    -------
    ndarray, shape (n, words)
        The same text as ``f"{value:.{decimals}f}"`` gives, but for a zero with a sign.

    Raises
    ------
    InputError
        If a number is infinite.

    Notes
    -----
    Between −999 and 9999 the number times 10^decimals is rounded to an integer that stands for its
    text; anything beyond is formatted one by one.
    """
    if not np.isnan(values.min()):
        return _of_numbers(values, decimals, end)
    missing = np.isnan(values)
    # Any number that is there will do, and keeps the span of the block small.
    column = _of_numbers(np.where(missing, _number_in(values), values), decimals, end)
    column[missing] = 0
    column.view(np.uint8)[missing, -1] = ord(end)
    return column


def _number_in(values: NDArray[np.float64]) -> float:
    least = float(np.fmin.reduce(values))
    return 0.0 if np.isnan(least) else least


def _of_numbers(numbers: NDArray[np.float64], decimals: int, end: bytes) -> Words:
    low, high = float(numbers.min()), float(numbers.max())
    layout = _layout(low, high, decimals)
    if layout is None:
        return text_column([fixed(number, decimals).encode() for number in numbers.tolist()], end)
    integers = _times_power(numbers, decimals)
    first = floor(low * 10**decimals - 1) // _PAGE
    pages = ceil(high * 10**decimals + 1) // _PAGE - first + 1
    if pages > _MOST_PAGES:
        return _in_parts(integers, decimals, end, layout)
    integers -= first * _PAGE
    # In range by construction; "clip" only spares a second check.
    return _ready_made(first, pages, decimals, end, layout).take(integers, axis=0, mode="clip")


def _layout(low: float, high: float, decimals: int) -> tuple[int, int] | None:
    """Return how many bytes before the point, and words in all, hold numbers in a range; None if tables cannot."""
    tail = decimals + 2 if decimals else 1
    for width, words in ((min(_WIDEST, _WORD - tail), 1), (_WIDEST, 2)):
        # One below the largest that fits, because a number may round up.
        if width >= 2 and low > 1 - 10 ** (width - 1) and high < 10**width - 1:
            return width, words
    return None


@lru_cache(maxsize=12)
def _ready_made(first: int, pages: int, decimals: int, end: bytes, layout: tuple[int, int]) -> Words:
    """Return the texts of all integers of some pages of 16384: shared by the blocks of a frame, and by frames."""
    return _in_parts(np.arange(first * _PAGE, (first + pages) * _PAGE), decimals, end, layout)


def _in_parts(integers: NDArray[np.int64], decimals: int, end: bytes, layout: tuple[int, int]) -> Words:
    width, words = layout
    power = 10**decimals
    magnitude = np.abs(integers)
    whole = magnitude // power
    fraction = magnitude - whole * power
    # −0.25 needs "-0": a negative number uses entry −1 − whole, which ~whole gives.
    np.invert(whole, out=whole, where=integers < 0)
    whole += 10 ** (width - 1)
    # A page may reach past what the layout holds; no number of the block lies there.
    head = _whole_texts(width).take(whole, mode="clip")
    tail = _fraction(fraction, decimals, end)
    return (head | tail)[:, np.newaxis] if words == 1 else np.stack((head, tail), axis=1)


def _times_power(numbers: NDArray[np.float64], decimals: int) -> NDArray[np.int64]:
    """Return number × 10^decimals, rounded half to even from the exact product, as text formatting does.

    A tie n + ½ is a floating-point number, and rounding a product to the nearest one never carries it
    past another: so only where the rounded product *is* a tie can the exact product lie elsewhere.
    There the sign of the product's rounding error decides.
    """
    power = float(10**decimals)
    product = numbers * power
    rounded = np.rint(product)
    integers = rounded.astype(np.int64)
    distance = np.subtract(product, rounded, out=rounded)
    ties = np.flatnonzero(np.abs(distance, out=distance) == 0.5)
    if ties.size:
        error = _product_error(numbers[ties], power, product[ties])
        below = np.floor(product[ties]).astype(np.int64)
        integers[ties] = np.where(error == 0, integers[ties], below + (error > 0))
    return integers


def _product_error(a: NDArray[np.float64], power: float, product: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return a · power − product exactly.

    ``a`` is split into a high and a low half of at most 26 bits (T. J. Dekker, "A floating-point technique
    for extending the available precision", Numer. Math. 18, 1971, eq. 5.5 to 5.14); ``power`` has at
    most 20 bits, so that both partial products are exact.
    """
    carried = a * 134217729.0  # 2^27 + 1
    high = carried - (carried - a)
    low = a - high
    exact: NDArray[np.float64] = (high * power - product) + low * power
    return exact


def _fraction(fraction: NDArray[np.int64], decimals: int, end: bytes) -> NDArray[np.uint64]:
    """Return point, decimals and end, at the right of one word."""
    first, second = _fraction_texts(decimals, end)
    if second is None:
        return first.take(fraction)
    upper = fraction // len(second)
    return np.bitwise_or(first.take(upper), second.take(fraction - upper * len(second)))


@lru_cache(maxsize=8)
def _whole_texts(width: int) -> NDArray[np.uint64]:
    """Return the digits before the point, at the left of one word, of −(10^(width−1) − 1) … 10^width − 1."""
    negative = [f"-{size}".encode() for size in range(10 ** (width - 1))]
    positive = [str(size).encode() for size in range(10**width)]
    return np.array(negative[::-1] + positive, dtype=f"S{_WORD}").view(np.uint64)


@lru_cache(maxsize=32)
def _fraction_texts(decimals: int, end: bytes) -> tuple[NDArray[np.uint64], NDArray[np.uint64] | None]:
    """Return the text after the whole number by its first three decimals, and by the rest where there is one."""
    if not decimals:
        return _at_right([end], 0), None
    leading = min(decimals, 3)
    rest = decimals - leading
    first = [b".%0*d" % (leading, size) for size in range(10**leading)]
    if not rest:
        return _at_right([text + end for text in first], 0), None
    second = [b"%0*d" % (rest, size) + end for size in range(10**rest)]
    return _at_right(first, rest + 1), _at_right(second, 0)


def _at_right(texts: list[bytes], after: int) -> NDArray[np.uint64]:
    """Return each text as one word, ``after`` bytes from its right end."""
    return np.frombuffer(b"".join((text + b"\0" * after).rjust(_WORD, b"\0") for text in texts), dtype=np.uint64)
