"""From the camera's tables to the camera."""

from thermfix.inspection.estimates import kelvin
from thermfix.inspection.faults import Faults
from thermfix.inspection.references import References
from thermfix.inspection.schema import AppliedTable, CalibrationTable, CameraTable, SignalTable
from thermfix.model import (
    Applied,
    BlackbodyTable,
    Camera,
    Estimate,
    SakumaHattori,
    Signal,
    SignalKind,
    Table,
    TemperatureUnit,
)
from thermfix.quantities import QUANTITIES

_SAKUMA_HATTORI = ("a_um", "b_um_k", "c")


def build_camera(table: CameraTable | None, references: References, faults: Faults) -> Camera:
    """Return the camera; what is missing or contradicts itself is noted and left at the model's default."""
    if table is None:
        faults.follow(("camera",), "is missing: give at least the band and what the stored numbers are.")
        return Camera()
    signal = _signal(table.signal, faults)
    return Camera(
        band_um=table.band_um,
        response=_response(table, references, faults),
        signal=signal,
        applied=_applied(table.applied, signal.kind, faults),
        calibration=_calibration(table, signal.kind, references, faults),
        field_of_view_deg=table.field_of_view_deg,
        blur_px=_estimate(table),
        noise_k=table.noise_k,
        accuracy_k=table.accuracy_k,
        accuracy_rel=table.accuracy_rel,
    )


def _estimate(table: CameraTable) -> Estimate | None:
    return None if table.blur_px is None else table.blur_px.estimate("blur_px")


def _response(table: CameraTable, references: References, faults: Faults) -> Table | None:
    path = ("camera", "response")
    if table.response is None:
        if table.band_um is None and not faults.mars(path):
            faults.follow(
                ("camera", "band_um"), "is missing: the wavelengths the camera sees, as [7.5, 14.0]; or a response."
            )
        return None
    if table.band_um is not None:
        faults.follow(path, "does not go together with band_um: give one or the other.")
    found = references.table(path, table.response, ("wavelength_um", "response"), ("wavelength_um",))
    if found is not None:
        seen = found.columns["wavelength_um"][found.columns["response"] > 0]
        row = QUANTITIES["band_um"]
        if seen[0] < row.low or seen[-1] > row.high:
            faults.follow(
                path,
                f"the response reaches from {seen[0]:g} to {seen[-1]:g} µm; "
                f"it must lie in {row.low:g} to {row.high:g} µm.",
            )
    return found


def _signal(table: SignalTable | None, faults: Faults) -> Signal:
    path = ("camera", "signal")
    if table is None:
        faults.follow(path, "is missing: say what the stored numbers are (quantity, and unit for temperatures).")
        return Signal()
    if table.quantity is None:
        faults.follow((*path, "quantity"), "is missing: temperature, radiance or counts.")
    kind = SignalKind(table.quantity or "temperature")
    if kind is SignalKind.TEMPERATURE and table.unit is None and table.quantity is not None:
        faults.follow((*path, "unit"), "is missing: say whether stored temperatures are in C, K or F.")
    if kind is not SignalKind.TEMPERATURE and table.unit is not None:
        faults.follow((*path, "unit"), f"is for temperatures only, not for {kind.value}.")
    if table.scale == 0:
        faults.follow((*path, "scale"), "is 0, which makes all stored numbers the same.")
    return Signal(kind=kind, unit=TemperatureUnit(table.unit or "C"), scale=table.scale, offset=table.offset)


def _applied(table: AppliedTable | None, kind: SignalKind, faults: Faults) -> Applied | None:
    if table is None:
        return None
    path = ("camera", "applied")
    if kind is not SignalKind.TEMPERATURE:
        faults.follow(path, f"is for stored temperatures only, not for {kind.value}.")
    if table.emissivity < 1 and table.reflected_c is None:
        faults.follow((*path, "reflected_c"), "is missing: with an applied emissivity below 1 it is needed to undo it.")
    if table.transmittance < 1 and table.air_c is None:
        faults.follow((*path, "air_c"), "is missing: with an applied transmittance below 1 it is needed to undo it.")
    return Applied(
        emissivity=table.emissivity,
        reflected_k=None if table.reflected_c is None else kelvin("reflected_c", table.reflected_c),
        transmittance=table.transmittance,
        air_k=None if table.air_c is None else kelvin("air_c", table.air_c),
    )


def _calibration(
    camera: CameraTable, kind: SignalKind, references: References, faults: Faults
) -> SakumaHattori | BlackbodyTable | None:
    table, path = camera.calibration, ("camera", "calibration")
    if table is None:
        if kind is SignalKind.COUNTS:
            faults.follow(path, "is missing: counts need a calibration (see thermfix calibrate).")
        return None
    if kind is not SignalKind.COUNTS:
        return None  # it may stay in the file; only counts use it
    if table.model is None:
        faults.follow((*path, "model"), "is missing: sakuma-hattori or table.")
    if table.model == "sakuma-hattori":
        return _sakuma_hattori(table, faults)
    return _blackbody_table(table, references, faults) if table.model == "table" else None


def _sakuma_hattori(table: CalibrationTable, faults: Faults) -> SakumaHattori | None:
    path = ("camera", "calibration")
    if table.file is not None:
        faults.follow((*path, "file"), "does not go together with the model sakuma-hattori.")
    for key in _SAKUMA_HATTORI:
        if getattr(table, key) is None:
            faults.follow((*path, key), "is missing.")
    if table.a_um is None or table.b_um_k is None or table.c is None:
        return None
    return SakumaHattori(a_um=table.a_um, b_um_k=table.b_um_k, c=table.c, d=table.d or 0.0, u_k=table.u_k or 0.0)


def _blackbody_table(table: CalibrationTable, references: References, faults: Faults) -> BlackbodyTable | None:
    path = ("camera", "calibration")
    for key in (*_SAKUMA_HATTORI, "d"):
        if getattr(table, key) is not None:
            faults.follow((*path, key), "does not go together with the model table.")
    if table.file is None:
        faults.follow((*path, "file"), "is missing: a CSV file with temperature_c,counts.")
        return None
    columns = ("temperature_c", "counts")
    found = references.table((*path, "file"), table.file, columns, columns)
    return None if found is None else BlackbodyTable(table=found, u_k=table.u_k or 0.0)
