"""``thermfix correct``: the main job without a screen."""

from pathlib import Path
from typing import Annotated

import typer

from thermfix.cli.output import Progress, columns, data, say
from thermfix.correction import Reading
from thermfix.correction.cautions import CAUTIONS
from thermfix.files import printable
from thermfix.inspection import load_inspection
from thermfix.quantities import ZERO_C_K
from thermfix.session import Grids, Outputs, PageReadings, Summary, correct_inspection

_MOST_ROWS = 200
_HEAD = ["frame", "page", "region", "apparent °C", "surface °C", "± U (k=2)", "cautions"]
_BEFORE_ACTING = """
A thermal image does not prove that a circuit is dead. Open panels are for qualified people; confirm a
reading by contact or a second method before acting on it; local codes and licensed practice come first."""


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command("correct", epilog="Example: thermfix correct sample_frames/substation --out corrected")(correct)


def correct(
    path: Annotated[Path, typer.Argument(help="An inspection folder, or its inspection.toml.")],
    out: Annotated[Path, typer.Option("--out", help="Folder for the results; made if missing.")],
    grids: Annotated[
        Grids, typer.Option(help="Grids of surface temperatures: auto = frames of one page only.")
    ] = Grids.AUTO,
    pixels: Annotated[bool, typer.Option("--pixels", help="Also list every pixel of every region.")] = False,
    tiff: Annotated[
        bool, typer.Option("--tiff", help="Also write surface temperature and uncertainty as TIFF.")
    ] = False,
    decimals: Annotated[int, typer.Option(min=0, max=6, help="Decimals of the grids.")] = 2,
    force: Annotated[bool, typer.Option("--force", help="Overwrite results that exist already.")] = False,
) -> None:
    """Correct every frame of an inspection and write regions.csv, grids and record.json."""
    inspection = load_inspection(path)
    outputs = Outputs(grids=grids, pixels=pixels, tiff=tiff, decimals=decimals, force=force)
    summary = correct_inspection(inspection, out, outputs, Progress("pages corrected"))
    _show(summary)
    for name, error in summary.failed:
        say(f"Not read: {printable(name)}: {error} {error.hint}".rstrip())
    say(f"Results are in {printable(out)}.")
    if summary.failed:
        raise typer.Exit(3)


def _show(summary: Summary) -> None:
    rows = [_row(page, one) for page in summary.pages for one in page.readings]
    if len(rows) > _MOST_ROWS:
        data(f"{len(rows)} readings of {len(summary.pages)} pages; see regions.csv.")
    elif rows:
        for line in columns([_HEAD, *rows], right=(1, 3, 4, 5)):
            data(line)
    codes = sorted({found.code for page in summary.pages for one in page.readings for found in one.cautions})
    if codes:
        say("\nCautions")
    for code in codes:
        say(f"  {code}: {CAUTIONS[code].sentence} {CAUTIONS[code].advice}")
    if summary.readings:
        say(_BEFORE_ACTING)


def _row(page: PageReadings, one: Reading) -> list[str]:
    return [
        page.file,
        str(page.page),
        one.region,
        _celsius(one.apparent_mean_k),
        _celsius(one.surface_mean_k) or "no reading",
        "" if one.expanded_u_k is None else f"{one.expanded_u_k:.1f}",
        ", ".join(found.code for found in one.cautions),
    ]


def _celsius(kelvin: float | None) -> str:
    return "" if kelvin is None else f"{kelvin - ZERO_C_K:.1f}"
