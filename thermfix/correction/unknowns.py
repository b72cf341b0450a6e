"""Which inputs of a frame are to be solved, and how each is found."""

from dataclasses import replace

from thermfix.correction.conditions import Key
from thermfix.model import (
    EmissivitySolve,
    Estimate,
    Frame,
    FromContact,
    FromOtherFrame,
    FromReflector,
    FromTarget,
    Region,
    SameTemperature,
    Scene,
)

How = FromReflector | FromTarget | EmissivitySolve


def wanted(frame: Frame) -> list[Key]:
    """Return everything that is to be solved in a frame."""
    keys = [key for region in frame.regions for key in wanted_by(frame.scene, region)]
    return list(dict.fromkeys([*wanted_by(frame.scene, None), *keys]))


def wanted_by(scene: Scene, region: Region | None) -> list[Key]:
    """Return what is to be solved before a region (None: the background) can be corrected."""
    keys: list[Key] = []
    origin = "scene" if region is None else f"region {region.name}"
    if scene.window is not None and isinstance(scene.window.transmittance, FromTarget):
        keys.append(("window", "transmittance"))
    own_reflected = None if region is None else region.reflected_k
    if isinstance(own_reflected or scene.reflected_k, FromReflector):
        keys.append((origin if own_reflected else "scene", "reflected_c"))
    own_measured = None if region is None else region.transmittance
    own_distance = None if region is None else region.distance_m
    measured = own_measured or (None if own_distance else scene.transmittance)
    if isinstance(measured, FromTarget):
        keys.append((origin if own_measured else "scene", "transmittance"))
    if region is not None and isinstance(region.emissivity, FromContact | SameTemperature | FromOtherFrame):
        keys.append((origin, "emissivity"))
    return keys


def how(frame: Frame, key: Key) -> How:
    """Return how an input is found."""
    origin, name = key
    if origin == "window" and frame.scene.window is not None:
        found: object = frame.scene.window.transmittance
    else:
        holder = frame.scene if origin == "scene" else next(r for r in frame.regions if f"region {r.name}" == origin)
        found = getattr(holder, {"reflected_c": "reflected_k"}.get(name, name))
    assert isinstance(found, FromReflector | FromTarget | FromContact | SameTemperature | FromOtherFrame)
    return found


def regions_used(frame: Frame) -> set[str]:
    """Return the names of the regions that something is solved from: their readings are no evidence of their own."""
    names = set()
    for key in wanted(frame):
        found = how(frame, key)
        if isinstance(found, FromContact | FromOtherFrame):
            names.add(key[0].removeprefix("region "))
        else:
            names.add(found.region)
    return names


def reflectors(frame: Frame) -> set[str]:
    """Return the names of the regions that a reflected temperature is read from."""
    givens = [frame.scene.reflected_k, *(region.reflected_k for region in frame.regions)]
    return {given.region for given in givens if isinstance(given, FromReflector)}


def as_reflector(region: Region) -> Region:
    """Return a reflector region: one that states no emissivity is taken as a perfect mirror, with doubt.

    It then has no reading of its own, because nothing of its signal is its own.
    """
    if region.material is not None or region.emissivity is not None:
        return region
    return replace(region, emissivity=Estimate(value=1e-9, u=0.03))
