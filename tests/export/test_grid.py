"""The grid: its exact bytes, and that a failure leaves what was there."""

from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp

from thermfix.errors import InputError, OutOfRange
from thermfix.export import write_grid

GOLDEN = Path(__file__).parent / "golden"


def one_by_one(surface_k, decimals):
    lines = []
    for row in surface_k.astype(np.float64) - 273.15:
        fields = ["" if value != value else f"{value:.{decimals}f}" for value in row.tolist()]
        lines.append(",".join(text.lstrip("-") if not text.strip("-0.") else text for text in fields) + "\n")
    return "".join(lines).encode()


@pytest.fixture(scope="module")
def target(tmp_path_factory):
    return tmp_path_factory.mktemp("grid") / "grid.csv"


@settings(max_examples=150)
@given(
    surface_k=hnp.arrays(
        np.float32,
        hnp.array_shapes(min_dims=2, max_dims=2, max_side=9),
        elements=st.one_of(st.floats(213.25, 3276.0, width=32), st.just(float("nan"))),
    ),
    decimals=st.integers(0, 6),
)
def test_same_text_as_one_by_one(target, surface_k, decimals):
    write_grid(target, surface_k, decimals=decimals, force=True)
    assert target.read_bytes() == one_by_one(surface_k, decimals)


@pytest.mark.parametrize("shape", [(1, 1), (3, 20_000), (40_000, 1), (131, 257), (512, 640)])
@pytest.mark.parametrize("decimals", [0, 2, 4, 6])
def test_blocks_join_without_a_seam(tmp_path, shape, decimals):
    """Shapes around, within and over the block in which numbers are formatted."""
    rng = np.random.default_rng(11)
    surface_k = rng.uniform(220, 400, shape).astype(np.float32)
    surface_k[rng.random(shape) < 0.1] = np.nan
    write_grid(tmp_path / "a.csv", surface_k, decimals=decimals)
    assert (tmp_path / "a.csv").read_bytes() == one_by_one(surface_k, decimals)


def test_one_hot_pixel_among_cold_ones(tmp_path):
    """A span too wide for ready-made text takes the other way to the same digits."""
    surface_k = np.full((20, 30), 260.0, np.float32)
    surface_k[7, 9] = 3200.0
    write_grid(tmp_path / "a.csv", surface_k)
    assert (tmp_path / "a.csv").read_bytes() == one_by_one(surface_k, 2)


def test_golden(tmp_path):
    surface_k = np.array([[273.15, 273.146, 293.25], [np.nan, 213.15, 3273.15], [np.nan, np.nan, np.nan]])
    write_grid(tmp_path / "a.csv", surface_k)
    assert (tmp_path / "a.csv").read_bytes() == (GOLDEN / "frame.surface_c.csv").read_bytes()


@pytest.mark.parametrize("order", ["C", "F"])
def test_the_array_is_left_alone_whatever_its_order(tmp_path, order):
    surface_k = np.asarray(np.linspace(280, 300, 12).reshape(3, 4), order=order)
    before = surface_k.copy()
    surface_k.flags.writeable = False
    write_grid(tmp_path / "a.csv", surface_k)
    np.testing.assert_array_equal(surface_k, before)
    assert (tmp_path / "a.csv").read_bytes() == one_by_one(before, 2)


@pytest.mark.parametrize("shape", [(0, 4), (0, 0), (3, 0)])
def test_nothing_to_write(tmp_path, shape):
    write_grid(tmp_path / "a.csv", np.empty(shape, np.float32))
    assert (tmp_path / "a.csv").read_bytes() == b""


def test_refusals_come_before_any_file(tmp_path):
    with pytest.raises(OutOfRange):
        write_grid(tmp_path / "a.csv", np.zeros((2, 2)), decimals=7)
    with pytest.raises(InputError, match="shape"):
        write_grid(tmp_path / "a.csv", np.zeros(4))
    assert list(tmp_path.iterdir()) == []


def test_an_infinite_value_half_way_leaves_the_old_file(tmp_path):
    path = tmp_path / "a.csv"
    path.write_bytes(b"old\n")
    surface_k = np.full((100, 640), 300.0)
    surface_k[-1, -1] = np.inf
    with pytest.raises(InputError, match="infinite"):
        write_grid(path, surface_k, force=True)
    assert path.read_bytes() == b"old\n"
    assert [one.name for one in tmp_path.iterdir()] == ["a.csv"]


def test_an_existing_file_needs_force(tmp_path):
    path = tmp_path / "a.csv"
    path.write_bytes(b"old\n")
    with pytest.raises(InputError, match="exists already") as caught:
        write_grid(path, np.full((1, 1), 300.0))
    assert caught.value.exit_code == 2
    assert path.read_bytes() == b"old\n"
    write_grid(path, np.full((1, 1), 300.0), force=True)
    assert path.read_bytes() == b"26.85\n"
