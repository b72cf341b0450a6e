"""Finds materials by words: any order, any case, accents ignored, beginnings and near spellings count."""

import difflib
import re
import unicodedata
from functools import cache

from thermfix.materials.catalogue import library
from thermfix.model import Material

_NEAR = 0.82  # lets "aluminum" reach "aluminium" (0.94) and keeps "scale" from "cable" (0.80)
_SHORTEST_NEAR = 4

# How well a word fits, lower is better; one found nowhere rules the material out.
_WHOLE, _BEGINNING, _NEARLY = 0, 2, 4
_SYNONYM = 1  # added where the word fits a synonym, not the name
_GROUP, _NOTE = 6, 7


def search(words: str) -> list[Material]:
    """Return the materials that all the words fit, the best first.

    A word fits where it is, begins, or nearly spells a word of the name or of the synonyms, or
    where it begins a word of the group or of the note. Without words all materials are returned,
    in the order of the library.

    Examples
    --------
    >>> [material.name for material in search("aluminum foil")]
    ['aluminium foil', 'aluminium foil tape']
    """
    wanted = _split(words)
    ranked = []
    for material in library().values():
        ranks = [_rank(word, material) for word in wanted]
        known = [rank for rank in ranks if rank is not None]
        if len(known) == len(ranks):
            # Among equals the shorter name is the plainer material; sorting keeps the library's order.
            ranked.append((sum(level for level, _ in known), sum(place for _, place in known), material))
    if wanted:
        ranked.sort(key=lambda item: (item[0], item[1], len(item[2].name)))
    return [material for _, _, material in ranked]


def _rank(word: str, material: Material) -> tuple[int, int] | None:
    """Return how well the word fits and where in the name, or None where it does not fit."""
    name, synonyms, group, note = _tokens(material.name)
    fits = [(level, place) for place, token in enumerate(name) for level in _levels(word, token)]
    fits += [(level + _SYNONYM, 0) for token in synonyms for level in _levels(word, token)]
    fits += [(_GROUP, 0) for token in group if token.startswith(word)]
    fits += [(_NOTE, 0) for token in note if token.startswith(word)]
    return min(fits, default=None)


def _levels(word: str, token: str) -> list[int]:
    if word == token:
        return [_WHOLE]
    if token.startswith(word):
        return [_BEGINNING]
    return [_NEARLY] if _near(word, token) else []


def _near(word: str, token: str) -> bool:
    if min(len(word), len(token)) < _SHORTEST_NEAR:
        return False
    matcher = difflib.SequenceMatcher(None, word, token, autojunk=False)
    return matcher.quick_ratio() >= _NEAR and matcher.ratio() >= _NEAR


@cache
def _tokens(name: str) -> tuple[list[str], list[str], list[str], list[str]]:
    material = library()[name]
    return (
        _split(material.name),
        _split(" ".join(material.words)),
        _split(material.group),
        _split(material.note),
    )


def _split(text: str) -> list[str]:
    plain = "".join(c for c in unicodedata.normalize("NFKD", text) if not unicodedata.combining(c))
    return re.findall(r"\w+", plain.casefold())
