"""``thermfix calibrate``: fit a calibration to a table of blackbody shots."""

from pathlib import Path
from typing import Annotated

import numpy as np
import typer

from thermfix.cli.output import columns, data, say
from thermfix.errors import InputError
from thermfix.files import printable
from thermfix.frames import load_frame
from thermfix.geometry.slanted_edge import blur_of_edge
from thermfix.inspection import read_table
from thermfix.quantities import ZERO_C_K
from thermfix.radiometry import sakuma_hattori


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command("calibrate", epilog="Example: thermfix calibrate sample_frames/counts/blackbody.csv")(calibrate)


def calibrate(
    table: Annotated[Path, typer.Argument(help="CSV with the columns temperature_c,counts; or a frame, with --edge.")],
    edge: Annotated[
        tuple[int, int, int, int] | None,
        typer.Option("--edge", help="Find blur_px from the straight hot edge in this patch: x0 y0 x1 y1."),
    ] = None,
    fixed_offset: Annotated[
        float | None, typer.Option("--fixed-offset", help="Counts without any radiance, if known; else it is fitted.")
    ] = None,
) -> None:
    """Fit S = C / (exp(c2 / (A T + B)) − 1) + D to blackbody shots, or find the camera's blur from an edge.

    The result is printed as lines for inspection.toml.
    """
    if edge is not None:
        _blur(table, edge)
        return
    columns_ = read_table(table, ("temperature_c", "counts")).columns
    kelvin, counts = columns_["temperature_k"], columns_["counts"]
    fit = sakuma_hattori.fit(kelvin, counts, fixed_d=fixed_offset)
    u = np.sqrt(np.diag(fit.covariance))
    data("[camera.calibration]")
    data('model = "sakuma-hattori"')
    for name, value, one in zip(("a_um", "b_um_k", "c", "d"), fit.parameters, u, strict=True):
        data(f"{name} = {value!r}  # u = {one:.3g}")
    rms = float(np.sqrt(np.nanmean(fit.residual_k**2) * counts.size / max(fit.degrees_of_freedom, 1)))
    data(f"u_k = {rms:.3g}  # from the residuals; add what the blackbody itself is uncertain by")
    if fit.degenerate:
        say("The shots do not settle all parameters: the uncertainties are unknown. Add shots, or fix the offset.")
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


def _blur(path: Path, edge: tuple[int, int, int, int]) -> None:
    x0, y0, x1, y1 = edge
    frame = load_frame(path)
    if not (0 <= x0 < x1 <= frame.shape[1] and 0 <= y0 < y1 <= frame.shape[0]):
        raise InputError(
            f"The patch {x0} {y0} {x1} {y1} does not lie within {printable(path)} of "
            f"{frame.shape[1]} × {frame.shape[0]} pixels.",
            hint="Give x0 y0 x1 y1 with x0 < x1 and y0 < y1.",
        )
    found = blur_of_edge(frame[y0:y1, x0:x1].astype(np.float64))
    data(f"blur_px = {{ value = {found.blur_px:.3f}, u = {max(found.u_blur_px, 0.001):.3f} }}")
    say(f"The edge lies {found.angle_deg:.1f}° to the rows; step {found.contrast:.4g}, rms misfit {found.misfit:.2g}.")
    say("A step of over 30 K bends temperatures against radiance: prefer a frame of radiance or a smaller step.")
