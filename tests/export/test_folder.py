"""The output folder is checked before any work."""

import os

import pytest

from thermfix.errors import InputError
from thermfix.export import claim_output


def test_makes_the_folder_and_its_parents(tmp_path):
    claim_output(tmp_path / "a" / "b", ["regions.csv"])
    assert (tmp_path / "a" / "b").is_dir()
    claim_output(tmp_path / "a" / "b", iter(["regions.csv"]))


def test_other_files_do_no_harm(tmp_path):
    (tmp_path / "notes.txt").write_text("mine")
    claim_output(tmp_path, ["regions.csv"])
    assert (tmp_path / "notes.txt").read_text() == "mine"


def test_names_the_first_five_of_all(tmp_path):
    names = [f"{number}.csv" for number in range(8)]
    for name in names[1:]:
        (tmp_path / name).write_text("")
    with pytest.raises(InputError, match=r"7 outputs exist already .*: 1\.csv, 2\.csv, .*5\.csv and 2 more") as caught:
        claim_output(tmp_path, [*names, *names])
    assert caught.value.exit_code == 2
    assert "--force" in caught.value.hint
    claim_output(tmp_path, names, force=True)


def test_one_is_named_alone(tmp_path):
    (tmp_path / "regions\x1b.csv").write_text("")
    with pytest.raises(InputError, match=r"An output exists already in .*: regions\\x1b\.csv\."):
        claim_output(tmp_path, ["regions\x1b.csv", "record.json"])


def test_a_dangling_link_counts(tmp_path):
    os.symlink(tmp_path / "nowhere", tmp_path / "regions.csv")
    with pytest.raises(InputError, match=r"regions\.csv"):
        claim_output(tmp_path, ["regions.csv"])


def test_force_does_not_overwrite_a_folder(tmp_path):
    (tmp_path / "regions.csv").mkdir()
    with pytest.raises(InputError, match="is a folder, not a file"):
        claim_output(tmp_path, ["regions.csv"], force=True)


@pytest.mark.parametrize("inside", ["", "deeper"])
def test_a_file_in_the_way(tmp_path, inside):
    (tmp_path / "out").write_text("mine")
    with pytest.raises(InputError) as caught:
        claim_output(tmp_path / "out" / inside, ["regions.csv"], force=True)
    assert "out" in str(caught.value)
    assert caught.value.hint
    assert (tmp_path / "out").read_text() == "mine"
