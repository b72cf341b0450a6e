"""Checks the inputs of a frame that are to be solved: their regions are there, and none hangs on itself.

What an input hangs on is what the measurement equation of its region needs: see `_needs`.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from thermfix.model import (
    FromContact,
    FromOtherFrame,
    FromReflector,
    FromTarget,
    Region,
    SameTemperature,
    Scene,
)

Owner = str | None
"""A region by its name; None is the scene."""

Solve = FromReflector | FromTarget | FromContact | SameTemperature | FromOtherFrame
_SOLVES = (FromReflector, FromTarget, FromContact, SameTemperature, FromOtherFrame)


@dataclass(frozen=True, slots=True)
class Unknown:
    """An input that is to be solved: whose, and which (in the words of the file)."""

    owner: Owner
    key: str

    def __str__(self) -> str:
        return self.key if self.owner is None else f"{self.key} of “{self.owner}”"


class Solves:
    """The solved inputs of one frame."""

    def __init__(self, scene: Scene, regions: Sequence[Region]) -> None:
        self.scene = scene
        self.regions = {region.name: region for region in regions}
        self.found: dict[Unknown, Solve] = dict(_scene_solves(scene))
        for region in regions:
            self.found.update(_region_solves(region))

    def region_of(self, unknown: Unknown) -> str | None:
        """Return the name of the other region that an unknown is solved from, if it names one."""
        solve = self.found[unknown]
        return None if isinstance(solve, FromContact | FromOtherFrame) else solve.region

    def circles(self) -> Iterator[list[Unknown]]:
        """Yield every chain of unknowns that leads back to its own start."""
        done: set[Unknown] = set()
        for start in self.found:
            trail, branches = {start: None}, [iter(self._needs(start))]
            while branches and start not in done:
                need = next(branches[-1], None)
                if need is None:
                    branches.pop()
                    done.add(trail.popitem()[0])
                elif need in trail:
                    chain = list(trail)
                    yield chain[chain.index(need) :]
                elif need not in done:
                    trail[need] = None
                    branches.append(iter(self._needs(need)))

    def _needs(self, unknown: Unknown) -> list[Unknown]:
        """Return the unknowns that must be known before one can be solved."""
        match self.found[unknown]:
            case FromReflector(region=name):
                return self._of_region(name, reflected=False)
            case FromTarget(region=name):
                return self._of_region(name, path=unknown.key != "transmittance", window=unknown.key == "transmittance")
            case FromContact() | FromOtherFrame():
                return self._of_region(unknown.owner, emissivity=False)
            case SameTemperature(region=name):
                own = self._of_region(unknown.owner, emissivity=False)
                return [*own, *self._of_region(name)]

    def _of_region(
        self,
        name: Owner,
        *,
        emissivity: bool = True,
        reflected: bool = True,
        path: bool = True,
        window: bool = True,
    ) -> list[Unknown]:
        """Return the unknowns in the equation of a region, but for those left out."""
        region = self.regions.get(name or "")
        if region is None:
            return []
        wanted: list[Unknown] = []
        if emissivity:
            wanted.append(Unknown(name, "emissivity"))
        if reflected:
            wanted.append(Unknown(name if region.reflected_k is not None else None, "reflected_c"))
        if path and (region.transmittance is not None or region.distance_m is None):
            wanted.append(Unknown(name if region.transmittance is not None else None, "transmittance"))
        if window:
            wanted.append(Unknown(None, "window.transmittance"))
        return [one for one in wanted if one in self.found]


def _scene_solves(scene: Scene) -> Iterator[tuple[Unknown, Solve]]:
    given = {"reflected_c": scene.reflected_k, "transmittance": scene.transmittance}
    if scene.window is not None:
        given["window.transmittance"] = scene.window.transmittance
    for key, value in given.items():
        if isinstance(value, _SOLVES):
            yield Unknown(None, key), value


def _region_solves(region: Region) -> Iterator[tuple[Unknown, Solve]]:
    given = {
        "emissivity": region.emissivity,
        "reflected_c": region.reflected_k,
        "transmittance": region.transmittance,
    }
    for key, value in given.items():
        if isinstance(value, _SOLVES):
            yield Unknown(region.name, key), value
