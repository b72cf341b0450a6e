"""The long table of pixels reads back, number by number."""

import csv
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from thermfix.correction.results import RegionPixels
from thermfix.errors import InputError, OutOfRange
from thermfix.export import PIXELS, write_pixels

GOLDEN = Path(__file__).parent / "golden"


def read(path):
    with path.open(newline="", encoding="utf-8") as stream:
        return list(csv.DictReader(stream, strict=True))


def text(value, decimals):
    return "" if value != value else f"{value:.{decimals}f}"


def assert_reads_back(path, regions, decimals):
    rows = read(path)
    expected = [
        {
            "x": str(x),
            "y": str(y),
            "region": region.region,
            "apparent_c": text(float(apparent) - 273.15, decimals),
            "surface_c": text(float(surface) - 273.15, decimals),
            "u_k": text(float(u), 3),
        }
        for region in regions
        for x, y, apparent, surface, u in zip(
            region.x, region.y, region.apparent_k, region.surface_k, region.u_k, strict=True
        )
    ]
    assert rows == expected


@pytest.mark.parametrize("decimals", range(7))
def test_reads_back(tmp_path, make_pixels, decimals):
    regions = [make_pixels("wall", 700), make_pixels('tank, "north"', 90, 20_000), make_pixels("none", 0)]
    write_pixels(tmp_path / "p.csv", regions, decimals=decimals)
    assert_reads_back(tmp_path / "p.csv", regions, decimals)


def test_a_region_larger_than_a_block(tmp_path, make_pixels):
    regions = [make_pixels("wall", 40_000), make_pixels("a name of more than sixteen letters", 17_000, 100)]
    write_pixels(tmp_path / "p.csv", regions)
    assert_reads_back(tmp_path / "p.csv", regions, 2)


def test_golden(tmp_path):
    region = RegionPixels(
        region="bus bar, L1",
        x=np.array([0, 639, 12_345]),
        y=np.array([0, 511, 9999]),
        apparent_k=np.array([300.0, np.nan, 273.149], np.float32),
        surface_k=np.array([310.5, np.nan, np.nan], np.float32),
        u_k=np.array([1.2345, np.nan, 1234.5], np.float32),
    )
    write_pixels(tmp_path / "p.csv", [region])
    assert (tmp_path / "p.csv").read_bytes() == (GOLDEN / "frame.pixels.csv").read_bytes()


@given(name=st.text(st.characters(exclude_characters="\0", exclude_categories=["Cs"]), max_size=30))
def test_any_name_reads_back(tmp_path_factory, name):
    path = tmp_path_factory.mktemp("names") / "p.csv"
    one = np.ones(1)
    write_pixels(path, [RegionPixels(region=name, x=one, y=one, apparent_k=one, surface_k=one, u_k=one)])
    assert [row["region"] for row in read(path)] == [name]


def test_no_region_leaves_the_header(tmp_path):
    write_pixels(tmp_path / "p.csv", [])
    assert (tmp_path / "p.csv").read_text() == ",".join(column.name for column in PIXELS) + "\n"


def test_refusals(tmp_path, make_pixels):
    with pytest.raises(OutOfRange):
        write_pixels(tmp_path / "p.csv", [], decimals=-1)
    with pytest.raises(InputError, match="NUL"):
        write_pixels(tmp_path / "p.csv", [make_pixels("a\0b", 3)])
    assert list(tmp_path.iterdir()) == []
