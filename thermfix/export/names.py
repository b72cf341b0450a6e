"""What the outputs of a frame are called."""

import hashlib
import re
import unicodedata
from collections import Counter, defaultdict
from collections.abc import Sequence
from pathlib import PurePosixPath

from thermfix.errors import InputError
from thermfix.files import printable

_LONGEST = 180  # bytes of a stem; file systems allow 255 with the endings
_PAGE = re.compile(r"(.+)-p\d{5,}")


def page_stem(stem: str, page: int, pages: int) -> str:
    """Return the name of one page's outputs, without their endings: ``-pNNNNN`` (from 0) if the file has several.

    >>> page_stem("pump", 7, 20), page_stem("pump", 0, 1)
    ('pump-p00007', 'pump')
    """
    return f"{stem}-p{page:05d}" if pages > 1 else stem


def frame_stems(files: Sequence[str], pages: Sequence[int] | None = None) -> list[str]:
    """Return what the outputs of each frame start with, one per file and all different.

    Parameters
    ----------
    files : sequence of str
        Frame files relative to the inspection's folder.
    pages : sequence of int, optional
        Number of pages of each; one each if left out. With it, the pages of ``a.tif`` and a file that
        is itself called ``a-p00000.tif`` are told apart.

    Returns
    -------
    list of str
        The relative path with separators as ``__``, without its ending. Frames that would collide keep
        their endings; those that still do get eight hexadecimal digits of their path's SHA-256 too, as
        does a name over 180 bytes, which is cut.

    Raises
    ------
    InputError
        If a file is listed twice.

    Notes
    -----
    Names that differ only in case, or in how an accent is encoded, collide: some file systems do not
    tell them apart. A name depends on the set of files, not on their order.

    Examples
    --------
    >>> frame_stems(["roof/a.tif", "b.tif", "b.npy"])
    ['roof__a', 'b.tif', 'b.npy']
    """
    twice = [file for file, count in Counter(files).items() if count > 1]
    if twice:
        raise InputError(f"The frame “{printable(twice[0])}” is listed twice.", hint="Keep one of the two.")
    several = [count > 1 for count in pages] if pages is not None else [False] * len(files)
    level = [0] * len(files)
    while True:
        stems = [_stem(file, one) for file, one in zip(files, level, strict=True)]
        clashing = _clashing(stems, several)
        if not clashing:
            return stems
        for index in clashing:
            level[index] += 1


def _stem(file: str, level: int) -> str:
    """Return the name of a file; each level tells it better apart from others (the digits grow without end)."""
    path = PurePosixPath(file.replace("\\", "/").lstrip("/"))
    stem = "__".join((path if level else path.with_suffix("")).parts)
    digits = 8 * max(0, level - 1)
    if len(stem.encode("utf-8", "surrogateescape")) > _LONGEST:
        stem = stem.encode("utf-8", "surrogateescape")[:_LONGEST].decode("utf-8", "ignore")
        digits = max(8, digits)
    return f"{stem}-{hashlib.sha256(file.encode('utf-8', 'surrogateescape')).hexdigest()[:digits]}" if digits else stem


def _clashing(stems: Sequence[str], several: Sequence[bool]) -> list[int]:
    """Return the positions of names that a file system could take for one another."""
    folded = [unicodedata.normalize("NFC", unicodedata.normalize("NFC", stem).casefold()) for stem in stems]
    with_pages = {name for name, many in zip(folded, several, strict=True) if many}
    groups: defaultdict[str, list[int]] = defaultdict(list)
    for index, name in enumerate(folded):
        page = _PAGE.fullmatch(name)
        owner = page.group(1) if page and page.group(1) in with_pages and not several[index] else name
        groups[owner].append(index)
    return [index for group in groups.values() if len(group) > 1 for index in group]
