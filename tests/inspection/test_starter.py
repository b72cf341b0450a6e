"""A starter is one answer away from an inspection."""

import tomllib

import pytest

from thermfix.inspection import starter_text
from thermfix.model import SignalKind, TemperatureUnit


def test_only_the_unit_is_open(folder, faults):
    text = starter_text(folder, ["a.tif", "b.tif"], band_um=(7.5, 14), hints=["The numbers lie between 290 and 310."])
    ((line, key, sentence),) = faults(text)
    assert key == "camera.signal.unit"
    assert sentence == "is still open (“?”): say whether it is C, K or F."
    assert text.splitlines()[line - 1].startswith('unit = "?"')
    assert "# The numbers lie between 290 and 310." in text


def test_band_and_unit_are_open(folder, faults):
    found = faults(starter_text(folder, ["a.tif"]))
    assert [fault[1] for fault in found] == ["camera.band_um", "camera.signal.unit"]
    assert "?" in found[0][2]


def test_answered_it_is_valid(folder, read):
    text = starter_text(folder, ["a.tif", "b.tif"], band_um=(7.5, 14.0), unit=TemperatureUnit.KELVIN, scale=0.01)
    found = read(text)
    assert [frame.file for frame in found.frames] == ["a.tif", "b.tif"]
    assert (found.camera.signal.unit, found.camera.signal.scale) == (TemperatureUnit.KELVIN, 0.01)
    assert found.title == folder.name


@pytest.mark.parametrize("kind", [SignalKind.RADIANCE, SignalKind.COUNTS])
def test_other_quantities(folder, read, faults, kind):
    text = starter_text(folder, ["a.tif"], band_um=(3, 5), quantity=kind)
    if kind is SignalKind.RADIANCE:
        assert read(text).camera.signal.kind is kind
    else:
        assert [fault[1] for fault in faults(text)] == ["camera.calibration.model"]


def test_commented_keys_are_right_once_uncommented(folder, read):
    """Every commented line of the starter that is a key of the file parses where it stands."""
    text = starter_text(folder, ["a.tif"], band_um=(7.5, 14.0), unit=TemperatureUnit.CELSIUS)
    lines = []
    for line in text.splitlines():
        bare = line.removeprefix("# ")
        is_key = (
            bare != line and (bare.startswith("[") or bare.split(" = ")[0].isidentifier()) and " = " in bare + " = "
        )
        lines.append(bare if is_key and not bare.startswith(("response", "Any", "Fill")) else line)
    found = read("\n".join(lines))
    assert found.frames[0].scene.window is not None
    assert {region.name for region in found.frames[0].regions} == {"wall", "bus bar"}
    assert found.camera.applied is not None


def test_awkward_names(folder):
    name = 'quote " back\\ {band} ünï.tif'
    text = starter_text(folder / "a\nb", [name])
    assert tomllib.loads(text)["frames"][0]["file"] == name
    assert tomllib.loads(text)["title"] == "a\\nb"
