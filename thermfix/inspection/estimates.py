"""Numbers with an uncertainty, and the ways an input may be solved instead of given."""

from dataclasses import dataclass
from typing import Annotated, Any

from pydantic import GetCoreSchemaHandler
from pydantic_core import CoreSchema, core_schema

from thermfix.inspection.refusing import Reader, Strict, refuse
from thermfix.inspection.values import in_range, name, number
from thermfix.model import Estimate, FromContact, FromOtherFrame, FromReflector, FromTarget, SameTemperature
from thermfix.quantities import QUANTITIES, ZERO_C_K, Quantity

_Number = Annotated[float, Reader(number)]
_Name = Annotated[str, Reader(name)]


class Number(Strict):
    """A number, bare or as ``{ value, u }``."""

    value: _Number | None = None
    u: _Number | None = None

    def resolve(self, key: str) -> Any:
        """Return the model's value: an estimate in the model's unit, or how it is solved."""
        return self.estimate(key)

    def estimate(self, key: str) -> Estimate:
        """Return the given number as an estimate, °C turned to kelvin."""
        if self.value is None:
            raise refuse("needs a value: { value = …, u = … }.")
        in_range(QUANTITIES[key], self.value, "value")
        if self.u is not None:
            _standard_uncertainty(QUANTITIES[key], self.u)
        return _estimate(key, self.value, self.u)


class ReflectedNumber(Number):
    """A reflected apparent temperature, given or solved from a reflector region."""

    from_region: _Name | None = None

    def resolve(self, key: str) -> Estimate | FromReflector:
        """Return the estimate or the solve."""
        if self.from_region is None:
            return self.estimate(key)
        _only(self, "from_region")
        return FromReflector(region=self.from_region)


class TransmittanceNumber(Number):
    """A transmittance, given or solved from a region of known true temperature."""

    from_region: _Name | None = None
    true_c: _Number | None = None

    def resolve(self, key: str) -> Estimate | FromTarget:
        """Return the estimate or the solve."""
        if self.from_region is None:
            if self.true_c is not None:
                raise refuse("needs from_region: the region whose true temperature is true_c.")
            return self.estimate(key)
        if self.true_c is None:
            raise refuse("needs true_c: the true temperature of that region.")
        _only(self, "from_region", "true_c", "u")
        return FromTarget(region=self.from_region, true_k=_known("true_c", self.true_c, self.u))


class EmissivityNumber(Number):
    """An emissivity, given or solved: by contact, from another region, or from another frame."""

    from_contact_c: _Number | None = None
    same_temperature_as: _Name | None = None
    other_frame: _Name | None = None

    def resolve(self, key: str) -> Estimate | FromContact | SameTemperature | FromOtherFrame:
        """Return the estimate or the solve."""
        if self.from_contact_c is not None:
            _only(self, "from_contact_c", "u")
            return FromContact(contact_k=_known("from_contact_c", self.from_contact_c, self.u))
        if self.same_temperature_as is not None:
            _only(self, "same_temperature_as")
            return SameTemperature(region=self.same_temperature_as)
        if self.other_frame is not None:
            _only(self, "other_frame")
            return FromOtherFrame(file=self.other_frame)
        return self.estimate(key)


@dataclass(frozen=True, slots=True)
class Of:
    """Marks a number as being of one quantity: a bare number is taken as its value, its range is checked."""

    key: str

    def __get_pydantic_core_schema__(self, source: object, handler: GetCoreSchemaHandler) -> CoreSchema:
        """Return the number's schema between what makes a table of a bare number and what checks the range."""
        checked = core_schema.no_info_after_validator_function(self._check, handler(source))
        return core_schema.no_info_before_validator_function(_as_table, checked)

    def _check(self, given: Number) -> Number:
        given.resolve(self.key)
        return given


def _standard_uncertainty(quantity: Quantity, u: float) -> float:
    """Return a standard uncertainty from 0 to the width of its quantity's range, or refuse it."""
    if not 0 <= u <= quantity.high - quantity.low:
        raise refuse(f"u is {u:g}; a standard uncertainty must lie in 0 to {quantity.high - quantity.low:g}.", "u")
    return u


def kelvin(key: str, value: float) -> float:
    """Return a number of the file in the model's unit: °C becomes kelvin, all else stays."""
    return value + ZERO_C_K if QUANTITIES[key].unit == "°C" else value


def _as_table(given: object) -> object:
    return given if isinstance(given, dict) else {"value": given}


def _estimate(key: str, value: float, u: float | None) -> Estimate:
    return Estimate(value=kelvin(key, value), u=u)


def _known(key: str, value: float, u: float | None) -> Estimate:
    in_range(QUANTITIES[key], value, key)
    if u is not None:
        _standard_uncertainty(QUANTITIES[key], u)
    return _estimate(key, value, u)


def _only(given: Number, *allowed: str) -> None:
    for other in sorted(given.model_fields_set - set(allowed)):
        raise refuse(f"{other} does not go together with {allowed[0]}.", other)
