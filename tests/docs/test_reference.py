"""The reference pages say what the code does now: generated pages, commands as shown, keys and their ranges."""

import importlib.util
import os
import re
import shlex
import shutil
import subprocess
import sys
from pathlib import Path
from typing import get_args

import pytest
from pydantic import BaseModel

from thermfix.inspection.schema import InspectionTable
from thermfix.quantities import QUANTITIES

ROOT = Path(__file__).parents[2]
DOCS = ROOT / "docs"


def pages():
    spec = importlib.util.spec_from_file_location("make_reference", DOCS / "make_reference.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module.PAGES


@pytest.mark.parametrize("name", ["csv-columns.md", "cautions.md", "quantities.md"])
def test_committed_page_is_current(name):
    assert (DOCS / "reference" / name).read_text(encoding="utf-8") == pages()[name]()


def test_commands_print_what_their_page_shows(tmp_path):
    """What is shown is printed; only where an ellipsis stands are lines left out."""
    shutil.copytree(ROOT / "sample_frames", tmp_path / "sample_frames", ignore=shutil.ignore_patterns("*.py"))
    (tmp_path / "my_round").mkdir()
    shutil.copy(ROOT / "sample_frames" / "heating" / "wall.csv", tmp_path / "my_round")
    page = (DOCS / "reference" / "commands.md").read_text(encoding="utf-8")
    examples = re.findall(r"```console\n\$ thermfix (.*?)\n(.*?)```", page, re.DOTALL)
    assert len(examples) == 7
    for command, shown in examples:
        words = [sys.executable, "-m", "thermfix", *shlex.split(command)]
        environment = os.environ | {"PYTHONPATH": str(ROOT)}
        done = subprocess.run(
            words, cwd=tmp_path, env=environment, capture_output=True, text=True, check=True, timeout=120
        )
        printed = "".join(f"{line.rstrip()}\n" for line in done.stdout.rstrip().splitlines())
        parts = [re.escape(part) for part in shown.split("…\n")]
        assert re.fullmatch("(?:.*\n)*".join(parts), printed), f"{command}\n{done.stdout}"


def models_of(annotation):
    """Yield every table that a key's type holds."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        yield annotation
    for inner in get_args(annotation):
        yield from models_of(inner)


def keys_of(table, done):
    """Return the keys of a table of the inspection file and of all tables in it."""
    if table in done:
        return set()
    done.add(table)
    found = set(table.model_fields)
    for one in table.model_fields.values():
        for inner in models_of(one.annotation):
            found |= keys_of(inner, done)
    return found


def test_every_key_of_the_inspection_file_is_described():
    page = (DOCS / "reference" / "inspection-file.md").read_text(encoding="utf-8")
    rows = re.sub(r"```toml\n.*?```", "", page, flags=re.DOTALL)
    keys = keys_of(InspectionTable, set())
    assert {"band_um", "source_angle_deg", "other_frame", "radius_px", "valid_c", "u_k"} <= keys
    for key in keys:
        assert re.search(rf"(?<![\w-]){key}(?![\w-])", rows), key


def test_ranges_of_the_inspection_file_are_those_that_are_checked():
    page = (DOCS / "reference" / "inspection-file.md").read_text(encoding="utf-8").replace("−", "-")
    rows = re.findall(r"^\|(?: `\w+`:| or `\w+`:)? `(\w+)` \| number[^|]*\|(.*)\|$", page, re.MULTILINE)
    compared = 0
    for key, rest in rows:
        if key not in QUANTITIES:
            continue
        row = QUANTITIES[key]
        low, high = re.search(r"(?:more than |above )?(-?[\d.e]+) to (-?[\d.e]+)", rest).groups()
        assert (float(low), float(high)) == (row.low, row.high), key
        compared += 1
    assert compared > 30
