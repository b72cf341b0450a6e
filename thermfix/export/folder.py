"""The output folder: made, and checked before any work, so that a long run does not fail at its end."""

import os
from collections.abc import Iterable
from pathlib import Path

from thermfix.errors import InputError
from thermfix.files import printable

_SHOWN = 5


def claim_output(folder: Path, names: Iterable[str], *, force: bool = False) -> None:
    """Make the folder if it is missing, and refuse if a file to be written there exists already.

    Parameters
    ----------
    folder : Path
        Where the results go; parents are made too.
    names : iterable of str
        Names of all files to be written into it; repeats do no harm.
    force : bool
        Existing files may be overwritten (existing folders of such a name may not).

    Raises
    ------
    InputError
        If the folder is a file or cannot be made, or if any of the names exists: the first five are
        named, and how many there are.
    """
    if folder.exists() and not folder.is_dir():
        raise InputError(f"{printable(folder)} is a file, not a folder.", hint="Choose another --out folder.")
    wanted = dict.fromkeys(names)
    # A dangling link counts as existing: writing would replace it.
    taken = [name for name in wanted if os.path.lexists(folder / name) and (not force or (folder / name).is_dir())]
    if taken:
        raise _taken(folder, taken, force)
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise InputError(
            f"Cannot make the folder {printable(folder)}: {error.strerror}.", hint="Choose another --out folder."
        ) from error


def _taken(folder: Path, taken: list[str], force: bool) -> InputError:
    shown = ", ".join(printable(name) for name in taken[:_SHOWN])
    more = f" and {len(taken) - _SHOWN} more" if len(taken) > _SHOWN else ""
    verb = ("exists" if len(taken) == 1 else "exist") + " already"
    if force:
        verb = "is a folder, not a file" if len(taken) == 1 else "are folders, not files"
    count = f"{len(taken)} outputs" if len(taken) > 1 else "An output"
    return InputError(
        f"{count} {verb} in {printable(folder)}: {shown}{more}.",
        hint="Choose another --out folder." if force else "Use --force to overwrite, or choose another --out folder.",
    )
