"""The generated reference pages are those that the code gives now."""

import importlib.util
from pathlib import Path

import pytest

DOCS = Path(__file__).parents[2] / "docs"


def pages():
    spec = importlib.util.spec_from_file_location("make_reference", DOCS / "make_reference.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module.PAGES


@pytest.mark.parametrize("name", ["csv-columns.md", "cautions.md", "quantities.md"])
def test_committed_page_is_current(name):
    assert (DOCS / "reference" / name).read_text(encoding="utf-8") == pages()[name]()
