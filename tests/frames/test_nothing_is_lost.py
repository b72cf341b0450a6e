"""Numbers are never dropped, cast or made up without a word; decoders stay silent and memory flat."""

import contextlib
import subprocess
import sys
import tracemalloc
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

import numpy as np
import pytest
import tifffile
from PIL import Image

from thermfix.errors import FrameError
from thermfix.frames import describe_values, load_frame, open_frame

NAN = float("nan")
GRID = np.random.default_rng(5).integers(1, 60000, (40, 64)).astype(np.uint16)


@pytest.mark.parametrize(("text", "expected"), [
    ("nan,nan\n1,2\n", [[NAN, NAN], [1, 2]]),
    (",\n1,2\n", [[NAN, NAN], [1, 2]]),
    ("-;-\n1,5;2\n", [[NAN, NAN], [1.5, 2]]),
    ("unit C\n;;\n1;2;3\n", [[NAN] * 3, [1, 2, 3]]),
    ("unit C;;\n;;\n1;2;3\n", [[1, 2, 3]]),
    ("1\t2\n\t\n3\t4\n", [[1, 2], [NAN, NAN], [3, 4]]),
    ("1,2,\n3,4,5\n", [[1, 2, NAN], [3, 4, 5]]),
    ("1,2,3\n4,5,\n", [[1, 2, 3], [4, 5, NAN]]),
    ("1,2,\n3,4,\n", [[1, 2], [3, 4]]),
    ("1,,\n3,4,\n", [[1, NAN, NAN], [3, 4, NAN]]),
    (",,\n,,\n", [[NAN] * 3] * 2),
    ("nan nan\nnan nan\n", [[NAN] * 2] * 2),
    ("1,234\n5,678\n", [[1, 234], [5, 678]]),
    ("1,5 2,5\n3,5 4,5\n", [[1.5, 2.5], [3.5, 4.5]]),
    ('"1","\u22122"\n', [[1, -2]]),
    ("\ufeff1,2\n", [[1, 2]]),
])  # fmt: skip
def test_rows_and_cells_of_text(tmp_path, text, expected):
    (tmp_path / "a.csv").write_text(text, encoding="utf-8")
    np.testing.assert_array_equal(load_frame(tmp_path / "a.csv"), expected)


def test_a_grid_without_numbers_in_its_first_300_rows_keeps_them(tmp_path):
    (tmp_path / "a.csv").write_text(",,\n" * 300 + "1,2,3\n", encoding="utf-8")
    assert load_frame(tmp_path / "a.csv").shape == (301, 3)


@pytest.mark.parametrize("encoding", ["utf-16-le", "utf-16-be"])
def test_wide_text_without_its_mark(tmp_path, encoding):
    (tmp_path / "a.txt").write_bytes("1.5;2\r\n3;4\r\n".encode(encoding))
    np.testing.assert_array_equal(load_frame(tmp_path / "a.txt"), [[1.5, 2], [3, 4]])


@pytest.mark.parametrize(("text", "words"), [
    ("1.5;2,5\n3;4\n", "line 1: there are decimal points and commas"),
    ("1;2\n3;1_0\n", "line 2, value 2: “1_0” is not a number"),
    ("OL,2,3\n4,5,6\n", "line 1, value 1: “OL” is not a number"),
    ("1;2\n3;x\x1b[31m\n", r"“x\\x1b\[31m” is not a number"),
    ("1,2,3\n4,5,6,7\n", "line 2: 4 values, but the first line of numbers has 3"),
])  # fmt: skip
def test_faults_of_text_are_named(tmp_path, text, words):
    (tmp_path / "a.csv").write_text(text, encoding="utf-8")
    with pytest.raises(FrameError, match=words) as caught:
        load_frame(tmp_path / "a.csv")
    assert caught.value.hint
    assert caught.value.exit_code == 3


def test_pages_of_another_type_are_not_cast(tmp_path):
    with tifffile.TiffWriter(tmp_path / "a.tif") as writer:
        writer.write(GRID)
        writer.write(GRID.astype(np.float32) + 0.5)
    with open_frame(tmp_path / "a.tif") as file, pytest.raises(FrameError, match="type float32"):
        file.read(1)


@pytest.mark.parametrize("how", [{}, {"tile": (16, 16)}, {"compression": "lzw"}, {"rowsperstrip": 5}])
@pytest.mark.parametrize("kept", [0.95, 0.6, 0.2])
def test_cut_off_tiff_is_refused_not_filled_with_zeros(tmp_path, how, kept):
    path = tmp_path / "a.tif"
    tifffile.imwrite(path, GRID, photometric="minisblack", **how)
    data = path.read_bytes()
    path.write_bytes(data[: int(kept * len(data))])
    with pytest.raises(FrameError):
        load_frame(path)


def test_absent_tiles_are_refused_not_filled_with_zeros(tmp_path):
    path = tmp_path / "a.tif"
    tifffile.imwrite(path, GRID, tile=(16, 16), photometric="minisblack")
    with tifffile.TiffFile(path, mode="r+b") as file:
        counts = list(file.pages[0].databytecounts)
        file.pages[0].tags["TileByteCounts"].overwrite([0, *counts[1:]])
    with pytest.raises(FrameError, match="absent"):
        load_frame(path)


def test_times_of_pages(tmp_path):
    with tifffile.TiffWriter(tmp_path / "a.tif") as writer:
        for day in (1, 2):
            writer.write(GRID, datetime=f"2026:01:0{day} 10:00:00", contiguous=False)
    with open_frame(tmp_path / "a.tif") as file:
        assert [file.time(i) for i in range(2)] == ["2026-01-01T10:00:00", "2026-01-02T10:00:00"]
    np.save(tmp_path / "b.npy", GRID)
    with open_frame(tmp_path / "b.npy") as file:
        assert file.time(0) is None


@pytest.mark.parametrize("order", ["C", "F"])
@pytest.mark.parametrize("save", [np.savez, np.savez_compressed])
def test_archived_stacks_in_any_order(tmp_path, order, save):
    pages = np.array(np.stack([GRID + i for i in range(5)]), order=order)
    save(tmp_path / "a.npz", one=pages, two=pages[0] + 9)
    with open_frame(tmp_path / "a.npz") as file:
        assert file.pages == 6
        for i in (3, 0, 5, 4, 1, 2):
            np.testing.assert_array_equal(file.read(i), pages[i] if i < 5 else pages[0] + 9)


def test_threads_read_an_archive(tmp_path):
    np.savez_compressed(tmp_path / "a.npz", np.stack([GRID + i for i in range(30)]))
    with open_frame(tmp_path / "a.npz") as file, ThreadPoolExecutor(4) as pool:
        for i, found in enumerate(pool.map(file.read, range(30))):
            np.testing.assert_array_equal(found, GRID + i)


@pytest.mark.parametrize("save", [np.save, np.savez_compressed])
def test_memory_of_stacks_is_flat(tmp_path, save):
    path = tmp_path / ("a.npy" if save is np.save else "a.npz")
    save(path, np.zeros((2000, 96, 96), np.uint16))  # 37 MB
    tracemalloc.start()
    with open_frame(path) as file:
        for i in range(file.pages):
            file.read(i)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert peak < 20e6


def test_memory_of_separate_pages_is_flat(tmp_path):
    path = tmp_path / "a.tif"
    with tifffile.TiffWriter(path) as writer:
        for _ in range(2000):
            writer.write(np.zeros((96, 96), np.uint16), contiguous=False, compression="zlib", metadata=None)
    tracemalloc.start()
    with open_frame(path) as file:
        assert file.pages == 2000
        for i in range(file.pages):
            file.read(i)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert peak < 20e6


def seeds(folder):
    tifffile.imwrite(folder / "plain.tif", GRID, photometric="minisblack")
    tifffile.imwrite(folder / "tiles.tif", GRID, photometric="minisblack", tile=(16, 16), compression="lzw")
    tifffile.imwrite(folder / "big.tif", np.stack([GRID, GRID]), photometric="minisblack", bigtiff=True)
    Image.fromarray(GRID).save(folder / "a.png")
    np.save(folder / "a.npy", GRID)
    np.savez(folder / "a.npz", GRID)
    (folder / "a.csv").write_text("\n".join(";".join(f"{v / 100:.2f}" for v in row) for row in GRID[:8, :8]))
    return sorted(folder.iterdir())


@pytest.mark.filterwarnings("default")
def test_mutated_headers_print_nothing(tmp_path, capfd, recwarn):
    """200 seeded mutations of each, half of them in the first 400 bytes, where the headers are."""
    rng = np.random.default_rng(11)
    (tmp_path / "seeds").mkdir()
    for seed in seeds(tmp_path / "seeds"):
        target = tmp_path / f"m{seed.suffix}"
        for trial in range(200):
            data = bytearray(seed.read_bytes())
            reach = min(len(data), 400) if trial % 2 else len(data)
            for at in rng.integers(reach, size=4):
                data[at] = rng.integers(256)
            target.write_bytes(data)
            with contextlib.suppress(FrameError), open_frame(target) as file:
                file.facts()
                file.time(0)
                assert file.read(0).shape == file.shape
    assert capfd.readouterr() == ("", "")
    assert not [str(one.message) for one in recwarn]


def test_packed_tiff_without_the_codec_library(tmp_path):
    """A process in which it cannot be imported: what is read is the same."""
    tifffile.imwrite(tmp_path / "a.tif", GRID, photometric="minisblack", compression="lzw")
    np.save(tmp_path / "a.npy", GRID)
    code = (
        "import sys; sys.modules['imagecodecs'] = None; from thermfix.frames import load_frame; "
        "print((load_frame(sys.argv[1]) == load_frame(sys.argv[2])).all())"
    )
    done = subprocess.run(
        [sys.executable, "-W", "error", "-c", code, tmp_path / "a.tif", tmp_path / "a.npy"],
        capture_output=True, text=True, check=False, cwd=Path(__file__).parents[2],
    )  # fmt: skip
    assert (done.stdout.strip(), done.stderr) == ("True", "")


def test_all_nan_loads_and_a_closed_file_may_be_closed_again(tmp_path):
    for name in ("a.npy", "a.npz", "a.tif"):
        values = np.full((3, 4), NAN, np.float32)
        save = {"a.npy": np.save, "a.npz": np.savez, "a.tif": tifffile.imwrite}[name]
        save(tmp_path / name, values)
        with open_frame(tmp_path / name) as file:
            np.testing.assert_array_equal(file.read(0), values)
            file.close()


def test_share_at_the_limits():
    rows = dict(describe_values(np.array([[0, 65535], [7, 65535]], np.uint16)))
    assert rows["at the highest number"].startswith("2 pixels are 65535, 50.00%")
    assert rows["at the lowest number"].startswith("1 pixels are 0, 25.00%")
