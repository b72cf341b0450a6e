"""A window by its material: the plate's own optics in the band."""

import pytest

from thermfix.correction import Instrument
from thermfix.correction.conditions import Conditions
from thermfix.model import Camera, Estimate, Window


def test_germanium_plate(scene_of):
    """Uncoated germanium reflects a little over half: τ ≈ 2n/(n² + 1) = 0.47 less absorption, ρ ≈ 0.53."""
    pane = Window(
        transmittance=None,
        reflectance=Estimate(value=0.0, assumed=True),
        temperature_k=Estimate(value=300.0),
        material="germanium",
        thickness_mm=Estimate(value=3.0),
    )
    about = Conditions(instrument=Instrument(Camera(band_um=(8.0, 11.0))), scene=scene_of(window=pane)).of(None)
    n = 4.005
    assert about.window.tau.value == pytest.approx(2 * n / (n**2 + 1), abs=0.01)
    assert about.window.rho.value == pytest.approx(1 - 2 * n / (n**2 + 1), abs=0.02)
    assert about.window.warning


def test_an_oblique_plate_passes_less(scene_of):
    def pane(angle_deg):
        return Window(
            transmittance=None,
            reflectance=Estimate(value=0.0, assumed=True),
            temperature_k=Estimate(value=300.0),
            material="zinc selenide",
            thickness_mm=Estimate(value=5.0),
            angle_deg=Estimate(value=angle_deg),
        )

    instrument = Instrument(Camera(band_um=(8.0, 12.0)))
    straight, oblique = (
        Conditions(instrument=instrument, scene=scene_of(window=pane(angle))).of(None).window.tau.value
        for angle in (0.0, 60.0)
    )
    assert oblique < straight - 0.005
