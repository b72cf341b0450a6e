"""Whatever is done to a valid file, it is read or refused with InspectionError, in plain words."""

import contextlib
import copy
import re
import tomllib

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.errors import InspectionError
from thermfix.inspection import read_inspection
from thermfix.inspection.writing import toml_key, toml_value

VALID = tomllib.loads("""
format = "thermfix-inspection/1"
title = "x"
[camera]
band_um = [7.5, 14.0]
field_of_view_deg = [25.0, 19.0]
blur_px = 0.6
noise_k = 0.05
[camera.signal]
quantity = "temperature"
unit = "C"
[camera.applied]
emissivity = 0.95
reflected_c = 20.0
[camera.calibration]
model = "table"
file = "blackbody.csv"
[scene]
reflected_c = { from_region = "foil" }
air_c = { value = 22.0, u = 1 }
distance_m = 2.0
[scene.window]
transmittance = 0.85
reflectance = 0.05
[sequence]
start = 2026-03-01T08:00:00
[[regions]]
name = "foil"
shape = { rectangle = [10, 10, 60, 60] }
material = "tile"
[[frames]]
file = "a.tif"
scene = { distance_m = 1.2, window = { temperature_c = 3 } }
[[frames.regions]]
name = "bar"
shape = { polygon = [[120, 80], [160, 82], [158, 140]] }
emissivity = { same_temperature_as = "foil" }
view = { plane = { tilt_deg = 3, azimuth_deg = 3 } }
reflections = [{ source_c = 180.0, view_factor = 0.12 }]
small_target = true
[[frames.regions]]
name = "pipe"
shape = { ellipse = [5, 5, 2, 2] }
emissivity = { from_contact_c = 61.2, u = 0.5 }
view = { cylinder = { axis = [[1, 1], [2, 9]], width_px = 4 } }
transmittance = { from_region = "foil", true_c = 80 }
[materials.tile]
emissivity = 0.91
angular = "dielectric"
[materials.other]
by_angle = [[0, 0.9], [60, 0.8]]
""")

JARGON = re.compile(r"Input should|valid (number|string|list|dictionary)|type=|pydantic|Traceback|None|dict|str\b")

odd_keys = st.one_of(st.text(st.characters(exclude_categories=["Cs"]), max_size=4), st.sampled_from(["value", "u"]))
odd_values = st.recursive(
    st.one_of(
        st.none().map(lambda _: "?"),
        st.booleans(),
        st.integers(-(10**400), 10**400),
        st.floats(),
        st.text(st.characters(exclude_categories=["Cs"]), max_size=8),
        st.sampled_from(["foil", "bar", "a.tif", "../a.tif", "temperature", "counts", "radiance", "table"]),
        st.datetimes(),
        st.times(),
    ),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(odd_keys, inner, max_size=3),
    max_leaves=6,
)


def places(data, path=()):
    items = data.items() if isinstance(data, dict) else enumerate(data) if isinstance(data, list) else ()
    return [place for key, one in items for place in [(*path, key), *places(one, (*path, key))]]


PLACES = places(VALID)


@pytest.fixture(scope="module")
def home(tmp_path_factory):
    folder = tmp_path_factory.mktemp("inspection")
    (folder / "a.tif").write_bytes(b"x")
    (folder / "blackbody.csv").write_text("temperature_c,counts\n0,1\n10,2\n")
    return folder / "inspection.toml"


def as_text(data):
    return "".join(f"{toml_key(key)} = {toml_value(value)}\n" for key, value in data.items())


def test_the_document_itself_is_valid(home):
    assert read_inspection(as_text(VALID), home).frames


def faults_of(text, home):
    """Return the faults of a text; anything but an inspection with frames or an InspectionError fails."""
    try:
        assert read_inspection(text, home).frames
    except InspectionError as error:
        return error.faults or pytest.fail("refused without a fault")
    return ()


def mutate(mutated, data):
    """Drop, replace or add one value."""
    path = data.draw(st.sampled_from(PLACES))
    holder = mutated
    for part in path[:-1]:
        holder = holder[part]
    if data.draw(st.booleans()):
        del holder[path[-1]]
    elif data.draw(st.booleans()) and isinstance(holder, dict):
        holder[data.draw(odd_keys)] = data.draw(odd_values)
    else:
        holder[path[-1]] = data.draw(odd_values)


@given(st.data())
@settings(max_examples=400)
def test_mutations_are_read_or_refused(home, data):
    mutated = copy.deepcopy(VALID)
    for _ in range(data.draw(st.integers(1, 3))):
        # An earlier mutation may have taken away where this one goes.
        with contextlib.suppress(KeyError, IndexError, TypeError):
            mutate(mutated, data)
    for fault in faults_of(as_text(mutated), home):
        assert not JARGON.search(re.sub("“.*?”", "", fault.message)), fault
        assert fault.message.isprintable()
        assert fault.key.isprintable()


@given(st.text(max_size=60), st.integers(0, 10_000))
@settings(max_examples=200)
def test_torn_and_stuffed_texts_are_read_or_refused(home, stuffing, at):
    text = as_text(VALID)
    place = at % len(text)
    for torn in (text[:place], text[:place] + stuffing + text[place:], stuffing):
        faults_of(torn, home)
