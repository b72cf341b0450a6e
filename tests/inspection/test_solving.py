"""Inputs that are solved name regions that are there, and none hangs on itself."""

import pytest


def region(name: str, *lines: str) -> str:
    return "\n".join([f'[[regions]]\nname = "{name}"\nshape = {{ point = [1, 1] }}', *lines, ""])


SAME = 'emissivity = {{ same_temperature_as = "{}" }}'


def test_unknown_region_with_a_close_one(between_faults):
    text = '[scene]\nreflected_c = { from_region = "fiol" }\n' + region("foil")
    assert between_faults(text) == [(4, "scene.reflected_c", "a.tif has no region “fiol”; did you mean “foil”?")]


def test_a_region_of_another_frame_does_not_count(between_faults):
    tail = (
        '[[frames]]\nfile = "a.tif"\nregions = [{ name = "foil", shape = { point = [1, 1] } }]\n'
        '[[frames]]\nfile = "b.tif"\nscene = { reflected_c = { from_region = "foil" } }\n'
    )
    assert between_faults("", tail=tail) == [(8, "frames[1].scene.reflected_c", "b.tif has no region “foil”.")]


def test_the_scene_of_all_frames_is_said_once(between_faults):
    tail = '[[frames]]\nfile = "a.tif"\n[[frames]]\nfile = "b.tif"\n'
    found = between_faults('[scene]\nreflected_c = { from_region = "foil" }\n', tail=tail)
    assert found == [(4, "scene.reflected_c", "a.tif has no region “foil”.")]


CIRCLES = {
    "itself": (region("a", SAME.format("a")), "regions[0].emissivity"),
    "each other": (region("a", SAME.format("b")) + region("b", SAME.format("a")), "regions[0].emissivity"),
    "three": (
        region("a", SAME.format("b")) + region("b", SAME.format("c")) + region("c", SAME.format("a")),
        "regions[0].emissivity",
    ),
    "reflector whose emissivity needs what it reflects": (
        '[scene]\nreflected_c = { from_region = "foil" }\n' + region("foil", "emissivity = { from_contact_c = 30 }"),
        "scene.reflected_c",
    ),
    "air and window through each other": (
        '[scene]\ntransmittance = { from_region = "p", true_c = 80 }\n'
        '[scene.window]\nreflectance = 0\ntransmittance = { from_region = "q", true_c = 80 }\n'
        + region("p", "emissivity = 0.9")
        + region("q", "emissivity = 0.9"),
        "scene.transmittance",
    ),
}


@pytest.mark.parametrize("case", CIRCLES)
def test_circles(between_faults, case):
    text, key = CIRCLES[case]
    found = between_faults(text)
    assert [fault[1] for fault in found] == [key]
    assert "would need itself" in found[0][2]


LINES = {
    "reflector of a stated emissivity": '[scene]\nreflected_c = { from_region = "foil" }\n'
    + region("foil", "emissivity = 0.05")
    + region("tape", "emissivity = { from_contact_c = 60 }"),
    "reflector with its own reflected temperature": '[scene]\nreflected_c = { from_region = "foil" }\n'
    + region("foil", "emissivity = { from_contact_c = 30 }", "reflected_c = 20"),
    "air and window of regions near and far": '[scene]\ntransmittance = { from_region = "p", true_c = 80 }\n'
    '[scene.window]\nreflectance = 0\ntransmittance = { from_region = "q", true_c = 80 }\n'
    + region("p", "emissivity = 0.9")
    + region("q", "emissivity = 0.9", "distance_m = 1"),
    "a chain": "".join(region(f"r{n}", SAME.format(f"r{n + 1}")) for n in range(300))
    + region("r300", "emissivity = 0.9"),
}


@pytest.mark.parametrize("case", LINES)
def test_no_circle(between, case):
    """A foil's emissivity may hang on its own reflected temperature, and a far plate's path on its distance."""
    assert between(LINES[case]).frames[0].regions
