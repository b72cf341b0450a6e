"""The committed reference page is the one the data give."""

from pathlib import Path

from thermfix.materials import library, materials_page, window_materials

PAGE = Path(__file__).parents[2] / "docs" / "reference" / "materials.md"


def test_committed_page_matches_the_data() -> None:
    """When it does not, write ``materials_page()`` to the page again."""
    assert PAGE.read_text(encoding="utf-8") == materials_page()


def test_page_names_every_material_once_as_a_row() -> None:
    page = materials_page()
    for name in (*library(), *window_materials()):
        assert page.count(f"\n| {name} |") == 1


def test_page_tables_have_equal_columns() -> None:
    rows = [line for line in materials_page().splitlines() if line.startswith("|")]
    assert {line.count("|") for line in rows} == {5, 7}


def test_a_table_fills_only_the_columns_of_the_bands_it_covers() -> None:
    """The glass table starts at 5 µm: its 3–5 µm column is empty; water's covers both."""
    rows = {line.split("|")[1].strip(): line.split("|") for line in materials_page().splitlines() if "| n, k" in line}
    assert rows["window glass, uncoated"][2].strip() == "n, k ± 0.02 (5–16.5 µm)"
    assert rows["window glass, uncoated"][3].strip() == ""
    assert rows["water"][2] == rows["water"][3]
