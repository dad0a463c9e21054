"""Where a run may be written: nothing is lost, nobody writes into another's file, every refusal says why."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

from toeline.errors import RunError, UsageError
from toeline.results.netcdf_writer import NetcdfSink


@pytest.fixture
def sink(invented_run):
    """Make a sink for a path; give back the sink."""

    def make(path, *, overwrite=False):
        run = invented_run(steps=3)
        return NetcdfSink(path, run.static(), run.attributes, run.start, overwrite)

    return make


@pytest.fixture
def finish(invented_run):
    return lambda sink: invented_run(steps=3).write_to(sink)


def names_in(directory: Path) -> list[str]:
    return sorted(path.name for path in directory.iterdir())


def test_a_finished_run_is_kept(sink, finish, tmp_path):
    finish(sink(tmp_path / "run.nc"))
    before = (tmp_path / "run.nc").read_bytes()
    with pytest.raises(UsageError, match=r"run\.nc exists and is kept"):
        sink(tmp_path / "run.nc")
    assert (tmp_path / "run.nc").read_bytes() == before
    assert names_in(tmp_path) == ["run.nc"]


def test_overwriting_keeps_the_finished_run_until_the_new_one_is_complete(sink, finish, tmp_path):
    finish(sink(tmp_path / "run.nc"))
    before = (tmp_path / "run.nc").read_bytes()
    second = sink(tmp_path / "run.nc", overwrite=True)
    second.close("stopped at noon: interrupted")
    assert (tmp_path / "run.nc").read_bytes() == before
    assert names_in(tmp_path) == ["run.nc", "run.nc.partial"]


def test_overwriting_replaces_the_finished_run(sink, finish, tmp_path):
    finish(sink(tmp_path / "run.nc"))
    finish(sink(tmp_path / "run.nc", overwrite=True))
    assert names_in(tmp_path) == ["run.nc"]


def test_other_files_are_never_overwritten(sink, tmp_path):
    (tmp_path / "canal.toml").write_text('name = "Quillmere main canal"')
    with pytest.raises(UsageError, match="no NetCDF-4 file and is kept"):
        sink(tmp_path / "canal.toml", overwrite=True)


def test_an_unfinished_run_is_kept(sink, finish, tmp_path):
    sink(tmp_path / "run.nc").close("stopped at noon: interrupted")
    with pytest.raises(UsageError, match=r"run\.nc\.partial holds an unfinished run"):
        sink(tmp_path / "run.nc")


def test_an_unfinished_run_may_be_overwritten(sink, finish, tmp_path):
    sink(tmp_path / "run.nc").close("stopped at noon: interrupted")
    finish(sink(tmp_path / "run.nc", overwrite=True))
    assert names_in(tmp_path) == ["run.nc"]


def test_what_a_kill_left_behind_does_not_block_the_next_run(sink, finish, tmp_path):
    (tmp_path / "run.nc.writing").write_bytes(b"\x89HDF\r\n\x1a\n half")
    (tmp_path / "run.nc.copying").write_bytes(b"half")
    finish(sink(tmp_path / "run.nc"))
    assert names_in(tmp_path) == ["run.nc"]


@pytest.mark.skipif(os.name == "nt", reason="Windows refuses to delete a file that is open")
@pytest.mark.parametrize("overwrite", [False, True])
def test_two_runs_never_write_one_file_at_once(sink, tmp_path, overwrite):
    program = f"""
from toeline.results.run_file import RunFile
from toeline.errors import UsageError
try:
    with RunFile({str(tmp_path / "run.nc")!r}, {overwrite}).claimed():
        print("claimed")
except UsageError as error:
    print(error)
"""
    first = sink(tmp_path / "run.nc")
    result = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    first.close("stopped at noon: interrupted")
    assert "another run is writing" in result.stdout


def test_a_file_that_appears_meanwhile_is_kept_and_so_is_the_run(sink, finish, tmp_path):
    running = sink(tmp_path / "run.nc")
    (tmp_path / "run.nc").write_text("somebody else's")
    with pytest.raises(RunError, match=r"complete run is in .*run\.nc\.partial"):
        finish(running)
    assert (tmp_path / "run.nc").read_text() == "somebody else's"
    assert names_in(tmp_path) == ["run.nc", "run.nc.partial"]


def test_a_run_whose_file_was_taken_away_never_touches_the_file_in_its_place(sink, finish, tmp_path):
    """Only where the file system has no locks can this happen."""
    running = sink(tmp_path / "run.nc")
    (tmp_path / "run.nc.writing").unlink()
    (tmp_path / "run.nc.writing").write_text("another run's")
    with pytest.raises(RunError, match="another run took the place of this one"):
        finish(running)
    assert (tmp_path / "run.nc.writing").read_text() == "another run's"
    assert not (tmp_path / "run.nc").exists()


def test_a_link_is_followed(sink, finish, tmp_path):
    (tmp_path / "archive").mkdir()
    (tmp_path / "today.nc").symlink_to(tmp_path / "archive" / "run.nc")
    finish(sink(tmp_path / "today.nc"))
    assert names_in(tmp_path / "archive") == ["run.nc"]
    assert (tmp_path / "today.nc").is_symlink()


@pytest.mark.parametrize("name", ["day 1 #2.nc", "Überlauf.nc", "https:run.nc", "run"])
def test_odd_names_work(sink, finish, tmp_path, name):
    finish(sink(tmp_path / name))
    assert names_in(tmp_path) == [name]


@pytest.mark.parametrize(
    ("name", "reason"),
    [
        ("missing/run.nc", "directory .*missing does not exist"),
        (".", "is a directory"),
        ("run.nc.partial", "kept for unfinished runs"),
        ("x" * 250 + ".nc", "name too long"),
        ("a\0b.nc", "cannot be a file name"),
        ("a\udcff.nc", "cannot be a file name"),
        ("pipe", "is a pipe or device"),
        ("taken.nc", "is in the way and is no file"),
    ],
)
def test_what_cannot_be_written_is_refused_with_its_reason(sink, tmp_path, name, reason):
    os.mkfifo(tmp_path / "pipe")
    (tmp_path / "taken.nc.partial").mkdir()
    with pytest.raises(UsageError, match=f"(?i){reason}"):
        sink(tmp_path / name, overwrite=True)
    assert names_in(tmp_path) == ["pipe", "taken.nc.partial"]


@pytest.mark.skipif(os.geteuid() == 0, reason="nothing is forbidden to the superuser")
def test_a_directory_without_permission_is_named(sink, tmp_path):
    tmp_path.chmod(0o555)
    with pytest.raises(UsageError, match="no permission in"):
        sink(tmp_path / "run.nc")
    tmp_path.chmod(0o755)
