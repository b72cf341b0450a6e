"""Speed of the correction as multiples of copying the same frame, measured in one run.

The marks are those of a quiet machine; the gate is twice that, so that a busy one does not fail it.
Run with ``pytest -m bench -s`` to see the figures.
"""

from timeit import repeat

import numpy as np
import pytest

from thermfix.correction import Instrument, make_plan
from thermfix.geometry.views import Imaging, plane_view
from thermfix.model import Camera, Estimate, Frame, Scene
from thermfix.radiometry import Band

pytestmark = pytest.mark.bench

SHAPE = (512, 640)
GATE = 2.0


def seconds(function, number=5, rounds=15):
    return min(repeat(function, number=number, repeat=rounds)) / number


@pytest.fixture(scope="module")
def copy_seconds():
    frame = np.ones(SHAPE, np.float32)
    target = np.empty_like(frame)
    return seconds(lambda: np.copyto(target, frame), number=50)


@pytest.fixture(scope="module")
def background():
    one = Estimate(value=0.9, u=0.02)
    scene = Scene(
        reflected_k=Estimate(value=295.0, u=1.0),
        air_k=Estimate(value=293.0),
        humidity_pct=Estimate(value=50.0),
        pressure_hpa=Estimate(value=1013.0),
        co2_ppm=Estimate(value=420.0),
        emissivity=one,
        distance_m=Estimate(value=5.0),
    )
    camera = Camera(band_um=(7.5, 14.0), noise_k=0.05, accuracy_k=2.0)
    return make_plan(Instrument(camera), Frame(file="x.npy", scene=scene), SHAPE).background


@pytest.fixture(scope="module")
def radiance():
    kelvin = np.random.default_rng(3).uniform(280, 360, SHAPE)
    return Band.rectangular(7.5, 14.0).radiance(kelvin).astype(np.float32)


def report(name, ratio, mark):
    print(f"\n{name}: {ratio:.1f} × copyto (mark {mark})")
    assert ratio <= GATE * mark


def test_temperature(background, radiance, copy_seconds):
    report("T from radiance", seconds(lambda: background.temperature(radiance)) / copy_seconds, 25)


def test_temperature_and_uncertainty(background, radiance, copy_seconds):
    report("T and U from radiance", seconds(lambda: background.temperature_and_u(radiance)) / copy_seconds, 40)


def test_stored_temperatures(background, copy_seconds):
    """The whole way from stored float32 °C; no mark was set for it."""
    stored = np.random.default_rng(3).uniform(10, 90, SHAPE).astype(np.float32)
    signal = background.instrument.signal
    report("T from stored °C", seconds(lambda: background.temperature(signal.radiance(stored))) / copy_seconds, 50)


def test_uncertainty_costs_little(background, radiance):
    alone = seconds(lambda: background.temperature(radiance))
    both = seconds(lambda: background.temperature_and_u(radiance))
    print(f"\nU costs {both / alone:.2f} × T alone (mark 1.7)")
    assert both / alone <= 1.2 * 1.7


def test_geometry_of_a_whole_frame():
    """Angle, range and footprint of 640 × 512 pixels: the mark is 60 ms on a quiet machine."""
    y, x = (one.ravel() + 0.5 for one in np.indices(SHAPE))
    imaging = Imaging(frame=SHAPE, field_of_view_deg=(25.0, 19.0), distance_m=2.0)
    taken = seconds(lambda: plane_view(imaging, x, y, 30.0, 0.0, (320, 256)), number=1, rounds=5)
    print(f"\ngeometry of a whole frame: {1000 * taken:.0f} ms (mark 60)")
    assert taken <= GATE * 0.060
