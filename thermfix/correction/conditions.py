"""From an inspection's words to the inputs of the measurement equation: which value holds for which region."""

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np

from thermfix.correction.defaults import Input, stated_or_default
from thermfix.correction.instrument import Instrument
from thermfix.correction.path import AirPath, WindowPane
from thermfix.correction.setting import Circumstances, Mirrored, Tilt
from thermfix.correction.surface import Normal, Surface, grey_surface, material_surface
from thermfix.errors import PhysicsError
from thermfix.files import printable
from thermfix.materials import find
from thermfix.model import Estimate, FromReflector, FromTarget, Material, Region, Scene

Key = tuple[str, str]
"""Origin ("scene", "window" or "region NAME") and key of an input."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Conditions:
    """Where the inputs of one frame come from: its scene, the materials, and what was solved for it."""

    instrument: Instrument
    scene: Scene
    materials: Mapping[str, Material] = field(default_factory=dict)
    solved: Mapping[Key, Input] = field(default_factory=dict)

    def of(
        self, region: Region | None, tilts: tuple[Tilt, ...] = (), found_range: Input | None = None
    ) -> Circumstances:
        """Return all that enters a region's equation (None: the background's) but each pixel's angle and distance.

        ``tilts`` are what the view angle hangs on; the background faces the camera, for all that is known.
        ``found_range`` is a range found by a pose, used where no distance is stated.
        """
        surface = grey_surface(self.instrument.band, self.scene.emissivity) if region is None else self.surface(region)
        return Circumstances(
            band=self.instrument.band,
            surface=surface,
            mirrored=self._mirrored(region),
            path=self.path(region, found_range),
            window=WindowPane(self.instrument.band, self.scene, self.solved.get(("window", "transmittance"))),
            tilts=tilts or (Tilt(input=stated_or_default("angle_deg", Estimate(value=0.0, assumed=True))),),
        )

    def surface(self, region: Region) -> Surface:
        """Return what a region is made of: its material, its own or solved emissivity, or else the scene's."""
        band = self.instrument.band
        if region.material is not None:
            material = self.materials.get(region.material) or find(region.material)
            return material_surface(band, material, _origin(region))
        if isinstance(region.emissivity, Estimate):
            return grey_surface(band, region.emissivity, _origin(region))
        if region.emissivity is not None:
            value = self._solved((_origin(region), "emissivity"))
            return Normal(band=band, value=value, normal=np.array([value.value]))
        return grey_surface(band, self.scene.emissivity)

    def _mirrored(self, region: Region | None) -> Mirrored:
        own = None if region is None else region.reflected_k
        sources = []
        for i, one in enumerate(() if region is None else region.reflections, start=1):
            origin = f"{_origin(region)}, source {i}"
            sources.append(
                (
                    stated_or_default("source_c", one.source_k, origin),
                    stated_or_default("view_factor", one.view_factor, origin),
                )
            )
        surroundings = self._input("reflected_c", own or self.scene.reflected_k, region if own else None)
        return Mirrored(surroundings=surroundings, sources=sources)

    def path(self, region: Region | None, found_range: Input | None = None) -> AirPath:
        """Return the air path; the region's own transmittance or distance goes before the scene's."""
        own_distance = None if region is None else region.distance_m
        own_measured = None if region is None else region.transmittance
        measured = own_measured or (None if own_distance else self.scene.transmittance)
        distance = own_distance or self.scene.distance_m
        return AirPath(
            self.instrument.band,
            self.scene,
            found_range if distance is None else self._input("distance_m", distance, region if own_distance else None),
            None if measured is None else self._input("transmittance", measured, region if own_measured else None),
        )

    def _input(self, key: str, given: Estimate | FromReflector | FromTarget, owner: Region | None) -> Input:
        if isinstance(given, Estimate):
            return stated_or_default(key, given, _origin(owner))
        return self._solved((_origin(owner), key))

    def _solved(self, key: Key) -> Input:
        if key not in self.solved:
            raise PhysicsError(f"{printable(key[1])} of the {printable(key[0])} is to be solved, but was not.")
        return self.solved[key]


def _origin(region: Region | None) -> str:
    return "scene" if region is None else f"region {region.name}"
