"""Inputs found from regions whose temperature is known: reflected temperature, emissivity, transmittance.

All are one problem: the equation of the known region, with its mean received radiance on the left,
holds one unknown. Newton's method finds it; the implicit derivative carries every other input's
uncertainty, the camera's and the noise's into it, so that errors common to the known region and to
whatever uses the result stay common.
"""

from collections.abc import Callable, Mapping
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.conditions import Conditions, Key
from thermfix.correction.defaults import Input, stated_or_default
from thermfix.correction.instrument import Instrument
from thermfix.correction.layer import Layer
from thermfix.correction.plan import plan_region
from thermfix.correction.setting import Setting, Term
from thermfix.correction.two_frames import Side, two_frames
from thermfix.correction.unknowns import as_reflector, how, wanted, wanted_by
from thermfix.errors import PhysicsError
from thermfix.files import printable
from thermfix.model import (
    Estimate,
    Frame,
    FromContact,
    FromOtherFrame,
    FromReflector,
    FromTarget,
    Material,
    Region,
    SameTemperature,
    Scene,
)
from thermfix.quantities import QUANTITIES, ZERO_C_K
from thermfix.radiometry.planck import spectral_radiance, spectral_radiance_slope

Fast = NDArray[np.float32]

_START = {"reflected_c": 293.15, "emissivity": 0.8, "transmittance": 0.9}
_GOOD_U = 0.05
_HOPELESS_U = {"reflected_c": 50.0, "emissivity": 0.15, "transmittance": 0.15}
"""A solved input less certain than this says nothing: it is refused. Temperatures in K."""


def solve(
    instrument: Instrument,
    frame: Frame,
    radiance: Fast,
    materials: Mapping[str, Material] | None = None,
    others: Mapping[str, tuple[Frame, Fast]] | None = None,
) -> dict[Key, Input]:
    """Return every input of a frame that is to be solved.

    Parameters
    ----------
    instrument : Instrument
        The camera.
    frame : Frame
        Its scene and regions; what is to be solved stands in them as how it is found.
    radiance : ndarray, shape (rows, columns)
        Received in-band radiance. [W m⁻² sr⁻¹].
    materials : mapping, optional
        Materials of the inspection.
    others : mapping of str to (frame, radiance), optional
        Frames that something is solved from together with this one, by file.

    Returns
    -------
    dict of (origin, key) to Input
        With uncertainty and parts. Empty where nothing is to be solved.

    Raises
    ------
    PhysicsError
        If a solve is ill-conditioned, its region has no number, or two solves hang on each other.
    """
    return _Solver(instrument, frame, radiance, materials or {}, others or {}).all()


class _Solver:
    def __init__(
        self,
        instrument: Instrument,
        frame: Frame,
        radiance: Fast,
        materials: Mapping[str, Material],
        others: Mapping[str, tuple[Frame, Fast]],
    ) -> None:
        self.instrument, self.frame, self.radiance, self.materials = instrument, frame, radiance, materials
        self.others = others
        self.shape = (radiance.shape[0], radiance.shape[1])
        self.regions = {region.name: region for region in frame.regions}
        self.solved: dict[Key, Input] = {}
        self.pending: list[Key] = []

    def all(self) -> dict[Key, Input]:
        for key in wanted(self.frame):
            self.solve(key)
        return self.solved

    def solve(self, key: Key) -> None:
        if key in self.solved:
            return
        if key in self.pending:
            names = " and ".join(f"{one[1]} of the {printable(one[0])}" for one in self.pending)
            raise PhysicsError(
                f"{printable(self.frame.file)}: {names} hang on each other and cannot both be solved.",
                hint="Measure one of them in another way.",
            )
        self.pending.append(key)
        self.solved[key] = self._solve(key)
        self.pending.remove(key)

    def _solve(self, key: Key) -> Input:
        scene, found_how = self.frame.scene, how(self.frame, key)
        match found_how:
            case FromReflector():
                region = as_reflector(replace(self._region(found_how.region), reflected_k=None))
                scene = replace(scene, reflected_k=found_how)
                return self._from(key, ("scene", "reflected_c"), scene, region, stated_or_default("air_c", scene.air_k))
            case FromTarget():
                known = stated_or_default("true_c", found_how.true_k, f"region {found_how.region}")
                region = self._region(found_how.region)
                if key[0] == "window":
                    return self._from(key, key, scene, region, known)
                scene = replace(scene, transmittance=found_how)
                region = replace(region, transmittance=None, distance_m=None)
                return self._from(key, ("scene", "transmittance"), scene, region, known)
            case FromContact():
                known = stated_or_default("from_contact_c", found_how.contact_k, key[0])
                return self._from(key, key, scene, self._region(key[0].removeprefix("region ")), known)
            case FromOtherFrame():
                return self._from_two_frames(key, self._region(key[0].removeprefix("region ")), found_how.file)
            case SameTemperature():
                known = self._temperature_of(self._region(found_how.region))
                return self._from(key, key, scene, self._region(key[0].removeprefix("region ")), known)

    def _from(self, key: Key, unknown: Key, scene: Scene, region: Region, known: Input) -> Input:
        """Solve an unknown of the equation of a region at a known temperature [K]; the result is for ``key``."""
        self._needs(scene, region, unknown)

        def plan(guess: float) -> Layer:
            trial = {**self.solved, unknown: Input(key=unknown[1], value=guess, u=0.0, origin=unknown[0])}
            conditions = Conditions(instrument=self.instrument, scene=scene, materials=self.materials, solved=trial)
            return plan_region(conditions, region, self.shape, self.frame.file).layer

        mean, count = self._mean(plan(_START[unknown[1]]), region)
        value, setting = _newton(lambda guess: plan(guess).setting, unknown, mean, known.value, self.instrument)
        parts = self._parts(unknown, setting, known, mean, count, region)
        u = float(np.sqrt(sum((one.u * slope) ** 2 for one, slope in parts)))
        found = Input(key=key[1], value=value, u=u, origin=key[0], parts=parts)
        return self._judged(found, region, known, scene)

    def _from_two_frames(self, key: Key, region: Region, file: str) -> Input:
        """Solve emissivity and temperature from this frame and another of the same surface."""
        if file not in self.others:
            raise PhysicsError(
                f"{printable(self.frame.file)}: there is no frame “{printable(file)}” to solve from.",
                hint="List it in the inspection; other_frame names it as its file key does.",
            )
        frame, radiance = self.others[file]
        twin = next((one for one in frame.regions if one.name == region.name), None)
        if twin is None:
            raise PhysicsError(f"{printable(file)} has no region “{printable(region.name)}”, which is needed to solve.")
        self._needs(self.frame.scene, region, key)
        wanted_there = [one for one in wanted_by(frame.scene, twin) if one != key]
        there: dict[Key, Input] = {}
        if wanted_there:
            there = _Solver(self.instrument, _without(frame, twin), radiance, self.materials, {}).all()
        sides = [
            self._side(self.frame, region, self.radiance, self.solved, key),
            self._side(frame, replace(twin, emissivity=region.emissivity, material=None), radiance, there, key),
        ]
        found = two_frames(self.instrument, key, region.name, sides[0], sides[1], file)
        return self._judged(found, region, stated_or_default("air_c", frame.scene.air_k), frame.scene)

    def _side(self, frame: Frame, region: Region, radiance: Fast, solved: Mapping[Key, Input], key: Key) -> Side:
        """Return one frame's equation of a region as a function of its emissivity, and what was received."""

        def layer(guess: float) -> Layer:
            trial = {**solved, key: Input(key=key[1], value=guess, u=0.0, origin=key[0])}
            conditions = Conditions(
                instrument=self.instrument, scene=frame.scene, materials=self.materials, solved=trial
            )
            return plan_region(conditions, region, (radiance.shape[0], radiance.shape[1]), frame.file).layer

        received = radiance.reshape(-1)[layer(_START["emissivity"]).pixels]
        seen = received[np.isfinite(received)].astype(np.float64)
        if seen.size == 0:
            raise PhysicsError(f"{printable(frame.file)}: the region “{printable(region.name)}” holds no number.")
        return Side(setting=lambda guess: layer(guess).setting, received=float(seen.mean()), count=seen.size)

    def _mean(self, layer: Layer, region: Region) -> tuple[float, int]:
        """Return the mean received radiance of a region and over how many pixels."""
        received = self.radiance.reshape(-1)[layer.pixels]
        seen = received[np.isfinite(received)].astype(np.float64)
        if seen.size == 0:
            raise PhysicsError(
                f"{printable(self.frame.file)}: the region “{printable(region.name)}” holds no number to solve from.",
                hint="Move it, or give the input instead.",
            )
        return float(seen.mean()), seen.size

    def _parts(
        self, unknown: Key, setting: Setting, known: Input, mean: float, count: int, region: Region
    ) -> tuple[tuple[Input, float], ...]:
        """Return d(unknown)/d(input) for everything else: −(∂L/∂p) / (∂L/∂unknown)."""
        nodes = self.instrument.band.nodes_um
        at = spectral_radiance(nodes, known.value)
        terms = {term.input.name: term for term in setting.terms}
        by = _along(terms.pop(f"{unknown[0]}: {unknown[1]}"), at)
        slopes = [(term.input, -_along(term, at) / by) for term in terms.values()]
        slopes.append((known, -float(setting.emission @ spectral_radiance_slope(nodes, known.value)) / by))
        slopes += [(one, slope / by) for one, slope in self._camera(mean, count, region)]
        return _flat(slopes)

    def _camera(self, mean: float, count: int, region: Region) -> list[tuple[Input, float]]:
        """Return the errors of a mean received radiance: the camera's accuracy, and noise averaged down."""
        noise_u = self.instrument.noise_radiance / np.sqrt(count)
        calibration = self.instrument.calibration
        own = [] if calibration is None else [(calibration, float(self.instrument.calibration_radiance(mean)))]
        return [
            *own,
            (self.instrument.accuracy, float(self.instrument.accuracy_radiance(mean))),
            (Input(key="noise", value=0.0, u=noise_u, origin=f"region {region.name}"), 1.0),
        ]

    def _judged(self, found: Input, region: Region, known: Input, scene: Scene) -> Input:
        """Return the solved input, or refuse it where it says nothing."""
        quantity = QUANTITIES[found.key]
        value = found.value - ZERO_C_K if quantity.unit == "°C" else found.value
        where = f"{printable(self.frame.file)}: the {quantity.label} from the region “{printable(region.name)}”"
        if not quantity.low <= value <= quantity.high:
            raise PhysicsError(
                f"{where} comes out as {value:.3g}; it must lie in {quantity.low:g} to {quantity.high:g} "
                f"[{quantity.unit}].",
                hint="Check the known temperature, the region and the other inputs.",
            )
        if found.u > _HOPELESS_U[found.key]:
            raise PhysicsError(
                f"{where} would be uncertain by {found.u:.2g} {quantity.unit.strip('1')}, too much to be of use.",
                hint=self._apart(found, known, scene),
            )
        return found

    def _apart(self, found: Input, known: Input, scene: Scene) -> str:
        """Say how far apart the temperatures must be: the uncertainty falls about as their difference grows."""
        if found.key == "reflected_c":
            return "A reflector must be mostly reflecting; use crumpled and flattened bare metal foil."
        other = self.solved.get(("scene", "reflected_c")) or scene.reflected_k
        if found.key == "transmittance" or not isinstance(other, Input | Estimate):
            other = scene.air_k
        apart = abs(known.value - other.value)
        needed = max(apart * found.u / _GOOD_U, 20.0)
        return (
            f"The known temperature is {apart:.1f} K from that of its surroundings; "
            f"about {np.ceil(needed / 5) * 5:.0f} K would be needed. Heat or cool the target."
        )

    def _temperature_of(self, region: Region) -> Input:
        """Return the mean surface temperature of a region of known emissivity as an input with parts. [K]."""
        self._needs(self.frame.scene, region, None)
        conditions = Conditions(
            instrument=self.instrument, scene=self.frame.scene, materials=self.materials, solved=self.solved
        )
        layer = plan_region(conditions, region, self.shape, self.frame.file).layer
        mean, count = self._mean(layer, region)
        kelvin = float(layer.temperature(np.array([mean], np.float32))[0])
        if not np.isfinite(kelvin):
            raise PhysicsError(
                f"{printable(self.frame.file)}: the region “{printable(region.name)}” has no temperature of its own.",
                hint="Check its emissivity and the reflected temperature.",
            )
        nodes, setting = self.instrument.band.nodes_um, layer.setting
        at = spectral_radiance(nodes, kelvin)
        slope = float(setting.emission @ spectral_radiance_slope(nodes, kelvin))
        slopes = [(term.input, -_along(term, at) / slope) for term in setting.terms]
        slopes += [(one, by / slope) for one, by in self._camera(mean, count, region)]
        parts = _flat(slopes)
        u = float(np.sqrt(sum((one.u * by) ** 2 for one, by in parts)))
        return Input(key="true_c", value=kelvin, u=u, origin=f"region {region.name}", parts=parts)

    def _needs(self, scene: Scene, region: Region, unknown: Key | None) -> None:
        """Solve first what the region's own equation needs."""
        for key in wanted_by(scene, region):
            if key != unknown:
                self.solve(key)

    def _region(self, name: str) -> Region:
        if name not in self.regions:
            raise PhysicsError(
                f"{printable(self.frame.file)}: there is no region “{printable(name)}” to solve from.",
                hint="Draw it in this frame, or in all frames.",
            )
        return self.regions[name]


def _newton(
    setting: Callable[[float], Setting], key: Key, received: float, surface_k: float, instrument: Instrument
) -> tuple[float, Setting]:
    at = spectral_radiance(instrument.band.nodes_um, surface_k)
    value = _START[key[1]]
    lowest = 30.0 if key[1] == "reflected_c" else 1e-9
    for _ in range(60):
        now = setting(value)
        slope = _along(next(one for one in now.terms if one.input.name == f"{key[0]}: {key[1]}"), at)
        step = (received - float(now.emission @ at) - now.rest) / slope if slope else np.inf
        if not np.isfinite(step):
            break
        value = max(value + step, lowest)
        if key[1] != "reflected_c" and value > 1:
            return value, now  # impossible, and said so by the caller; the equation is linear up to here
        if abs(step) < 1e-10 * max(1.0, abs(value)):
            return value, setting(value)
    raise PhysicsError(
        f"{QUANTITIES[key[1]].label} of the {printable(key[0])} cannot be solved: the signal does not hang on it.",
        hint="Surface and surroundings must differ by 20 K or more.",
    )


def _along(term: Term, at: NDArray[np.float64]) -> float:
    return float((0.0 if term.gain is None else term.gain @ at) + term.offset)


def _flat(slopes: list[tuple[Input, float]]) -> tuple[tuple[Input, float], ...]:
    """Return parts that have no parts of their own, each once."""
    rows: dict[str, tuple[Input, float]] = {}
    for one, slope in slopes:
        for part, by in one.parts or ((one, 1.0),):
            rows[part.name] = (part, slope * by + (rows[part.name][1] if part.name in rows else 0.0))
    return tuple(rows.values())


def _without(frame: Frame, region: Region) -> Frame:
    """Return a frame without one region, whose own unknown is found elsewhere."""
    return replace(frame, regions=tuple(one for one in frame.regions if one is not region))
