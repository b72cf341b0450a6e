"""Inputs that are found from a region whose temperature is known, kept as how they are found."""

from dataclasses import dataclass

from thermfix.model.estimate import Estimate


@dataclass(frozen=True, slots=True, kw_only=True)
class FromReflector:
    """Reflected apparent temperature from a diffuse reflector region (ISO 18434-1, ASTM E1862)."""

    region: str


@dataclass(frozen=True, slots=True, kw_only=True)
class FromContact:
    """Emissivity from a contact reading on the region itself (ASTM E1933). [K]."""

    contact_k: Estimate


@dataclass(frozen=True, slots=True, kw_only=True)
class SameTemperature:
    """Emissivity from another region of known emissivity at the same temperature (ASTM E1933)."""

    region: str


@dataclass(frozen=True, slots=True, kw_only=True)
class FromTarget:
    """Transmittance from a region of known true temperature (ASTM E1897). [K]."""

    region: str
    true_k: Estimate


@dataclass(frozen=True, slots=True, kw_only=True)
class FromOtherFrame:
    """Emissivity, with the temperature, from the same region in a frame of another reflected temperature."""

    file: str


EmissivitySolve = FromContact | SameTemperature | FromOtherFrame
