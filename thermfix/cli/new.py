"""``thermfix new``: write a starter inspection from the frames in a folder."""

from pathlib import Path
from typing import Annotated

import typer

from thermfix.cli.output import data, say
from thermfix.errors import FrameError, InputError
from thermfix.files import atomic_write, printable
from thermfix.frames import is_frame_name, open_frame, unit_hints
from thermfix.inspection import starter_text
from thermfix.model import SignalKind, TemperatureUnit


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command("new", epilog="Example: thermfix new my_round --band 7.5 14 --unit C")(new)


def new(
    folder: Annotated[Path, typer.Argument(help="Folder that holds the frames.")],
    band: Annotated[tuple[float, float] | None, typer.Option(help="Wavelengths the camera sees, in µm.")] = None,
    quantity: Annotated[SignalKind | None, typer.Option(help="What the stored numbers are.")] = None,
    unit: Annotated[TemperatureUnit | None, typer.Option(help="Unit of stored temperatures.")] = None,
    force: Annotated[bool, typer.Option("--force", help="Overwrite an inspection.toml that exists already.")] = False,
) -> None:
    """Write inspection.toml for the frames of a folder; what cannot be known is left for you to fill in."""
    if not folder.is_dir():
        raise InputError(f"{printable(folder)} is not a folder.", hint="Give the folder that holds the frames.")
    names = sorted(one.name for one in folder.iterdir() if one.is_file() and is_frame_name(one.name))
    frames: list[str] = []
    hints: list[str] = []
    for name in names:
        try:
            with open_frame(folder / name) as file:
                frames.append(name)
                if not hints:
                    hints = unit_hints(file.read(0))
        except FrameError as error:
            say(f"Left out: {printable(name)}: {error}")
    if not frames:
        raise FrameError(f"{printable(folder)} holds no frame that can be read.", hint="See thermfix info for a file.")
    text = starter_text(folder, frames, band_um=band, quantity=quantity, unit=unit, hints=hints)
    path = folder / "inspection.toml"
    with atomic_write(path, force=force) as stream:
        stream.write(text.encode())
    data(str(path))
    say(f"{len(frames)} frames listed. Fill in what is marked, then run: thermfix check {printable(folder)}")
