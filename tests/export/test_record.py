"""record.json: plain JSON, the same bytes for the same record."""

import json
from datetime import UTC, datetime
from enum import StrEnum
from pathlib import Path, PurePosixPath

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from thermfix.errors import InputError
from thermfix.export import write_record

GOLDEN = Path(__file__).parent / "golden"


class Colour(StrEnum):
    RED = "red"


def test_golden(tmp_path):
    record = {
        "format": "thermfix-record/1",
        "written": datetime(2026, 3, 1, 8, tzinfo=UTC),
        "files": (PurePosixPath("rooms/größe.tif"),),
        "number": 0.1,
        "whole": np.int64(7),
        "array": np.array([[1.5, np.nan], [np.inf, -2.0]]),
        "nothing": None,
        "yes": True,
        "colour": Colour.RED,
        "empty": {},
    }
    write_record(tmp_path / "r.json", record)
    assert (tmp_path / "r.json").read_bytes() == (GOLDEN / "record.json").read_bytes()


json_like = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats(allow_nan=False, allow_infinity=False) | st.text(),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(), inner, max_size=4),
    max_leaves=12,
)


@given(record=st.dictionaries(st.text(), json_like, max_size=4))
def test_reads_back_to_the_last_bit_and_in_order(tmp_path_factory, record):
    path = tmp_path_factory.mktemp("record") / "r.json"
    write_record(path, record)
    back = json.loads(path.read_text(encoding="utf-8"))
    assert back == record
    assert list(back) == list(record)


def test_a_file_name_that_is_not_text(tmp_path):
    write_record(tmp_path / "r.json", {"file": "roof\udce4.tif"})
    assert json.loads((tmp_path / "r.json").read_text(encoding="utf-8")) == {"file": "roof\udce4.tif"}


@pytest.mark.parametrize(
    ("record", "where"), [({"a": {"b": [1, object()]}}, r"record\.a\.b\[1\]"), ({"a": {1: 2}}, r"record\.a")]
)
def test_what_json_cannot_hold_is_named(tmp_path, record, where):
    with pytest.raises(TypeError, match=where):
        write_record(tmp_path / "r.json", record)
    assert list(tmp_path.iterdir()) == []


def test_an_existing_record_needs_force(tmp_path):
    write_record(tmp_path / "r.json", {"a": 1})
    with pytest.raises(InputError, match="exists already"):
        write_record(tmp_path / "r.json", {"a": 2})
    write_record(tmp_path / "r.json", {"a": 2}, force=True)
    assert json.loads((tmp_path / "r.json").read_text()) == {"a": 2}
