"""From an inspection's words to the inputs of the measurement equation: which value holds for which region."""

from collections.abc import Mapping

from thermfix.correction.defaults import Input, stated_or_default
from thermfix.correction.instrument import Instrument
from thermfix.correction.path import AirPath, WindowPane
from thermfix.correction.setting import Circumstances, Mirrored
from thermfix.correction.surface import Surface, grey_surface, material_surface
from thermfix.errors import InputError
from thermfix.materials import find
from thermfix.model import AngleView, Estimate, Material, Region, Scene


def surface_of(instrument: Instrument, region: Region, scene: Scene, materials: Mapping[str, Material]) -> Surface:
    """Return what a region is made of: its material, its own emissivity, or else the scene's."""
    origin = f"region {region.name}"
    if region.material is not None:
        material = materials.get(region.material) or find(region.material)
        return material_surface(instrument.band, material, origin)
    if isinstance(region.emissivity, Estimate):
        return grey_surface(instrument.band, region.emissivity, origin)
    return grey_surface(instrument.band, scene.emissivity)


def circumstances_of(instrument: Instrument, scene: Scene, region: Region | None, surface: Surface) -> Circumstances:
    """Return all that enters one region's equation (None: the background's) but its angle and distance."""
    origin = "scene" if region is None else f"region {region.name}"
    own_reflected = region.reflected_k if region is not None else None
    reflected = own_reflected or scene.reflected_k
    if not isinstance(reflected, Estimate):
        raise InputError("A solved reflected temperature is not known before the frame is read.")
    sources = [
        (stated_or_default("source_c", one.source_k, f"{origin}, source {i + 1}"),
         stated_or_default("view_factor", one.view_factor, f"{origin}, source {i + 1}"))
        for i, one in enumerate(region.reflections if region is not None else ())
    ]  # fmt: skip
    return Circumstances(
        band=instrument.band,
        surface=surface,
        mirrored=Mirrored(
            surroundings=stated_or_default("reflected_c", reflected, origin if own_reflected else "scene"),
            sources=sources,
        ),
        path=_path(instrument, scene, region),
        window=WindowPane(instrument.band, scene),
        angle=_angle(region, origin),
    )


def _path(instrument: Instrument, scene: Scene, region: Region | None) -> AirPath:
    """Return the air path; the region's own transmittance or distance goes before the scene's."""
    origin = "scene" if region is None else f"region {region.name}"
    own_distance = region.distance_m if region is not None else None
    own_transmittance = region.transmittance if region is not None else None
    measured = own_transmittance or (None if own_distance else scene.transmittance)
    distance = own_distance or scene.distance_m
    if measured is not None and not isinstance(measured, Estimate):
        raise InputError("A solved transmittance is not known before the frame is read.")
    return AirPath(
        instrument.band,
        scene,
        None if distance is None else stated_or_default("distance_m", distance, origin if own_distance else "scene"),
        None
        if measured is None
        else stated_or_default("transmittance", measured, origin if own_transmittance else "scene"),
    )


def _angle(region: Region | None, origin: str) -> Input:
    if region is not None and isinstance(region.view, AngleView):
        return stated_or_default("angle_deg", region.view.angle_deg, origin)
    # Nobody said how it is seen: taken as facing the camera, with the default doubt about it.
    return stated_or_default("angle_deg", Estimate(value=0.0, assumed=True), origin)
