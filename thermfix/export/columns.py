"""The columns of every table written: name, meaning and decimals, in the order of the file."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """One column: its header, one sentence of meaning, and fixed decimals (None = text or a whole number)."""

    name: str
    meaning: str
    decimals: int | None = None


_FRAME = Column(name="frame", meaning="File of the frame, relative to the inspection's folder.")
_PAGE = Column(name="page", meaning="Page within that file, from 0.")
_REGION = Column(name="region", meaning="Name of the region.")
_APPARENT_MEAN = Column(
    name="apparent_mean_c",
    decimals=2,
    meaning="Mean apparent temperature over the pixels of the region that hold a number, in °C.",
)
_SURFACE_MEAN = Column(
    name="surface_mean_c",
    decimals=2,
    meaning="Mean surface temperature over the pixels with a reading, in °C; empty where there is no reading.",
)
_EXPANDED_U = Column(
    name="expanded_u_k",
    decimals=3,
    meaning="Expanded uncertainty of surface_mean_c, in kelvin: k = 2, or the reach of the Monte Carlo interval.",
)
_CAUTIONS = Column(name="cautions", meaning="Codes of the reasons to distrust the reading, joined by semicolons.")

REGIONS: tuple[Column, ...] = (
    _FRAME,
    _PAGE,
    _REGION,
    Column(name="material", meaning="Name of the material; empty where an emissivity was given instead."),
    Column(name="emissivity", decimals=4, meaning="In-band emissivity used, toward the camera, as a fraction of 1."),
    Column(name="view_angle_deg", decimals=1, meaning="Mean angle between surface normal and line of sight, degrees."),
    Column(name="distance_m", decimals=3, meaning="Mean length of air to the surface, in metres; empty if not given."),
    Column(name="pixels", meaning="Number of pixels of the region inside the frame."),
    _APPARENT_MEAN,
    _SURFACE_MEAN,
    Column(name="surface_min_c", decimals=2, meaning="Lowest surface temperature of a pixel, in °C."),
    Column(name="surface_max_c", decimals=2, meaning="Highest surface temperature of a pixel, in °C."),
    Column(
        name="surface_sd_k",
        decimals=3,
        meaning="Standard deviation of the surface temperatures over the region (n − 1), in kelvin.",
    ),
    Column(name="u_k", decimals=3, meaning="Standard uncertainty of surface_mean_c, in kelvin."),
    _EXPANDED_U,
    _CAUTIONS,
    Column(
        name="radiant_exitance_w_m2",
        decimals=3,
        meaning="Mean radiant exitance of the surface within the camera's band, W/m²; empty without a reading.",
    ),
    Column(
        name="area_m2",
        decimals=6,
        meaning="Surface the region covers, m²; empty where field of view or distance is unknown.",
    ),
    Column(
        name="radiant_power_w",
        decimals=4,
        meaning="Power the region sends to its surroundings within the camera's band, W; empty where unknown.",
    ),
)
"""regions.csv: one row per region and page."""

BUDGET: tuple[Column, ...] = (
    _FRAME,
    _PAGE,
    _REGION,
    Column(name="input", meaning="Origin and key of the input; the same name is one and the same error everywhere."),
    Column(name="value", meaning="Its value, temperatures in °C.", decimals=4),
    Column(name="unit", meaning="Unit of value and u."),
    Column(name="u", meaning="Its standard uncertainty (kelvin for temperatures).", decimals=5),
    Column(name="distribution", meaning="How its error is distributed."),
    Column(name="sensitivity", meaning="Change of surface_mean_c in kelvin for one unit of the input.", decimals=5),
    Column(name="contribution_k", meaning="Size of sensitivity times u, in kelvin.", decimals=4),
    Column(name="share_pct", meaning="Share of the combined variance, in percent.", decimals=2),
)
"""budget.csv: one row per region and input of the frames of one page, and of the first page of others."""

TREND: tuple[Column, ...] = (
    _FRAME,
    _PAGE,
    Column(name="time", meaning="Time of the page as ISO 8601 text; empty where it is not known."),
    _REGION,
    _APPARENT_MEAN,
    _SURFACE_MEAN,
    _EXPANDED_U,
    _CAUTIONS,
)
"""trend.csv: one row per region and page of the files with several pages."""

PIXELS: tuple[Column, ...] = (
    Column(name="x", meaning="Column of the pixel, from 0 at the left."),
    Column(name="y", meaning="Row of the pixel, from 0 at the top."),
    _REGION,
    Column(name="apparent_c", decimals=2, meaning="Apparent temperature of the pixel, in °C (decimals as asked for)."),
    Column(name="surface_c", decimals=2, meaning="Surface temperature of the pixel, in °C (decimals as asked for)."),
    Column(name="u_k", decimals=3, meaning="Standard uncertainty of surface_c, in kelvin."),
)
"""<frame>.pixels.csv: one row per region and pixel. Its two temperatures follow ``--decimals``."""


def header(columns: tuple[Column, ...]) -> bytes:
    r"""Return the first line of a table.

    >>> header(PIXELS)
    b'x,y,region,apparent_c,surface_c,u_k\n'
    """
    return (",".join(column.name for column in columns) + "\n").encode()
