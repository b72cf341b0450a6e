"""The dump holds every input, in words JSON knows."""

import json

from thermfix.inspection import to_mapping


def test_complete_and_json_able(between, folder):
    (folder / "tile.csv").write_text("wavelength_um,emissivity\n7,0.8\n15,0.9\n")
    found = to_mapping(
        between(
            """[sequence]
start = 2026-03-01T08:00:00
[[regions]]
name = "wall"
shape = { rectangle = [1, 2, 3, 4] }
material = "tile"
[materials.tile]
spectrum = "tile.csv"
""",
            tail='[[frames]]\nfile = "a.tif"\n[[frames]]\nfile = "b.tif"\nscene = { air_c = 5 }\n',
        )
    )
    assert json.loads(json.dumps(found, allow_nan=False)) == found
    assert found["folder"] == folder.name
    assert found["sequence"]["start"] == "2026-03-01T08:00:00"
    assert [frame["scene"] for frame in found["frames"]] == [0, 1]
    assert [frame["regions"] for frame in found["frames"]] == [[0], [0]]
    assert found["scenes"][1]["air_k"] == {"kind": "Estimate", "value": 278.15, "u": None, "assumed": False}
    assert found["scenes"][0]["air_k"]["assumed"] is True
    assert found["regions"][0]["shape"] == {"kind": "Rectangle", "x0": 1.0, "y0": 2.0, "x1": 3.0, "y1": 4.0}
    tile = found["materials"]["tile"]
    assert tile["spectrum"]["columns"] == {"wavelength_um": [7.0, 15.0], "emissivity": [0.8, 0.9]}
    assert len(tile["spectrum"]["sha256"]) == 64
    assert found["camera"]["signal"]["unit"] == "C"
