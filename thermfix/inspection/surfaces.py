"""From the tables of materials and regions to materials and regions."""

import difflib
from collections.abc import Collection, Mapping

from thermfix.files import printable
from thermfix.geometry.view_factors import facing_rectangle
from thermfix.inspection.estimates import Number
from thermfix.inspection.faults import Faults
from thermfix.inspection.lines import KeyPath
from thermfix.inspection.references import References
from thermfix.inspection.schema import RegionTable, SourceTable
from thermfix.inspection.schema_surfaces import MaterialTable, PlaneTable, ViewTable
from thermfix.inspection.values import LONGEST_NAME
from thermfix.model import (
    AngleView,
    Angular,
    CornersView,
    CylinderView,
    Estimate,
    Material,
    PlaneView,
    Point,
    Region,
    Source,
    SphereView,
    View,
)
from thermfix.radiometry.fresnel import METAL_MAX_EMISSIVITY

_KINDS = ("nk", "spectrum", "by_angle", "emissivity")


def build_material(name: str, table: MaterialTable, references: References, faults: Faults) -> Material:
    """Return a material of the inspection."""
    path: KeyPath = ("materials", name)
    if not 0 < len(name.strip()) <= len(name) <= LONGEST_NAME or printable(name) != name:
        faults.follow(path, f"a name has 1 to {LONGEST_NAME} characters, none of them a control character.")
    _check_kind(path, table, faults)
    angular = Angular(table.angular or "diffuse")
    numbers = {key: _number(getattr(table, key)) for key in ("emissivity", "lwir", "mwir")}
    nk, spectrum = (
        None if file is None else references.table((*path, key), file, columns, ("wavelength_um",))
        for key, file, columns in (
            ("nk", table.nk, ("wavelength_um", "n", "k")),
            ("spectrum", table.spectrum, ("wavelength_um", "emissivity")),
        )
    )
    for key, estimate in numbers.items():
        if estimate is not None and angular is Angular.METAL:
            _check_metal((*path, key), estimate.value, faults)
    if spectrum is not None and angular is Angular.METAL:
        _check_metal((*path, "spectrum"), float(spectrum.columns["emissivity"].max()), faults)
    return Material(
        name=name,
        group=table.group,
        emissivity=numbers["emissivity"],
        lwir=numbers["lwir"],
        mwir=numbers["mwir"],
        angular=angular,
        nk=nk,
        spectrum=spectrum,
        by_angle=table.by_angle,
        u=table.u,
        valid_c=table.valid_c,
        warning=table.warning,
        note=table.note,
        source=table.source,
    )


def _number(given: Number | None) -> Estimate | None:
    return None if given is None else given.estimate("emissivity")


def _check_kind(path: KeyPath, table: MaterialTable, faults: Faults) -> None:
    """Note it unless exactly one kind of data is given, and only keys that go with it."""
    kinds = {"emissivity" if key in ("lwir", "mwir") else key for key in table.model_fields_set} & set(_KINDS)
    if len(kinds) != 1:
        found = " and ".join(sorted(kinds)) or "none"
        faults.follow(path, f"needs one of emissivity, nk, spectrum or by_angle; {found} is given.")
        return
    kind = kinds.pop()
    if kind == "emissivity" and table.u is not None:
        faults.follow((*path, "u"), "goes with nk, spectrum or by_angle; write emissivity = { value = …, u = … }.")
    if kind in ("nk", "by_angle") and table.angular is not None:
        faults.follow((*path, "angular"), f"is not used with {kind}, which gives the angles itself.")


def _check_metal(path: KeyPath, emissivity: float, faults: Faults) -> None:
    if emissivity > METAL_MAX_EMISSIVITY:
        faults.follow(path, f"no smooth metal has an emissivity above {METAL_MAX_EMISSIVITY:.3f}; use another angular.")


class Regions:
    """Builds regions, each checked against the materials that are known."""

    def __init__(self, own: Collection[str], library: Mapping[str, Material], faults: Faults) -> None:
        self.own, self.faults = own, faults
        self.known = {name.casefold(): name for name in (*own, *library)}
        self._library = {name.casefold() for name in library}

    def build(self, table: RegionTable, path: KeyPath) -> Region:
        """Return a region. Where its name or shape is missing it is noted, and something stands in for it."""
        for key in ("name", "shape"):
            if getattr(table, key) is None:
                self.faults.follow((*path, key), "is missing.")
        if table.material is not None:
            self._check_material(table, table.material, (*path, "material"))
        sources = tuple(
            Source(
                source_k=one.source_c.estimate("source_c"),
                view_factor=self._view_factor(one, (*path, "reflections", i)),
            )
            for i, one in enumerate(table.reflections)
        )
        total = sum(one.view_factor.value for one in sources)
        if total > 1 + 1e-9:
            self.faults.follow((*path, "reflections"), f"the view factors add up to {total:g}; they must not exceed 1.")
        if table.true_area_mm2 is not None and not table.small_target:
            self.faults.follow(
                (*path, "true_area_mm2"), "is for targets below one pixel: give small_target = true with it."
            )
        return Region(
            name=table.name or "",
            shape=Point(0, 0) if table.shape is None else table.shape.shape,
            material=table.material,
            emissivity=None if table.emissivity is None else table.emissivity.resolve("emissivity"),
            view=None if table.view is None else build_view(table.view),
            reflected_k=None if table.reflected_c is None else table.reflected_c.resolve("reflected_c"),
            distance_m=None if table.distance_m is None else table.distance_m.estimate("distance_m"),
            transmittance=None if table.transmittance is None else table.transmittance.resolve("transmittance"),
            reflections=sources,
            small_target=table.small_target,
            true_area_mm2=None if table.true_area_mm2 is None else table.true_area_mm2.estimate("true_area_mm2"),
        )

    def _view_factor(self, source: SourceTable, path: KeyPath) -> Estimate:
        """Return a source's view factor, stated or by its size, distance and the two angles."""
        if source.view_factor is not None:
            for key in ("size_m", "distance_m"):
                if getattr(source, key) is not None:
                    self.faults.follow((*path, key), "does not go together with view_factor.")
            return source.view_factor.estimate("view_factor")
        if source.size_m is None or not source.distance_m:
            self.faults.follow(path, "needs view_factor, or size_m and a distance_m above 0.")
            return Estimate(value=0.0)
        width, height = source.size_m
        value = facing_rectangle(width, height, source.distance_m, source.surface_angle_deg, source.source_angle_deg)
        return Estimate(value=value, u=0.1 * value)

    def _check_material(self, table: RegionTable, name: str, path: KeyPath) -> None:
        if table.emissivity is not None:
            self.faults.follow(path, "does not go together with emissivity: give one or the other.")
        folded = " ".join(name.split()).casefold()
        if name in self.own or folded in self._library:
            return
        close = difflib.get_close_matches(folded, self.known, n=3, cutoff=0.5)
        hint = (
            f"closest: {'; '.join(printable(self.known[one]) for one in close)}."
            if close
            else "search the library: thermfix materials WORDS."
        )
        self.faults.follow(path, f"there is no material “{printable(name)}”; {hint}")


def build_view(table: ViewTable) -> View:
    """Return how a region is seen."""
    if table.angle_deg is not None:
        return AngleView(angle_deg=table.angle_deg.estimate("angle_deg"))
    if table.plane is not None:
        return _plane(table.plane)
    if table.cylinder is not None:
        axis, tilt = table.cylinder.axis, table.cylinder.tilt_deg
        level = Estimate(value=0.0, assumed=True) if tilt is None else tilt.estimate("tilt_deg")
        return CylinderView(axis=axis, width_px=table.cylinder.width_px, tilt_deg=level)
    assert table.sphere is not None  # a view has exactly one form
    return SphereView(centre=table.sphere.centre, radius_px=table.sphere.radius_px)


def _plane(table: PlaneTable) -> PlaneView | CornersView:
    if table.corners is not None and table.size_m is not None:
        return CornersView(corners=table.corners, size_m=table.size_m)
    assert table.tilt_deg is not None  # the one pair or the other
    assert table.azimuth_deg is not None
    return PlaneView(tilt_deg=table.tilt_deg.estimate("tilt_deg"), azimuth_deg=table.azimuth_deg)
