"""The tables of shapes, views and materials."""

from typing import Annotated, Any, Self

from pydantic import model_validator

from thermfix.inspection.estimates import Number, Of
from thermfix.inspection.points import coordinate, points, xy
from thermfix.inspection.refusing import Reader, Strict, kind_of, refuse
from thermfix.inspection.values import bare, choice, in_range, number, numbers, pair, words
from thermfix.model import XY, Ellipse, Line, Point, Polygon, Rectangle, Shape
from thermfix.quantities import QUANTITIES


def _rectangle(value: object) -> Rectangle:
    x0, y0, x1, y1 = (coordinate(one, n) for n, one in enumerate(numbers(value, 4, "x0, y0, x1, y1")))
    if not (x0 < x1 and y0 < y1):
        raise refuse("needs x0 < x1 and y0 < y1: left, top, right, bottom.")
    return Rectangle(x0, y0, x1, y1)


def _ellipse(value: object) -> Ellipse:
    cx, cy, rx, ry = (coordinate(one, n) for n, one in enumerate(numbers(value, 4, "cx, cy, rx, ry")))
    if not (rx > 0 and ry > 0):
        raise refuse("needs half axes rx and ry above 0.")
    return Ellipse(cx, cy, rx, ry)


def _polygon(value: object) -> Polygon:
    return Polygon(points(value, 3, "corners"))


def _line(value: object) -> Line:
    return Line(points(value, 2, "points"))


def _point(value: object) -> Point:
    return Point(*xy(value))


def _corners(value: object) -> tuple[XY, ...]:
    found = points(value, 4, "corners")
    if len(found) != 4:
        raise refuse(f"needs 4 corners, clockwise from the real top left, not {len(found)}.")
    return found


def _axis(value: object) -> tuple[XY, ...]:
    found = points(value, 2, "points")
    if len(found) != 2 or found[0] == found[1]:
        raise refuse("needs 2 points that differ: the two ends of the axis.")
    return found


def _length(value: object) -> float:
    found = coordinate(value)
    if not found > 0:
        raise refuse("must be above 0 pixels.")
    return found


def _one_of(table: Strict, what: str) -> str:
    """Return the one key that is given."""
    known = list(type(table).model_fields)
    given = [key for key in known if key in table.model_fields_set]
    if len(given) == 1:
        return given[0]
    listed = f"{', '.join(known[:-1])} or {known[-1]}"
    raise refuse(f"{what} is one of {listed}; {'none' if not given else ' and '.join(given)} is given.")


class ShapeTable(Strict):
    """``shape = { … }``: exactly one form."""

    rectangle: Annotated[Rectangle, Reader(_rectangle)] | None = None
    ellipse: Annotated[Ellipse, Reader(_ellipse)] | None = None
    polygon: Annotated[Polygon, Reader(_polygon)] | None = None
    line: Annotated[Line, Reader(_line)] | None = None
    point: Annotated[Point, Reader(_point)] | None = None

    @model_validator(mode="after")
    def check_form(self) -> Self:
        """Refuse anything but exactly one form."""
        _one_of(self, "a shape")
        return self

    @property
    def shape(self) -> Shape:
        """The one form that is given."""
        found: Shape = getattr(self, _one_of(self, "a shape"))
        return found


class PlaneTable(Strict):
    """``view = { plane = … }``: tilt and azimuth, or corners and size."""

    tilt_deg: Annotated[Number, Of("tilt_deg")] | None = None
    azimuth_deg: Annotated[float, bare("azimuth_deg")] | None = None
    corners: Annotated[tuple[XY, XY, XY, XY], Reader(_corners)] | None = None
    size_m: Annotated[tuple[float, float], pair("size_m", "width and height in metres")] | None = None

    @model_validator(mode="after")
    def check_form(self) -> Self:
        """Refuse anything but exactly one form."""
        if self.model_fields_set not in ({"tilt_deg", "azimuth_deg"}, {"corners", "size_m"}):
            raise refuse("needs either tilt_deg and azimuth_deg, or corners and size_m.")
        return self


class CylinderTable(Strict):
    """``view = { cylinder = … }``."""

    axis: Annotated[tuple[XY, XY], Reader(_axis)]
    width_px: Annotated[float, Reader(_length)]
    tilt_deg: Annotated[Number, Of("tilt_deg")] | None = None


class SphereTable(Strict):
    """``view = { sphere = … }``."""

    centre: Annotated[XY, Reader(xy)]
    radius_px: Annotated[float, Reader(_length)]


class ViewTable(Strict):
    """``view = { … }``: exactly one form."""

    angle_deg: Annotated[Number, Of("angle_deg")] | None = None
    plane: PlaneTable | None = None
    cylinder: CylinderTable | None = None
    sphere: SphereTable | None = None

    @model_validator(mode="after")
    def check_form(self) -> Self:
        """Refuse anything but exactly one form."""
        _one_of(self, "a view")
        return self


def _by_angle(value: object) -> tuple[tuple[float, float], ...]:
    if not isinstance(value, list) or not value:
        raise refuse(f"must be a list of [degrees, emissivity], not {kind_of(value)}.")
    rows: list[tuple[float, float]] = []
    for place, row in enumerate(value):
        angle, emissivity = _angle_row(row, place)
        if rows and not angle > rows[-1][0]:
            raise refuse(f"the angles must rise from row to row; {angle:g}° follows {rows[-1][0]:g}°.", place)
        rows.append((angle, emissivity))
    if rows[0][0] != 0:
        raise refuse("must begin with the normal emissivity, at 0 degrees.", 0)
    return tuple(rows)


def _angle_row(row: object, place: int) -> tuple[float, float]:
    if not isinstance(row, list) or len(row) != 2:
        raise refuse("must be [degrees, emissivity].", place)
    values: list[Any] = []
    for one in row:
        if isinstance(one, bool) or not isinstance(one, int | float):
            raise refuse(f"must be a number, not {kind_of(one)}.", place, len(values))
        values.append(one)
    angle, emissivity = values
    if not 0 <= angle <= 90:
        raise refuse("the angle must lie in 0 to 90 degrees.", place, 0)
    if not 0 <= emissivity <= 1 or (angle == 0 and emissivity == 0):
        raise refuse("the emissivity must lie in 0 to 1, and above 0 at 0 degrees.", place, 1)
    return float(angle), float(emissivity)


def _u(value: object) -> float:
    found = number(value)
    if not 0 <= found <= 1:
        raise refuse(f"u is {found:g}; the standard uncertainty of an emissivity must lie in 0 to 1.")
    return found


def _valid_c(value: object) -> tuple[float, float]:
    row = QUANTITIES["true_c"]
    low, high = (in_range(row, number(one)) for one in numbers(value, 2, "lowest and highest °C"))
    if not low < high:
        raise refuse(f"the first number, {low:g}, must be smaller than the second, {high:g}.")
    return low, high


class MaterialTable(Strict):
    """``[materials."…"]``."""

    emissivity: Annotated[Number, Of("emissivity")] | None = None
    lwir: Annotated[Number, Of("emissivity")] | None = None
    mwir: Annotated[Number, Of("emissivity")] | None = None
    nk: Annotated[str, Reader(words)] | None = None
    spectrum: Annotated[str, Reader(words)] | None = None
    by_angle: Annotated[tuple[tuple[float, float], ...], Reader(_by_angle)] | None = None
    u: Annotated[float, Reader(_u)] | None = None
    angular: Annotated[str, choice("diffuse", "dielectric", "metal")] | None = None
    valid_c: Annotated[tuple[float, float], Reader(_valid_c)] | None = None
    group: Annotated[str, Reader(words)] = ""
    warning: Annotated[str, Reader(words)] = ""
    note: Annotated[str, Reader(words)] = ""
    source: Annotated[str, Reader(words)] = ""
