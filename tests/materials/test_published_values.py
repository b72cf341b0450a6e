"""Library values against published ones: handbook totals (from memory) and Fresnel's equation.

``tests/reference/values/e_emissivity.csv`` holds total emissivities of Incropera & DeWitt, Table
A.11, and a few in-band ones; nearly all of its rows are themselves *from memory*, so that these
tests hold the library to the same spread, not to the printed page. Its tolerance rule: ±0.02 for
non-metals, ±50 % for polished metals. A total value is not an in-band one; where the two are known
to differ (snow) the in-band row is used.
"""

import csv
import re
from pathlib import Path

import numpy as np
import pytest

from thermfix.materials import find, library

ROWS = {
    row["id"]: row
    for row in csv.DictReader(
        (Path(__file__).parents[1] / "reference/values/e_emissivity.csv").read_text(encoding="utf-8").splitlines()
    )
}

POLISHED = {
    "e_01": "aluminium, polished",
    "e_02": "aluminium foil",
    "e_04": "chromium plate",
    "e_05": "copper, polished",
    "e_07": "gold plate",
    "e_10": "nickel, bare",
    "e_13": "silver plate, bright",
    "e_14": "stainless steel, bright",
}
OTHERS = {
    "e_11": "nickel, oxidised",
    "e_16": "stainless steel, lightly oxidised",
    "e_17": "stainless steel, heavily oxidised",
    "e_20": "asphalt",
    "e_22": "brick, red",
    "e_23": "gypsum board",
    "e_25": "cloth",
    "e_26": "concrete",
    "e_29": "paint, black, very matt",
    "e_31": "paint, white, matt",
    "e_32": "paper",
    "e_34": "rock",
    "e_35": "sand, dry",
    "e_40": "PTFE",
    "e_41": "vegetation",
    "e_44": "snow",
    "e_47": "skin",
}


def _spread(row_id: str) -> tuple[float, float]:
    ends = [float(number) for number in re.findall(r"\d\.\d+", ROWS[row_id]["expected"])]
    return min(ends), max(ends)


@pytest.mark.parametrize(("row_id", "name"), POLISHED.items())
def test_handbook_polished_metals_within_half(row_id: str, name: str) -> None:
    low, high = _spread(row_id)
    lwir = find(name).lwir
    assert lwir is not None
    assert 0.5 * low <= lwir.value <= 1.5 * high


@pytest.mark.parametrize(("row_id", "name"), OTHERS.items())
def test_handbook_other_surfaces_within_two_hundredths(row_id: str, name: str) -> None:
    low, high = _spread(row_id)
    lwir = find(name).lwir
    assert lwir is not None
    assert low - 0.0201 <= lwir.value <= high + 0.0201


def test_every_entry_that_claims_the_handbook_is_held_to_it() -> None:
    claiming = {m.name for m in library().values() if "Table A.11" in m.source}
    assert claiming <= {*POLISHED.values(), *OTHERS.values()}
    assert claiming >= set(POLISHED.values())


def test_anodised_aluminium_differs_between_the_bands() -> None:
    """Row e_49, from memory: 0.6–0.7 at 3–5 µm against 0.95 in the long-wave band, ±0.02."""
    assert ROWS["e_49"]["expected"] == "0.6-0.7 / 0.95"
    material = find("aluminium, anodised")
    assert material.lwir is not None
    assert material.mwir is not None
    assert material.lwir.value == pytest.approx(0.95, abs=0.0201)
    assert 0.58 <= material.mwir.value <= 0.72


def _normal_in_band(name: str, low_um: float, high_um: float, kelvin: float = 300.0) -> float:
    """Planck-weighted normal emissivity 4n/((n+1)² + k²), on its own grid, apart from the package."""
    table = find(name).nk
    assert table is not None
    wavelength, n, k = (table.columns[key] for key in ("wavelength_um", "n", "k"))
    assert wavelength[0] <= low_um
    assert wavelength[-1] >= high_um
    grid = np.linspace(low_um, high_um, 2001)
    n, k = np.interp(grid, wavelength, n), np.interp(grid, wavelength, k)
    weight = grid**-5 / np.expm1(14387.768775 / (grid * kelvin))
    return float(np.average(4 * n / ((n + 1) ** 2 + k**2), weights=weight))


@pytest.mark.parametrize(("row_id", "name"), [("e_43", "water"), ("e_50", "window glass, uncoated"), ("e_28", "ice")])
def test_optical_constants_give_the_published_in_band_value(row_id: str, name: str) -> None:
    low, high = _spread(row_id)
    assert low - 0.01 <= _normal_in_band(name, 8, 14) <= high + 0.01


@pytest.mark.parametrize(
    ("smooth", "real"),
    [
        ("aluminium, smooth and clean (limit)", "aluminium, bare"),
        ("copper, smooth and clean (limit)", "copper, bare"),
        ("iron, smooth and clean (limit)", "steel, bare"),
        ("nickel, smooth and clean (limit)", "nickel, bare"),
        ("chromium, smooth and clean (limit)", "chromium plate"),
        ("silver, smooth and clean (limit)", "silver plate, bright"),
        ("gold, smooth and clean (limit)", "gold plate"),
        ("zinc, smooth and clean (limit)", "zinc, bare"),
        ("titanium, smooth and clean (limit)", "titanium, bare"),
        ("tungsten, smooth and clean (limit)", "tungsten, bare"),
    ],
)
def test_smooth_metals_are_lower_bounds_of_real_ones(smooth: str, real: str) -> None:
    lwir = find(real).lwir
    assert lwir is not None
    ideal = _normal_in_band(smooth, 8, 14)
    assert 0 < ideal < lwir.value
    u = find(smooth).u
    assert u is not None
    # Half the value, taken in the band where it is largest, so that one u serves both bands.
    assert u == pytest.approx(0.5 * max(ideal, _normal_in_band(smooth, 3, 5)), rel=0.45)
