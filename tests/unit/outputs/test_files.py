"""How the output files come to stand in their folder."""

import re

import pytest
from output_builders import step_file

from ifcaudit.errors import ModelFileError, UsageError
from ifcaudit.outputs import files, to_csv, to_ifc

NAMES = ["audit.json", "beams.csv", "failures.csv", "tower.audited.ifc"]


def names_in(folder):
    """Return the names of everything in a folder, hidden files included."""
    return sorted(path.name for path in folder.iterdir())


def test_the_four_files_are_written(tmp_path, model, audit):
    """All outputs stand in a new folder under their names, nothing else does, and the model is as it was."""
    before = model.read_bytes()
    out = tmp_path / "new" / "tower-audit"
    assert {path.name for path in files.write_all(audit, model, out, "si")} >= set(NAMES)
    assert set(names_in(out)) >= set(NAMES)
    assert not [name for name in names_in(out) if name.startswith(".")]
    assert model.read_bytes() == before
    assert names_in(tmp_path) == ["new", "tower.ifc"]


def test_same_bytes_twice(tmp_path, model, audit):
    """Two runs give the same bytes in every file, and a second run into the same folder replaces the first."""
    first = {path.name: path.read_bytes() for path in files.write_all(audit, model, tmp_path / "a", "us")}
    files.write_all(audit, model, tmp_path / "b", "si")
    second = {path.name: path.read_bytes() for path in files.write_all(audit, model, tmp_path / "b", "us")}
    assert first == second


def test_auditing_an_audited_model_keeps_its_name(tmp_path, audit):
    """The audited copy of tower.audited.ifc is tower.audited.ifc again, equal to the first."""
    (tmp_path / "tower.ifc").write_bytes(step_file())
    files.write_all(audit, tmp_path / "tower.ifc", tmp_path / "one", "si")
    first = tmp_path / "one" / "tower.audited.ifc"
    files.write_all(audit, first, tmp_path / "two", "si")
    assert (tmp_path / "two" / "tower.audited.ifc").read_bytes() == first.read_bytes()


def test_never_onto_the_model(tmp_path, audit):
    """Where the audited copy would replace the model audited, nothing is written."""
    source = tmp_path / "tower.audited.ifc"
    source.write_bytes(step_file())
    with pytest.raises(UsageError) as caught:
        files.write_all(audit, source, tmp_path, "si")
    assert str(caught.value) == (
        f"{source}: the results would overwrite the model that was audited; choose another folder with --out"
    )
    assert (names_in(tmp_path), source.read_bytes()) == (["tower.audited.ifc"], step_file())


def test_out_is_a_file(tmp_path, model, audit):
    """An existing file as --out is refused."""
    out = tmp_path / "notes.txt"
    out.write_text("mine")
    with pytest.raises(UsageError, match=re.escape(f"{out}: is a file; --out takes a folder")):
        files.write_all(audit, model, out, "si")
    assert out.read_text() == "mine"


def test_out_below_a_file(tmp_path, model, audit):
    """A folder that cannot be made gives one message."""
    with pytest.raises(UsageError, match="the folder cannot be made"):
        files.write_all(audit, model, model / "sub", "si")


def test_folder_in_the_way(tmp_path, model, audit):
    """A folder named like a result is refused before anything is written."""
    (tmp_path / "out" / "beams.csv").mkdir(parents=True)
    with pytest.raises(UsageError, match=r"beams\.csv: is a folder where a result has to be written"):
        files.write_all(audit, model, tmp_path / "out", "si")
    assert names_in(tmp_path / "out") == ["beams.csv"]


@pytest.mark.parametrize("exists", [False, True])
def test_a_full_disk_leaves_nothing_half_written(tmp_path, model, audit, monkeypatch, exists):
    """If one file cannot be written the folder is as before: absent, or with the results it held."""
    out = tmp_path / "out"
    if exists:
        files.write_all(audit, model, out, "si")
    before = {path.name: path.read_bytes() for path in out.iterdir()} if exists else None

    def full(*_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(to_ifc, "FILES", {"{model}.audited.ifc": full})
    with pytest.raises(UsageError) as caught:
        files.write_all(audit, model, out, "us")
    message = f"{out}: the results cannot be written (No space left on device); nothing was changed"
    assert str(caught.value) == message
    assert ({path.name: path.read_bytes() for path in out.iterdir()} if out.exists() else None) == before


def test_a_file_that_cannot_be_moved_puts_the_others_back(tmp_path, model, audit, monkeypatch):
    """If a result cannot be moved into place, those moved before it give way to what stood there."""
    out = tmp_path / "out"
    files.write_all(audit, model, out, "si")
    before = {path.name: path.read_bytes() for path in out.iterdir()}

    def unlink_after_writing(audit, source, target, units):
        to_csv.write(audit, target, units=units)
        target.unlink()

    monkeypatch.setattr(to_ifc, "FILES", {"{model}.audited.ifc": unlink_after_writing})
    with pytest.raises(UsageError, match="nothing was changed"):
        files.write_all(audit, model, out, "us")
    assert {path.name: path.read_bytes() for path in out.iterdir()} == before


def test_a_model_that_is_no_step_file(tmp_path, audit):
    """A compressed model is refused and no output folder is left behind."""
    source = tmp_path / "tower.ifczip"
    source.write_bytes(b"PK\x03\x04")
    with pytest.raises(ModelFileError, match="STEP files"):
        files.write_all(audit, source, tmp_path / "out", "si")
    assert names_in(tmp_path) == ["tower.ifczip"]


def test_an_output_is_found_by_its_file_name():
    """The writers come from the modules named to_*, and their functions follow the interface of the package."""
    writers = files.discover()
    assert {"audit.json", "beams.csv", "failures.csv", "{model}.audited.ifc"} <= set(writers)
    assert all(callable(writer) for writer in writers.values())


def test_units_reach_the_tables(tmp_path, model, audit):
    """The system of units chosen decides the headings of both tables."""
    files.write_all(audit, model, tmp_path / "out", "us")
    for name in ("beams.csv", "failures.csv"):
        assert "span_ft" in (tmp_path / "out" / name).read_text(encoding="utf-8").splitlines()[0]
