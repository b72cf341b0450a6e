"""The sample frames: made again they are the same, their hashes hold, and corrected they come near the truth."""

import ast
import csv
import hashlib
import subprocess
import sys
import tomllib
from pathlib import Path

import numpy as np
import pytest

from thermfix.correction import Instrument, run
from thermfix.frames import open_frame
from thermfix.inspection import load_inspection
from thermfix.quantities import ZERO_C_K
from thermfix.session.batch import plan_of

SAMPLES = Path(__file__).parents[2] / "sample_frames"
FOLDERS = ("substation", "heating", "sequence", "counts", "fitted", "solved", "geometry")
MADE = tomllib.loads((SAMPLES / "MANIFEST.toml").read_text(encoding="utf-8"))["files"]
FRAMES = [one["file"] for one in MADE if not one["file"].endswith(("truth.csv", "blackbody.csv"))]

STEPS = {
    "heating/pipe_elbow.tif": 0.001,
    "heating/heat_exchanger.npy": 0.001,
    "heating/wall.csv": 0.01,
    "solved/foil.npy": 0.001,
}
"""Last digit of frames that are not whole numbers. [°C]."""


def pages_of(path):
    with open_frame(path) as file:
        return np.stack([np.asarray(file.read(page), dtype=np.float64) for page in range(file.pages)])


def truth_of(folder):
    with (folder / "truth.csv").open(newline="", encoding="utf-8") as stream:
        return {(row["frame"], int(row["page"]), row["region"]): row for row in csv.DictReader(stream)}


@pytest.fixture(scope="module")
def again(tmp_path_factory):
    out = tmp_path_factory.mktemp("samples")
    done = subprocess.run(
        [sys.executable, "-W", "error", SAMPLES / "simulate.py", "--out", out],
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    assert done.stdout == ""
    return out


@pytest.mark.parametrize("one", MADE, ids=lambda one: one["file"])
def test_hash_of_manifest_holds(one):
    assert hashlib.sha256((SAMPLES / one["file"]).read_bytes()).hexdigest() == one["sha256"]
    assert one["unit"]
    assert one["demonstrates"]
    assert (SAMPLES.parent / one["script"]).is_file()


def test_manifest_lists_every_frame_that_is_there():
    endings = {".tif", ".png", ".npy", ".npz"}
    there = {f"{path.parent.name}/{path.name}" for path in SAMPLES.glob("*/*") if path.suffix in endings}
    assert there | {"heating/wall.csv"} == set(FRAMES)


def test_samples_stay_small():
    assert sum(path.stat().st_size for path in SAMPLES.rglob("*") if path.is_file()) <= 6e6


def test_simulator_knows_nothing_of_the_corrections():
    for path in SAMPLES.rglob("*.py"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            names = [one.name for one in node.names] if isinstance(node, ast.Import) else []
            names += [node.module or ""] if isinstance(node, ast.ImportFrom) else []
            assert not [name for name in names if name.split(".")[0] == "thermfix"], path


@pytest.mark.parametrize("file", FRAMES)
def test_made_again_the_numbers_are_the_same(again, file):
    """One step of the stored numbers is allowed, to a pixel in a thousand: processors differ in the last bit of exp."""
    before, after = pages_of(SAMPLES / file), pages_of(again / file)
    step = STEPS.get(file, 1.0)
    assert np.abs(after - before).max() <= step * 1.01
    assert (after != before).mean() <= 1e-3


@pytest.mark.parametrize("folder", FOLDERS)
def test_made_again_the_truth_is_the_same(again, folder):
    before, after = truth_of(SAMPLES / folder), truth_of(again / folder)
    assert before.keys() == after.keys()
    for key, row in before.items():
        # Half a step of the last digit may round either way.
        for column, step in (("surface_true_mean_c", 0.001), ("plain_reading_c", 0.01)):
            assert float(after[key][column]) == pytest.approx(float(row[column]), abs=1.01 * step)


def test_blackbody_shots_made_again_are_the_same(again):
    tables = [
        np.loadtxt(root / "counts" / "blackbody.csv", delimiter=",", skiprows=1).astype(np.float64)
        for root in (SAMPLES, again)
    ]
    assert np.abs(tables[0] - tables[1]).max() <= 0.101  # one step of the last digit


def test_one_folder_alone_is_the_same_as_among_the_others(again, tmp_path):
    subprocess.run(
        [sys.executable, SAMPLES / "simulate.py", "--only", "counts", "--out", tmp_path],
        capture_output=True,
        check=True,
    )
    assert sorted(path.name for path in tmp_path.iterdir()) == ["MANIFEST.toml", "counts"]
    for path in (tmp_path / "counts").iterdir():
        assert path.read_bytes() == (again / "counts" / path.name).read_bytes()


def readings_of(folder):
    """Return every reading with its row of truth."""
    inspection = load_inspection(SAMPLES / folder)
    truth = truth_of(SAMPLES / folder)
    found = []
    for frame in inspection.frames:
        with open_frame(inspection.folder / frame.file) as file:
            plan = plan_of(Instrument(inspection.camera), inspection, frame, file)
            for page in range(file.pages):
                result = run(plan, file.read(page), grid=False, budgets=False)
                found += [(one, truth[frame.file, page, one.region]) for one in result.readings]
    assert len(found) == len(truth)
    return found


@pytest.mark.parametrize("folder", FOLDERS)
def test_corrected_readings_hold_the_truth(folder):
    """The inspector's inputs are off by up to about one standard uncertainty; U is two of all of them together."""
    for reading, row in readings_of(folder):
        if reading.surface_mean_k is None:
            assert reading.region in MIRRORS, row
            assert reading.cautions
            continue
        error = reading.surface_mean_k - ZERO_C_K - float(row["surface_true_mean_c"])
        assert abs(error) <= reading.expanded_u_k, row


def test_solved_inputs_are_those_of_the_simulated_surfaces():
    """The inspector's tape and probe are off by half a standard uncertainty or less; 2 u holds both."""
    true = {"header": 0.42, "valve": 0.55}
    found = {one.region: one.emissivity for one, _ in readings_of("solved") if one.region in true}
    assert found == pytest.approx(true, abs=0.015)


def test_stated_calibration_is_the_one_fitted_to_the_blackbody_shots():
    stated = load_inspection(SAMPLES / "fitted").camera.calibration
    celsius, counts = np.loadtxt(SAMPLES / "counts" / "blackbody.csv", delimiter=",", skiprows=1).T
    kelvin = celsius + ZERO_C_K
    of_formula = stated.c / np.expm1(14387.768775 / (stated.a_um * kelvin + stated.b_um_k)) + stated.d
    # Noise of a shot is 0.3 counts; four constants over eleven shots leave less than three of it.
    assert np.abs(of_formula - counts).max() <= 0.9


MIRRORS = {"foil", "steel"}
"""Little of what leaves them is their own: a reading may be refused, with a caution that says why."""

EXACT = {
    # Inspection files that state the true inputs: what is left is noise, rounding, and the two sides' own errors.
    # Mean of over 100 pixels of 0.06 K noise: below 0.006 K, at three sigma.
    ("mirrors.tif", "glass"): 0.02,
    ("mirrors.tif", "label"): 0.02,
    ("plate_cool.tif", "plate"): 0.02,
    ("plate_warm.tif", "plate"): 0.02,
    # The view is a sphere with parallel rays; the simulated rays spread.
    ("tank_sphere.tif", "tank below the level"): 0.02,
    ("tank_sphere.tif", "tank, rim"): 0.2,
    ("pipe_cylinder.tif", "painted pipe"): 0.1,
    ("tilted_cabinet.tif", "door"): 0.05,
    # Shares of narrow targets are exact; the noise is divided by them.
    ("small_fuses.tif", "fuse, 2.5 px"): 0.1,
    ("small_fuses.tif", "speck"): 4.0,  # noise of 49 pixels, 0.35 K together, over a fill of 0.39, at three sigma
}


def test_corrections_agree_with_the_simulation_where_the_inputs_are_true():
    errors = {
        (row["frame"], row["region"]): reading.surface_mean_k - ZERO_C_K - float(row["surface_true_mean_c"])
        for reading, row in readings_of("geometry")
        if (row["frame"], row["region"]) in EXACT
    }
    assert {key: errors[key] for key, most in EXACT.items() if not abs(errors[key]) <= most} == {}


@pytest.mark.parametrize("folder", FOLDERS)
def test_readme_figures_are_those_of_the_truth(folder):
    """Every temperature in the README's table stands in truth.csv, to its one decimal."""
    text = (SAMPLES / "README.md").read_text(encoding="utf-8")
    known = {
        f"{float(row[column]):.1f}".replace("-", "−")
        for row in truth_of(SAMPLES / folder).values()
        for column in ("surface_true_mean_c", "plain_reading_c")
    }
    for line in text.splitlines():
        if line.startswith(f"| `{folder}/"):
            said = [word.strip("°C,;") for cell in line.split("|")[3:5] for word in cell.split()]
            figures = [word for word in said if word.lstrip("−").replace(".", "").isdigit() and "." in word]
            assert figures
            assert [figure for figure in figures if figure not in known] == []
