"""``thermfix explain``: the measurement equation with one region's numbers in it, and its budget."""

from pathlib import Path
from typing import Annotated

import typer

from thermfix.cli.output import columns, data, say
from thermfix.inspection import load_inspection
from thermfix.quantities import ZERO_C_K
from thermfix.session import Explanation, explain_region
from thermfix.uncertainty.budget import Budget


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command("explain", epilog='Example: thermfix explain sample_frames/substation "bus bar L1"')(explain)


def explain(
    path: Annotated[Path, typer.Argument(help="An inspection folder, or its inspection.toml.")],
    region: Annotated[str, typer.Argument(help="Name of the region.")],
    frame: Annotated[str | None, typer.Option(help="Frame file; the first with this region if left out.")] = None,
    page: Annotated[int, typer.Option(min=0, help="Page of the frame file.")] = 0,
    minus: Annotated[str | None, typer.Option(help="Another region of the frame: state the difference too.")] = None,
    trials: Annotated[bool, typer.Option("--trials", help="Run Monte Carlo even where first order holds.")] = False,
) -> None:
    """Show how one region's reading comes about, line by line, and what makes its uncertainty."""
    found = explain_region(load_inspection(path), region, frame=frame, page=page, minus=minus, trials=trials)
    reading = found.reading
    data(f"{found.frame}, page {found.page}, region {reading.region}: {reading.pixels_read} of {reading.pixels} pixels")
    data()
    for line in columns([[step.what, step.formula, step.numbers, step.result] for step in found.steps], right=(3,)):
        data(line)
    data()
    _show_reading(found)
    if reading.budget is not None:
        _show_budget(reading.budget)
    for caution in reading.cautions:
        say(f"{caution.code}: {caution.sentence} {caution.advice}")
    if found.difference is not None:
        one = found.difference
        data()
        data(f"{one.first} − {one.second}: {one.value_k:.2f} K ± {one.expanded_u_k:.2f} K (k = 2)")
        _show_budget(one.budget)


def _show_reading(found: Explanation) -> None:
    reading = found.reading
    if reading.surface_mean_k is None or reading.expanded_u_k is None:
        data("No reading.")
        return
    celsius = reading.surface_mean_k - ZERO_C_K
    data(f"Mean surface temperature {celsius:.2f} °C ± {reading.expanded_u_k:.2f} K (k = 2)")
    if found.trials is not None:
        run = found.trials.found
        ends = [end - ZERO_C_K for end in (*run.interval, *run.shortest)]
        verdict = "holds" if found.trials.first_order_holds else "does not hold"
        data(
            f"Monte Carlo, {run.trials} trials: mean {run.mean - ZERO_C_K:.2f} °C, standard uncertainty {run.sd:.2f} K"
        )
        data(f"  95 % lie between {ends[0]:.1f} and {ends[1]:.1f} °C (shortest: {ends[2]:.1f} to {ends[3]:.1f} °C)")
        data(f"  first order {verdict}")
    if reading.area_m2 is not None and found.extent_m is not None:
        length, width = (1000 * one for one in found.extent_m)
        data(f"The region covers {reading.area_m2:.4g} m² of surface, about {length:.0f} × {width:.0f} mm")
    if reading.radiant_exitance_w_m2 is not None:
        power = "" if reading.radiant_power_w is None else f", radiant power {reading.radiant_power_w:.4g} W"
        data(f"In-band radiant exitance {reading.radiant_exitance_w_m2:.4g} W/m²{power}")
    if found.note:
        data(f"The plane: {found.note}")


def _show_budget(budget: Budget) -> None:
    data()
    rows = [["input", "value", "unit", "u", "sensitivity", "contribution K", "share %"]]
    for row in budget.rows:
        one = row.input
        stated = (
            ["", "", "", ""]
            if one is None
            else [f"{one.value:.5g}", one.unit, f"{one.u:.3g}", f"{one.sensitivity:.4g}"]
        )
        rows.append([row.name, *stated, f"{row.contribution_k:.3f}", f"{row.share_pct:.1f}"])
    rows.append(["combined standard uncertainty", "", "", "", "", f"{budget.u_k:.3f}", "100.0"])
    for line in columns(rows, right=(1, 3, 4, 5, 6)):
        data(line)
