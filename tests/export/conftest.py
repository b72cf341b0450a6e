"""Made-up readings and pixels that several tests write."""

from dataclasses import replace

import numpy as np
import pytest

from thermfix.correction.cautions import caution
from thermfix.correction.results import Reading, RegionPixels

FULL = Reading(
    region="bus bar L1",
    material="copper, oxidised",
    emissivity=0.6543,
    view_angle_deg=35.04,
    distance_m=1.2,
    pixels=120,
    pixels_read=118,
    apparent_mean_k=320.15,
    surface_mean_k=341.274,
    surface_min_k=335.0,
    surface_max_k=350.875,
    surface_sd_k=2.3456,
    u_k=1.23449,
    cautions=(caution("missing-pixels"), caution("reflection-dominated", "41 %")),
)

EMPTY = Reading(
    region='tank, "north"',
    material="",
    emissivity=None,
    view_angle_deg=None,
    distance_m=None,
    pixels=0,
    pixels_read=0,
    apparent_mean_k=None,
    surface_mean_k=None,
    surface_min_k=float("nan"),
    surface_max_k=None,
    surface_sd_k=None,
    u_k=None,
    cautions=(caution("no-value"),),
)


@pytest.fixture
def readings():
    """A full reading, one without anything, and one a hair below 0 °C."""
    return [FULL, EMPTY, replace(FULL, region="=ice+water", surface_min_k=273.149, u_k=float("nan"), cautions=())]


@pytest.fixture
def make_pixels():
    """Pixels of one region by name and number, counted along rows of 640."""

    def make(name, count, start=0):
        y, x = np.divmod(np.arange(start, start + count), 640)
        kelvin = (280 + np.arange(count) % 97 * 0.37).astype(np.float32)
        kelvin[::7] = np.nan
        return RegionPixels(region=name, x=x, y=y, apparent_k=kelvin - 1, surface_k=kelvin, u_k=kelvin / 250)

    return make
