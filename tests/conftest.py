"""Published values for the tests: rows of the tables in tests/reference."""

import csv
import re
from pathlib import Path

import pytest
from hypothesis import settings

REFERENCE = Path(__file__).parent / "reference"

settings.register_profile("suite", deadline=None, derandomize=True, print_blob=True)
settings.load_profile("suite")


def rows_of(table: str, prefix: str = "") -> list[dict[str, str]]:
    """Return the rows of tests/reference/values/<table>.csv whose id starts with the prefix."""
    with (REFERENCE / "values" / f"{table}.csv").open(newline="", encoding="utf-8") as stream:
        return [row for row in csv.DictReader(stream) if row["id"].startswith(prefix)]


def numbers_in(text: str) -> dict[str, float]:
    """Return the ``name=number`` pairs of an ``inputs`` cell."""
    return {name: float(value) for name, value in re.findall(r"(\w+)=([-+]?[\d.]+(?:e[-+]?\d+)?)", text)}


@pytest.fixture(scope="session")
def reference_dir() -> Path:
    """Folder of published values."""
    return REFERENCE


def pytest_generate_tests(metafunc: pytest.Metafunc) -> None:
    """Give a test marked ``rows(table, prefix)`` one case per published row, by its id."""
    mark = metafunc.definition.get_closest_marker("rows")
    if mark is not None:
        rows = [row for prefix in mark.args[1:] or ("",) for row in rows_of(mark.args[0], prefix)]
        assert rows, f"no rows in {mark.args}"
        metafunc.parametrize("row", rows, ids=[row["id"] for row in rows])


@pytest.fixture
def inputs(row: dict[str, str]) -> dict[str, float]:
    """The numbers in a row's ``inputs`` cell."""
    return numbers_in(row["inputs"])


@pytest.fixture
def expected(row: dict[str, str]) -> float:
    """A row's published or independently computed value."""
    return float(row["expected"])
