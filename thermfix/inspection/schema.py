"""The tables of an inspection file: what may stand in each. Presence and what needs several keys is checked later."""

from datetime import datetime
from typing import Annotated

from pydantic import Field

from thermfix.inspection.estimates import EmissivityNumber, Number, Of, ReflectedNumber, TransmittanceNumber
from thermfix.inspection.refusing import Reader, Strict, refuse
from thermfix.inspection.schema_surfaces import MaterialTable, ShapeTable, ViewTable
from thermfix.inspection.values import bare, choice, name, pair, truth, words
from thermfix.quantities import Quantity

FORMAT = "thermfix-inspection/1"

_Name = Annotated[str, Reader(name)]
_Words = Annotated[str, Reader(words)]

_A = Quantity(
    key="a_um", symbol="A", unit="µm", low=0, low_open=True, high=100, label="A", help="Calibration constant A."
)
_B = Quantity(key="b_um_k", symbol="B", unit="µm K", low=-1e5, high=1e5, label="B", help="Calibration constant B.")
_C = Quantity(
    key="c", symbol="C", unit="counts", low=0, low_open=True, high=1e15, label="C", help="Calibration constant C."
)
_D = Quantity(key="d", symbol="D", unit="counts", low=-1e15, high=1e15, label="D", help="Counts without radiance.")


class SignalTable(Strict):
    """``[camera.signal]``."""

    quantity: Annotated[str, choice("temperature", "radiance", "counts")] | None = None
    unit: Annotated[str, choice("C", "K", "F")] | None = None
    scale: Annotated[float, bare("scale")] = 1.0
    offset: Annotated[float, bare("offset")] = 0.0


class AppliedTable(Strict):
    """``[camera.applied]``."""

    emissivity: Annotated[float, bare("emissivity")] = 1.0
    reflected_c: Annotated[float, bare("reflected_c")] | None = None
    transmittance: Annotated[float, bare("transmittance")] = 1.0
    air_c: Annotated[float, bare("air_c")] | None = None


class CalibrationTable(Strict):
    """``[camera.calibration]``."""

    model: Annotated[str, choice("sakuma-hattori", "table")] | None = None
    a_um: Annotated[float, bare(_A)] | None = None
    b_um_k: Annotated[float, bare(_B)] | None = None
    c: Annotated[float, bare(_C)] | None = None
    d: Annotated[float, bare(_D)] | None = None
    file: _Words | None = None
    u_k: Annotated[float, bare("noise_k")] | None = None


class CameraTable(Strict):
    """``[camera]``."""

    band_um: Annotated[tuple[float, float], pair("band_um", "as [7.5, 14.0]", rising=True)] | None = None
    response: _Words | None = None
    field_of_view_deg: (
        Annotated[tuple[float, float], pair("field_of_view_deg", "horizontal and vertical, as [25.0, 19.0]")] | None
    ) = None
    blur_px: Annotated[Number, Of("blur_px")] | None = None
    noise_k: Annotated[float, bare("noise_k")] | None = None
    accuracy_k: Annotated[float, bare("accuracy_k")] | None = None
    accuracy_rel: Annotated[float, bare("accuracy_rel")] | None = None
    signal: SignalTable | None = None
    applied: AppliedTable | None = None
    calibration: CalibrationTable | None = None


class WindowTable(Strict):
    """``[scene.window]``."""

    transmittance: Annotated[TransmittanceNumber, Of("transmittance")] | None = None
    reflectance: Annotated[Number, Of("reflectance")] | None = None
    temperature_c: Annotated[Number, Of("temperature_c")] | None = None
    material: _Name | None = None
    thickness_mm: Annotated[Number, Of("thickness_mm")] | None = None
    angle_deg: Annotated[Number, Of("angle_deg")] | None = None


class SceneTable(Strict):
    """``[scene]``, and the ``scene`` of a frame."""

    reflected_c: Annotated[ReflectedNumber, Of("reflected_c")] | None = None
    air_c: Annotated[Number, Of("air_c")] | None = None
    humidity_pct: Annotated[Number, Of("humidity_pct")] | None = None
    pressure_hpa: Annotated[Number, Of("pressure_hpa")] | None = None
    co2_ppm: Annotated[Number, Of("co2_ppm")] | None = None
    distance_m: Annotated[Number, Of("distance_m")] | None = None
    transmittance: Annotated[TransmittanceNumber, Of("transmittance")] | None = None
    camera_side_c: Annotated[Number, Of("camera_side_c")] | None = None
    emissivity: Annotated[Number, Of("emissivity")] | None = None
    window: WindowTable | None = None


class SequenceTable(Strict):
    """``[sequence]``."""

    start: datetime | None = None
    interval_s: Annotated[float, bare("interval_s")] | None = None


class SourceTable(Strict):
    """One of a region's ``reflections``: its view factor, or the size, distance and angles that give it."""

    source_c: Annotated[Number, Of("source_c")]
    view_factor: Annotated[Number, Of("view_factor")] | None = None
    size_m: Annotated[list[Annotated[float, bare("size_m")]], Field(min_length=2, max_length=2)] | None = None
    distance_m: Annotated[float, bare("distance_m")] | None = None
    surface_angle_deg: Annotated[float, bare("angle_deg")] = 0.0
    source_angle_deg: Annotated[float, bare("angle_deg")] = 0.0


class RegionTable(Strict):
    """``[[regions]]`` and ``[[frames.regions]]``."""

    name: _Name | None = None
    shape: ShapeTable | None = None
    material: _Name | None = None
    emissivity: Annotated[EmissivityNumber, Of("emissivity")] | None = None
    view: ViewTable | None = None
    reflected_c: Annotated[ReflectedNumber, Of("reflected_c")] | None = None
    distance_m: Annotated[Number, Of("distance_m")] | None = None
    transmittance: Annotated[TransmittanceNumber, Of("transmittance")] | None = None
    reflections: list[SourceTable] = Field(default_factory=list)
    small_target: Annotated[bool, Reader(truth)] = False
    true_area_mm2: Annotated[Number, Of("true_area_mm2")] | None = None


class FrameTable(Strict):
    """``[[frames]]``."""

    file: _Words | None = None
    scene: SceneTable = SceneTable()
    regions: list[RegionTable] = Field(default_factory=list)


def _format(value: object) -> str:
    if value != FORMAT:
        raise refuse(f"must be “{FORMAT}”; other formats are not known here.")
    return FORMAT


class InspectionTable(Strict):
    """The whole file."""

    format: Annotated[str, Reader(_format)] | None = None
    title: _Words = ""
    camera: CameraTable | None = None
    scene: SceneTable = SceneTable()
    sequence: SequenceTable = SequenceTable()
    regions: list[RegionTable] = Field(default_factory=list)
    frames: list[FrameTable] | None = None
    materials: dict[str, MaterialTable] = Field(default_factory=dict)
