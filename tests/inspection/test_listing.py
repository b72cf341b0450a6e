"""Frames of an inspection that lists none."""


def test_frame_files_of_the_folder_sorted(between, folder):
    for name in ("c.PNG", "d.csv", "notes.md", ".hidden.tif", "regions.csv", "a.surface_c.csv", "a.surface.tif"):
        (folder / name).write_bytes(b"x")
    (folder / "nk.csv").write_text("wavelength_um,n,k\n2,1,0\n15,1,0\n")
    (folder / "deep.tif").mkdir()
    outside = folder.parent / "outside.tif"
    outside.write_bytes(b"x")
    (folder / "out.tif").symlink_to(outside)
    found = between('[[regions]]\nname = "r"\nshape = { point = [1, 1] }\n[materials.m]\nnk = "./nk.csv"\n', tail="")
    assert [frame.file for frame in found.frames] == ["a.tif", "b.tif", "c.PNG", "d.csv"]
    assert all([region.name for region in frame.regions] == ["r"] for frame in found.frames)


def test_none_in_the_folder_and_an_empty_list(between_faults, folder):
    assert between_faults("frames = []\n", tail="") == [
        (3, "frames", "lists no frame; leave it out to take every frame file of the folder.")
    ]
    for file in folder.iterdir():
        file.unlink()
    assert between_faults("", tail="") == [(0, "frames", "no frame is listed, and the folder holds none.")]


def test_a_faulty_list_does_not_stand_for_the_folder(between_faults):
    assert between_faults("frames = 3\n", tail="") == [(3, "frames", "must be a list, not a number.")]
