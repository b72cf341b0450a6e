"""What the file may say but a correction cannot do yet is refused, row by row, and accepted once its row is gone."""

import pytest

from thermfix.inspection.unsupported import NOT_YET

REGION = 'name = "r"\nshape = { point = [1, 1] }\n'
CAMERA = """format = "thermfix-inspection/1"
[camera]
band_um = [3, 5]
blur_px = 0.5
field_of_view_deg = [25, 19]
signal = { quantity = "radiance" }
"""
FRAME = '[[frames]]\nfile = "a.tif"\n'
OTHER = '[[regions]]\nname = "s"\nemissivity = 0.9\nshape = { point = [1, 1] }\n'

SAID = {
    "plane": (f"[[regions]]\n{REGION}view = {{ plane = {{ tilt_deg = 1, azimuth_deg = 1 }} }}\n", "regions[0].view"),
    "cylinder": (
        f"[[regions]]\n{REGION}view = {{ cylinder = {{ axis = [[1, 1], [2, 2]], width_px = 3 }} }}\n",
        "regions[0].view",
    ),
    "sphere": (f"[[regions]]\n{REGION}view = {{ sphere = {{ centre = [1, 1], radius_px = 3 }} }}\n", "regions[0].view"),
    "small target": (f"[[regions]]\n{REGION}small_target = true\n", "regions[0].small_target"),
    "contact": (f"[[regions]]\n{REGION}emissivity = {{ from_contact_c = 60 }}\n", "regions[0].emissivity"),
    "same temperature": (
        f'[[regions]]\n{REGION}emissivity = {{ same_temperature_as = "s" }}\n{OTHER}',
        "regions[0].emissivity",
    ),
    "reflected of a region": (
        f'[[regions]]\n{REGION}reflected_c = {{ from_region = "s" }}\n{OTHER}',
        "regions[0].reflected_c",
    ),
    "path of a region": (
        f'[[regions]]\n{REGION}transmittance = {{ from_region = "s", true_c = 3 }}\n{OTHER}',
        "regions[0].transmittance",
    ),
    "reflected": (f'[scene]\nreflected_c = {{ from_region = "s" }}\n{OTHER}', "scene.reflected_c"),
    "path": (f'[scene]\ntransmittance = {{ from_region = "s", true_c = 3 }}\n{OTHER}', "scene.transmittance"),
    "window": (
        f'[scene.window]\nreflectance = 0\ntransmittance = {{ from_region = "s", true_c = 3 }}\n{OTHER}',
        "scene.window.transmittance",
    ),
    "window material": (
        '[scene.window]\nmaterial = "germanium"\nthickness_mm = 3\n',
        "scene.window.material",
    ),
}


@pytest.mark.parametrize("case", SAID)
def test_each_is_refused_only_by_its_row(read, faults, case):
    text, key = SAID[case]
    # Every row at work: what is refused now, and what stays switched on later, are held to the same list.
    rows = [row for row in NOT_YET if row.key == key.rsplit(".", 1)[1]]
    whole = CAMERA + text + FRAME
    assert read(whole).frames
    if not rows:
        assert read(whole, not_yet=NOT_YET).frames
        return
    found = faults(whole, not_yet=NOT_YET)
    assert [fault[1] for fault in found] == [key]
    assert "not yet supported" in found[0][2]


def test_what_is_supported_passes(read):
    text = f"[[regions]]\n{REGION}view = {{ angle_deg = 20 }}\nsmall_target = false\nemissivity = 0.9\n"
    assert read(CAMERA + text + FRAME, not_yet=NOT_YET).frames


def test_the_scene_of_a_frame_is_held_to_the_same_rows(faults):
    if not any(row.table == "scene" and row.key == "reflected_c" for row in NOT_YET):
        pytest.skip("solving the reflected temperature is supported")
    frame = '[[frames]]\nfile = "a.tif"\nscene = { reflected_c = { from_region = "s" } }\n'
    assert [one[1] for one in faults(CAMERA + OTHER + frame, not_yet=NOT_YET)] == ["frames[0].scene.reflected_c"]
