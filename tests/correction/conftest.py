"""Scenes and layers for the tests of the correction."""

from dataclasses import replace

import numpy as np
import pytest

from thermfix.correction import Instrument
from thermfix.correction.conditions import Conditions
from thermfix.correction.layer import Geometry, Layer
from thermfix.model import Camera, Estimate, Scene


def exactly(value: float) -> Estimate:
    return Estimate(value=value, u=0.0)


@pytest.fixture(scope="session")
def scene_of():
    """Make a scene from plain numbers in °C and the like; everything else as in a quiet room."""

    def make(**given) -> Scene:
        values = {"reflected": 20.0, "air": 20.0, "humidity_pct": 50.0, "pressure_hpa": 1013.25, "co2_ppm": 420.0}
        values |= {"emissivity": 0.95, **given}
        return Scene(
            reflected_k=Estimate(value=values["reflected"] + 273.15, u=1.0),
            air_k=Estimate(value=values["air"] + 273.15, u=1.0),
            humidity_pct=Estimate(value=values["humidity_pct"], u=5.0),
            pressure_hpa=exactly(values["pressure_hpa"]),
            co2_ppm=exactly(values["co2_ppm"]),
            emissivity=Estimate(value=values["emissivity"], u=0.02),
            distance_m=None if values.get("distance_m") is None else Estimate(value=values["distance_m"], u=0.1),
            transmittance=None
            if values.get("transmittance") is None
            else Estimate(value=values["transmittance"], u=0.01),
            camera_side_k=values.get("camera_side_k"),
            window=values.get("window"),
        )

    return make


@pytest.fixture(scope="session")
def layer_of(scene_of):
    """Make a layer for one surface (default: grey, the scene's emissivity) at one angle."""

    def make(band_um=(7.5, 14.0), surface=None, angle_deg=0.0, **given) -> Layer:
        instrument = Instrument(Camera(band_um=band_um, noise_k=0.05, accuracy_k=2.0))
        scene = scene_of(**given)
        circumstances = Conditions(instrument=instrument, scene=scene).of(None)
        if surface is not None:
            circumstances = replace(circumstances, surface=surface(instrument.band))
        distance = None if scene.distance_m is None else np.array([scene.distance_m.value])
        return Layer(
            instrument=instrument,
            circumstances=circumstances,
            geometry=Geometry(angle_deg=np.array([angle_deg]), distance_m=distance),
        )

    return make
