"""Result files out, written atomically."""

from thermfix.export.columns import BUDGET, PIXELS, REGIONS, TREND, Column
from thermfix.export.folder import claim_output
from thermfix.export.grid import write_grid
from thermfix.export.names import frame_stems, page_stem
from thermfix.export.pixels import write_pixels
from thermfix.export.record import write_record
from thermfix.export.tables import write_budget, write_regions, write_trend
from thermfix.export.tiff import write_surface_tiff

__all__ = [
    "BUDGET",
    "PIXELS",
    "REGIONS",
    "TREND",
    "Column",
    "claim_output",
    "frame_stems",
    "page_stem",
    "write_budget",
    "write_grid",
    "write_pixels",
    "write_record",
    "write_regions",
    "write_surface_tiff",
    "write_trend",
]
