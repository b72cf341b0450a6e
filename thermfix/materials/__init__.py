"""The library of materials: in-band emissivities, optical constants, and window indices.

The data are read on first use; importing the package reads no file.
"""

from thermfix.materials.catalogue import find, library
from thermfix.materials.page import materials_page
from thermfix.materials.searching import search
from thermfix.materials.window_glass import WindowMaterial, window_index, window_material, window_materials

__all__ = [
    "WindowMaterial",
    "find",
    "library",
    "materials_page",
    "search",
    "window_index",
    "window_material",
    "window_materials",
]
