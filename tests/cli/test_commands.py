"""The commands as a person types them: exit codes, streams, refusals, and results that agree with each other."""

import csv
import json
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
import tifffile

ROOT = Path(__file__).parents[2]
SAMPLES = ROOT / "sample_frames"
GOLDEN = Path(__file__).parent / "golden"

HEAD = """format = "thermfix-inspection/1"
[camera]
band_um = [8, 14]
noise_k = 0.05
accuracy_k = 2
[camera.signal]
quantity = "temperature"
unit = "C"
[scene]
reflected_c = 20
air_c = 20
distance_m = 1
"""


def thermfix(*words, cwd=ROOT):
    command = [sys.executable, "-m", "thermfix", *map(str, words)]
    return subprocess.run(command, cwd=cwd, capture_output=True, text=True, check=False, timeout=180)


def rows(path):
    with path.open(newline="", encoding="utf-8") as stream:
        return list(csv.DictReader(stream))


@pytest.fixture
def folder(tmp_path):
    """A folder with one small frame and a way to write its inspection."""
    np.save(tmp_path / "a.npy", np.full((20, 30), 50.0))

    def write(text="", frames='[[frames]]\nfile = "a.npy"\n'):
        (tmp_path / "inspection.toml").write_text(HEAD + text + frames, encoding="utf-8")
        return tmp_path

    return write


@pytest.mark.parametrize("name", ["substation", "heating", "counts", "sequence", "geometry", "fitted", "solved"])
def test_samples_pass_the_check(name):
    done = thermfix("check", SAMPLES / name)
    assert done.returncode == 0, done.stderr


@pytest.mark.parametrize("name", ["substation", "heating", "counts", "sequence", "geometry", "fitted", "solved"])
def test_samples_come_near_their_truth(name, tmp_path):
    """Every reading of the simulated frames holds the truth within its uncertainty; most are far nearer."""
    done = thermfix("correct", SAMPLES / name, "--out", tmp_path / "out")
    assert done.returncode == 0, done.stderr
    found = {(r["frame"], r["page"], r["region"]): r for r in rows(tmp_path / "out" / "regions.csv")}
    errors = []
    for truth in rows(SAMPLES / name / "truth.csv"):
        reading = found[truth["frame"], truth["page"], truth["region"]]
        if not reading["surface_mean_c"]:
            assert reading["cautions"]
            continue
        error = float(reading["surface_mean_c"]) - float(truth["surface_true_mean_c"])
        assert abs(error) <= float(reading["expanded_u_k"]), truth
        errors.append(abs(error))
    assert np.median(errors) < 0.5


@pytest.mark.parametrize("name", ["substation", "sequence"])
def test_golden_tables(name, tmp_path):
    """The tables of two samples as they were looked at and accepted."""
    thermfix("correct", SAMPLES / name, "--out", tmp_path / "out")
    for table in ("regions.csv", "trend.csv"):
        made, golden = tmp_path / "out" / table, GOLDEN / f"{name}.{table}"
        assert made.exists() == golden.exists()
        if made.exists():
            assert made.read_text() == golden.read_text()


def test_outputs_agree_with_each_other(folder, tmp_path):
    region = (
        '[[regions]]\nname = "r, <b>x</b>"\nshape = { rectangle = [5, 5, 15, 15] }\n'
        "emissivity = { value = 0.8, u = 0.02 }\n"
    )
    done = thermfix("correct", folder(region), "--out", tmp_path / "out", "--pixels", "--tiff", "--decimals", "3")
    assert done.returncode == 0, done.stderr
    out = tmp_path / "out"
    (reading,) = rows(out / "regions.csv")
    assert reading["region"] == "r, <b>x</b>"
    grid = np.loadtxt(out / "a.surface_c.csv", delimiter=",")
    pages = tifffile.imread(out / "a.surface.tif")
    listed = rows(out / "a.pixels.csv")
    assert grid.shape == (20, 30)
    assert float(reading["surface_mean_c"]) == pytest.approx(grid[10, 10], abs=0.006)
    assert pages[0][10, 10] == pytest.approx(grid[10, 10], abs=0.001)
    assert len(listed) == 100
    assert float(listed[0]["surface_c"]) == pytest.approx(grid[5, 5], abs=0.001)
    assert float(listed[0]["u_k"]) == pytest.approx(pages[1][5, 5], abs=0.001)
    record = json.loads((out / "record.json").read_text())
    assert record["frames"][0]["sha256"]
    assert sum(float(row["share_pct"]) for row in rows(out / "budget.csv")) == pytest.approx(100, abs=0.1)


def test_same_input_same_bytes(folder, tmp_path):
    for name in ("one", "two"):
        thermfix("correct", folder('[[regions]]\nname = "r"\nshape = { point = [3, 3] }\n'), "--out", tmp_path / name)
    for path in sorted((tmp_path / "one").iterdir()):
        first, second = path.read_text(), (tmp_path / "two" / path.name).read_text()
        if path.name == "record.json":
            first, second = (json.dumps({**json.loads(text), "written": ""}) for text in (first, second))
        assert first == second


def test_nothing_is_overwritten_unasked(folder, tmp_path):
    assert thermfix("correct", folder(), "--out", tmp_path / "out").returncode == 0
    again = thermfix("correct", tmp_path, "--out", tmp_path / "out")
    assert again.returncode == 2
    assert "--force" in again.stderr
    assert thermfix("correct", tmp_path, "--out", tmp_path / "out", "--force").returncode == 0


BAD = {
    "unknown key": ("[scene2]\nx = 1\n", 2, "scene2"),
    "emissivity in percent": (
        '[[regions]]\nname = "r"\nshape = { point = [1, 1] }\nemissivity = 95\n',
        2,
        "emissivity",
    ),
    "outside the frame": ('[[regions]]\nname = "r"\nshape = { point = [99, 1] }\n', 2, "outside the frame"),
    "unknown material": ('[[regions]]\nname = "r"\nshape = { point = [1, 1] }\nmaterial = "cooper"\n', 2, "copper"),
}


@pytest.mark.parametrize("case", BAD)
def test_refused_inspections(case, folder, tmp_path):
    text, code, words = BAD[case]
    done = thermfix("correct", folder(text), "--out", tmp_path / "out")
    assert done.returncode == code
    assert words in done.stderr
    assert "Traceback" not in done.stderr
    assert done.stdout == ""
    assert not (tmp_path / "out").exists()


def test_missing_frame_file(folder, tmp_path):
    done = thermfix("check", folder(frames='[[frames]]\nfile = "gone.npy"\n'))
    assert done.returncode == 2
    assert "gone.npy" in done.stderr


def test_one_bad_frame_does_not_stop_the_rest(folder, tmp_path):
    (tmp_path / "b.csv").write_text("1,2,3\n4,5\n6,7,8\n")
    region = '[[regions]]\nname = "r"\nshape = { point = [1, 1] }\n'
    done = thermfix(
        "correct", folder(region, '[[frames]]\nfile = "b.csv"\n[[frames]]\nfile = "a.npy"\n'), "--out", tmp_path / "out"
    )
    assert done.returncode == 3
    assert "b.csv, line 2" in done.stderr
    assert [row["frame"] for row in rows(tmp_path / "out" / "regions.csv")] == ["a.npy"]


def test_truncated_tiff_and_jpeg_are_refused(tmp_path):
    path = tmp_path / "cut.tif"
    tifffile.imwrite(path, np.zeros((50, 50), np.uint16))
    path.write_bytes(path.read_bytes()[:2000])
    (tmp_path / "photo.tif").write_bytes(b"\xff\xd8\xff\xe0" + bytes(100))
    for name, words in (("cut.tif", "Export or copy the file again"), ("photo.tif", "colours are not temperatures")):
        done = thermfix("info", tmp_path / name)
        assert done.returncode == 3
        assert words in done.stderr
        assert "Traceback" not in done.stderr


def test_all_nan_frame_and_negative_emission_leave_empty_readings(folder, tmp_path):
    """Neither a traceback nor an invented number: an empty reading, and exit code 4 where nothing is left."""
    region = '[[regions]]\nname = "r"\nshape = { rectangle = [1, 1, 9, 9] }\n'
    np.save(tmp_path / "a.npy", np.full((20, 30), np.nan))
    done = thermfix("correct", folder(region), "--out", tmp_path / "nan")
    assert done.returncode == 4
    assert rows(tmp_path / "nan" / "regions.csv")[0]["cautions"].endswith("no-value")
    np.save(tmp_path / "a.npy", np.full((20, 30), -20.0))
    done = thermfix("correct", folder(region + "emissivity = 0.1\nreflected_c = 60\n"), "--out", tmp_path / "dark")
    reading = rows(tmp_path / "dark" / "regions.csv")[0]
    assert reading["surface_mean_c"] == ""
    assert "no-emission" in reading["cautions"]


def test_new_asks_for_what_it_cannot_know(tmp_path):
    np.save(tmp_path / "a.npy", np.full((20, 30), 50.0))
    assert thermfix("new", tmp_path).returncode == 0
    checked = thermfix("check", tmp_path)
    assert checked.returncode == 2
    assert "unit" in checked.stderr
    assert "band_um" in checked.stderr
    assert thermfix("new", tmp_path).returncode == 2
    done = thermfix("new", tmp_path, "--band", "8", "14", "--unit", "C", "--force")
    assert done.returncode == 0, done.stderr
    assert thermfix("check", tmp_path).returncode == 0


def test_calibrate_gives_back_what_the_sample_uses():
    done = thermfix("calibrate", SAMPLES / "counts" / "blackbody.csv")
    assert done.returncode == 0, done.stderr
    assert 'model = "sakuma-hattori"' in done.stdout
    assert "Largest residual" in done.stderr


def test_explain_and_materials_and_usage():
    done = thermfix("explain", SAMPLES / "substation", "bus bar L1", "--minus", "bus bar L3")
    assert done.returncode == 0
    assert "L(T_s) = left / (τ_w τ_a ε)" in done.stdout
    assert "bus bar L1 − bus bar L3" in done.stdout
    assert thermfix("explain", SAMPLES / "substation", "nobody").returncode == 2
    assert "copper, oxidised" in thermfix("materials", "copper").stdout
    assert thermfix("materials", "unobtainium").returncode == 2
    assert thermfix("correct").returncode == 2


def test_blur_from_an_edge(tmp_path):
    """A vertical step of one pixel's slope: the edge is found, and a patch outside the frame refused."""
    x = np.arange(40)[None, :] + 0.1 * np.arange(40)[:, None]
    np.save(tmp_path / "edge.npy", 20 + 10 / (1 + np.exp(-(x - 22) / 0.45)))
    done = thermfix("calibrate", tmp_path / "edge.npy", "--edge", "5", "5", "35", "35")
    assert done.returncode == 0, done.stderr
    assert 0.4 < float(done.stdout.split("value = ")[1].split(",")[0]) < 1.0
    assert thermfix("calibrate", tmp_path / "edge.npy", "--edge", "5", "5", "99", "35").returncode == 2


def test_saturated_pixels_are_no_reading(folder, tmp_path):
    """The highest number of a 16-bit type is where the signal ends."""
    stored = np.full((20, 30), 5000, np.uint16)
    stored[:5, :5] = 65535
    tifffile.imwrite(tmp_path / "a.tif", stored)
    text = HEAD.replace('unit = "C"', 'unit = "C"\nscale = 0.01')
    region = '[[regions]]\nname = "r"\nshape = { rectangle = [0, 0, 10, 10] }\n'
    hot = '[[regions]]\nname = "hot"\nshape = { rectangle = [0, 0, 5, 5] }\n'
    (tmp_path / "inspection.toml").write_text(text + region + hot + '[[frames]]\nfile = "a.tif"\n')
    assert thermfix("correct", tmp_path, "--out", tmp_path / "out").returncode == 0
    first, second = rows(tmp_path / "out" / "regions.csv")
    assert "partly-saturated" in first["cautions"]
    assert second["surface_mean_c"] == ""
    assert second["cautions"].endswith("saturated")


def test_the_calibration_has_its_own_row_in_the_budget(tmp_path):
    """u_k of the calibration widens the budget of counts by itself."""
    for name in ("inspection.toml", "boiler_door.npz", "blackbody.csv"):
        (tmp_path / name).write_bytes((SAMPLES / "counts" / name).read_bytes())
    text = (tmp_path / "inspection.toml").read_text(encoding="utf-8")
    (tmp_path / "inspection.toml").write_text(text.replace("[camera.calibration]", "[camera.calibration]\nu_k = 0.7"))
    assert thermfix("correct", tmp_path, "--out", tmp_path / "out").returncode == 0
    found = [row for row in rows(tmp_path / "out" / "budget.csv") if row["input"] == "camera: calibration"]
    assert len(found) == 4
    assert 0.7 <= float(found[0]["contribution_k"]) < 0.9
