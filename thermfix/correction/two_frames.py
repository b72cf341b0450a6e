"""Emissivity and temperature of one surface from two frames under different reflected temperatures."""

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input
from thermfix.correction.instrument import Instrument
from thermfix.correction.setting import Setting
from thermfix.errors import PhysicsError
from thermfix.files import printable
from thermfix.radiometry.planck import spectral_radiance, spectral_radiance_slope

Array = NDArray[np.float64]
Key = tuple[str, str]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Side:
    """One frame: the region's equation as a function of its emissivity, mean received radiance, pixels in that mean."""

    setting: Callable[[float], Setting]
    received: float
    count: int


def two_frames(instrument: Instrument, key: Key, region: str, first: Side, second: Side, file: str) -> Input:
    """Return the emissivity, with parts, that makes both frames see one temperature.

    Newton's method on both equations; their implicit derivatives carry every input of both frames. The
    scene of the second frame has errors of its own; the camera's accuracy is common to both.

    Raises
    ------
    PhysicsError
        If the two reflected temperatures are too near to tell emission from reflection.
    """
    nodes = instrument.band.nodes_um
    emissivity, surface_k = 0.5, 310.0
    for _ in range(60):
        rows = [_row(side, key, emissivity, surface_k, nodes) for side in (first, second)]
        jacobian = np.array([[row[1], row[2]] for row in rows])
        missing = np.array([side.received - row[0] for side, row in zip((first, second), rows, strict=True)])
        if abs(np.linalg.det(jacobian)) < 1e-9 * np.abs(jacobian).max() ** 2:
            break
        step = np.linalg.solve(jacobian, missing)
        emissivity = float(np.clip(emissivity + np.clip(step[0], -0.2, 0.2), 1e-3, 1.0))
        surface_k = float(np.clip(surface_k + np.clip(step[1], -60, 60), 213.2, 3273.0))
        if abs(step[0]) < 1e-10 and abs(step[1]) < 1e-7:
            return _solved(instrument, key, region, (first, second), file, emissivity, surface_k)
    raise PhysicsError(
        f"The emissivity of “{printable(region)}” cannot be found from this frame and {printable(file)}.",
        hint="The reflected temperatures of the two frames must differ by 20 K or more, the surface's must not.",
    )


def _row(side: Side, key: Key, emissivity: float, surface_k: float, nodes: Array) -> tuple[float, float, float]:
    """Return the model's radiance and its derivatives with emissivity and temperature."""
    setting = side.setting(emissivity)
    at = spectral_radiance(nodes, surface_k)
    term = next(one for one in setting.terms if one.input.name == f"{key[0]}: {key[1]}")
    by_emissivity = float((0.0 if term.gain is None else term.gain @ at) + term.offset)
    slope = float(setting.emission @ spectral_radiance_slope(nodes, surface_k))
    return float(setting.emission @ at) + setting.rest, by_emissivity, slope


def _solved(
    instrument: Instrument,
    key: Key,
    region: str,
    sides: tuple[Side, Side],
    file: str,
    emissivity: float,
    surface_k: float,
) -> Input:
    nodes = instrument.band.nodes_um
    at = spectral_radiance(nodes, surface_k)
    rows = [_row(side, key, emissivity, surface_k, nodes) for side in sides]
    inverse = np.linalg.inv(np.array([[row[1], row[2]] for row in rows]))[0]
    parts: dict[str, tuple[Input, float]] = {}

    def add(one: Input, slope: float) -> None:
        before = parts[one.name][1] if one.name in parts else 0.0
        parts[one.name] = (one, before + slope)

    for i, side in enumerate(sides):
        for term in side.setting(emissivity).terms:
            if term.input.name == f"{key[0]}: {key[1]}":
                continue
            by = -inverse[i] * float((0.0 if term.gain is None else term.gain @ at) + term.offset)
            for part, share in term.input.parts or ((term.input, 1.0),):
                add(part if i == 0 or part.origin == "camera" else _of(part, file), by * share)
        add(instrument.accuracy, float(inverse[i] * instrument.accuracy_radiance(side.received)))
        noise_u = instrument.noise_radiance / float(np.sqrt(side.count))
        place = f"region {region}" + (f" in {file}" if i else "")
        add(Input(key="noise", value=0.0, u=noise_u, origin=place), float(inverse[i]))
    found = tuple(parts.values())
    u = float(np.sqrt(sum((one.u * slope) ** 2 for one, slope in found)))
    return Input(key=key[1], value=emissivity, u=u, origin=key[0], parts=found)


def _of(one: Input, file: str) -> Input:
    """Return an input of the other frame as an error of its own."""
    return replace(one, origin=f"{one.origin} of {file}")
