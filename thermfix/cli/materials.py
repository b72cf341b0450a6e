"""``thermfix materials``: search the library of materials."""

from typing import Annotated

import typer

from thermfix.cli.output import columns, data, say
from thermfix.correction.surface import material_surface
from thermfix.errors import InputError
from thermfix.materials import search
from thermfix.model import Material
from thermfix.radiometry import Band


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command("materials", epilog="Example: thermfix materials copper --band 7.5 14")(materials)


def materials(
    words: Annotated[list[str] | None, typer.Argument(help="Words to look for; none lists everything.")] = None,
    band: Annotated[tuple[float, float], typer.Option(help="Wavelengths the camera sees, in µm.")] = (7.5, 14.0),
) -> None:
    """Search the library; the emissivity shown is the in-band normal one for the band."""
    seen = Band.rectangular(*band)
    found = search(" ".join(words or []))
    if not found:
        raise InputError(
            f"No material matches “{' '.join(words or [])}”.", hint="Try a single plain word, e.g. copper."
        )
    rows = [["material", "group", "emissivity", "u", "angle", "basis", "warning"]]
    rows += [_row(seen, one) for one in found]
    for line in columns(rows):
        data(line)
    say("\nu is the standard uncertainty. A library value is a start: measure emissivity where a decision hangs on it.")


def _row(band: Band, material: Material) -> list[str]:
    try:
        value = material_surface(band, material, "library").value
        shown = [f"{value.value:.3f}", f"{value.u:.3f}"]
    except InputError:
        shown = ["none in this band", ""]
    angle = "optical constants" if material.nk is not None else material.angular.value
    basis = "from memory" if material.from_memory else "published"
    return [material.name, material.group, *shown, angle, basis, material.warning]
