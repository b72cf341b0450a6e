"""Puts the frames of an inspection together: scene and regions merged, and what needs several tables checked."""

import difflib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from thermfix.files import printable
from thermfix.inspection.faults import Faults
from thermfix.inspection.lines import KeyPath
from thermfix.inspection.scenes import build_scene
from thermfix.inspection.schema import FrameTable, InspectionTable, RegionTable, SceneTable
from thermfix.inspection.solving import Solves, Unknown
from thermfix.inspection.surfaces import Regions
from thermfix.model import Camera, CornersView, Frame, Region, Scene

MOST_IN_ALL = 2_000_000
"""Most regions of all frames together, those of every frame counted once for each. [1]."""


@dataclass(slots=True)
class FrameList:
    """What all frames have in common."""

    table: InspectionTable
    camera: Camera
    regions: Regions
    faults: Faults
    shared: list[tuple[Region, KeyPath]] = field(default_factory=list)

    def build(self, files: Sequence[tuple[str, FrameTable | None, KeyPath]]) -> tuple[Frame, ...]:
        """Return the frames of these files; a file without a table of its own has only what all have."""
        self.shared = self._named(self.table.regions, ("regions",), {})
        own = sum(len(frame.regions) > 0 for _, frame, _ in files if frame is not None)
        if own * len(self.shared) > MOST_IN_ALL:
            self.faults.add(("regions",), f"over all frames there are more than {MOST_IN_ALL} regions.")
            return ()
        plain: Frame | None = None
        frames = []
        for file, frame, path in files:
            if frame is not None and (frame.regions or frame.scene.model_fields_set):
                frames.append(self._frame(file, frame, path))
                continue
            plain = plain or self._frame(file, FrameTable(), path)
            frames.append(Frame(file=file, scene=plain.scene, regions=plain.regions))
        return tuple(frames)

    def _frame(self, file: str, frame: FrameTable, path: KeyPath) -> Frame:
        layers: list[tuple[SceneTable, KeyPath]] = [(self.table.scene, ("scene",))]
        if frame.scene.model_fields_set:
            layers.append((frame.scene, (*path, "scene")))
        scene = build_scene(layers, self.faults)
        names = {region.name: place for region, place in self.shared}
        placed = [*self.shared, *self._named(frame.regions, (*path, "regions"), names)]
        for region, place in placed:
            self._check_needs(region, place, scene)
        self._check_solves(file, scene, placed, layers)
        return Frame(file=file, scene=scene, regions=tuple(region for region, _ in placed))

    def _named(
        self, tables: Sequence[RegionTable], path: KeyPath, names: Mapping[str, KeyPath]
    ) -> list[tuple[Region, KeyPath]]:
        """Return regions and where they stand; a name that is there already is noted."""
        placed, taken = [], set(names)
        for place, table in enumerate(tables):
            at = (*path, place)
            region = self.regions.build(table, at)
            if table.name is not None and region.name in taken:
                self.faults.follow(
                    (*at, "name"), f"another region of the frame is named “{printable(region.name)}” too."
                )
            taken.add(region.name)
            placed.append((region, at))
        return placed

    def _check_needs(self, region: Region, path: KeyPath, scene: Scene) -> None:
        """Note what a region needs of the camera or of the scene and what they do not give."""
        optics = self.camera.field_of_view_deg
        if isinstance(region.view, CornersView) and optics is None:
            self.faults.follow((*path, "view", "plane"), "needs camera.field_of_view_deg.")
        if region.small_target and not (self.camera.blur_px and self.camera.blur_px.value > 0):
            self.faults.follow((*path, "small_target"), "needs camera.blur_px, above 0.")
        if region.true_area_mm2 is not None:
            if optics is None:
                self.faults.follow((*path, "true_area_mm2"), "needs camera.field_of_view_deg.")
            if region.distance_m is None and scene.distance_m is None:
                self.faults.follow((*path, "true_area_mm2"), "needs distance_m.")

    def _check_solves(
        self,
        file: str,
        scene: Scene,
        placed: Sequence[tuple[Region, KeyPath]],
        layers: Sequence[tuple[SceneTable, KeyPath]],
    ) -> None:
        solves = Solves(scene, [region for region, _ in placed])
        if not solves.found:
            return
        where = {region.name: path for region, path in placed}
        complete = "" not in where  # else a region whose name is faulty may be the one
        for unknown in solves.found:
            name = solves.region_of(unknown)
            if name is not None and name not in where and complete:
                close = difflib.get_close_matches(name, where, n=1)
                hint = f"; did you mean “{printable(close[0])}”?" if close else "."
                self.faults.follow(
                    _place(unknown, where, layers),
                    f"{printable(file)} has no region “{printable(name)}”{hint}",
                )
        for circle in solves.circles():
            chain = " → ".join(printable(one) for one in [*circle, circle[0]])
            self.faults.follow(
                _place(circle[0], where, layers), f"cannot be solved, because it would need itself: {chain}."
            )


def _place(unknown: Unknown, where: Mapping[str, KeyPath], layers: Sequence[tuple[SceneTable, KeyPath]]) -> KeyPath:
    """Return where the file says how an unknown is solved."""
    keys = tuple(unknown.key.split("."))
    if unknown.owner is not None:
        return (*where[unknown.owner], *keys)
    for table, path in reversed(layers):
        holder: object = table
        for key in keys:
            holder = getattr(holder, key, None)
        if holder is not None:
            return (*path, *keys)
    return keys
