"""What the documentation shows is what the program does: output, links, code, TOML, and every name it must know."""

import doctest
import re
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

from thermfix.correction.cautions import CAUTIONS
from thermfix.export import BUDGET, PIXELS, REGIONS, TREND
from thermfix.inspection import load_inspection
from thermfix.quantities import QUANTITIES

ROOT = Path(__file__).parents[2]
PAGES = [
    ROOT / "README.md",
    ROOT / "DEVELOPERS.md",
    ROOT / "sample_frames" / "README.md",
    *sorted((ROOT / "docs").rglob("*.md")),
]


def thermfix(*words, cwd=ROOT):
    command = [sys.executable, "-m", "thermfix", *words]
    return subprocess.run(command, cwd=cwd, capture_output=True, text=True, check=True, timeout=120)


def test_readme_shows_the_real_output(tmp_path):
    shown = re.search(r"```text\n(.*?)```", (ROOT / "README.md").read_text(encoding="utf-8"), re.DOTALL).group(1)
    done = thermfix("correct", "sample_frames/substation", "--out", str(tmp_path / "corrected"))
    assert shown == done.stdout


@pytest.mark.parametrize("page", PAGES, ids=lambda page: str(page.relative_to(ROOT)))
def test_links_lead_somewhere(page):
    text = page.read_text(encoding="utf-8")
    for target in re.findall(r"\]\(([^)#\s]+)(?:#[^)]*)?\)", text):
        if not target.startswith(("http://", "https://", "mailto:")):
            assert (page.parent / target).exists(), target


@pytest.mark.parametrize("page", PAGES, ids=lambda page: str(page.relative_to(ROOT)))
def test_python_on_the_page_runs(page, monkeypatch):
    monkeypatch.chdir(ROOT)
    failed, _ = doctest.testfile(str(page), module_relative=False, encoding="utf-8", optionflags=doctest.ELLIPSIS)
    assert failed == 0


@pytest.mark.parametrize("page", PAGES, ids=lambda page: str(page.relative_to(ROOT)))
def test_toml_on_the_page_is_toml(page):
    for block in re.findall(r"```toml\n(.*?)```", page.read_text(encoding="utf-8"), re.DOTALL):
        tomllib.loads(block)


def reference(name):
    return (ROOT / "docs" / "reference" / name).read_text(encoding="utf-8")


@pytest.mark.parametrize("command", ["correct", "explain", "check", "new", "info", "materials", "calibrate"])
def test_every_command_and_option_is_described(command):
    page = reference("commands.md")
    assert f"## thermfix {command}" in page
    section = page.split(f"## thermfix {command}")[1].split("\n## ")[0]
    for option in set(re.findall(r"(?<![\w-])--[a-z-]+", thermfix(command, "--help").stdout)) - {"--help"}:
        assert f"`{option}" in section, option


def test_every_column_is_described():
    page = reference("csv-columns.md")
    for table in (REGIONS, PIXELS, TREND, BUDGET):
        for column in table:
            assert f"| `{column.name}` | {column.meaning} |" in page


def test_every_caution_is_described():
    page = reference("cautions.md")
    for row in CAUTIONS.values():
        assert f"| `{row.code}` | {row.rule} | {row.sentence} | {row.advice} |" in page


def test_every_quantity_is_described():
    page = reference("quantities.md")
    for row in QUANTITIES.values():
        assert f"| `{row.key}` | {row.symbol} | {row.unit} |" in page


def test_tutorial_as_it_is_written(tmp_path):
    """The commands of the tutorial on its own file give the outputs it shows."""
    page = (ROOT / "docs" / "tutorials" / "first-correction.md").read_text(encoding="utf-8")
    shown = re.findall(r"```text\n(.*?)```", page, re.DOTALL)
    (tmp_path / "pipe_elbow.tif").write_bytes((ROOT / "sample_frames" / "heating" / "pipe_elbow.tif").read_bytes())
    assert thermfix("info", "pipe_elbow.tif", cwd=tmp_path).stdout.rstrip() == shown[0].rstrip()
    (tmp_path / "inspection.toml").write_text(
        re.search(r"```toml\n(.*?)```", page, re.DOTALL).group(1), encoding="utf-8"
    )
    assert thermfix("check", ".", cwd=tmp_path).stdout.rstrip() == shown[2].rstrip()
    assert thermfix("correct", ".", "--out", "out", cwd=tmp_path).stdout.rstrip() == shown[3].rstrip()
    assert thermfix("explain", ".", "flange", cwd=tmp_path).stdout.rstrip() == shown[4].rstrip()


def test_complete_inspections_on_the_pages_load(tmp_path):
    for page in PAGES:
        for block in re.findall(r"```toml\n(# complete\n.*?)```", page.read_text(encoding="utf-8"), re.DOTALL):
            for frame in tomllib.loads(block)["frames"]:
                (tmp_path / frame["file"]).write_bytes(b"x")
            (tmp_path / "inspection.toml").write_text(block, encoding="utf-8")
            assert load_inspection(tmp_path).frames
