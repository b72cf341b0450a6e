"""Make the sample frames: seeded, from invented scenes, with what is true written beside them.

python sample_frames/simulate.py                    everything, into this folder
python sample_frames/simulate.py --only geometry    one folder
python sample_frames/simulate.py --out elsewhere    into another folder; inspection files are not copied
"""

import argparse
import csv
import hashlib
import io
import sys
import tomllib
import zlib
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.ndimage import distance_transform_edt
from simulator import flue, heating, machines, mirrors, shaped, substation, unknowns
from simulator.camera import write
from simulator.outlines import from_file
from simulator.scene import Picture, points, show
from simulator.shot import Shot

HERE = Path(__file__).parent
SEED = 20260301
FOLDERS: dict[str, Callable[[], list[Shot]]] = {
    "substation": substation.shots,
    "heating": heating.shots,
    "sequence": machines.sequence_shots,
    "counts": machines.counts_shots,
    "fitted": flue.shots,
    "solved": unknowns.shots,
    "geometry": lambda: [*shaped.shots(), *mirrors.shots()],
}
BLACKBODY = "counts/blackbody.csv"
CLEAR_PX = 2
"""Regions keep this far from the edge of their body, so that the optics bring nothing foreign in. [px]."""

TRUTH_HEADER = ("frame", "page", "region", "surface_true_mean_c", "plain_reading_c", "note")
TRUTH_SHOWS = "what is true: mean surface temperature of each region, and what its uncorrected numbers say"

Row = tuple[str, int, str, str, str, str]


def main(arguments: list[str] | None = None) -> int:
    """Make the frames that the command line asks for."""
    parser = argparse.ArgumentParser(description="Make the sample frames, seeded, with their true temperatures.")
    parser.add_argument("--out", type=Path, default=HERE, help="folder to write into (default: this one)")
    parser.add_argument("--only", choices=FOLDERS, help="make one folder")
    chosen = parser.parse_args(arguments)
    for folder in [chosen.only] if chosen.only else FOLDERS:
        sys.stderr.write(f"{folder}\n")
        make_folder(folder, chosen.out)
    write_manifest(chosen.out)
    return 0


def make_folder(folder: str, out: Path) -> None:
    """Write the frames of one folder and their truth."""
    inspection = tomllib.loads((HERE / folder / "inspection.toml").read_text(encoding="utf-8"))
    rows: list[Row] = []
    for shot in FOLDERS[folder]():
        generator = generator_of(f"{folder}/{shot.file}")
        pages = []
        for number, scene in enumerate(shot.pages):
            picture = show(scene, shot.camera.blur_px)
            received = picture.radiance + shot.camera.noise(generator, scene.frame)
            pages.append(shot.camera.stored(received))
            rows += truth(shot, number, picture, shot.camera.read_c(pages[-1]), shapes_of(inspection, shot.file))
        stored: Any = pages[0] if len(pages) == 1 else np.stack(pages)
        write(out / folder / shot.file, stored)
    if folder == "counts":
        table = machines.blackbody_shots(generator_of(BLACKBODY))
        lines = ["temperature_c,counts", *(f"{celsius:.1f},{counts:.1f}" for celsius, counts in table)]
        (out / BLACKBODY).write_text("\n".join(lines) + "\n", encoding="utf-8", newline="\n")
    (out / folder / "truth.csv").write_text(_as_csv(rows), encoding="utf-8", newline="\n")


def generator_of(file: str) -> np.random.Generator:
    """Return the random numbers of one file: its own, so that a file can be made alone."""
    return np.random.default_rng([SEED, zlib.crc32(file.encode())])


def shapes_of(inspection: dict[str, Any], file: str) -> dict[str, dict[str, Any]]:
    """Return the shapes of a frame's regions by their names."""
    frame = next(one for one in inspection["frames"] if one["file"] == file)
    regions = [*inspection.get("regions", []), *frame.get("regions", [])]
    return {region["name"]: region["shape"] for region in regions}


def truth(
    shot: Shot, page: int, picture: Picture, plain_c: NDArray[np.float64], shapes: dict[str, dict[str, Any]]
) -> Iterator[Row]:
    """Yield the row of each region; a region that is not where its body is stops the run."""
    if set(shapes) != set(shot.regions):
        raise ValueError(f"{shot.file}: the inspection's regions and the simulator's differ")
    fine = picture.scene.fine
    names = [body.name for body in picture.scene.bodies]
    for name, (body, note) in shot.regions.items():
        pixels = from_file(shapes[name])(*points(picture.scene.frame, 1))
        cells = pixels.repeat(fine, axis=0).repeat(fine, axis=1)
        mine = picture.owner == names.index(body)
        if name not in shot.small:
            whole = mine.reshape(pixels.shape[0], fine, pixels.shape[1], fine).all(axis=(1, 3))
            clear = distance_transform_edt(whole)[pixels]
            if not clear.size or clear.min() <= CLEAR_PX:
                raise ValueError(f"{shot.file}: region {name} is not {CLEAR_PX} px inside {body}")
        surface_c = float(picture.celsius[cells & mine].mean())
        yield shot.file, page, name, f"{surface_c:.3f}", f"{float(plain_c[pixels].mean()):.2f}", note


def write_manifest(out: Path) -> None:
    """Write what each made file is, with its hash. Files that were not made are left out."""
    script = f"sample_frames/{Path(__file__).name}"
    entries = []
    for name, unit, shows in _made():
        path = out / name
        if path.is_file():
            digest = hashlib.sha256(path.read_bytes()).hexdigest()
            entries.append(
                f'[[files]]\nfile = "{name}"\nsha256 = "{digest}"\nunit = "{unit}"\nscript = "{script}"\n'
                f'seed = {SEED}\ndemonstrates = "{shows}"\n'
            )
    head = "# Written by simulate.py. Every scene is invented; the files are free of rights (CC0).\n\n"
    (out / "MANIFEST.toml").write_text(head + "\n".join(entries), encoding="utf-8", newline="\n")


def _made() -> Iterator[tuple[str, str, str]]:
    for folder, shots in FOLDERS.items():
        for shot in shots():
            yield f"{folder}/{shot.file}", shot.camera.unit, shot.demonstrates
        if folder == "counts":
            yield BLACKBODY, "°C, counts", "shots of a blackbody: what thermfix calibrate fits"
        yield f"{folder}/truth.csv", "°C", TRUTH_SHOWS


def _as_csv(rows: list[Row]) -> str:
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(TRUTH_HEADER)
    writer.writerows(rows)
    return text.getvalue()


if __name__ == "__main__":
    sys.exit(main())
