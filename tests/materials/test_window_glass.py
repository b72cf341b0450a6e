"""Window indices against values computed elsewhere from the same published formulas."""

import csv
import re
from pathlib import Path

import numpy as np
import pytest

from thermfix.errors import InputError, OutOfRange
from thermfix.materials import window_index, window_material, window_materials

NAMES = {"Ge": "germanium", "ZnSe": "zinc selenide", "CaF2": "calcium fluoride"}


def _published() -> list[tuple[str, float, float, float]]:
    text = (Path(__file__).parents[1] / "reference/values/d_window.csv").read_text(encoding="utf-8")
    rows = []
    for row in csv.DictReader(text.splitlines()):
        found = re.fullmatch(r"d_win_(Ge|ZnSe|CaF2)_([\d.]+)_0", row["id"])
        index = re.search(r"n=([\d.]+);", row["inputs"])
        if found and index:
            rows.append((NAMES[found[1]], float(found[2]), float(index[1]), float(row["expected"])))
    return rows


@pytest.mark.parametrize(("name", "wavelength_um", "n", "transmittance"), _published())
def test_index_from_the_database_of_optical_constants(
    name: str, wavelength_um: float, n: float, transmittance: float
) -> None:
    """Printed with six decimals, hence 1e-6; the lossless plate passes 2n/(n² + 1)."""
    if name == "calcium fluoride" and wavelength_um > 9.7:
        # Malitson's formula is published to 9.7 µm; the row at 10 µm lies beyond it.
        with pytest.raises(OutOfRange, match=r"9\.7"):
            window_index(name, wavelength_um)
        return
    ours, _ = window_index(name, wavelength_um)
    assert float(ours) == pytest.approx(n, abs=1e-6)
    assert float(2 * ours / (ours**2 + 1)) == pytest.approx(transmittance, abs=1e-6)


def test_there_are_enough_rows_to_test_against() -> None:
    assert len(_published()) == 9


def test_sapphire_index_from_memory() -> None:
    """Handbook table, ordinary ray, from memory: 1.7122 at 3 µm, 1.6752 at 4 µm; last digit ±2."""
    n, _ = window_index("sapphire", [3.0, 4.0])
    assert n == pytest.approx([1.7122, 1.6752], abs=2e-4)


@pytest.mark.parametrize(
    ("name", "wavelength_um", "per_cm", "factor"),
    [
        ("germanium", 10.6, 0.027, 1.5),
        ("zinc selenide", 10.6, 0.0005, 1.5),
        ("sapphire", 5.0, 0.92, 1.5),
        ("sapphire", 4.0, 0.055, 1.5),
        ("calcium fluoride", 8.0, 0.2, 1.6),
    ],
)
def test_absorption_from_memory(name: str, wavelength_um: float, per_cm: float, factor: float) -> None:
    """Handbook absorption coefficients, from memory, good to the factor that the documentation states."""
    _, k = window_index(name, wavelength_um)
    ours = 4 * np.pi * float(k) / (wavelength_um * 1e-4)
    assert per_cm / factor < ours < per_cm * factor


@pytest.mark.parametrize("name", window_materials())
def test_normal_dispersion_and_shape(name: str) -> None:
    window = window_material(name)
    low, high = window.range_um
    n, k = window_index(name.upper(), np.linspace(max(low, 2.0), high, 60).reshape(3, 20))
    assert n.shape == k.shape == (3, 20)
    assert np.all(np.diff(n.ravel()) < 0)
    assert np.all(k >= 0)
    assert window.warning.endswith(".")
    assert window.source


@pytest.mark.parametrize("wavelength_um", [1.9, 14.1, np.nan, [4.0, 20.0]])
def test_outside_the_published_range_is_refused(wavelength_um: object) -> None:
    with pytest.raises(OutOfRange, match="germanium"):
        window_index("germanium", wavelength_um)  # type: ignore[arg-type]


def test_unknown_window_lists_the_known_ones() -> None:
    with pytest.raises(InputError, match="zinc selenide") as caught:
        window_index("germanium, coated", 10.0)
    assert "measured" in caught.value.hint
