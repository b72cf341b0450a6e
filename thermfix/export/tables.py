"""regions.csv and trend.csv: one row per region and page; budget.csv: one per region and input."""

from collections.abc import Iterable
from pathlib import Path

from thermfix.correction.results import Reading
from thermfix.export.columns import BUDGET, REGIONS, TREND, Column, header
from thermfix.export.digits import fixed
from thermfix.export.quoting import quoted
from thermfix.files import atomic_write
from thermfix.quantities import ZERO_C_K

_Value = str | int | float | None


def write_regions(path: Path, rows: Iterable[tuple[str, int, Reading]], *, force: bool = False) -> None:
    """Write regions.csv from rows of (frame, page, reading), in the order given.

    Kelvin become °C; a value that is None or NaN leaves its field empty.

    Raises
    ------
    InputError
        If a value is infinite, a name holds a NUL, the file exists and ``force`` is False, or it
        cannot be written.
    """
    values = ({"frame": frame, "page": page, **_values(reading)} for frame, page, reading in rows)
    _write(path, REGIONS, values, force)


def write_trend(path: Path, rows: Iterable[tuple[str, int, str, Reading]], *, force: bool = False) -> None:
    """Write trend.csv from rows of (frame, page, time, reading), in the order given; as `write_regions`."""
    values = ({"frame": frame, "page": page, "time": time, **_values(reading)} for frame, page, time, reading in rows)
    _write(path, TREND, values, force)


def write_budget(path: Path, rows: Iterable[tuple[str, int, Reading]], *, force: bool = False) -> None:
    """Write budget.csv from rows of (frame, page, reading); readings without a budget add nothing."""
    values = (
        {
            "frame": frame,
            "page": page,
            "region": reading.region,
            "input": row.name,
            "value": None if row.input is None else row.input.value,
            "unit": "" if row.input is None else row.input.unit,
            "u": None if row.input is None else row.input.u,
            "distribution": "" if row.input is None else row.input.distribution,
            "sensitivity": None if row.input is None else row.input.sensitivity,
            "contribution_k": row.contribution_k,
            "share_pct": row.share_pct,
        }
        for frame, page, reading in rows
        if reading.budget is not None
        for row in reading.budget.rows
    )
    _write(path, BUDGET, values, force)


def _write(path: Path, columns: tuple[Column, ...], rows: Iterable[dict[str, _Value]], force: bool) -> None:
    with atomic_write(path, force=force) as stream:
        stream.write(header(columns))
        for row in rows:
            stream.write(b",".join(_field(row[column.name], column.decimals) for column in columns) + b"\n")


def _values(reading: Reading) -> dict[str, _Value]:
    """Return what a reading gives to the columns, by column."""
    return {
        "region": reading.region,
        "material": reading.material,
        "emissivity": reading.emissivity,
        "view_angle_deg": reading.view_angle_deg,
        "distance_m": reading.distance_m,
        "pixels": reading.pixels,
        "apparent_mean_c": _celsius(reading.apparent_mean_k),
        "surface_mean_c": _celsius(reading.surface_mean_k),
        "surface_min_c": _celsius(reading.surface_min_k),
        "surface_max_c": _celsius(reading.surface_max_k),
        "surface_sd_k": reading.surface_sd_k,
        "u_k": reading.u_k,
        "expanded_u_k": reading.expanded_u_k,
        "cautions": ";".join(caution.code for caution in reading.cautions),
        "radiant_exitance_w_m2": reading.radiant_exitance_w_m2,
        "area_m2": reading.area_m2,
        "radiant_power_w": reading.radiant_power_w,
    }


def _celsius(kelvin: float | None) -> float | None:
    return None if kelvin is None else float(kelvin) - ZERO_C_K


def _field(value: _Value, decimals: int | None) -> bytes:
    if value is None:
        return b""
    if decimals is not None:
        return fixed(float(value), decimals).encode()
    return quoted(str(value))
