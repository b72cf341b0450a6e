"""Search by words: any order, spelling variants, beginnings, and the best match first."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.materials import library, search


def _names(words: str) -> list[str]:
    return [material.name for material in search(words)]


@pytest.mark.parametrize(
    ("words", "first"),
    [
        ("copper", "copper, bare"),
        ("oxidized copper", "copper, oxidised"),
        ("COPPER oxidised", "copper, oxidised"),
        ("aluminum anodized", "aluminium, anodised"),
        ("plasterboard", "gypsum board"),
        ("concret", "concrete"),
        ("isulator glazed", "porcelain insulator, glazed"),
        ("galvanized new", "steel, galvanised, new"),
        ("pv glass", "photovoltaic module, cover glass"),
        ("béton concrète", None),
        ("concrète", "concrete"),
        ("stainles scale", "stainless steel, heavily oxidised"),
        ("quartz glass", "fused silica, smooth"),
    ],
)
def test_first_answer(words: str, first: str | None) -> None:
    assert (_names(words) or [None])[0] == first


def test_all_words_must_fit() -> None:
    assert _names("copper brick") == []


def test_an_american_spelling_finds_every_entry_of_the_british_one() -> None:
    british = {name for name in library() if name.startswith("aluminium")}
    assert british
    assert british <= set(_names("aluminum"))


def test_a_word_of_the_name_ranks_before_a_synonym_and_that_before_a_note() -> None:
    names = _names("tape")
    assert names.index("electrical tape, PVC") < names.index("polyimide, smooth")
    assert names.index("masking tape, paper") < names.index("polyimide, smooth")


def test_a_group_finds_all_its_members() -> None:
    members = {material.name for material in library().values() if material.group == "metals"}
    assert members <= set(_names("metals"))


def test_near_spellings_do_not_drown_the_answer() -> None:
    assert "cable sheath, PVC" not in _names("scale")
    assert _names("water") == ["water"]


def test_nothing_asked_gives_the_whole_library() -> None:
    assert search("") == search(" ,; ") == list(library().values())


@settings(deadline=None, max_examples=60)
@given(st.text(max_size=30))
def test_any_text_is_answered_without_error_or_repeats(words: str) -> None:
    names = _names(words)
    assert len(names) == len(set(names))


@settings(deadline=None, max_examples=60)
@given(st.sampled_from(sorted(library())))
def test_a_full_name_finds_itself(name: str) -> None:
    assert name in _names(name)
