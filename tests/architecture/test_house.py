"""The house rules, checked: format, lint, types, floors, file sizes, start-up imports, and words."""

import ast
import re
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
SOURCES = sorted((ROOT / "thermfix").rglob("*.py"))
MOST_LINES, MOST_NAMES = 400, 12


def run(*command: str) -> None:
    done = subprocess.run([sys.executable, "-m", *command], cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr


def test_format():
    run("ruff", "format", "--check", "--no-cache", ".")


def test_lint():
    run("ruff", "check", "--no-cache", ".")


def test_types(tmp_path):
    run("mypy", "--cache-dir", str(tmp_path))


def test_floors():
    """Imports only point down (contracts in pyproject.toml)."""
    code = "from importlinter.cli import lint_imports; import sys; sys.exit(lint_imports(no_cache=True))"
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr


@pytest.mark.parametrize("path", SOURCES, ids=lambda path: str(path.relative_to(ROOT)))
def test_one_idea_a_file(path):
    """A file that outgrows these holds more than one idea."""
    text = path.read_text(encoding="utf-8")
    assert text.count("\n") <= MOST_LINES
    names = [
        node.name
        for node in ast.parse(text).body
        if isinstance(node, ast.FunctionDef | ast.ClassDef) and not node.name.startswith("_")
    ]
    assert len(names) <= MOST_NAMES, names


@pytest.mark.parametrize(
    ("statement", "kept_out"),
    [
        ("import thermfix", {"numpy", "scipy", "textual", "rich", "pydantic", "typer", "tifffile", "PIL"}),
        (
            "from thermfix import Band, load_frame, load_inspection, correct",
            {"scipy.optimize", "scipy.stats", "scipy.interpolate", "scipy.ndimage", "textual", "tifffile", "PIL"},
        ),
        ("import thermfix.cli.main", {"scipy.optimize", "scipy.stats", "textual", "rich", "tifffile", "PIL", "jinja2"}),
    ],
)
def test_start_up_loads_no_more_than_it_needs(statement, kept_out):
    code = f"{statement}\nimport sys\nprint('\\n'.join(sys.modules))"
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    loaded = set(done.stdout.split())
    assert not {name for name in kept_out if name in loaded}


def test_ci_runs_the_command_of_the_readme():
    """What the README tells a newcomer to type is what every submission runs."""
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    command = re.search(r"python3 -m venv \.venv.*pytest.*", readme)
    assert command, "the README shows no test command"
    assert command.group(0).strip() in (ROOT / ".ci" / "run").read_text(encoding="utf-8")
