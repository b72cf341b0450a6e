"""Reads the library's data files into materials, once, and looks one up by name.

Each ``data/*.toml`` holds one ``group``; its tables ``sources``, ``warnings`` and ``notes`` hold
texts that entries share by key, any other text stands as it is. ``nk`` names a CSV in ``data/nk``.
"""

import difflib
import tomllib
from collections.abc import Mapping
from functools import cache
from pathlib import Path
from types import MappingProxyType
from typing import Any

import numpy as np

from thermfix.errors import InputError
from thermfix.files import printable, sha256_of
from thermfix.model import Angular, Estimate, Material, Table

_DATA = Path(__file__).parent / "data"
_SHARED_TEXTS = {"source": "sources", "warning": "warnings", "note": "notes"}


@cache
def library() -> Mapping[str, Material]:
    """Return all materials of the library by name, ordered by group and then name (read-only, cached)."""
    found = [material for path in sorted(_DATA.glob("*.toml")) for material in _read_group(path)]
    return MappingProxyType({material.name: material for material in sorted(found, key=lambda m: (m.group, m.name))})


def find(name: str) -> Material:
    """Return the material of exactly this name, whatever its upper and lower case.

    Raises
    ------
    InputError
        If the library has no such material; the hint names the closest ones.

    Examples
    --------
    >>> find("Copper, oxidised").angular.value
    'diffuse'
    """
    wanted = " ".join(name.split()).casefold()
    by_folded = {known.casefold(): material for known, material in library().items()}
    if wanted in by_folded:
        return by_folded[wanted]
    close = [by_folded[key].name for key in difflib.get_close_matches(wanted, by_folded, n=3, cutoff=0.5)]
    hint = f"Closest: {'; '.join(close)}." if close else "Search the library with one plain word, such as copper."
    raise InputError(f"The library has no material named {printable(name)!r}.", hint=hint)


def _read_group(path: Path) -> list[Material]:
    with path.open("rb") as stream:
        data = tomllib.load(stream)
    return [_material(data, entry) for entry in data["materials"]]


def _material(data: Mapping[str, Any], entry: Mapping[str, Any]) -> Material:
    given = dict(entry)
    for key, shared in _SHARED_TEXTS.items():
        text = given.get(key, "")
        given[key] = data.get(shared, {}).get(text, text)
    for key in ("lwir", "mwir"):
        if key in given:
            given[key] = Estimate(**given[key])
    if "nk" in given:
        given["nk"] = _read_nk(given["nk"])
    if "valid_c" in given:
        low, high = given["valid_c"]
        given["valid_c"] = (float(low), float(high))
    given["angular"] = Angular(given["angular"])
    given["words"] = tuple(given["words"])
    return Material(group=data["group"], **given)


@cache
def _read_nk(file: str) -> Table:
    path = _DATA / "nk" / file
    lines = [line for line in path.read_text(encoding="utf-8").splitlines() if not line.startswith("#")]
    names = lines[0].split(",")
    values = np.array([line.split(",") for line in lines[1:]], dtype=np.float64).T.copy()
    # Shared by every caller of the cached library: nobody may write into it.
    values.setflags(write=False)
    return Table(columns=dict(zip(names, values, strict=True)), source=f"nk/{file}", sha256=sha256_of(path))
