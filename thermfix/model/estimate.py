"""A number with what is known about its error."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimate:
    """A value and its standard uncertainty ``u`` in the same unit (kelvin for temperatures).

    ``u`` is None where none was stated; the documented default of the quantity is then used and
    marked as such. ``assumed`` marks a value nobody gave (a documented default).
    """

    value: float
    u: float | None = None
    assumed: bool = False
