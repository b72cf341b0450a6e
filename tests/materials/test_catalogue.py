"""Every entry of the library is complete, honest about its source, and within the published spread."""

import re
import subprocess
import sys
import tomllib
from pathlib import Path
from typing import Any

import numpy as np
import pytest

import thermfix.materials
from thermfix.errors import InputError
from thermfix.materials import find, library
from thermfix.model import Angular, Material

DATA = Path(thermfix.materials.__file__).parent / "data"
KEYS = {
    "name", "lwir", "mwir", "nk", "u", "angular", "valid_c", "source", "from_memory", "warning", "note", "words",
}  # fmt: skip

every_material = pytest.mark.parametrize("material", library().values(), ids=lambda material: material.name)


def _raw() -> list[tuple[str, dict[str, Any], dict[str, Any]]]:
    groups = [(path.name, tomllib.loads(path.read_text(encoding="utf-8"))) for path in sorted(DATA.glob("*.toml"))]
    return [(file, group, entry) for file, group in groups for entry in group["materials"]]


@every_material
def test_entry_has_exactly_one_kind_of_data(material: Material) -> None:
    in_band = material.lwir is not None or material.mwir is not None
    assert in_band != (material.nk is not None)
    assert material.emissivity is None
    assert material.spectrum is None
    assert material.by_angle is None
    assert (material.u is not None) == (material.nk is not None)


@every_material
def test_values_lie_in_range_with_an_uncertainty(material: Material) -> None:
    for estimate in (material.lwir, material.mwir):
        if estimate is not None:
            assert 0 < estimate.value <= 1
            assert estimate.u is not None
            assert 0 < estimate.u <= 0.5 * estimate.value + 0.06
            assert not estimate.assumed
    if material.u is not None:
        assert 0 < material.u <= 0.05


@every_material
def test_entry_says_where_it_comes_from(material: Material) -> None:
    assert len(material.source) > 20
    assert material.from_memory == (material.nk is None), "only optical constants are copied from a published table"
    assert material.words
    assert material.group


@every_material
def test_temperature_range_is_ordered(material: Material) -> None:
    if material.nk is None:
        assert material.valid_c is not None, "a value stands for some temperatures, not for all"
    if material.valid_c is not None:
        low, high = material.valid_c
        assert -273.15 < low < high <= 3000


@every_material
def test_texts_are_sentences_without_marks_of_trade(material: Material) -> None:
    assert not re.search("[®™©]", f"{material.name} {material.words} {material.note} {material.warning}")
    for text in (material.warning, material.note):
        assert text == "" or text.endswith("."), "a key of a shared text that does not exist would show here"
    # Plain words in lower case: a capital marks an abbreviation, never a firm or a product.
    abbreviations = {"PVC", "PMMA", "PET", "PTFE", "GRP", "FR", "PC", "PS", "PE", "PP", "PV", "PCB", "PDMS", "ABS"}
    abbreviations |= {"EPS", "XPS", "PUR"}
    for word in re.findall(r"[^\W\d_]+", f"{material.name} {' '.join(material.words)}"):
        assert word.islower() or word in abbreviations
    for text in (material.warning, material.note):
        inside = re.sub(r"(^|[.:] )[A-Z]", "", text)
        assert set(re.findall(r"\b[A-Z]\w*", inside)) <= {"ASTM", "E1862", "E1933", "C", "K"}


def test_metals_warn_and_bare_ones_state_half_their_value() -> None:
    metals = [m for m in library().values() if m.group == "metals" or m.angular is Angular.METAL]
    assert len(metals) > 45
    for material in metals:
        assert material.warning
        if material.nk is None and material.angular is Angular.METAL and material.lwir is not None:
            assert "reflection" in material.warning
            assert material.lwir.u is not None
            assert material.lwir.u >= 0.49 * material.lwir.value
        if material.angular is Angular.DIFFUSE and material.lwir is not None and "anodised" not in material.name:
            assert material.lwir.u is not None
            assert material.lwir.u >= 0.05


def test_smooth_metals_say_that_they_are_lower_bounds() -> None:
    smooth = [m for m in library().values() if m.group == "metals" and m.nk is not None]
    assert len(smooth) == 10
    for material in smooth:
        assert material.warning.startswith("Lower bound")


def test_plastics_from_optical_constants_warn_of_transparency() -> None:
    plastics = [m for m in library().values() if m.group == "plastics and rubber" and m.nk is not None]
    assert len(plastics) == 7
    for material in plastics:
        assert "transparent" in material.warning


def test_handbook_totals_of_metals_are_called_what_they_are() -> None:
    from_totals = [m for m in library().values() if m.group == "metals" and "total" in m.source]
    assert len(from_totals) > 20
    for material in from_totals:
        assert "total values" in material.note


@pytest.mark.parametrize(("file", "group", "entry"), _raw(), ids=lambda value: None)
def test_data_files_use_known_keys_only(file: str, group: dict[str, Any], entry: dict[str, Any]) -> None:
    assert set(group) <= {"group", "sources", "warnings", "notes", "materials"}
    assert set(entry) <= KEYS, file
    assert entry["source"] in group["sources"]
    for key in ("lwir", "mwir"):
        assert set(entry.get(key, {"value": 0, "u": 0})) == {"value", "u"}


def test_data_files_hold_nothing_unused() -> None:
    used_tables = {entry["nk"] for _, _, entry in _raw() if "nk" in entry}
    assert used_tables == {path.name for path in (DATA / "nk").iterdir()}
    for path in DATA.glob("*.toml"):
        group = tomllib.loads(path.read_text(encoding="utf-8"))
        for key, table in (("source", "sources"), ("warning", "warnings"), ("note", "notes")):
            assert set(group.get(table, {})) <= {entry.get(key) for entry in group["materials"]}


def test_names_are_unique_over_all_groups() -> None:
    names = [entry["name"].casefold() for _, _, entry in _raw()]
    assert len(names) == len(set(names)) == len(library())


@every_material
def test_optical_constants_are_readable(material: Material) -> None:
    if material.nk is None:
        return
    columns = material.nk.columns
    assert list(columns) == ["wavelength_um", "n", "k"]
    assert np.all(np.diff(columns["wavelength_um"]) > 0)
    assert columns["wavelength_um"][0] <= 5
    assert columns["wavelength_um"][-1] >= 14
    assert np.all(columns["n"] > 0)
    assert np.all(columns["k"] >= 0)
    assert not columns["n"].flags.writeable
    assert len(material.nk.sha256) == 64
    header = (DATA / material.nk.source).read_text(encoding="utf-8").splitlines()[:2]
    assert "refractiveindex.info" in header[1]
    assert "CC0" in header[1]


def test_library_is_cached_ordered_and_read_only() -> None:
    assert library() is library()
    assert list(library().values()) == sorted(library().values(), key=lambda m: (m.group, m.name))
    with pytest.raises(TypeError):
        library()["x"] = find("concrete")  # type: ignore[index]


def test_find_ignores_case_and_spaces() -> None:
    assert find("  Copper,   OXIDISED ") is library()["copper, oxidised"]


def test_find_names_the_closest() -> None:
    with pytest.raises(InputError, match="coper, oxidised") as caught:
        find("coper, oxidised")
    assert "copper, oxidised" in caught.value.hint


def test_find_shows_control_characters_as_escapes() -> None:
    with pytest.raises(InputError) as caught:
        find("\x1b[31mzzzzzz")
    assert "\x1b" not in str(caught.value)
    assert caught.value.hint


def test_import_reads_no_data_and_stays_light() -> None:
    script = (
        "import sys, thermfix.materials as m; from thermfix.materials.catalogue import library\n"
        "assert library.cache_info().currsize == 0\n"
        "heavy = {'scipy', 'textual', 'typer', 'pydantic', 'tifffile'} & set(sys.modules)\n"
        "assert not heavy, heavy\n"
        "m.search('copper'); heavy = {'scipy', 'textual', 'pydantic'} & set(sys.modules); assert not heavy, heavy"
    )
    subprocess.run([sys.executable, "-c", script], check=True)
