"""``thermfix check``: validate an inspection and say everything that is wrong with it."""

from pathlib import Path
from typing import Annotated

import typer

from thermfix.cli.output import data
from thermfix.correction import Instrument
from thermfix.files import printable
from thermfix.frames import open_frame
from thermfix.inspection import load_inspection
from thermfix.session import plan_of


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command("check", epilog="Example: thermfix check sample_frames/substation")(check)


def check(path: Annotated[Path, typer.Argument(help="An inspection folder, or its inspection.toml.")]) -> None:
    """Validate an inspection and its frames without correcting anything."""
    inspection = load_inspection(path)
    instrument = Instrument(inspection.camera)
    for frame in inspection.frames:
        with open_frame(inspection.folder / frame.file) as file:
            plan_of(instrument, inspection, frame, file)
            pages = f", {file.pages} pages" if file.pages > 1 else ""
        data(f"{printable(frame.file)}: {file.shape[1]} × {file.shape[0]}{pages}, {len(frame.regions)} regions")
