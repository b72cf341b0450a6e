"""The TIFF reads back with two independent readers."""

import subprocess
import sys

import numpy as np
import pytest
import tifffile
from PIL import Image

from thermfix.errors import InputError
from thermfix.export import write_surface_tiff


@pytest.fixture
def surface_k():
    kelvin = np.random.default_rng(2).uniform(220, 3000, (24, 3)).astype(np.float32)
    kelvin[3] = np.nan
    return kelvin


def test_two_pages_in_plain_terms(tmp_path, surface_k):
    u_k = surface_k / 100
    path = tmp_path / "a.surface.tif"
    write_surface_tiff(path, surface_k, u_k)
    with tifffile.TiffFile(path) as tiff:
        assert len(tiff.pages) == 2
        celsius, uncertainty = (page.asarray() for page in tiff.pages)
        words = [page.description for page in tiff.pages]
    assert celsius.dtype == uncertainty.dtype == np.float32
    np.testing.assert_array_equal(celsius, (surface_k.astype(np.float64) - 273.15).astype(np.float32))
    np.testing.assert_array_equal(uncertainty, u_k)
    assert "degrees Celsius" in words[0]
    assert "uncertainty" in words[1]
    assert "kelvin" in words[1]


def test_another_reader(tmp_path, surface_k):
    write_surface_tiff(tmp_path / "a.tif", surface_k, surface_k / 100)
    with Image.open(tmp_path / "a.tif") as image:
        assert (image.mode, image.size, image.n_frames) == ("F", (3, 24), 2)
        image.seek(1)
        np.testing.assert_array_equal(np.asarray(image), surface_k / 100)


def test_no_uncertainty_is_a_page_of_nan(tmp_path, surface_k):
    write_surface_tiff(tmp_path / "a.tif", surface_k.astype(np.float64), None)
    assert np.isnan(tifffile.imread(tmp_path / "a.tif", key=1)).all()


def test_same_input_same_bytes(tmp_path, surface_k):
    for name in ("a.tif", "b.tif"):
        write_surface_tiff(tmp_path / name, surface_k, None)
    assert (tmp_path / "a.tif").read_bytes() == (tmp_path / "b.tif").read_bytes()


@pytest.mark.parametrize(("shape", "u_shape"), [((4,), None), ((0, 4), None), ((4, 4), (4, 5))])
def test_shapes_that_do_not_fit(tmp_path, shape, u_shape):
    with pytest.raises(InputError, match="shape"):
        write_surface_tiff(tmp_path / "a.tif", np.zeros(shape), None if u_shape is None else np.zeros(u_shape))
    assert list(tmp_path.iterdir()) == []


def test_the_library_is_loaded_late():
    code = "import thermfix.export, sys; print('tifffile' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "False"
