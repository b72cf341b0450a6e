"""Writing so that nothing is lost, hashing, and text from files made safe to print."""

import contextlib
import hashlib
import os
import tempfile
from collections.abc import Iterator
from pathlib import Path
from typing import BinaryIO

from thermfix.errors import InputError


@contextlib.contextmanager
def atomic_write(path: Path, *, force: bool = True) -> Iterator[BinaryIO]:
    """Yield a binary file that replaces ``path`` only when the block ends without an error.

    The bytes are on disk before the old file goes, so that a reader sees the old file or the new
    one, never a mixture. Raises ``InputError`` if the file exists and ``force`` is False, or if the
    folder cannot be written.
    """
    if not force and path.exists():
        raise InputError(f"{printable(path)} exists already.", hint="Use --force to overwrite it.")
    try:
        handle, name = tempfile.mkstemp(prefix=f".{path.name[:80]}.", suffix=".part", dir=path.parent)
    except OSError as error:
        raise InputError(
            f"Cannot write in {printable(path.parent)}: {error.strerror}.", hint="Choose another folder."
        ) from error
    try:
        with os.fdopen(handle, "wb") as stream:
            yield stream
            stream.flush()
            os.fsync(stream.fileno())
        # mkstemp makes the file private; give it the mode an ordinary new file would have.
        umask = os.umask(0)
        os.umask(umask)
        os.chmod(name, 0o666 & ~umask)
        os.replace(name, path)
    except OSError as error:
        raise InputError(f"Cannot write {printable(path)}: {error.strerror}.", hint="Is the disk full?") from error
    finally:
        with contextlib.suppress(FileNotFoundError):
            os.unlink(name)


def sha256_of(path: Path) -> str:
    """Return the hexadecimal SHA-256 of a file's bytes."""
    with path.open("rb") as stream:
        return hashlib.file_digest(stream, "sha256").hexdigest()


def printable(text: object) -> str:
    r"""Return text with control, format and surrogate characters shown as escapes, safe for a terminal.

    >>> printable("panel\x1b[31m.tif")
    'panel\\x1b[31m.tif'
    """
    return "".join(c if c.isprintable() else c.encode("unicode_escape", "surrogatepass").decode() for c in str(text))
