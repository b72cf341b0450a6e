"""Lines of keys in odd layouts, and against the plain data of random documents."""

import tomllib

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.inspection.lines import key_lines, line_of
from thermfix.inspection.writing import toml_key, toml_value

ODD = '''# a comment with [brackets] = and "quotes
a.b."c d" = 1   # dotted
text = """
[not.a.table]
x = 1 # \\""" still text
"""
raw = \'\'\'
[[nor.this]]
\'\'\'
list = [
  1,   # one
  # nothing here
  [2, 3],
  { deep = "]", deeper = { x = 1 } },
]

[ table . "x.y" ]
'literal key' = '#]'
date = 2026-03-01T08:00:00

[[frames]]
file = "a"
[frames.scene]
air_c = 1
[[frames.regions]]
name = "first"
[[frames.regions]]
name = "second"
[[frames]]
file = "b"
regions = [{ name = "third" },
           { name = "fourth" }]
'''
EXPECTED = {
    ("a",): 2,
    ("a", "b", "c d"): 2,
    ("text",): 3,
    ("raw",): 7,
    ("list",): 10,
    ("list", 0): 11,
    ("list", 1): 13,
    ("list", 1, 1): 13,
    ("list", 2, "deep"): 14,
    ("list", 2, "deeper", "x"): 14,
    ("table",): 17,
    ("table", "x.y"): 17,
    ("table", "x.y", "literal key"): 18,
    ("table", "x.y", "date"): 19,
    ("frames", 0): 21,
    ("frames", 0, "scene", "air_c"): 24,
    ("frames", 0, "regions", 0, "name"): 26,
    ("frames", 0, "regions", 1, "name"): 28,
    ("frames", 1, "file"): 30,
    ("frames", 1, "regions", 0, "name"): 31,
    ("frames", 1, "regions", 1, "name"): 32,
}


def paths_in(data, path=()):
    """Return the paths of everything in plain data."""
    items = data.items() if isinstance(data, dict) else enumerate(data) if isinstance(data, list) else ()
    return {place for key, one in items for place in {(*path, key)} | paths_in(one, (*path, key))}


@pytest.mark.parametrize("ends", ["\n", "\r\n"])
def test_odd_layouts(ends):
    text = ODD.replace("\n", ends)
    lines = key_lines(text)
    assert {path: lines[path] for path in EXPECTED} == EXPECTED
    assert set(lines) == paths_in(tomllib.loads(text))


def test_nearest_key_around():
    lines = {("a",): 3, ("a", "b"): 4}
    assert line_of(lines, ("a", "b", "c", 1)) == 4
    assert line_of(lines, ("x",)) == 0
    assert line_of(lines, ()) == 0


keys = st.text(max_size=6).filter(lambda text: text.isprintable())
scalars = st.one_of(st.integers(-9, 9), st.booleans(), st.floats(allow_nan=False), keys)
values = st.recursive(
    scalars, lambda inner: st.lists(inner, max_size=3) | st.dictionaries(keys, inner, max_size=3), max_leaves=8
)


@given(st.dictionaries(keys, values, max_size=4), st.lists(st.dictionaries(keys, values, max_size=2), max_size=3))
@settings(max_examples=150)
def test_every_path_of_random_documents_has_its_line(table, frames):
    """One pair a line, so that the line of each pair is known beforehand."""
    written, expected = [], {}
    for header, one in [("[table]", table), *(("[[frames]]", frame) for frame in frames)]:
        written += ["# [comment", header]
        count = sum(line == "[[frames]]" for line in written)
        above = ("table",) if header == "[table]" else ("frames", count - 1)
        for key, value in one.items():
            written.append(f"{toml_key(key)} = {toml_value(value)} # ]")
            expected |= {path: len(written) for path in {(*above, key)} | paths_in(value, (*above, key))}
    text = "\n".join(written)
    lines = key_lines(text)
    assert set(lines) == paths_in(tomllib.loads(text))
    assert {path: lines[path] for path in expected} == expected
