"""Names of outputs: readable where they can be, different always."""

import unicodedata

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.errors import InputError
from thermfix.export import frame_stems, page_stem


@pytest.mark.parametrize(
    ("files", "stems"),
    [
        ([], []),
        (["panel_004.tif"], ["panel_004"]),
        (["a.b.tif", "no_ending"], ["a.b", "no_ending"]),
        (["rooms/north/a.tif", "rooms\\south\\a.tif"], ["rooms__north__a", "rooms__south__a"]),
        (["./a.tif"], ["a"]),
        (["a.tif", "a.npy", "b.tif"], ["a.tif", "a.npy", "b"]),
        (["roof/a.tif", "roof/a.csv"], ["roof__a.tif", "roof__a.csv"]),
        (["A.tif", "a.csv"], ["A.tif", "a.csv"]),
    ],
)
def test_ruling(files, stems):
    assert frame_stems(files) == stems


@pytest.mark.parametrize(
    "files",
    [
        ["a/b.tif", "a__b.tif"],
        ["A.tif", "a.tif"],
        ["a.tif", "a.npy", "a.tif.csv"],
        ["gr\u00fcn.tif", "gru\u0308n.tif"],
        ["straße.tif", "strasse.tif"],
        ["a.tif", "./a.tif"],
    ],
)
def test_what_still_collides_is_told_apart(files):
    stems = frame_stems(files)
    assert_different(stems)
    assert all(stem.lower().startswith(files[0][0].lower()) for stem in stems)
    assert frame_stems(files[::-1]) == stems[::-1]


def assert_different(names):
    folded = {unicodedata.normalize("NFC", unicodedata.normalize("NFC", name).casefold()) for name in names}
    assert len(folded) == len(names)


PIECES = st.lists(st.sampled_from(["a", "A", "b", "_", "/", ".tif", ".TIF", ".npy", "-p00000", "-p00001"]), min_size=1)
PATHS = PIECES.map("".join).filter(lambda path: path.strip("/."))


@settings(max_examples=200)
@given(files=st.lists(PATHS, unique=True, max_size=12), data=st.data())
def test_no_two_pages_share_a_name(files, data):
    pages = data.draw(st.lists(st.integers(1, 3), min_size=len(files), max_size=len(files)))
    stems = frame_stems(files, pages)
    names = [page_stem(stem, page, count) for stem, count in zip(stems, pages, strict=True) for page in range(count)]
    assert_different(names)
    assert not any("/" in name for name in names)


def test_a_file_called_like_a_page():
    assert frame_stems(["a.tif", "a-p00000.tif"]) == ["a", "a-p00000"]
    assert frame_stems(["a.tif", "a-p00000.tif"], [2, 1]) == ["a.tif", "a-p00000.tif"]
    assert frame_stems(["a.tif", "a-p00000.tif"], [2, 2]) == ["a", "a-p00000"]


def test_a_long_path_is_cut_and_stays_different():
    deep = "/".join(["ein langer Ordnername mit Umlaut ü"] * 12)
    stems = frame_stems([f"{deep}/a.tif", f"{deep}/b.tif"])
    assert_different(stems)
    assert all(len((stem + "-p00000.surface_c.csv").encode()) <= 255 for stem in stems)


def test_pages():
    assert [page_stem("a", page, 3) for page in (0, 2)] == ["a-p00000", "a-p00002"]
    assert page_stem("a", 123_456, 200_000) == "a-p123456"
    assert page_stem("a", 0, 1) == "a"


def test_listed_twice():
    with pytest.raises(InputError, match=r"a\.tif.* twice"):
        frame_stems(["a.tif", "b.tif", "a.tif"])
