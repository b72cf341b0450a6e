"""From scene tables to the scene of each frame: overrides merged, documented defaults marked as assumed."""

from dataclasses import dataclass
from typing import Any

from thermfix.errors import InputError
from thermfix.inspection.estimates import Number, kelvin
from thermfix.inspection.faults import Faults
from thermfix.inspection.lines import KeyPath
from thermfix.inspection.refusing import Strict
from thermfix.inspection.schema import SceneTable
from thermfix.materials import window_material
from thermfix.model import Estimate, Scene, Window

DEFAULTS = {"air_c": 20.0, "humidity_pct": 50.0, "pressure_hpa": 1013.25, "co2_ppm": 420.0, "emissivity": 0.95}
"""Taken where neither scene nor frame gives them; the reflected temperature is then that of the air."""

_BY_NUMBERS = ("transmittance", "reflectance")
_BY_MATERIAL = ("material", "thickness_mm", "angle_deg")


@dataclass(frozen=True, slots=True)
class Placed:
    """A table of the file and where it stands."""

    table: Strict
    path: KeyPath

    def given(self) -> dict[str, Any]:
        """Return what the table gives."""
        return {key: getattr(self.table, key) for key in self.table.model_fields_set}


def build_scene(layers: list[tuple[SceneTable, KeyPath]], faults: Faults) -> Scene:
    """Return the scene of tables of which a later one overrides an earlier one key by key."""
    given: dict[str, Any] = {}
    windows: list[Placed] = []
    for table, path in layers:
        own = Placed(table, path).given()
        window = own.pop("window", None)
        given |= own
        if window is not None:
            windows.append(Placed(window, (*path, "window")))
    found = {key: _resolved(number, key) for key, number in given.items()}
    for key, value in DEFAULTS.items():
        found.setdefault(key, Estimate(value=kelvin(key, value), assumed=True))
    air = found["air_c"]
    return Scene(
        reflected_k=found.get("reflected_c") or Estimate(value=air.value, assumed=True),
        air_k=air,
        humidity_pct=found["humidity_pct"],
        pressure_hpa=found["pressure_hpa"],
        co2_ppm=found["co2_ppm"],
        emissivity=found["emissivity"],
        distance_m=found.get("distance_m"),
        transmittance=found.get("transmittance"),
        camera_side_k=found.get("camera_side_c"),
        window=_window(windows, air, faults) if windows else None,
    )


def _resolved(number: Number, key: str) -> Any:
    return number.resolve(key)


def merged_window(windows: list[Placed]) -> dict[str, Any]:
    """Return the keys of windows, later ones first; a material takes the place of numbers, and the other way round."""
    merged: dict[str, Any] = {}
    for window in windows:
        given = window.given()
        for ours, theirs in ((_BY_NUMBERS, _BY_MATERIAL), (_BY_MATERIAL, _BY_NUMBERS)):
            if any(key in given for key in ours):
                merged = {key: value for key, value in merged.items() if key not in theirs}
        merged |= given
    return merged


def _window(windows: list[Placed], air: Estimate, faults: Faults) -> Window:
    merged, path = merged_window(windows), windows[-1].path
    _check_window(windows[-1], merged, faults)
    found = {key: _resolved(value, key) for key, value in merged.items() if key != "material"}
    material = merged.get("material")
    _check_sum(path, found, faults)
    return Window(
        transmittance=found.get("transmittance"),
        # Of a material it follows from the material; where it is missing the file is refused.
        reflectance=found.get("reflectance") or Estimate(value=0.0, assumed=True),
        temperature_k=found.get("temperature_c") or Estimate(value=air.value, assumed=True),
        material=material,
        thickness_mm=found.get("thickness_mm"),
        angle_deg=found.get("angle_deg"),
    )


def _check_window(last: Placed, merged: dict[str, Any], faults: Faults) -> None:
    path = last.path
    by_material = [key for key in _BY_MATERIAL if key in merged]
    by_numbers = [key for key in _BY_NUMBERS if key in merged]
    if by_material and by_numbers:
        faults.follow((*path, by_material[0]), f"does not go together with {by_numbers[0]}: give one or the other.")
        return
    wanted = ("material", "thickness_mm") if by_material else _BY_NUMBERS
    for key in wanted:
        if key not in merged:
            hint = "" if by_material else "; or give material and thickness_mm"
            faults.follow((*path, key), f"is missing{hint}.")
    if "material" in merged:
        try:
            window_material(merged["material"])
        except InputError as error:
            faults.follow((*path, "material"), f"{error} {error.hint}".strip())


def _check_sum(path: KeyPath, found: dict[str, Any], faults: Faults) -> None:
    tau, rho = found.get("transmittance"), found.get("reflectance")
    if isinstance(tau, Estimate) and isinstance(rho, Estimate) and tau.value + rho.value > 1:
        total = tau.value + rho.value
        faults.follow(
            (*path, "reflectance"), f"transmittance and reflectance add up to {total:g}; they must not exceed 1."
        )
