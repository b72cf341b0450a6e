"""A folder with two frames, and what an inspection text in it comes to."""

from collections.abc import Callable
from pathlib import Path

import pytest

from thermfix.errors import InspectionError
from thermfix.inspection import read_inspection
from thermfix.model import Inspection

HEAD = """format = "thermfix-inspection/1"
camera = { band_um = [7.5, 14.0], signal = { quantity = "temperature", unit = "C" } }
"""
TAIL = """
[[frames]]
file = "a.tif"
"""


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """A folder with frames a.tif and b.tif (never opened here)."""
    for name in ("a.tif", "b.tif"):
        (tmp_path / name).write_bytes(b"frame")
    return tmp_path


@pytest.fixture
def read(folder: Path) -> Callable[..., Inspection]:
    """Read a whole text."""

    def read_text(text: str) -> Inspection:
        return read_inspection(text, folder / "inspection.toml")

    return read_text


@pytest.fixture
def between(read) -> Callable[..., Inspection]:
    """Read a text between a valid beginning (2 lines) and one frame."""
    return lambda text, tail=TAIL: read(HEAD + text + tail)


@pytest.fixture
def faults(read) -> Callable[..., list[tuple[int, str, str]]]:
    """Return the faults of a whole text."""

    def faults_of(text: str) -> list[tuple[int, str, str]]:
        with pytest.raises(InspectionError) as caught:
            read(text)
        return [(fault.line, fault.key, fault.message) for fault in caught.value.faults]

    return faults_of


@pytest.fixture
def between_faults(faults) -> Callable[..., list[tuple[int, str, str]]]:
    """Return the faults of a text that begins in line 3 and is followed by one frame."""
    return lambda text, tail=TAIL: faults(HEAD + text + tail)
