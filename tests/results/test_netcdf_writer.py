"""The run file: the same as the dataset in memory, however blocks fall, and whole at every moment."""

import pickle
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
import xarray as xr

from toeline.errors import UsageError
from toeline.results import netcdf_writer
from toeline.results.dataset import DatasetSink, open_run
from toeline.results.netcdf_writer import NetcdfSink


def written(run, path, **options):
    run.write_to(NetcdfSink(path, run.static(), run.attributes, run.start), **options)
    with open_run(path) as opened:
        return opened.load()


def collected(run, **options):
    return run.write_to(DatasetSink(run.static(), run.attributes, run.start), **options).dataset


@pytest.mark.parametrize("changes", [{}, {"gates": 0}, {"offtakes": 0}, {"orders": 0}, {"steps": 1, "profiles": 1}])
def test_file_and_memory_hold_the_same_dataset(invented_run, tmp_path, changes):
    run = invented_run(**changes)
    from_file, from_memory = written(run, tmp_path / "run.nc"), collected(run)
    xr.testing.assert_identical(from_file, from_memory)
    assert dict(from_file.dtypes) == dict(from_memory.dtypes)


@pytest.mark.parametrize("rows", [1, 7, 99, 1000])
def test_blocks_of_any_length_give_the_same_file(invented_run, tmp_path, monkeypatch, rows):
    monkeypatch.setattr(netcdf_writer, "TIME_CHUNK", 20)
    run = invented_run()
    xr.testing.assert_identical(written(run, tmp_path / "run.nc", rows=rows), collected(run))


def test_copies_on_the_way_do_not_change_the_file(invented_run, tmp_path):
    run = invented_run()
    plain = written(run, tmp_path / "plain.nc")
    sink = NetcdfSink(tmp_path / "copied.nc", run.static(), run.attributes, run.start)
    for block in run.blocks(9):
        sink.write(block)
        sink.save_copy({})
    sink.close("complete", run.end_state())
    with open_run(tmp_path / "copied.nc") as copied:
        xr.testing.assert_identical(copied.load(), plain)


def test_two_runs_of_equal_input_give_equal_bytes(invented_run, tmp_path):
    for name in ("first.nc", "second.nc"):
        run = invented_run()
        run.write_to(NetcdfSink(tmp_path / name, run.static(), run.attributes, run.start))
    assert (tmp_path / "first.nc").read_bytes() == (tmp_path / "second.nc").read_bytes()


def test_values_come_back_as_given_to_the_stored_precision(invented_run, tmp_path):
    run = invented_run()
    opened = written(run, tmp_path / "run.nc")
    np.testing.assert_array_equal(opened["pool_volume"], run.values("pool_volume"))
    np.testing.assert_array_equal(opened["jet_depth"], run.values("jet_depth").astype("f4"))
    np.testing.assert_array_equal(opened["jump_state"], run.values("jump_state"))
    assert opened["order_reason"].values.tolist() == run.values("order_reason").tolist()


def test_both_input_files_come_back_unchanged(invented_run, tmp_path):
    run = invented_run()
    run.attributes["canal_file"] = "# Überfall\r\n" * 20_000
    assert written(run, tmp_path / "run.nc").attrs["canal_file"] == run.attributes["canal_file"]


def test_only_the_finished_file_remains(invented_run, tmp_path):
    written(invented_run(), tmp_path / "run.nc")
    assert [path.name for path in tmp_path.iterdir()] == ["run.nc"]


def test_a_run_that_stops_is_kept_as_partial_with_its_outcome(invented_run, tmp_path):
    run = invented_run()
    sink = NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)
    blocks = list(run.blocks(30))
    sink.write(blocks[0])
    sink.write(blocks[1])
    sink.close("stopped at 2031-05-04T01:00:00+02:00: no solution found")
    assert sink.written_path == tmp_path / "run.nc.partial"
    assert [path.name for path in tmp_path.iterdir()] == ["run.nc.partial"]
    with open_run(sink.written_path) as opened:
        assert opened.attrs["outcome"] == "stopped at 2031-05-04T01:00:00+02:00: no solution found"
        assert opened.sizes["time"] == 60
        assert "end_level" not in opened


def test_closing_twice_changes_nothing(invented_run, tmp_path):
    run = invented_run()
    sink = run.write_to(NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start))
    sink.close("stopped at some time: too late to say so")
    with open_run(sink.written_path) as opened:
        assert opened.attrs["outcome"] == "complete"


def test_the_partial_file_opens_while_the_run_goes_on(invented_run, tmp_path):
    run = invented_run()
    sink = NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)
    with open_run(sink.written_path) as opened:
        assert opened.sizes["time"] == 0
        assert opened.attrs["outcome"].startswith("unfinished")
    sink.close("complete", run.end_state())


def test_an_interrupt_while_writing_loses_no_row(invented_run, tmp_path, monkeypatch):
    monkeypatch.setattr(netcdf_writer, "TIME_CHUNK", 20)
    run = invented_run(steps=40)
    sink = NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)
    flush = NetcdfSink._flush

    def interrupted(sink, dimension):
        flush(sink, dimension)
        raise KeyboardInterrupt

    monkeypatch.setattr(NetcdfSink, "_flush", interrupted)
    with pytest.raises(KeyboardInterrupt):
        sink.write(next(run.blocks(20)))
    monkeypatch.setattr(NetcdfSink, "_flush", flush)
    sink.close("stopped at 2031-05-04T00:20:00+02:00: interrupted")
    with open_run(sink.written_path) as opened:
        np.testing.assert_array_equal(opened["pool_volume"], run.values("pool_volume")[:20])


def test_fixed_values_that_do_not_fit_leave_no_file(invented_run, tmp_path):
    run = invented_run()
    static = run.static()
    del static["bank_level"]
    with pytest.raises(ValueError, match="bank_level"):
        NetcdfSink(tmp_path / "run.nc", static, run.attributes, run.start)
    assert list(tmp_path.iterdir()) == []


def test_a_disk_that_is_full_from_the_start_leaves_no_file(invented_run, tmp_path, monkeypatch):
    def fail(*_):
        raise RuntimeError("NetCDF: HDF error")  # what netCDF4 raises then

    monkeypatch.setattr(NetcdfSink, "_define", fail)
    run = invented_run()
    with pytest.raises(UsageError, match=r"cannot be written: NetCDF: HDF error; .* MB of disk are free"):
        NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)
    assert list(tmp_path.iterdir()) == []


@pytest.fixture
def endless_writer(invented_run, tmp_path):
    """A process that writes an invented run over and over, and that run."""
    run = invented_run(steps=720)
    pickle_path = tmp_path / "run.pickle"
    pickle_path.write_bytes(pickle.dumps((run.static(), run.attributes, run.start, list(run.blocks(90)))))

    def start(*limit):
        program = Path(__file__).with_name("endless_writer.py")
        arguments = [sys.executable, str(program), str(pickle_path), str(tmp_path / "run.nc"), *limit]
        return subprocess.Popen(arguments, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)

    return start, run


def check_rows(partial, run, safe):
    """One line of xarray opens it; it holds at least the safe rows, and every row is right."""
    with xr.open_dataset(partial) as opened:
        steps = opened.sizes["time"]
        assert steps >= safe
        assert (np.diff(opened["time"]) == np.timedelta64(1, "m")).all()
        np.testing.assert_array_equal(opened["pool_volume"], np.resize(run.values("pool_volume"), (steps, run.pools)))
        assert opened.attrs["outcome"].startswith("unfinished")


def test_a_killed_run_opens_with_every_row_it_had_made_safe(endless_writer, tmp_path):
    start, run = endless_writer
    with start() as process:
        told = [process.stdout.readline() for _ in range(11)]
        process.kill()
        told += process.stdout.readlines()
    check_rows(tmp_path / "run.nc.partial", run, safe=int(told[-1]))


def test_a_full_disk_stops_the_run_and_leaves_every_row_it_had_made_safe(endless_writer, tmp_path):
    start, run = endless_writer
    with start("500_000") as process:
        told, complaints = process.communicate()
    *safe, error = told.splitlines()
    assert "MB of disk are free" in error
    assert complaints == ""
    assert not (tmp_path / "run.nc").exists()
    check_rows(tmp_path / "run.nc.partial", run, safe=int(safe[-1]))
