"""The text of a starter inspection: what is known filled in, what only the person can know left open."""

from collections.abc import Sequence
from pathlib import Path

from thermfix.files import printable
from thermfix.inspection.refusing import OPEN
from thermfix.inspection.schema import FORMAT
from thermfix.inspection.writing import toml_value
from thermfix.model import SignalKind, TemperatureUnit

_HEAD = """\
# Fill in every "?", then run: thermfix check "{folder}"
# Any physical number may be a bare number or { value = 0.78, u = 0.03 }, u = standard uncertainty in the same unit.

"""

_CAMERA = """
[camera]
{band}
# response = "response.csv"        # instead of band_um: a table with the header wavelength_um,response
# field_of_view_deg = [25.0, 19.0] # horizontal, vertical
# blur_px = 0.6                    # standard deviation of the point spread
# noise_k = 0.05                   # noise-equivalent temperature difference
# accuracy_k = 2.0                 # limits from the data sheet: the larger of the two holds
# accuracy_rel = 0.02              # as a fraction of the reading in °C

[camera.signal]                    # what the stored numbers are; value = stored × scale + offset
{hints}quantity = {quantity}           # temperature | radiance | counts
{unit}
scale = {scale}
offset = {offset}
"""

_APPLIED = """
# [camera.applied]                 # what the camera already applied to its temperatures, so that it can be undone
# emissivity = 0.95
# reflected_c = 20.0
# transmittance = 1.0
# air_c = 20.0
"""

_CALIBRATION = """
[camera.calibration]
model = "?"                        # sakuma-hattori (a_um, b_um_k, c, d) | table (file with temperature_c,counts)
# file = "blackbody.csv"           # thermfix calibrate TABLE fits such a table
"""

_SCENE = """
[scene]
# reflected_c = 20.0               # what the surfaces mirror; the air temperature unless given
# air_c = 20.0
# humidity_pct = 50
# distance_m = 2.0                 # without it the air is taken as clear
# emissivity = 0.95                # of pixels outside every region

# [scene.window]                   # an infrared window between surface and camera
# transmittance = 0.85
# reflectance = 0.05
# temperature_c = 25.0

# [[regions]]                      # a region of every frame
# name = "wall"
# shape = { rectangle = [10, 10, 60, 60] }    # x0, y0, x1, y1
# material = "paint, matt"         # thermfix materials WORDS searches the library

"""

_FRAME_EXAMPLE = """\
# scene = { distance_m = 1.2 }     # what differs from [scene] in this frame

# [[frames.regions]]               # a region of this frame
# name = "bus bar"
# shape = { polygon = [[120, 80], [160, 82], [158, 140]] }
# emissivity = { value = 0.30, u = 0.05 }
# view = { angle_deg = 35 }        # between the surface normal and the line of sight
"""


def starter_text(
    folder: Path,
    frames: Sequence[str],
    *,
    band_um: tuple[float, float] | None = None,
    quantity: SignalKind | None = None,
    unit: TemperatureUnit | None = None,
    scale: float = 1.0,
    offset: float = 0.0,
    hints: Sequence[str] = (),
) -> str:
    """Return a commented inspection that lists frames; what is not given and cannot be assumed is left as "?".

    Parameters
    ----------
    folder : Path
        Its name becomes the title.
    frames : sequence of str
        Frame files, relative to the folder.
    band_um : tuple of float, optional
        Wavelengths the camera sees. [µm]
    quantity : SignalKind, optional
        What the stored numbers are; temperatures if None.
    unit : TemperatureUnit, optional
        Unit of stored temperatures. It is never assumed.
    scale, offset : float
        value = stored × scale + offset.
    hints : sequence of str
        Sentences about the stored numbers that help to fill in the unit; they become comments.

    Returns
    -------
    str
        TOML; ``thermfix check`` names each value that is still open.

    Raises
    ------
    InputError
        If a frame's name has no form in TOML.
    """
    kind = quantity or SignalKind.TEMPERATURE
    name = printable(folder.absolute().name)
    # Not str.format: the text is full of braces that are TOML.
    camera = _filled(
        _CAMERA,
        band=_line("band_um", list(band_um) if band_um else OPEN, "wavelengths the camera sees, µm, as [7.5, 14.0]"),
        hints="".join(f"# {printable(hint)}\n" for hint in hints),
        quantity=toml_value(kind.value),
        unit=_unit_line(kind, unit),
        scale=toml_value(float(scale)),
        offset=toml_value(float(offset)),
    )
    extra = {SignalKind.TEMPERATURE: _APPLIED, SignalKind.COUNTS: _CALIBRATION}.get(kind, "")
    listed = [f"[[frames]]\nfile = {toml_value(file)}\n" for file in frames]
    if listed:
        listed[0] += _FRAME_EXAMPLE
    head = f"format = {toml_value(FORMAT)}\ntitle = {toml_value(name)}\n"
    return _filled(_HEAD, folder=name) + head + camera + extra + _SCENE + "\n".join(listed)


def _filled(text: str, **parts: str) -> str:
    for name, part in parts.items():
        text = text.replace(f"{{{name}}}", part)
    return text


def _line(key: str, value: object, comment: str) -> str:
    return f"{key} = {toml_value(value)}".ljust(35) + f"# {comment}"


def _unit_line(kind: SignalKind, unit: TemperatureUnit | None) -> str:
    if kind is not SignalKind.TEMPERATURE:
        return '# unit = "C"                     # for temperatures only'
    return _line("unit", unit.value if unit else OPEN, "C | K | F: the unit of the stored temperatures")
