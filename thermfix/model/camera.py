"""The camera: band, optics, accuracy, and what its stored numbers mean. Temperatures in kelvin."""

from dataclasses import dataclass
from enum import StrEnum

from thermfix.model.estimate import Estimate
from thermfix.model.tables import Table


class SignalKind(StrEnum):
    """What ``stored × scale + offset`` is."""

    TEMPERATURE = "temperature"
    RADIANCE = "radiance"
    COUNTS = "counts"


class TemperatureUnit(StrEnum):
    """Unit of stored temperatures."""

    CELSIUS = "C"
    KELVIN = "K"
    FAHRENHEIT = "F"


@dataclass(frozen=True, slots=True, kw_only=True)
class Signal:
    """Meaning of the stored numbers: value = stored × scale + offset, in ``unit`` when a temperature."""

    kind: SignalKind = SignalKind.TEMPERATURE
    unit: TemperatureUnit = TemperatureUnit.CELSIUS
    scale: float = 1.0
    offset: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Applied:
    """Corrections the camera already baked into its stored temperatures (defaults: none)."""

    emissivity: float = 1.0
    reflected_k: float | None = None
    transmittance: float = 1.0
    air_k: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class SakumaHattori:
    """Calibration S = C / (exp(c2 / (A T + B)) − 1) + D, with the standard uncertainty of its fit [K]."""

    a_um: float
    b_um_k: float
    c: float
    d: float = 0.0
    u_k: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BlackbodyTable:
    """Calibration by blackbody shots: columns temperature [K] and counts, and their standard uncertainty [K]."""

    table: Table
    u_k: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Camera:
    """One camera. ``band_um`` or ``response`` (wavelength µm, relative response) is set, never both."""

    band_um: tuple[float, float] | None = None
    response: Table | None = None
    signal: Signal = Signal()
    applied: Applied | None = None
    calibration: SakumaHattori | BlackbodyTable | None = None
    field_of_view_deg: tuple[float, float] | None = None
    blur_px: Estimate | None = None
    noise_k: float | None = None
    accuracy_k: float | None = None
    accuracy_rel: float | None = None
