"""``thermfix info``: what a frame file holds."""

from pathlib import Path
from typing import Annotated

import typer

from thermfix.cli.output import columns, data, say
from thermfix.errors import FrameError
from thermfix.files import printable
from thermfix.frames import describe_values, open_frame, unit_hints


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command("info", epilog="Example: thermfix info sample_frames/substation/*.tif")(info)


def info(files: Annotated[list[Path], typer.Argument(help="Frame files.")]) -> None:
    """Print what frame files hold: kind, size, numbers, and what the numbers could mean."""
    failed = 0
    for path in files:
        try:
            with open_frame(path) as file:
                values = file.read(0)
                rows = [["file", str(path)], *map(list, file.facts()), *map(list, describe_values(values))]
        except FrameError as error:
            failed += 1
            say(f"thermfix: {error} {error.hint}".rstrip())
            continue
        for line in columns(rows):
            data(line)
        for hint in unit_hints(values):
            data(printable(f"perhaps   {hint}"))
        data()
    if failed:
        raise typer.Exit(FrameError.exit_code)
