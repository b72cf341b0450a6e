"""regions.csv and trend.csv: columns of the contract, decimals, quoting, empty fields."""

import csv
from dataclasses import replace
from pathlib import Path

import pytest

from thermfix.errors import InputError
from thermfix.export import PIXELS, REGIONS, TREND, write_regions, write_trend

GOLDEN = Path(__file__).parent / "golden"


def read(path):
    with path.open(newline="", encoding="utf-8") as stream:
        return list(csv.DictReader(stream, strict=True))


@pytest.mark.parametrize(
    ("columns", "line"),
    [
        (
            REGIONS,
            "frame,page,region,material,emissivity,view_angle_deg,distance_m,pixels,apparent_mean_c,surface_mean_c,"
            "surface_min_c,surface_max_c,surface_sd_k,u_k,expanded_u_k,cautions,"
            "radiant_exitance_w_m2,area_m2,radiant_power_w",
        ),
        (TREND, "frame,page,time,region,apparent_mean_c,surface_mean_c,expanded_u_k,cautions"),
        (PIXELS, "x,y,region,apparent_c,surface_c,u_k"),
    ],
)
def test_columns_of_the_contract(columns, line):
    assert ",".join(column.name for column in columns) == line
    assert all(column.meaning.endswith(".") for column in columns)


def test_regions_golden(tmp_path, readings):
    write_regions(tmp_path / "r.csv", [("rooms/a.tif", page, one) for page, one in enumerate(readings)])
    assert (tmp_path / "r.csv").read_bytes() == (GOLDEN / "regions.csv").read_bytes()


def test_trend_golden(tmp_path, readings):
    rows = [("a.tif", page, f"2026-03-01T08:00:0{page}", one) for page, one in enumerate(readings)]
    write_trend(tmp_path / "t.csv", rows)
    assert (tmp_path / "t.csv").read_bytes() == (GOLDEN / "trend.csv").read_bytes()


def test_reads_back(tmp_path, readings):
    write_regions(tmp_path / "r.csv", [("a.tif", 3, one) for one in readings])
    full, empty, ice = read(tmp_path / "r.csv")
    assert full["material"] == "copper, oxidised"
    assert full["cautions"] == "missing-pixels;reflection-dominated"
    assert float(full["surface_mean_c"]) == pytest.approx(341.274 - 273.15, abs=0.005)
    assert float(full["expanded_u_k"]) == pytest.approx(2 * 1.23449, abs=0.0005)
    assert empty["region"] == 'tank, "north"'
    assert {empty[name] for name in ("emissivity", "apparent_mean_c", "surface_mean_c", "surface_min_c", "u_k")} == {""}
    assert (empty["page"], empty["pixels"], empty["cautions"]) == ("3", "0", "no-value")
    assert (ice["region"], ice["surface_min_c"], ice["u_k"], ice["expanded_u_k"]) == ("=ice+water", "0.00", "", "")


@pytest.mark.parametrize("name", ["a\nb", "a\r\nb", '"', ",", "  spaced ", "-5", "@home", "\tx", "größer μ", "", "a;b"])
def test_names_are_literal(tmp_path, readings, name):
    write_regions(tmp_path / "r.csv", [(name, 0, replace(readings[0], region=name, material=name))])
    (row,) = read(tmp_path / "r.csv")
    assert (row["frame"], row["region"], row["material"]) == (name, name, name)


def test_a_name_that_is_not_text_stays_readable(tmp_path, readings):
    write_regions(tmp_path / "r.csv", [("roof\udce4.tif", 0, readings[0])])
    assert read(tmp_path / "r.csv")[0]["frame"] == r"roof\udce4.tif"


def test_refusals(tmp_path, readings):
    with pytest.raises(InputError, match="infinite"):
        write_regions(tmp_path / "r.csv", [("a.tif", 0, replace(readings[0], u_k=float("inf")))])
    with pytest.raises(InputError, match="NUL"):
        write_regions(tmp_path / "r.csv", [("a\0.tif", 0, readings[0])])
    (tmp_path / "r.csv").write_text("old")
    with pytest.raises(InputError, match="exists already"):
        write_trend(tmp_path / "r.csv", [])
    assert (tmp_path / "r.csv").read_text() == "old"
