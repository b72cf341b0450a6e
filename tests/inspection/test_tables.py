"""The small CSV reader: every fault with its line, every column in its range."""

import hashlib

import pytest

from thermfix.errors import InspectionError
from thermfix.inspection import read_table

RESPONSE = ("wavelength_um", "response")
SHOTS = ("temperature_c", "counts")
NK = ("wavelength_um", "n", "k")


def faults_of(path, text, columns, **named):
    path.write_bytes(text if isinstance(text, bytes) else text.encode())
    with pytest.raises(InspectionError) as caught:
        read_table(path, columns, **named)
    return [(fault.line, fault.message) for fault in caught.value.faults]


def test_a_good_table(tmp_path):
    path = tmp_path / "r.csv"
    data = "\ufeff# made up\r\n\r\nwavelength_um, response\r\n7.5, 0\r\n# middle\r\n1e1,1.\r\n14,+.5\r\n".encode()
    path.write_bytes(data)
    table = read_table(path, RESPONSE)
    assert table.columns["wavelength_um"].tolist() == [7.5, 10, 14]
    assert table.columns["response"].tolist() == [0, 1, 0.5]
    assert (table.source, table.sha256) == ("r.csv", hashlib.sha256(data).hexdigest())
    with pytest.raises(ValueError, match="read-only"):
        table.columns["response"][0] = 3


def test_celsius_becomes_kelvin_and_repeated_shots_pass(tmp_path):
    (tmp_path / "t.csv").write_text("temperature_c,counts\n100,7\n20,3\n20,3.5\n")
    columns = read_table(tmp_path / "t.csv", SHOTS).columns
    assert list(columns) == ["temperature_k", "counts"]
    assert columns["temperature_k"].tolist() == [373.15, 293.15, 293.15]


CASES = {
    "header": ("wavelength,response\n1,2\n", RESPONSE, 1, "the header must be wavelength_um,response, not"),
    "order": ("response,wavelength_um\n1,2\n", RESPONSE, 1, "the header must be"),
    "nothing": ("# only words\n", RESPONSE, 0, "it holds no table"),
    "one row": ("wavelength_um,response\n7,1\n", RESPONSE, 0, "needs at least 2 rows of numbers, not 1"),
    "text": ("wavelength_um,response\n7,1\n8,high\n", RESPONSE, 3, "response must be a number"),
    "nan": ("wavelength_um,response\n7,nan\n8,1\n", RESPONSE, 2, "response must be a number"),
    "infinite": ("wavelength_um,response\n7,1\n8,1e999\n", RESPONSE, 3, "response is inf; it must lie in 0 to 1"),
    "underscore": ("wavelength_um,response\n7,1\n1_0,1\n", RESPONSE, 3, "wavelength_um must be a number"),
    "other digits": ("wavelength_um,response\n7,1\n٨,1\n", RESPONSE, 3, "wavelength_um must be a number"),
    "missing cell": ("wavelength_um,response\n7,1\n8\n", RESPONSE, 3, "needs 2 numbers, not 1"),
    "decimal comma": ("wavelength_um,response\n7,5,0,5\n8,1\n", RESPONSE, 2, "decimal points, not commas"),
    "percent": ("wavelength_um,response\n7,1\n8,95\n", RESPONSE, 3, "response is 95; it must lie in 0 to 1"),
    "negative": ("wavelength_um,response\n7,1\n8,-0.1\n", RESPONSE, 3, "response is -0.1"),
    "all zero": ("wavelength_um,response\n7,0\n8,0\n", RESPONSE, 0, "response is 0 in every row"),
    "falling": ("wavelength_um,response\n7,1\n\n# note\n7,1\n", RESPONSE, 5, "must rise from row to row; 7 follows 7"),
    "no index": ("wavelength_um,n,k\n7,0,1\n8,1,1\n", NK, 2, "n is 0"),
    "below absolute zero": ("temperature_c,counts\n-300,1\n8,2\n", SHOTS, 2, "temperature_c is -300"),
    "control characters": ("\x1b[31m\n7,1\n", RESPONSE, 1, r"not \x1b[31m"),
}


@pytest.mark.parametrize("case", CASES)
def test_one_fault(tmp_path, case):
    text, columns, line, sentence = CASES[case]
    ((found, message),) = faults_of(tmp_path / "t.csv", text, columns)
    assert found == line
    assert sentence in message


def test_counts_that_must_rise(tmp_path):
    text = "temperature_c,counts\n10,5\n20,4\n15,9\n"
    found = faults_of(tmp_path / "t.csv", text, SHOTS, rising=SHOTS)
    assert found == [
        (4, "temperature_c must rise from row to row; 15 follows 20."),
        (3, "counts must rise from row to row; 4 follows 5."),
    ]


def test_all_lines_at_once_but_not_without_end(tmp_path):
    text = "wavelength_um,response\n" + "x,1\n" * 50
    found = faults_of(tmp_path / "t.csv", text, RESPONSE)
    assert [line for line, _ in found] == [*range(2, 22), 0]
    assert found[-1][1] == "and 30 more lines are wrong."


def test_files_that_are_none(tmp_path):
    with pytest.raises(InspectionError, match="no such file"):
        read_table(tmp_path / "gone.csv", RESPONSE)
    with pytest.raises(InspectionError, match="no such file"):
        read_table(tmp_path, RESPONSE)
    assert faults_of(tmp_path / "t.csv", b"wavelength_um\n\xff", RESPONSE) == [(2, "the text is not UTF-8.")]
    with (tmp_path / "t.csv").open("wb") as stream:
        stream.truncate(16 * 2**20 + 1)
    with pytest.raises(InspectionError, match="larger than 16 MiB"):
        read_table(tmp_path / "t.csv", RESPONSE)


def test_faults_of_a_table_come_at_the_key_that_names_it(faults, folder):
    (folder / "b.csv").write_text("temperature_c,counts\n0,1\n10,x\n20,y\n")
    text = """format = "thermfix-inspection/1"
[camera]
band_um = [3, 5]
signal = { quantity = "counts" }
[camera.calibration]
model = "table"
file = "b.csv"
[[frames]]
file = "a.tif"
"""
    assert faults(text) == [
        (7, "camera.calibration.file", "b.csv, line 3: counts must be a number with a decimal point, not “x”."),
        (7, "camera.calibration.file", "b.csv, line 4: counts must be a number with a decimal point, not “y”."),
    ]
