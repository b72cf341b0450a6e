"""Run a decoder of a file format so that whatever it trips over becomes one sentence."""

import contextlib
import threading
import warnings
from collections.abc import Iterator
from pathlib import Path

from thermfix.errors import FrameError
from thermfix.files import printable

AGAIN = "Export or copy the file again."

# Filters of warnings belong to the whole process: one thread at a time may change them.
_FILTERS = threading.Lock()


@contextlib.contextmanager
def decoding(path: Path, what: str = "it is damaged or cut off", hint: str = AGAIN) -> Iterator[None]:
    """Turn any error but a ``FrameError`` into one that names the file."""
    try:
        yield
    except FrameError:
        raise
    except MemoryError as error:
        raise FrameError(f"{printable(path)} does not fit into memory.", hint="Export it in smaller parts.") from error
    except OSError as error:
        reason = error.strerror or what
        raise FrameError(f"{printable(path)} cannot be read: {reason}.", hint=hint) from error
    except Exception as error:
        raise FrameError(f"{printable(path)} cannot be read: {what}.", hint=hint) from error


@contextlib.contextmanager
def without_warnings() -> Iterator[None]:
    """Keep the warnings of a decoder from reaching the terminal."""
    with _FILTERS, warnings.catch_warnings():
        warnings.simplefilter("ignore")
        yield
