"""The example of the inspection file's reference, whole, and each of its alternatives."""

from datetime import datetime

import pytest

from thermfix.inspection import load_inspection
from thermfix.model import (
    AngleView,
    Angular,
    Applied,
    BlackbodyTable,
    CornersView,
    CylinderView,
    Ellipse,
    Estimate,
    FromContact,
    FromReflector,
    FromTarget,
    Line,
    PlaneView,
    Point,
    Polygon,
    Rectangle,
    Region,
    SakumaHattori,
    SameTemperature,
    Scene,
    Sequence,
    SignalKind,
    Source,
    SphereView,
    TemperatureUnit,
    Window,
)

EXAMPLE = """format = "thermfix-inspection/1"
title = "Pump house, quarterly round"

[camera]
band_um = [7.5, 14.0]
field_of_view_deg = [25.0, 19.0]
blur_px = 0.6
noise_k = 0.05
accuracy_k = 2.0
accuracy_rel = 0.02

[camera.signal]
quantity = "temperature"
unit = "C"
scale = 1.0
offset = 0.0

[camera.applied]
emissivity = 0.95
reflected_c = 20.0
transmittance = 1.0
air_c = 20.0

[camera.calibration]               # only for counts
model = "sakuma-hattori"

[scene]
reflected_c = { value = 21.0, u = 1.0 }
air_c = 22.0
humidity_pct = 45
pressure_hpa = 1013.25
co2_ppm = 420
distance_m = 2.0
transmittance = 0.98
camera_side_c = 22.0
emissivity = 0.95

[scene.window]
transmittance = 0.85
reflectance = 0.05
temperature_c = 25.0

[[regions]]
name = "ambient wall"
shape = { rectangle = [10, 10, 60, 60] }
material = "paint, matt"

[[frames]]
file = "panel_004.tif"
scene = { distance_m = 1.2 }

[[frames.regions]]
name = "bus bar L1"
shape = { polygon = [[120, 80], [160, 82], [158, 140], [119, 138]] }
emissivity = { value = 0.30, u = 0.05 }
view = { angle_deg = 35 }
reflected_c = 35.0
reflections = [ { source_c = 180.0, view_factor = 0.12 } ]
small_target = true
true_area_mm2 = 12.5

[materials."glazed tile"]
emissivity = { value = 0.91, u = 0.02 }
angular = "dielectric"
"""


def test_the_whole_example(tmp_path):
    (tmp_path / "panel_004.tif").write_bytes(b"frame")
    (tmp_path / "inspection.toml").write_text(EXAMPLE)
    found = load_inspection(tmp_path)
    assert load_inspection(tmp_path / "inspection.toml").frames == found.frames
    assert (found.folder, found.title) == (tmp_path, "Pump house, quarterly round")
    camera = found.camera
    assert (camera.band_um, camera.response, camera.calibration) == ((7.5, 14.0), None, None)
    assert (camera.field_of_view_deg, camera.blur_px) == ((25.0, 19.0), Estimate(value=0.6))
    assert (camera.noise_k, camera.accuracy_k, camera.accuracy_rel) == (0.05, 2.0, 0.02)
    assert (camera.signal.kind, camera.signal.unit) == (SignalKind.TEMPERATURE, TemperatureUnit.CELSIUS)
    assert camera.applied == Applied(emissivity=0.95, reflected_k=293.15, transmittance=1.0, air_k=293.15)
    (frame,) = found.frames
    assert frame.file == "panel_004.tif"
    assert frame.scene == Scene(
        reflected_k=Estimate(value=294.15, u=1.0),
        air_k=Estimate(value=295.15),
        humidity_pct=Estimate(value=45.0),
        pressure_hpa=Estimate(value=1013.25),
        co2_ppm=Estimate(value=420.0),
        emissivity=Estimate(value=0.95),
        distance_m=Estimate(value=1.2),
        transmittance=Estimate(value=0.98),
        camera_side_k=Estimate(value=295.15),
        window=Window(
            transmittance=Estimate(value=0.85),
            reflectance=Estimate(value=0.05),
            temperature_k=Estimate(value=298.15),
        ),
    )
    assert frame.regions == (
        Region(name="ambient wall", shape=Rectangle(10, 10, 60, 60), material="paint, matt"),
        Region(
            name="bus bar L1",
            shape=Polygon(((120, 80), (160, 82), (158, 140), (119, 138))),
            emissivity=Estimate(value=0.3, u=0.05),
            view=AngleView(angle_deg=Estimate(value=35.0)),
            reflected_k=Estimate(value=308.15),
            reflections=(Source(source_k=Estimate(value=453.15), view_factor=Estimate(value=0.12)),),
            small_target=True,
            true_area_mm2=Estimate(value=12.5),
        ),
    )
    tile = found.materials["glazed tile"]
    assert (tile.name, tile.emissivity, tile.angular) == (
        "glazed tile",
        Estimate(value=0.91, u=0.02),
        Angular.DIELECTRIC,
    )


@pytest.mark.parametrize(
    ("shape", "expected"),
    [
        ("ellipse = [5.5, 6, 2, 3]", Ellipse(5.5, 6, 2, 3)),
        ("line = [[0, 0], [5, 5], [9, 1]]", Line(((0, 0), (5, 5), (9, 1)))),
        ("point = [-4, 2.5]", Point(-4, 2.5)),
        ("rectangle = [-10, -10, 1e5, 5]", Rectangle(-10, -10, 1e5, 5)),  # may lie outside the frame
    ],
)
def test_shapes(between, shape, expected):
    inspection = between(f'[[regions]]\nname = "r"\nshape = {{ {shape} }}\n')
    assert inspection.frames[0].regions[0].shape == expected


@pytest.mark.parametrize(
    ("view", "expected"),
    [
        (
            "plane = { tilt_deg = 40, azimuth_deg = 90 }",
            PlaneView(tilt_deg=Estimate(value=40.0), azimuth_deg=90.0),
        ),
        (
            "plane = { corners = [[0, 0], [9, 0], [9, 9], [0, 9]], size_m = [0.8, 0.6] }",
            CornersView(corners=((0, 0), (9, 0), (9, 9), (0, 9)), size_m=(0.8, 0.6)),
        ),
        (
            "cylinder = { axis = [[1, 2], [3, 40]], width_px = 42, tilt_deg = { value = 3, u = 1 } }",
            CylinderView(axis=((1, 2), (3, 40)), width_px=42.0, tilt_deg=Estimate(value=3.0, u=1.0)),
        ),
        (
            "cylinder = { axis = [[1, 2], [3, 40]], width_px = 42 }",
            CylinderView(axis=((1, 2), (3, 40)), width_px=42.0, tilt_deg=Estimate(value=0.0, assumed=True)),
        ),
        ("sphere = { centre = [5, 6], radius_px = 30 }", SphereView(centre=(5, 6), radius_px=30.0)),
    ],
)
def test_views(read, between, view, expected):
    text = f'[[regions]]\nname = "r"\nshape = {{ point = [1, 1] }}\nview = {{ {view} }}\n[[frames]]\nfile = "a.tif"\n'
    camera = 'camera = { band_um = [3, 5], field_of_view_deg = [25, 19], signal = { quantity = "radiance" } }\n'
    inspection = read('format = "thermfix-inspection/1"\n' + camera + text)
    assert inspection.frames[0].regions[0].view == expected


def test_solves(between):
    inspection = between("""
[scene]
reflected_c = { from_region = "foil" }
transmittance = { from_region = "plate", true_c = 80.0, u = 0.3 }
[[regions]]
name = "foil"
shape = { point = [1, 1] }
transmittance = 0.9
[[regions]]
name = "plate"
shape = { point = [1, 1] }
emissivity = 0.9
reflected_c = 20
[[regions]]
name = "tape"
shape = { point = [1, 1] }
emissivity = { from_contact_c = 61.2, u = 0.5 }
[[regions]]
name = "bar"
shape = { point = [1, 1] }
emissivity = { same_temperature_as = "tape" }
""")
    scene = inspection.frames[0].scene
    regions = {region.name: region for region in inspection.frames[0].regions}
    assert scene.reflected_k == FromReflector(region="foil")
    assert scene.transmittance == FromTarget(region="plate", true_k=Estimate(value=353.15, u=0.3))
    assert regions["tape"].emissivity == FromContact(contact_k=Estimate(value=61.2 + 273.15, u=0.5))
    assert regions["bar"].emissivity == SameTemperature(region="tape")


def test_window_solved_and_by_material(between):
    plate = '[[regions]]\nname = "plate"\nshape = { point = [1, 1] }\nemissivity = 0.9\n'
    how = "transmittance = { from_region = 'plate', true_c = { value = 80, u = 1 } }"
    with pytest.raises(ValueError, match=r"true_c.*bare number"):
        between(f"[scene.window]\nreflectance = 0.05\n{how}\n" + plate)
    solved = between(
        "[scene.window]\nreflectance = 0.05\ntransmittance = { from_region = 'plate', true_c = 80 }\n" + plate
    )
    window = solved.frames[0].scene.window
    assert window.transmittance == FromTarget(region="plate", true_k=Estimate(value=353.15))
    assert window.temperature_k == Estimate(value=293.15, assumed=True)
    made = between('[scene.window]\nmaterial = "Germanium"\nthickness_mm = 5\n').frames[0].scene.window
    assert (made.material, made.thickness_mm, made.transmittance) == ("Germanium", Estimate(value=5.0), None)


def test_counts_by_fit_and_by_table(read, folder):
    text = """format = "thermfix-inspection/1"
[camera]
response = "response.csv"
[camera.signal]
quantity = "counts"
[camera.calibration]
{}
[[frames]]
file = "a.tif"
"""
    (folder / "response.csv").write_text("# peak 1\nwavelength_um,response\n7.5,0\n10,1\n14,0.5\n")
    (folder / "blackbody.csv").write_text("temperature_c,counts\n0,100\n100,900\n")
    fitted = read(text.format('model = "sakuma-hattori"\na_um = 9.5\nb_um_k = 100\nc = 1e5\n')).camera
    assert fitted.calibration == SakumaHattori(a_um=9.5, b_um_k=100.0, c=1e5, d=0.0)
    assert fitted.response.columns["response"].tolist() == [0, 1, 0.5]
    table = read(text.format('model = "table"\nfile = "blackbody.csv"\n')).camera.calibration
    assert isinstance(table, BlackbodyTable)
    assert table.table.columns["temperature_k"].tolist() == [273.15, 373.15]
    assert table.table.source == "blackbody.csv"


def test_materials_of_every_kind(between, folder):
    (folder / "nk.csv").write_text("wavelength_um,n,k\n7,1.5,0.1\n15,1.4,0\n")
    (folder / "tile.csv").write_text("wavelength_um,emissivity\n7,0.8\n15,0.9\n")
    found = between("""
[materials.a]
nk = "nk.csv"
u = 0.02
[materials.b]
spectrum = "tile.csv"
angular = "dielectric"
[materials.c]
by_angle = [[0, 0.91], [60, 0.86], [80, 0.6]]
[materials.d]
lwir = 0.9
mwir = { value = 0.7, u = 0.1 }
valid_c = [-20, 200]
warning = "wet"
""").materials
    assert found["a"].nk.columns["k"].tolist() == [0.1, 0]
    assert found["a"].u == 0.02
    assert found["b"].spectrum.columns["emissivity"].tolist() == [0.8, 0.9]
    assert found["c"].by_angle == ((0, 0.91), (60, 0.86), (80, 0.6))
    assert (found["d"].lwir, found["d"].mwir) == (Estimate(value=0.9), Estimate(value=0.7, u=0.1))
    assert (found["d"].valid_c, found["d"].warning) == ((-20.0, 200.0), "wet")


def test_sequence(between):
    found = between("[sequence]\nstart = 2026-03-01T08:00:00\ninterval_s = 2\n")
    assert found.sequence == Sequence(start=datetime(2026, 3, 1, 8), interval_s=2.0)  # noqa: DTZ001
