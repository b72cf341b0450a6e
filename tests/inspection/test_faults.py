"""One case per kind of fault: its line, its key path, and a sentence in plain words; then all at once."""

import pytest

from thermfix.errors import InspectionError
from thermfix.inspection import load_inspection, read_inspection

REGION = 'name = "r"\nshape = { point = [1, 1] }\n'

# The text begins in line 3: after format and a good camera, before one frame.
CASES = {
    "unknown key": ("[scene]\nairc = 3\n", 4, "scene.airc", "unknown key; did you mean air_c?"),
    "unknown key, no match": (
        "[sequence]\nxyz = 1\n",
        4,
        "sequence.xyz",
        "unknown key; known here: start, interval_s.",
    ),
    "unknown table": ("[scenes]\nair_c = 3\n", 3, "scenes", "unknown key; did you mean scene?"),
    "unknown key of a material": (
        '[materials."a b"]\nemisivity = 0.9\nemissivity = 0.9\n',
        4,
        'materials."a b".emisivity',
        "unknown key; did you mean emissivity?",
    ),
    "text for a number": ("[scene]\n\nair_c = 'warm'\n", 5, "scene.air_c", "must be a number, not text."),
    "truth for a number": ("[scene]\nair_c = true\n", 4, "scene.air_c", "must be a number, not true."),
    "text for u": (
        "[scene]\nair_c = { value = 3, u = '1' }\n",
        4,
        "scene.air_c.u",
        "must be a number, not text.",
    ),
    "negative u": (
        "[scene]\nair_c = { value = 3, u = -1 }\n",
        4,
        "scene.air_c.u",
        "u is -1; a standard uncertainty must lie in 0 to 140.",
    ),
    "no value": ("[scene]\nair_c = { u = 3 }\n", 4, "scene.air_c", "needs a value: { value = …, u = … }."),
    "no number with u": (
        "[sequence]\ninterval_s = { value = 3, u = 1 }\n",
        4,
        "sequence.interval_s",
        "must be a bare number: no uncertainty of it is used.",
    ),
    "out of range": (
        "[scene]\nhumidity_pct = 145\n",
        4,
        "scene.humidity_pct",
        "humidity_pct is 145; it must lie in 0 to 100 [%].",
    ),
    "out of range, in a table": (
        "[scene.emissivity]\n# percent\nvalue = 95\n",
        5,
        "scene.emissivity.value",
        "emissivity is 95; it must lie in 0 to 1 [1].",
    ),
    "zero where it must be above": (
        "[scene]\nemissivity = 0\n",
        4,
        "scene.emissivity",
        "emissivity is 0; it must lie above 0, up to 1 [1].",
    ),
    "not a number": ("[scene]\nair_c = nan\n", 4, "scene.air_c", "air_c is nan; it must lie in -60 to 80 [°C]."),
    "infinite": ("[scene]\nair_c = -inf\n", 4, "scene.air_c", "air_c is -inf; it must lie in -60 to 80 [°C]."),
    "huge": (f"[scene]\nair_c = 1{'0' * 400}\n", 4, "scene.air_c", "is too large a number."),
    "a table was wanted": ("scene = 3\n", 3, "scene", "must be a table, not a number."),
    "a list was wanted": ("[regions]\n" + REGION, 3, "regions", "must be a list, not a table."),
    "tables in a list were wanted": ("regions = [3]\n", 3, "regions[0]", "must be a table, not a number."),
    "text was wanted": ("title = 3\n", 3, "title", "must be text in quotes, not a number."),
    "truth was wanted": (
        f"[[regions]]\n{REGION}small_target = 1\n",
        6,
        "regions[0].small_target",
        "must be true or false, not a number.",
    ),
    "a time was wanted": (
        "[sequence]\nstart = 2026-03-01\n",
        4,
        "sequence.start",
        "must be a date and time, as 2026-03-01T08:00:00, not a date or time.",
    ),
    "no name": ("[[regions]]\nshape = { point = [1, 1] }\n", 3, "regions[0].name", "is missing."),
    "no shape": ("[[regions]]\nname = 'r'\n", 3, "regions[0].shape", "is missing."),
    "empty name": (
        "[[regions]]\nname = ' '\nshape = { point = [1, 1] }\n",
        4,
        "regions[0].name",
        "must not be empty.",
    ),
    "long name": (
        f"[[regions]]\nname = '{'x' * 81}'\nshape = {{ point = [1, 1] }}\n",
        4,
        "regions[0].name",
        "has 81 characters; at most 80 are allowed.",
    ),
    "control characters": (
        '[[regions]]\nname = "a\\u001b[31m"\nshape = { point = [1, 1] }\n',
        4,
        "regions[0].name",
        "must not hold control characters or line ends.",
    ),
    "same name twice": (
        f"[[regions]]\n{REGION}[[regions]]\n{REGION}",
        7,
        "regions[1].name",
        "another region of the frame is named “r” too.",
    ),
    "two shapes": (
        "[[regions]]\nname = 'r'\nshape = { point = [1, 1], ellipse = [5, 5, 2, 2] }\n",
        5,
        "regions[0].shape",
        "a shape is one of rectangle, ellipse, polygon, line or point; ellipse and point is given.",
    ),
    "no form of shape": (
        "[[regions]]\nname = 'r'\nshape = {}\n",
        5,
        "regions[0].shape",
        "a shape is one of rectangle, ellipse, polygon, line or point; none is given.",
    ),
    "rectangle inside out": (
        "[[regions]]\nname = 'r'\nshape = { rectangle = [9, 1, 3, 4] }\n",
        5,
        "regions[0].shape.rectangle",
        "needs x0 < x1 and y0 < y1: left, top, right, bottom.",
    ),
    "rectangle of three": (
        "[[regions]]\nname = 'r'\nshape = { rectangle = [9, 1, 3] }\n",
        5,
        "regions[0].shape.rectangle",
        "must be a list of 4 numbers, x0, y0, x1, y1, not a list of 3.",
    ),
    "flat ellipse": (
        "[[regions]]\nname = 'r'\nshape = { ellipse = [9, 1, 3, 0] }\n",
        5,
        "regions[0].shape.ellipse",
        "needs half axes rx and ry above 0.",
    ),
    "polygon of two": (
        "[[regions]]\nname = 'r'\nshape = { polygon = [[9, 1], [3, 4]] }\n",
        5,
        "regions[0].shape.polygon",
        "needs 3 corners or more, not 2.",
    ),
    "line of one": (
        "[[regions]]\nname = 'r'\nshape = { line = [[9, 1]] }\n",
        5,
        "regions[0].shape.line",
        "needs 2 points or more, not 1.",
    ),
    "corner that is none": (
        "[[regions]]\nname = 'r'\n[regions.shape]\npolygon = [\n[9, 1],\n[3, 4],\n[1, 'x']]\n",
        9,
        "regions[0].shape.polygon[2][1]",
        "must be a number of pixels, not text.",
    ),
    "coordinate not a number": (
        "[[regions]]\nname = 'r'\nshape = { point = [nan, 1] }\n",
        5,
        "regions[0].shape.point[0]",
        "must lie in −1e+06 to 1e+06 pixels.",
    ),
    "two views": (
        f"[[regions]]\n{REGION}view = {{ angle_deg = 3, sphere = {{ centre = [1, 1], radius_px = 3 }} }}\n",
        6,
        "regions[0].view",
        "a view is one of angle_deg, plane, cylinder or sphere; angle_deg and sphere is given.",
    ),
    "half a plane": (
        f"[[regions]]\n{REGION}view = {{ plane = {{ tilt_deg = 3 }} }}\n",
        6,
        "regions[0].view.plane",
        "needs either tilt_deg and azimuth_deg, or corners and size_m.",
    ),
    "three corners": (
        f"[[regions]]\n{REGION}view = {{ plane = {{ corners = [[0, 0], [1, 0], [1, 1]], size_m = [1, 1] }} }}\n",
        6,
        "regions[0].view.plane.corners",
        "needs 4 corners or more, not 3.",
    ),
    "corners without optics": (
        f"[[regions]]\n{REGION}"
        "view = { plane = { corners = [[0, 0], [1, 0], [1, 1], [0, 1]], size_m = [1, 1] } }\n",
        6,
        "regions[0].view.plane",
        "needs camera.field_of_view_deg.",
    ),
    "half a cylinder": (
        f"[[regions]]\n{REGION}view = {{ cylinder = {{ axis = [[0, 0], [1, 0]] }} }}\n",
        6,
        "regions[0].view.cylinder.width_px",
        "is missing.",
    ),
    "cylinder without length": (
        f"[[regions]]\n{REGION}view = {{ cylinder = {{ axis = [[0, 0], [0, 0]], width_px = 3 }} }}\n",
        6,
        "regions[0].view.cylinder.axis",
        "needs 2 points that differ: the two ends of the axis.",
    ),
    "sphere without size": (
        f"[[regions]]\n{REGION}view = {{ sphere = {{ centre = [0, 0], radius_px = 0 }} }}\n",
        6,
        "regions[0].view.sphere.radius_px",
        "must be above 0 pixels.",
    ),
    "material and emissivity": (
        f"[[regions]]\n{REGION}material = 'paint, matt'\nemissivity = 0.9\n",
        6,
        "regions[0].material",
        "does not go together with emissivity: give one or the other.",
    ),
    "half a reflection": (
        f"[[regions]]\n{REGION}reflections = [\n{{ source_c = 3 }}]\n",
        7,
        "regions[0].reflections[0]",
        "needs view_factor, or size_m and a distance_m above 0.",
    ),
    "reflections beyond the hemisphere": (
        f"[[regions]]\n{REGION}"
        "reflections = [{ source_c = 3, view_factor = 0.7 }, { source_c = 3, view_factor = 0.4 }]\n",
        6,
        "regions[0].reflections",
        "the view factors add up to 1.1; they must not exceed 1.",
    ),
    "small target without blur": (
        f"[[regions]]\n{REGION}small_target = true\n",
        6,
        "regions[0].small_target",
        "needs camera.blur_px, above 0.",
    ),
    "window of more than everything": (
        "[scene.window]\ntransmittance = 0.9\nreflectance = 0.2\n",
        5,
        "scene.window.reflectance",
        "transmittance and reflectance add up to 1.1; they must not exceed 1.",
    ),
    "window both ways": (
        "[scene.window]\nmaterial = 'germanium'\nthickness_mm = 3\ntransmittance = 0.5\n",
        4,
        "scene.window.material",
        "does not go together with transmittance: give one or the other.",
    ),
    "window without thickness": (
        "[scene.window]\nmaterial = 'germanium'\n",
        3,
        "scene.window.thickness_mm",
        "is missing.",
    ),
    "two kinds of material": (
        "[materials.m]\nemissivity = 0.9\nby_angle = [[0, 0.9]]\n",
        3,
        "materials.m",
        "needs one of emissivity, nk, spectrum or by_angle; by_angle and emissivity is given.",
    ),
    "angles that fall": (
        "[materials.m]\nby_angle = [[0, 0.9],\n[60, 0.8],\n[50, 0.7]]\n",
        6,
        "materials.m.by_angle[2]",
        "the angles must rise from row to row; 50° follows 60°.",
    ),
    "angles that begin late": (
        "[materials.m]\nby_angle = [[10, 0.9]]\n",
        4,
        "materials.m.by_angle[0]",
        "must begin with the normal emissivity, at 0 degrees.",
    ),
    "impossible metal": (
        "[materials.m]\nemissivity = 0.9\nangular = 'metal'\n",
        4,
        "materials.m.emissivity",
        "no smooth metal has an emissivity above 0.828; use another angular.",
    ),
    "one of a few words": (
        "[materials.m]\nemissivity = 0.9\nangular = 'metallic'\n",
        5,
        "materials.m.angular",
        "must be diffuse, dielectric or metal, not “metallic”.",
    ),
    "solve without its truth": (
        "[scene]\ntransmittance = { from_region = 'r' }\n",
        4,
        "scene.transmittance",
        "needs true_c: the true temperature of that region.",
    ),
    "solve and value": (
        "[scene]\nreflected_c = { from_region = 'r', value = 3 }\n",
        4,
        "scene.reflected_c.value",
        "value does not go together with from_region.",
    ),
    "solve of the wrong input": (
        "[scene]\nreflected_c = { from_contact_c = 3 }\n",
        4,
        "scene.reflected_c.from_contact_c",
        "unknown key; known here: value, u, from_region.",
    ),
}


@pytest.mark.parametrize("case", CASES)
def test_one_fault(between_faults, case):
    text, *expected = CASES[case]
    assert between_faults(text) == [tuple(expected)]


CAMERAS = {
    "no camera": ("", 0, "camera", "is missing: give at least the band and what the stored numbers are."),
    "no band": (
        "[camera]\nsignal = { quantity = 'temperature', unit = 'C' }\n",
        2,
        "camera.band_um",
        "is missing: the wavelengths the camera sees, as [7.5, 14.0]; or a response.",
    ),
    "band the wrong way round": (
        "[camera]\nsignal = { quantity = 'radiance' }\nband_um = [14, 7.5]\n",
        4,
        "camera.band_um",
        "the first number, 14, must be smaller than the second, 7.5.",
    ),
    "no signal": (
        "[camera]\nband_um = [7.5, 14]\n",
        2,
        "camera.signal",
        "is missing: say what the stored numbers are (quantity, and unit for temperatures).",
    ),
    "no unit": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'temperature' }\n",
        4,
        "camera.signal.unit",
        "is missing: say whether stored temperatures are in C, K or F.",
    ),
    "open unit": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'temperature', unit = '?' }\n",
        4,
        "camera.signal.unit",
        "is still open (“?”): say whether it is C, K or F.",
    ),
    "unit of counts": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'radiance', unit = 'C' }\n",
        4,
        "camera.signal.unit",
        "is for temperatures only, not for radiance.",
    ),
    "nothing left of the numbers": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'radiance', scale = 0 }\n",
        4,
        "camera.signal.scale",
        "is 0, which makes all stored numbers the same.",
    ),
    "counts without calibration": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'counts' }\n",
        2,
        "camera.calibration",
        "is missing: counts need a calibration (see thermfix calibrate).",
    ),
    "half a calibration": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'counts' }\n"
        "calibration = { model = 'sakuma-hattori', a_um = 9, b_um_k = 3 }\n",
        5,
        "camera.calibration.c",
        "is missing.",
    ),
    "applied emissivity alone": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'temperature', unit = 'K' }\n"
        "[camera.applied]\nemissivity = 0.95\n",
        5,
        "camera.applied.reflected_c",
        "is missing: with an applied emissivity below 1 it is needed to undo it.",
    ),
    "applied transmittance alone": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'temperature', unit = 'K' }\n"
        "[camera.applied]\ntransmittance = 0.95\n",
        5,
        "camera.applied.air_c",
        "is missing: with an applied transmittance below 1 it is needed to undo it.",
    ),
    "applied to radiance": (
        "[camera]\nband_um = [7.5, 14]\nsignal = { quantity = 'radiance' }\n[camera.applied]\nemissivity = 1\n",
        5,
        "camera.applied",
        "is for stored temperatures only, not for radiance.",
    ),
}


@pytest.mark.parametrize("case", CAMERAS)
def test_one_fault_of_the_camera(faults, case):
    text, *expected = CAMERAS[case]
    text = f'format = "thermfix-inspection/1"\n{text}\n[[frames]]\nfile = "a.tif"\n'
    assert faults(text) == [tuple(expected)]


def test_band_and_response(faults, folder):
    (folder / "r.csv").write_text("wavelength_um,response\n7,1\n16,1\n")
    text = 'format = "thermfix-inspection/1"\n[camera]\nband_um = [3, 5]\nresponse = "r.csv"\n'
    text += '[camera.signal]\nquantity = "radiance"\n[[frames]]\nfile = "a.tif"\n'
    assert faults(text)[0][1:] == ("camera.response", "does not go together with band_um: give one or the other.")
    beyond = faults(text.replace("band_um = [3, 5]\n", ""))
    assert beyond == [
        (3, "camera.response", "the response reaches from 7 to 16 µm; it must lie in 2 to 15 µm."),
    ]


def test_format(faults, read):
    text = 'camera = { band_um = [3, 5], signal = { quantity = "radiance" } }\n[[frames]]\nfile = "a.tif"\n'
    assert [fault[:2] for fault in faults(text)] == [(0, "format")]
    assert faults('format = "thermfix-inspection/2"\n' + text) == [
        (1, "format", "must be “thermfix-inspection/1”; other formats are not known here.")
    ]


def test_unknown_material_names_close_ones(between, between_faults):
    text = f"[[regions]]\n{REGION}material = 'paint, mat'\n[materials.tile]\nemissivity = 0.9\n"
    ((line, key, sentence),) = between_faults(text)
    assert (line, key) == (6, "regions[0].material")
    assert "no material “paint, mat”; closest: paint, matt" in sentence
    for known in ("tile", "Paint,  Matt"):
        assert between(text.replace("paint, mat", known)).frames[0].regions[0].material == known


FILES = {
    "../a.tif": "must not lead upward",
    "x/../a.tif": "must not lead upward",
    "/a.tif": "must be relative",
    "C:/a.tif": "must be relative",
    "c.tif": "there is no file “c.tif”",
    "deep": "is not a regular file",
    "out.tif": "leads out of the inspection's folder",
    "round.tif": "cannot be looked up",
    "deep\\\\a.tif": "not a backslash",
    "": "must name a file",
    "?": "still open",
    "a\\u0000.tif": "control characters",
    "a.tif/x": "no file",
    "x" * 5000: "cannot be looked up",
}


@pytest.mark.parametrize("name", FILES)
def test_files_that_are_refused(faults, folder, name):
    (folder / "deep").mkdir()
    outside = folder.parent / "outside.tif"
    outside.write_bytes(b"x")
    (folder / "out.tif").symlink_to(outside)
    (folder / "round.tif").symlink_to("round.tif")
    text = 'format = "thermfix-inspection/1"\ncamera = { band_um = [3, 5], signal = { quantity = "radiance" } }\n'
    ((line, key, sentence),) = faults(text + f'[[frames]]\nfile = "{name}"\n')
    assert (line, key) == (4, "frames[0].file")
    assert FILES[name] in sentence


def test_a_frame_listed_twice(between_faults):
    tail = '[[frames]]\nfile = "a.tif"\n[[frames]]\nfile = "./a.tif"\n'
    assert between_faults("", tail=tail) == [(6, "frames[1].file", "the file is listed twice.")]
    assert between_faults("", tail="[[frames]]\n") == [(3, "frames[0].file", "is missing.")]


def test_all_faults_at_once_in_the_order_of_lines(faults):
    text = """format = "thermfix-inspection/1"
[camera]
band_um = [7.5]
[camera.signal]
quantity = "warmth"
[scene]
air_c = 300
reflected_c = { from_region = "nowhere" }
[[regions]]
name = "a"
shape = { rectangle = [5, 5, 1, 1] }
emissivity = 1.2
material = "unobtainium"
[[regions]]
name = "a"
shpe = { point = [1, 1] }
[[frames]]
file = "gone.tif"
[[frames.regions]]
name = "b"
shape = { point = [1, 1] }
emissivity = { same_temperature_as = "c" }
colour = "red"
"""
    assert [fault[:2] for fault in faults(text)] == [
        (3, "camera.band_um"),
        (5, "camera.signal.quantity"),
        (7, "scene.air_c"),
        (8, "scene.reflected_c"),
        (11, "regions[0].shape.rectangle"),
        (12, "regions[0].emissivity"),
        (13, "regions[0].material"),
        (14, "regions[1].shape"),
        (15, "regions[1].name"),
        (16, "regions[1].shpe"),
        (18, "frames[0].file"),
        (22, "frames[0].regions[0].emissivity"),
        (23, "frames[0].regions[0].colour"),
    ]


def test_the_error_says_where_and_how_many(folder):
    text = 'format = "thermfix-inspection/1"\n'
    (folder / "inspection.toml").write_text(text)
    with pytest.raises(InspectionError) as caught:
        load_inspection(folder)
    assert caught.value.exit_code == 2
    assert "inspection.toml has one fault:\n  whole file: camera: is missing" in str(caught.value)


BROKEN = {
    "grammar": (b"a = 1\nb = = 2\n", 2, "at column 5"),
    "end": (b'a = 1\nb = "x', 2, "not valid TOML"),
    "twice": (b"a = 1\na = 2\n", 2, "not valid TOML"),
    "not UTF-8": (b"a = 1\nb = '\xff'\n", 2, "not UTF-8"),
    "deep": (b"a = " + b"[" * 100_000, 0, "nested too deeply"),
    "digits": (b"a = " + b"1" * 5000, 0, "cannot be read"),
    "large": (b"#" * (4 * 2**20 + 1), 0, "larger than 4 MiB"),
}


@pytest.mark.parametrize("case", BROKEN)
def test_what_cannot_be_read_at_all(folder, case):
    data, line, sentence = BROKEN[case]
    (folder / "inspection.toml").write_bytes(data)
    with pytest.raises(InspectionError) as caught:
        load_inspection(folder)
    (fault,) = caught.value.faults
    assert (fault.line, fault.key) == (line, "")
    assert sentence in fault.message


def test_no_file(folder):
    with pytest.raises(InspectionError, match="no such file"):
        load_inspection(folder)
    with pytest.raises(InspectionError):
        load_inspection(folder / "a\0b")


def test_too_many_regions(folder):
    text = "regions = [" + "{}," * 100_001 + "]"
    with pytest.raises(InspectionError, match="more than 100000 regions"):
        read_inspection(text, folder / "inspection.toml")


def test_a_byte_order_mark_and_windows_line_ends(read, faults):
    text = 'format = "thermfix-inspection/1"\ncamera = { band_um = [3, 5], signal = { quantity = "radiance" } }\n'
    text = "\ufeff" + (text + '[[frames]]\nfile = "a.tif"\n').replace("\n", "\r\n")
    assert read(text).frames[0].file == "a.tif"
    assert faults(text.replace("a.tif", "c.tif"))[0][0] == 4
