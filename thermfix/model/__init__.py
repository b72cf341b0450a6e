"""Frozen values that the floors above pass around. Kelvin, metres, pixels, degrees."""

from thermfix.model.camera import (
    Applied,
    BlackbodyTable,
    Camera,
    SakumaHattori,
    Signal,
    SignalKind,
    TemperatureUnit,
)
from thermfix.model.estimate import Estimate
from thermfix.model.inspection import Frame, Inspection, Region, Sequence, Source
from thermfix.model.material import Angular, Material
from thermfix.model.scene import Scene, Window
from thermfix.model.shapes import XY, Ellipse, Line, Point, Polygon, Rectangle, Shape
from thermfix.model.solves import (
    EmissivitySolve,
    FromContact,
    FromOtherFrame,
    FromReflector,
    FromTarget,
    SameTemperature,
)
from thermfix.model.tables import Table
from thermfix.model.views import AngleView, CornersView, CylinderView, PlaneView, SphereView, View

__all__ = [
    "XY",
    "AngleView",
    "Angular",
    "Applied",
    "BlackbodyTable",
    "Camera",
    "CornersView",
    "CylinderView",
    "Ellipse",
    "EmissivitySolve",
    "Estimate",
    "Frame",
    "FromContact",
    "FromOtherFrame",
    "FromReflector",
    "FromTarget",
    "Inspection",
    "Line",
    "Material",
    "PlaneView",
    "Point",
    "Polygon",
    "Rectangle",
    "Region",
    "SakumaHattori",
    "SameTemperature",
    "Scene",
    "Sequence",
    "Shape",
    "Signal",
    "SignalKind",
    "Source",
    "SphereView",
    "Table",
    "TemperatureUnit",
    "View",
    "Window",
]
