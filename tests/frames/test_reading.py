"""Every format comes back bit for bit, and what is no frame is refused in one sentence."""

import contextlib
import os
import threading
import tracemalloc
import zipfile

import numpy as np
import pytest
import tifffile
from hypothesis import given, settings
from hypothesis import strategies as st
from PIL import Image

from thermfix.errors import FrameError
from thermfix.frames import describe_values, is_frame_name, load_frame, open_frame, unit_hints

RNG = np.random.default_rng(8)
GRID = RNG.uniform(-20, 120, (31, 47))


def same(path, expected, page=0):
    found = load_frame(path, page)
    assert found.dtype == expected.dtype.newbyteorder("=")
    np.testing.assert_array_equal(found, expected)


@pytest.mark.parametrize("dtype", ["u1", "u2", "u4", "i1", "i2", "i4", "f4", "f8"])
@pytest.mark.parametrize("order", ["<", ">"])
@pytest.mark.parametrize("how", [
    {}, {"bigtiff": True}, {"compression": "zlib"}, {"compression": "lzw"}, {"tile": (16, 16)},
    {"tile": (16, 16), "compression": "zlib"}, {"rowsperstrip": 7},
])  # fmt: skip
def test_tiff(tmp_path, dtype, order, how):
    values = GRID.clip(0, None).astype(dtype)
    options = dict(how)
    path = tmp_path / "a.tif"
    with tifffile.TiffWriter(path, bigtiff=options.pop("bigtiff", False), byteorder=order) as writer:
        writer.write(values, photometric="minisblack", **options)
    same(path, values)


@pytest.mark.parametrize("compression", [None, "zlib"])
@pytest.mark.parametrize("contiguous", [True, False])
def test_pages_of_a_stack(tmp_path, compression, contiguous):
    pages = RNG.integers(0, 60000, (9, 20, 30)).astype(np.uint16)
    path = tmp_path / "a.tif"
    with tifffile.TiffWriter(path) as writer:
        for page in pages:
            writer.write(page, compression=compression, contiguous=contiguous and compression is None)
    with open_frame(path) as file:
        assert (file.pages, file.shape) == (9, (20, 30))
        for i, page in enumerate(pages):
            np.testing.assert_array_equal(file.read(i), page)
        with pytest.raises(FrameError, match="pages 0 to 8"):
            file.read(9)


@pytest.mark.parametrize("dtype", [np.uint8, np.uint16])
def test_grey_png(tmp_path, dtype):
    values = GRID.clip(0, 200).astype(dtype) * (250 if dtype is np.uint16 else 1)
    Image.fromarray(values.astype(dtype)).save(tmp_path / "a.png")
    same(tmp_path / "a.png", values.astype(dtype))


@pytest.mark.parametrize("values", [
    GRID, np.asfortranarray(GRID), GRID.astype(">f4"), GRID.astype(np.int16), np.stack([GRID, GRID + 1]),
])  # fmt: skip
def test_npy_and_npz(tmp_path, values):
    np.save(tmp_path / "a.npy", values)
    np.savez(tmp_path / "b.npz", values)
    last = values if values.ndim == 2 else values[1]
    for name in ("a.npy", "b.npz"):
        same(tmp_path / name, np.asarray(last), 0 if values.ndim == 2 else 1)


def test_npz_of_several_frames(tmp_path):
    np.savez(tmp_path / "a.npz", first=GRID, second=GRID + 1)
    with open_frame(tmp_path / "a.npz") as file:
        assert file.pages == 2
        np.testing.assert_array_equal(file.read(1), GRID + 1)
    np.savez(tmp_path / "b.npz", first=GRID, second=GRID[:5])
    with pytest.raises(FrameError, match="one size"):
        open_frame(tmp_path / "b.npz")


NUMBERS = st.floats(-99, 999).map(lambda v: round(v, 2))
HEADS = ["", "Frame export\nUnit: °C\n", "x;y;note\n\n"]


@given(
    values=st.lists(
        st.lists(st.floats(-99, 999).map(lambda v: round(v, 2)), min_size=4, max_size=4), min_size=2, max_size=6
    ),
    layout=st.sampled_from([(",", "."), (";", "."), (";", ","), ("\t", "."), ("\t", ","), (" ", "."), (" ", ",")]),
    encoding=st.sampled_from(["utf-8", "utf-8-sig", "utf-16"]),
    end=st.sampled_from(["\n", "\r\n"]),
    head=st.sampled_from(HEADS),
    trailing=st.booleans(),
)
@settings(max_examples=150)
def test_text_grids(tmp_path_factory, values, layout, encoding, end, head, trailing):
    mark, decimal = layout
    close = mark if trailing and mark != " " else ""
    lines = [mark.join(f"{v:.2f}".replace(".", decimal) for v in row) + close for row in values]
    path = tmp_path_factory.mktemp("text") / "a.csv"
    path.write_bytes((head + "\n".join(lines) + "\n").replace("\n", end).encode(encoding))
    np.testing.assert_allclose(load_frame(path), values)


def test_text_with_gaps_is_no_number_there(tmp_path):
    (tmp_path / "b.csv").write_text("1;2,5;7\n3;;nan\n", encoding="utf-8")
    found = load_frame(tmp_path / "b.csv")
    assert np.isnan(found[1, 1:]).all()
    assert found[0, 1] == 2.5


def picture(mode):
    return Image.new(mode, (8, 6), 3 if mode in ("L", "P") else tuple([3] * len(mode)))


REFUSED = {
    "jpeg named tif": (lambda p: picture("RGB").save(p, "JPEG"), "a.tif", "colours are not temperatures"),
    "colour png": (lambda p: picture("RGB").save(p), "a.png", "colours are not temperatures"),
    "palette png": (lambda p: picture("P").save(p), "a.png", "colours are not temperatures"),
    "colour tiff": (lambda p: picture("RGB").save(p), "a.tif", "colours are not temperatures"),
    "webp": (lambda p: picture("RGB").save(p, "WEBP"), "a.csv", "colours are not temperatures"),
    "gif": (lambda p: picture("P").save(p, "GIF"), "a.csv", "colours are not temperatures"),
    "bmp": (lambda p: picture("RGB").save(p, "BMP"), "a.csv", "colours are not temperatures"),
    "empty": (lambda p: p.write_bytes(b""), "a.tif", "empty"),
    "folder": (lambda p: p.mkdir(), "a.tif", "a folder"),
    "pipe": (lambda p: os.mkfifo(p), "a.tif", "not an ordinary file"),
    "objects": (lambda p: np.save(p, np.array([[{}]]), allow_pickle=True), "a.npy", "never loaded"),
    "complex": (lambda p: np.save(p, np.ones((3, 3), complex)), "a.npy", "must be integers or floating"),
    "booleans": (lambda p: np.save(p, np.ones((3, 3), bool)), "a.npy", "must be integers or floating"),
    "one dimension": (lambda p: np.save(p, np.ones(5)), "a.npy", "rows and columns"),
    "words": (lambda p: p.write_text("no numbers\nhere\n"), "a.csv", "no line of numbers"),
    "ragged": (lambda p: p.write_text("1,2,3\n4,5,6\n7,8\n"), "a.csv", "line 3: 2 values"),
    "binary": (lambda p: p.write_bytes(bytes(range(256)) * 9), "a.csv", "neither text nor a frame"),
    "zip of other things": (lambda p: zipfile.ZipFile(p, "w").writestr("x.txt", "hello"), "a.npz", "damaged NPZ"),
}


@pytest.mark.parametrize("case", REFUSED)
def test_refused_in_one_sentence(tmp_path, case):
    make, name, words = REFUSED[case]
    make(tmp_path / name)
    with pytest.raises(FrameError, match=words) as caught:
        open_frame(tmp_path / name).read(0)
    assert "\n" not in str(caught.value)


def test_missing_file(tmp_path):
    with pytest.raises(FrameError, match="cannot be read"):
        open_frame(tmp_path / "gone.tif")


def test_a_small_file_that_claims_much_is_refused_before_memory_is_taken(tmp_path):
    path = tmp_path / "a.tif"
    tifffile.imwrite(path, np.zeros((4, 4), np.uint16))
    data = path.read_bytes()
    (tmp_path / "b.tif").write_bytes(data)
    with tifffile.TiffFile(tmp_path / "b.tif", mode="r+b") as file:
        file.pages[0].tags["ImageWidth"].overwrite(65000)
        file.pages[0].tags["ImageLength"].overwrite(65000)
    tracemalloc.start()
    with pytest.raises(FrameError):
        load_frame(tmp_path / "b.tif")
    assert tracemalloc.get_traced_memory()[1] < 20e6
    tracemalloc.stop()


def seeds(tmp_path):
    tifffile.imwrite(tmp_path / "s.tif", GRID.astype(np.uint16), compression="zlib")
    Image.fromarray(GRID.clip(0, 99).astype(np.uint16)).save(tmp_path / "s.png")
    np.save(tmp_path / "s.npy", GRID.astype(np.float32))
    np.savez_compressed(tmp_path / "s.npz", GRID.astype(np.float32))
    (tmp_path / "s.csv").write_text("\n".join(";".join(f"{v:.2f}".replace(".", ",") for v in row) for row in GRID))
    return [tmp_path / f"s.{ending}" for ending in ("tif", "png", "npy", "npz", "csv")]


def test_mutated_files_give_an_array_or_one_sentence(tmp_path):
    """150 seeded mutations of each format: overwritten, cut and doubled bytes."""
    rng = np.random.default_rng(3)
    for seed in seeds(tmp_path):
        original = seed.read_bytes()
        for _ in range(150):
            data = bytearray(original)
            for _ in range(rng.integers(1, 6)):
                data[rng.integers(len(data))] = rng.integers(256)
            if rng.random() < 0.3:
                data = data[: rng.integers(len(data))]
            target = tmp_path / f"m{seed.suffix}"
            target.write_bytes(bytes(data))
            with contextlib.suppress(FrameError):
                assert load_frame(target).ndim == 2


def test_threads_read_what_one_reads(tmp_path):
    pages = RNG.integers(0, 60000, (40, 30, 40)).astype(np.uint16)
    path = tmp_path / "a.tif"
    tifffile.imwrite(path, pages, compression="zlib", photometric="minisblack")
    found = {}
    with open_frame(path) as file:
        threads = [threading.Thread(target=lambda i=i: found.update({i: file.read(i)})) for i in range(40)]
        for thread in threads:
            thread.start()
        for thread in threads:
            thread.join()
    for i, page in enumerate(pages):
        np.testing.assert_array_equal(found[i], page)


def test_memory_is_flat_in_the_number_of_pages(tmp_path):
    path = tmp_path / "a.tif"
    with tifffile.TiffWriter(path) as writer:
        for _ in range(2000):
            writer.write(np.zeros((64, 64), np.uint16), contiguous=True)
    tracemalloc.start()
    with open_frame(path) as file:
        for i in range(file.pages):
            file.read(i)
    assert tracemalloc.get_traced_memory()[1] < 20e6
    tracemalloc.stop()


def test_hints_suggest_and_say_so():
    assert any("°C" in one for one in unit_hints(np.full((4, 4), 25.0)))
    assert any("hundredths of a kelvin" in one for one in unit_hints(np.full((4, 4), 29315, np.uint16)))
    assert unit_hints(np.full((4, 4), np.nan)) == []
    assert dict(describe_values(np.array([[1.0, np.nan]])))["no number"] == "1 of 2 pixels"
    assert is_frame_name("A.TIFF")
    assert not is_frame_name("a.jpg")


@pytest.mark.parametrize("share", [0.3, 0.5, 0.95])
def test_a_cut_off_file_of_many_pages_does_not_lose_them_silently(tmp_path, share):
    path = tmp_path / "a.tif"
    with tifffile.TiffWriter(path) as writer:
        for _ in range(9):
            writer.write(GRID.astype(np.uint16), contiguous=False)
    data = path.read_bytes()
    path.write_bytes(data[: int(share * len(data))])
    with pytest.raises(FrameError), open_frame(path) as file:
        [file.read(page) for page in range(file.pages)]
