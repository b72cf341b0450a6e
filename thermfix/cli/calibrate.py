"""``thermfix calibrate``: fit a calibration to a table of blackbody shots."""

from pathlib import Path
from typing import Annotated

import numpy as np
import typer

from thermfix.cli.output import columns, data, say
from thermfix.inspection import read_table
from thermfix.quantities import ZERO_C_K
from thermfix.radiometry import sakuma_hattori


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command("calibrate", epilog="Example: thermfix calibrate sample_frames/counts/blackbody.csv")(calibrate)


def calibrate(
    table: Annotated[Path, typer.Argument(help="CSV with the columns temperature_c,counts.")],
    fixed_offset: Annotated[
        float | None, typer.Option("--fixed-offset", help="Counts without any radiance, if known; else it is fitted.")
    ] = None,
) -> None:
    """Fit S = C / (exp(c2 / (A T + B)) − 1) + D and print it as a block for inspection.toml."""
    columns_ = read_table(table, ("temperature_c", "counts")).columns
    kelvin, counts = columns_["temperature_k"], columns_["counts"]
    fit = sakuma_hattori.fit(kelvin, counts, fixed_d=fixed_offset)
    u = np.sqrt(np.diag(fit.covariance))
    data("[camera.calibration]")
    data('model = "sakuma-hattori"')
    for name, value, one in zip(("a_um", "b_um_k", "c", "d"), fit.parameters, u, strict=True):
        data(f"{name} = {value!r}  # u = {one:.3g}")
    say("\nShots and residuals (fitted − given)")
    rows = [["temperature °C", "counts", "residual counts", "residual K"]]
    rows += [
        [f"{t - ZERO_C_K:.2f}", f"{s:g}", f"{r:+.2f}", f"{k:+.3f}"]
        for t, s, r, k in zip(kelvin, counts, fit.residual_counts, fit.residual_k, strict=True)
    ]
    for line in columns(rows, right=(0, 1, 2, 3)):
        say(line)
    say(f"\nLargest residual {np.abs(fit.residual_k).max():.3f} K, {fit.degrees_of_freedom} degrees of freedom.")
    say("Covariance of a_um, b_um_k, c, d:")
    for row in fit.covariance:
        say("  " + "  ".join(f"{value: .4e}" for value in row))
