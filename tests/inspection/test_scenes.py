"""Defaults, overrides and shared regions."""

import pytest

from thermfix.model import Estimate


def test_what_nobody_gave_is_marked_as_assumed(between):
    scene = between("").frames[0].scene
    assert scene.air_k == Estimate(value=293.15, assumed=True)
    assert scene.reflected_k == Estimate(value=293.15, assumed=True)
    assert scene.humidity_pct == Estimate(value=50.0, assumed=True)
    assert scene.pressure_hpa == Estimate(value=1013.25, assumed=True)
    assert scene.co2_ppm == Estimate(value=420.0, assumed=True)
    assert scene.emissivity == Estimate(value=0.95, assumed=True)
    assert (scene.distance_m, scene.transmittance, scene.camera_side_k, scene.window) == (None, None, None, None)


def test_the_reflected_temperature_follows_the_air(between):
    scene = between("[scene]\nair_c = { value = 30, u = 1 }\n").frames[0].scene
    assert scene.reflected_k == Estimate(value=303.15, assumed=True)


def test_frames_override_key_by_key_down_into_the_window(between):
    frames = between(
        """[scene]
air_c = 10
distance_m = 3
[scene.window]
transmittance = 0.8
reflectance = 0.1
temperature_c = 15
""",
        tail="""
[[frames]]
file = "a.tif"
scene = { air_c = 12, window = { transmittance = 0.7 } }
[[frames]]
file = "b.tif"
""",
    ).frames
    first, second = frames[0].scene, frames[1].scene
    assert (first.air_k.value, second.air_k.value) == (285.15, 283.15)
    assert first.distance_m == second.distance_m == Estimate(value=3.0)
    assert (first.window.transmittance.value, second.window.transmittance.value) == (0.7, 0.8)
    assert first.window.reflectance == second.window.reflectance == Estimate(value=0.1)
    assert first.window.temperature_k.value == 288.15


def test_a_window_by_material_takes_the_place_of_numbers(between):
    frame = '\n[[frames]]\nfile = "a.tif"\nscene = { window = { material = "zinc selenide", thickness_mm = 3 } }\n'
    window = between("[scene.window]\ntransmittance = 0.8\nreflectance = 0.1\n", tail=frame).frames[0].scene.window
    assert window.transmittance is None
    assert window.material == "zinc selenide"


def test_what_a_window_lacks_may_come_from_its_frame(between, between_faults):
    frame = '\n[[frames]]\nfile = "a.tif"\nscene = { window = { reflectance = 0.1 } }\n'
    window = between("[scene.window]\ntransmittance = 0.8\n", tail=frame).frames[0].scene.window
    assert window.reflectance == Estimate(value=0.1)
    assert between_faults("[scene.window]\ntransmittance = 0.8\n") == [
        (3, "scene.window.reflectance", "is missing; or give material and thickness_mm.")
    ]


def test_shared_regions_come_first_and_plain_frames_share_them(between):
    region = '{{ name = "{}", shape = {{ point = [1, 1] }} }}'
    text = f"regions = [{region.format('wall')}]\n"
    tail = f'[[frames]]\nfile = "a.tif"\nregions = [{region.format("bar")}]\n[[frames]]\nfile = "b.tif"\n'
    frames = between(text, tail=tail).frames
    assert [[one.name for one in frame.regions] for frame in frames] == [["wall", "bar"], ["wall"]]
    assert frames[0].regions[0] == frames[1].regions[0]


@pytest.mark.parametrize("name", ["ambient wall", "Sammelschiene — L1 ✓", "x" * 80, "壁"])
def test_names_of_regions(between, name):
    found = between(f'[[regions]]\nname = "{name}"\nshape = {{ point = [1, 1] }}\n')
    assert found.frames[0].regions[0].name == name
