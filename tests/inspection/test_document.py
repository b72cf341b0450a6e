"""Editing keeps comments, order and line ends, and says in text what was set."""

import tomllib

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.errors import InputError, InspectionError
from thermfix.inspection import InspectionDocument
from thermfix.model import Estimate

TEXT = """# a round
format = "thermfix-inspection/1"

[camera]                 # the one with the dent
band_um = [7.5, 14.0]    # data sheet
[camera.signal]
quantity = "temperature"
unit = "C"

# what surrounds it
[scene]
air_c = { value = 20.0, u = 1.0 }   # thermometer
[scene.window]
transmittance = 0.85     # measured
reflectance = 0.05

[[frames]]
file = "a.tif"           # first
scene = { distance_m = 1.2 }

[[frames.regions]]
name = "bar"             # L1
shape = { point = [1, 1] }

[[frames]]
file = "b.tif"

[materials.tile]         # the last
emissivity = 0.9
"""


@pytest.fixture
def document(folder):
    return InspectionDocument(TEXT, folder / "inspection.toml")


@pytest.mark.parametrize("ends", ["\n", "\r\n"])
@pytest.mark.parametrize("mark", ["", "\ufeff"])
@pytest.mark.parametrize("last", ["", "\n\n", "\n# end"])
def test_untouched_the_bytes_stay(folder, ends, mark, last):
    data = (mark + TEXT.rstrip("\n") + last).replace("\n", ends).encode()
    file = folder / "inspection.toml"
    file.write_bytes(data)
    document = InspectionDocument.open(file)
    document.save(folder / "copy.toml")
    assert (folder / "copy.toml").read_bytes() == data


def test_mixed_line_ends_stay_where_they_are(folder):
    text = TEXT.replace("\n", "\r\n", 5)
    document = InspectionDocument(text, folder / "inspection.toml")
    assert document.text() == text
    document.set(("frames", 1, "file"), "a.tif")
    assert document.text() == text.replace('"b.tif"', '"a.tif"')


def test_set_changes_nothing_but_the_value(document):
    document.set(("camera", "band_um"), (3.0, 5.0))
    document.set(("scene", "air_c"), {"value": 21.5, "u": 0.5})
    document.set(("frames", 0, "regions", 0, "name"), "bar L1")
    expected = (
        TEXT.replace("[7.5, 14.0] ", "[3.0, 5.0] ")
        .replace("{ value = 20.0, u = 1.0 }", "{ value = 21.5, u = 0.5 }")
        .replace('"bar" ', '"bar L1" ')
    )
    assert document.text() == expected
    assert document.get(("scene", "air_c", "u")) == 0.5


def test_windows_line_ends_and_mark_stay_after_a_change(folder):
    text = "\ufeff" + TEXT.replace("\n", "\r\n")
    document = InspectionDocument(text, folder / "inspection.toml")
    document.set(("scene", "air_c"), 5)
    document.add_region(0, {"name": "x", "shape": {"point": [1, 1]}})
    changed = document.text()
    assert changed.startswith("\ufeff# a round\r\n")
    assert changed.count("\n") == changed.count("\r\n")


def test_new_keys_go_to_their_table(document):
    document.set(("title",), "Round")
    document.set(("scene", "humidity_pct"), 40)
    document.set(("camera", "applied", "emissivity"), 1.0)
    document.set(("frames", 0, "scene", "air_c"), 19)
    document.set(("frames", 1, "scene", "window", "temperature_c"), 12)
    document.set(("sequence", "interval_s"), 2.0)
    data = tomllib.loads(document.text())
    assert data["title"] == "Round"
    assert data["scene"]["humidity_pct"] == 40
    assert data["camera"]["applied"] == {"emissivity": 1.0}
    assert data["frames"][0]["scene"] == {"distance_m": 1.2, "air_c": 19}
    assert data["frames"][1]["scene"] == {"window": {"temperature_c": 12}}
    assert data["sequence"] == {"interval_s": 2.0}
    for comment in ("# a round", "# the one with the dent", "# data sheet", "# what surrounds it", "# the last"):
        assert comment in document.text()


def test_regions_come_and_go(document):
    one = {"name": "new", "shape": {"rectangle": [1, 2, 30, 40]}, "emissivity": {"value": 0.9, "u": 0.02}}
    assert document.add_region(0, one) == ("frames", 0, "regions", 1)
    assert document.add_region(1, one) == ("frames", 1, "regions", 0)
    assert document.add_region(None, {**one, "name": "all"}) == ("regions", 0)
    frames = document.inspection().frames
    assert [[region.name for region in frame.regions] for frame in frames] == [["all", "bar", "new"], ["all", "new"]]
    assert frames[1].regions[1].emissivity == Estimate(value=0.9, u=0.02)
    assert (
        'name = "new"\nshape = { rectangle = [1, 2, 30, 40] }\nemissivity = { value = 0.9, u = 0.02 }\n'
        in document.text()
    )
    document.remove(("frames", 0, "regions", 0))
    document.remove(("frames", 1, "regions", 0))
    document.remove(("regions", 0))
    assert [[region.name for region in frame.regions] for frame in document.inspection().frames] == [["new"], []]
    assert document.get(("frames", 1, "regions")) is None
    document.remove(("frames", 1, "regions", 7))
    document.remove(("nothing", "here"))


def test_regions_written_on_one_line_stay_so(folder):
    text = TEXT.replace('file = "b.tif"\n', 'file = "b.tif"\nregions = [{ name = "x", shape = { point = [1, 1] } }]\n')
    document = InspectionDocument(text, folder / "inspection.toml")
    document.add_region(1, {"name": "y", "shape": {"point": [2, 2]}})
    assert [region.name for region in document.inspection().frames[1].regions] == ["x", "y"]
    document.remove(("frames", 1, "regions", 0))
    document.remove(("frames", 1, "regions", 0))
    assert document.get(("frames", 1, "regions")) is None


def test_removing_a_key_leaves_comments(document):
    document.remove(("scene", "air_c"))
    assert document.text() == TEXT.replace("air_c = { value = 20.0, u = 1.0 }   # thermometer\n", "")


def test_a_frame_that_is_not_listed(folder):
    head = "".join(line + "\n" for line in TEXT.splitlines() if "file" not in line).split("[[frames]]")[0]
    document = InspectionDocument(head, folder / "inspection.toml")
    assert document.frame_index("b.tif") == 1
    assert document.frame_index("a.tif") == 0
    assert [frame.file for frame in document.inspection().frames] == ["a.tif", "b.tif"]
    assert document.frame_index("later.tif") == 2


def test_what_cannot_be_set(document):
    for path in [(), ("scene", "air_c", "value", "x"), ("frames", 9, "file"), ("frames", 0), ("frames", "x")]:
        with pytest.raises(InputError):
            document.set(path, 3)
    with pytest.raises(InputError):
        document.set(("title",), object())
    with pytest.raises(InputError):
        document.set(("title",), "\udcff")
    with pytest.raises(InputError):
        document.add_region(5, {"name": "x"})
    with pytest.raises(InputError):
        document.add_region(0, {"name": "x", "shape": object()})
    assert document.text() == TEXT


def test_faults_have_lines_of_the_edited_text(document):
    document.set(("frames", 0, "regions", 0, "emissivity"), 7)
    with pytest.raises(InspectionError) as caught:
        document.inspection()
    (fault,) = caught.value.faults
    assert fault.key == "frames[0].regions[0].emissivity"
    assert document.text().splitlines()[fault.line - 1] == "emissivity = 7"


def test_no_toml_no_document(folder):
    with pytest.raises(InspectionError, match="not valid TOML"):
        InspectionDocument("a = = 1", folder / "inspection.toml")


PLACES = [
    ("title",),
    ("scene", "air_c"),
    ("scene", "distance_m"),
    ("scene", "window", "transmittance"),
    ("camera", "noise_k"),
    ("camera", "applied", "emissivity"),
    ("frames", 0, "scene", "air_c"),
    ("frames", 0, "scene", "window", "reflectance"),
    ("frames", 1, "scene", "co2_ppm"),
    ("frames", 0, "regions", 0, "view"),
    ("frames", 0, "regions", 0, "emissivity"),
    ("materials", "a b", "emissivity"),
    ("sequence", "interval_s"),
]
VALUES = st.one_of(
    st.floats(allow_nan=False), st.integers(-9, 9), st.text(st.characters(exclude_categories=["Cs"]), max_size=5),
    st.fixed_dictionaries({"value": st.floats(0, 1), "u": st.floats(0, 1)}),
)  # fmt: skip
REGION = {"name": "r", "shape": {"point": [1, 2]}}
STEPS = st.one_of(
    st.tuples(st.just("set"), st.sampled_from(PLACES), VALUES),
    st.tuples(st.just("remove"), st.sampled_from([*PLACES, ("frames", 0, "regions", 0), ("scene", "window")])),
    st.tuples(st.just("add_region"), st.sampled_from([None, 0, 1])),
)


def _mirror(data, step):
    """Do the same to plain data, or return False where it cannot be done."""
    kind, where, *value = step
    if kind == "add_region":
        (data if where is None else data["frames"][where]).setdefault("regions", []).append(dict(REGION))
        return
    for part in where[:-1]:
        missing = part not in data if isinstance(data, dict) else part >= len(data)
        if missing:
            if kind == "remove":
                return
            assert isinstance(data, dict)
            data[part] = {}
        data = data[part]
    if kind == "set":
        data[where[-1]] = value[0]
    elif isinstance(data, dict):
        data.pop(where[-1], None)
    elif where[-1] < len(data):
        del data[where[-1]]


@given(st.lists(STEPS, max_size=8))
@settings(max_examples=150)
def test_any_edits_say_in_text_what_they_say_in_data(tmp_path_factory, steps):
    document = InspectionDocument(TEXT, tmp_path_factory.getbasetemp() / "inspection.toml")
    data = tomllib.loads(TEXT)
    for step in steps:
        regions = data["frames"][0].get("regions", [])
        if step[0] == "set" and "regions" in step[1] and not regions:
            continue  # there is nothing to set it in
        kind, *rest = step
        if kind == "add_region":
            document.add_region(rest[0], REGION)
        else:
            getattr(document, kind)(*rest)
        _mirror(data, step)
        if data["frames"][0].get("regions") == []:
            del data["frames"][0]["regions"]
    assert tomllib.loads(document.text()) == data
    document.save()
