"""What a surface is made of."""

from dataclasses import dataclass
from enum import StrEnum

from thermfix.model.estimate import Estimate
from thermfix.model.tables import Table


class Angular(StrEnum):
    """How emissivity goes with the view angle when only its normal value is known."""

    DIFFUSE = "diffuse"
    DIELECTRIC = "dielectric"
    METAL = "metal"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Material:
    """Emissivity of one material.

    Exactly one kind of data answers for a band: ``nk`` (wavelength_um, n, k), else ``spectrum``
    (wavelength_um, emissivity; normal), else ``by_angle`` (degrees, in-band emissivity), else an
    in-band normal value: ``emissivity`` (any band; inspection materials) or ``lwir`` (7–14 µm) and
    ``mwir`` (3–5 µm) of the library. ``u`` is the standard uncertainty that goes with ``nk``,
    ``spectrum`` and ``by_angle``. ``valid_c`` limits the surface temperatures it was stated for.
    """

    name: str
    group: str = ""
    emissivity: Estimate | None = None
    lwir: Estimate | None = None
    mwir: Estimate | None = None
    angular: Angular = Angular.DIFFUSE
    nk: Table | None = None
    spectrum: Table | None = None
    by_angle: tuple[tuple[float, float], ...] | None = None
    u: float | None = None
    valid_c: tuple[float, float] | None = None
    warning: str = ""
    note: str = ""
    source: str = ""
    from_memory: bool = False
    words: tuple[str, ...] = ()
