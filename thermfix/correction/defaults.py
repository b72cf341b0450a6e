"""Documented default uncertainties for inputs whose standard uncertainty nobody stated."""

from dataclasses import dataclass

from thermfix.model import Estimate
from thermfix.quantities import QUANTITIES

RELATIVE_U = {"distance_m": 0.05, "thickness_mm": 0.02, "true_area_mm2": 0.05}
"""Default standard uncertainties as a fraction of the value, where a fixed one would make no sense."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Input:
    """One input of a correction with the uncertainty that is used for it.

    ``assumed_value`` and ``assumed_u`` mark what nobody stated. ``origin`` is "scene", "camera" or
    the region it belongs to: the same key of the same origin is one and the same error wherever it enters.
    A solved input has ``parts``: the inputs it was found from with d(value)/d(input). Its error is
    theirs, so wherever it enters, they do.
    """

    key: str
    value: float
    u: float
    origin: str = "scene"
    assumed_value: bool = False
    assumed_u: bool = False
    parts: tuple[tuple["Input", float], ...] = ()

    @property
    def name(self) -> str:
        """Name of this error, the same wherever it enters."""
        return f"{self.origin}: {self.key}"


def stated_or_default(key: str, estimate: Estimate, origin: str = "scene") -> Input:
    """Return the input with its stated uncertainty, or with the documented default of its quantity."""
    u = estimate.u
    if u is None:
        fallback = RELATIVE_U[key] * abs(estimate.value) if key in RELATIVE_U else QUANTITIES[key].default_u
        if fallback is None:
            raise KeyError(f"no default uncertainty is documented for {key}")
        u = fallback
    return Input(
        key=key,
        value=estimate.value,
        u=u,
        origin=origin,
        assumed_value=estimate.assumed,
        assumed_u=estimate.u is None,
    )
