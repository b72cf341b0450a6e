"""Write the reference pages that come from the code: ``python docs/make_reference.py``."""

from collections.abc import Sequence
from pathlib import Path

from thermfix.correction.cautions import CAUTIONS
from thermfix.correction.defaults import RELATIVE_U
from thermfix.correction.instrument import DEFAULT_ACCURACY_K, DEFAULT_ACCURACY_REL, DEFAULT_NOISE_K
from thermfix.export import BUDGET, PIXELS, REGIONS, TREND, Column
from thermfix.quantities import QUANTITIES, Quantity

HERE = Path(__file__).parent / "reference"


def csv_columns() -> str:
    """Return the page of all tables written."""
    parts = ["# CSV columns\n\nUTF-8, comma-separated, decimal point, an empty field where there is no value.\n"]
    for name, columns, meaning in (
        ("regions.csv", REGIONS, "One row per region and page."),
        ("budget.csv", BUDGET, "One row per region and input; of a file with several pages, those of the first."),
        ("trend.csv", TREND, "One row per region and page, for files with several pages."),
        ("FRAME.pixels.csv", PIXELS, "One row per pixel of every region (`--pixels`)."),
    ):
        parts.append(f"\n## {name}\n\n{meaning}\n\n{_columns(columns)}")
    parts.append(
        "\n## FRAME.surface_c.csv\n\nThe grid of surface temperatures in °C: one line per row, no header, "
        "empty where there is no reading (`--grids`, `--decimals`).\n"
    )
    return "".join(parts)


def cautions() -> str:
    """Return the page of all cautions."""
    rows = "".join(f"| `{one.code}` | {one.rule} | {one.sentence} | {one.advice} |\n" for one in CAUTIONS.values())
    stops = ", ".join(f"`{one.code}`" for one in CAUTIONS.values() if one.stops)
    return (
        "# Cautions\n\nWhy a reading is to be distrusted, or why there is none. regions.csv lists their codes.\n\n"
        f"These leave no reading: {stops}.\n\n"
        "| code | raised when | what it says | what to do |\n|---|---|---|---|\n" + rows
    )


def quantities() -> str:
    """Return the page of all quantities, their ranges and default uncertainties."""
    rows = "".join(
        f"| `{row.key}` | {row.symbol} | {row.unit} | {_range(row)} | {_default_u(row)} | {row.help} |\n"
        for row in QUANTITIES.values()
    )
    return (
        "# Quantities\n\nRanges are checked when a file is read. The default u is the standard uncertainty that is "
        "used, and marked as assumed in record.json, where none is stated.\n\n"
        "| key | symbol | unit | range | default u | meaning |\n|---|---|---|---|---|---|\n" + rows + "\n"
        f"Without `accuracy_k` and `accuracy_rel` the camera's limits are taken as ± {DEFAULT_ACCURACY_K:g} K or "
        f"{100 * DEFAULT_ACCURACY_REL:g} % of the reading in °C, whichever is larger; without `noise_k` the noise as "
        f"{DEFAULT_NOISE_K:g} K. Data sheets of uncooled cameras commonly give such limits (common practice).\n"
    )


def _columns(columns: Sequence[Column]) -> str:
    return "| column | meaning |\n|---|---|\n" + "".join(f"| `{one.name}` | {one.meaning} |\n" for one in columns)


def _range(row: Quantity) -> str:
    return f"{'more than ' if row.low_open else ''}{row.low:g} to {row.high:g}"


def _default_u(row: Quantity) -> str:
    if row.key in RELATIVE_U:
        return f"{100 * RELATIVE_U[row.key]:g} % of the value"
    return "" if row.default_u is None else f"{row.default_u:g}"


PAGES = {"csv-columns.md": csv_columns, "cautions.md": cautions, "quantities.md": quantities}
"""Every generated page by its file."""


if __name__ == "__main__":
    for name, page in PAGES.items():
        (HERE / name).write_text(page(), encoding="utf-8")
