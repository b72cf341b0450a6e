"""One row per physical quantity: key, symbol, unit, allowed range, label and one sentence of help.

The rows feed the inspection file's range checks, the command line's options, the screen's form
fields and the reference page of the documentation, so that all of them say the same.
"""

from dataclasses import dataclass

from thermfix.errors import OutOfRange

ZERO_C_K = 273.15
"""0 °C in kelvin (exact by definition)."""

LOWEST_READING_C, HIGHEST_READING_C = -60.0, 3000.0
"""Surface temperatures the band relations carry; outside them there is no reading."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Quantity:
    """What one number is: where it may lie (both ends included) and how it is called."""

    key: str
    symbol: str
    unit: str
    low: float
    high: float
    label: str
    help: str
    low_open: bool = False
    default_u: float | None = None

    def check(self, value: float, name: str = "") -> float:
        """Return the value unchanged, or raise ``OutOfRange`` (NaN and infinities are refused too)."""
        if not (self.low <= value <= self.high) or (self.low_open and value == self.low):
            raise OutOfRange.of(name or self.key, value, self.low, self.high, self.unit)
        return value


_ROWS = (
    Quantity(
        key="band_um",
        symbol="λ",
        unit="µm",
        low=2,
        high=15,
        label="band",
        help="Lower and upper wavelength the camera sees; response 1 between them.",
    ),
    Quantity(
        key="field_of_view_deg",
        symbol="FOV",
        unit="deg",
        low=0.1,
        high=150,
        label="field of view",
        help="Full horizontal and vertical angle of the frame.",
    ),
    Quantity(
        key="blur_px",
        symbol="σ",
        unit="px",
        low=0,
        high=20,
        label="blur",
        default_u=0.15,
        help="Standard deviation of the Gaussian point spread, in pixels.",
    ),
    Quantity(
        key="noise_k",
        symbol="NETD",
        unit="K",
        low=0,
        high=10,
        label="noise",
        help="Noise-equivalent temperature difference of one pixel at 30 °C.",
    ),
    Quantity(
        key="accuracy_k",
        symbol="ΔT",
        unit="K",
        low=0,
        high=100,
        label="accuracy",
        help="Camera accuracy limit ±, taken as rectangular; the larger of the two limits holds.",
    ),
    Quantity(
        key="accuracy_rel",
        symbol="Δrel",
        unit="1",
        low=0,
        high=0.5,
        label="relative accuracy",
        help="Camera accuracy limit ± as a fraction of the reading in °C.",
    ),
    Quantity(
        key="scale", symbol="s", unit="1", low=-1e9, high=1e9, label="scale", help="value = stored × scale + offset."
    ),
    Quantity(
        key="offset", symbol="o", unit="1", low=-1e9, high=1e9, label="offset", help="value = stored × scale + offset."
    ),
    Quantity(
        key="emissivity",
        symbol="ε",
        unit="1",
        low=0,
        high=1,
        low_open=True,
        label="emissivity",
        default_u=0.05,
        help="Share of a blackbody's in-band radiance that the surface emits.",
    ),
    Quantity(
        key="reflected_c",
        symbol="T_refl",
        unit="°C",
        low=-200,
        high=3000,
        label="reflected temperature",
        default_u=3.0,
        help="Blackbody equivalent of what the surface mirrors (reflected apparent temperature).",
    ),
    Quantity(
        key="air_c",
        symbol="T_air",
        unit="°C",
        low=-60,
        high=80,
        label="air temperature",
        default_u=2.0,
        help="Temperature of the air between surface and camera.",
    ),
    Quantity(
        key="humidity_pct",
        symbol="RH",
        unit="%",
        low=0,
        high=100,
        label="relative humidity",
        default_u=10.0,
        help="Relative humidity of that air, over liquid water.",
    ),
    Quantity(
        key="pressure_hpa",
        symbol="P",
        unit="hPa",
        low=300,
        high=1100,
        label="air pressure",
        default_u=15.0,
        help="Static pressure of the air.",
    ),
    Quantity(
        key="co2_ppm",
        symbol="CO₂",
        unit="ppm",
        low=0,
        high=100000,
        label="carbon dioxide",
        default_u=50.0,
        help="Carbon dioxide in the air, parts per million by volume.",
    ),
    Quantity(
        key="distance_m",
        symbol="d",
        unit="m",
        low=0,
        high=2000,
        label="distance",
        default_u=None,
        help="Length of air between surface and camera.",
    ),
    Quantity(
        key="transmittance",
        symbol="τ",
        unit="1",
        low=0,
        high=1,
        low_open=True,
        label="transmittance",
        default_u=0.02,
        help="Measured in-band transmittance; replaces the air model (or is the window's).",
    ),
    Quantity(
        key="reflectance",
        symbol="ρ",
        unit="1",
        low=0,
        high=1,
        label="reflectance",
        default_u=0.02,
        help="In-band reflectance of the window's camera side.",
    ),
    Quantity(
        key="temperature_c",
        symbol="T_w",
        unit="°C",
        low=-60,
        high=1000,
        label="window temperature",
        default_u=3.0,
        help="Temperature of the window.",
    ),
    Quantity(
        key="camera_side_c",
        symbol="T_cs",
        unit="°C",
        low=-200,
        high=1000,
        label="camera-side temperature",
        default_u=3.0,
        help="What the window mirrors toward the camera; the air temperature unless given.",
    ),
    Quantity(
        key="thickness_mm",
        symbol="h",
        unit="mm",
        low=0.001,
        high=100,
        label="window thickness",
        default_u=None,
        help="Thickness of the window plate.",
    ),
    Quantity(
        key="angle_deg",
        symbol="θ",
        unit="deg",
        low=0,
        high=90,
        label="view angle",
        default_u=5.0,
        help="Angle between the surface normal and the line of sight.",
    ),
    Quantity(
        key="tilt_deg",
        symbol="tilt",
        unit="deg",
        low=0,
        high=89.9,
        label="tilt",
        default_u=5.0,
        help="Angle of the plane's normal (or the cylinder's axis) against facing the camera squarely.",
    ),
    Quantity(
        key="azimuth_deg",
        symbol="az",
        unit="deg",
        low=-360,
        high=360,
        label="azimuth",
        default_u=None,
        help="Direction in the image toward which the surface recedes: 0 = right, 90 = down.",
    ),
    Quantity(
        key="size_m",
        symbol="w×h",
        unit="m",
        low=1e-4,
        high=1e4,
        label="rectangle size",
        default_u=None,
        help="Real width and height of the rectangle whose corners are marked.",
    ),
    Quantity(
        key="source_c",
        symbol="T_i",
        unit="°C",
        low=-200,
        high=3000,
        label="source temperature",
        default_u=5.0,
        help="Blackbody-equivalent temperature of one reflected source.",
    ),
    Quantity(
        key="view_factor",
        symbol="F",
        unit="1",
        low=0,
        high=1,
        label="view factor",
        default_u=0.02,
        help="Share of what the surface mirrors that is this source.",
    ),
    Quantity(
        key="true_area_mm2",
        symbol="A",
        unit="mm²",
        low=1e-4,
        high=1e8,
        label="true area",
        default_u=None,
        help="Real area of a target below one pixel.",
    ),
    Quantity(
        key="from_contact_c",
        symbol="T_c",
        unit="°C",
        low=-60,
        high=3000,
        label="contact temperature",
        default_u=1.0,
        help="Contact reading on this region.",
    ),
    Quantity(
        key="true_c",
        symbol="T_true",
        unit="°C",
        low=-60,
        high=3000,
        label="true temperature",
        default_u=1.0,
        help="Known true temperature of the region.",
    ),
    Quantity(
        key="interval_s",
        symbol="Δt",
        unit="s",
        low=0,
        high=1e7,
        low_open=True,
        label="interval",
        help="Time between the pages of a sequence.",
    ),
)

QUANTITIES: dict[str, Quantity] = {row.key: row for row in _ROWS}
"""All quantities by key."""
