"""Text as a field of a table, after RFC 4180."""

from thermfix.errors import InputError
from thermfix.files import printable


def quoted(text: str) -> bytes:
    r"""Return text as one field: as it is, or in quotes where it holds a comma, a quote or a line break.

    UTF-8; a byte of a file name that is not UTF-8 becomes a ``\udc..`` escape. A name that starts like
    a spreadsheet formula is written as it is (decision 0004).

    Raises
    ------
    InputError
        If the text holds a NUL character, which readers of tables cut off or refuse.

    References
    ----------
    .. [1] Y. Shafranovich, "Common Format and MIME Type for Comma-Separated Values (CSV) Files", RFC 4180,
       October 2005, section 2, rules 5 to 7.

    Examples
    --------
    >>> quoted('bus bar "L1", left')
    b'"bus bar ""L1"", left"'
    """
    if "\0" in text:
        raise InputError(
            f"The name “{printable(text)}” holds a NUL character, which a table cannot carry.", hint="Rename it."
        )
    if any(mark in text for mark in ',"\r\n'):
        text = '"' + text.replace('"', '""') + '"'
    return text.encode("utf-8", "backslashreplace")
