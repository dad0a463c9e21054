"""Opening runs: exact times, local times, and clear words about files that are no run."""

from datetime import UTC, datetime, timedelta, timezone

import netCDF4
import numpy as np
import pytest

from toeline.errors import UsageError
from toeline.results import dataset as dataset_module
from toeline.results.dataset import DatasetSink, damage_told, in_parts, local_time, open_run, rows_at, timezone_of, utc
from toeline.results.netcdf_writer import NetcdfSink


@pytest.mark.parametrize("offset_hours", [0, 2, -9.5])
def test_times_are_exact_and_utc(invented_run, tmp_path, offset_hours):
    start = datetime(2031, 5, 4, 6, 30, tzinfo=timezone(timedelta(hours=offset_hours)))
    run = invented_run(start=start, steps=4)
    odd_ms = np.array([0, 1, 59_999, 31_536_000_001], dtype=np.int64)
    sink = NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, start)
    sink.write(next(run.blocks(4)) | {"time": odd_ms})
    sink.close("complete")
    with open_run(tmp_path / "run.nc") as opened:
        first = np.datetime64(start.astimezone(UTC).replace(tzinfo=None), "ms")
        np.testing.assert_array_equal(opened["time"], first + odd_ms)


def test_an_order_never_carried_out_has_no_time_of_completion(invented_run):
    run = invented_run(orders=2)
    block = next(run.blocks(run.steps)) | {"order_completed": np.array([np.nan, 90.5])}
    sink = DatasetSink(run.static(), run.attributes, run.start)
    sink.write(block)
    sink.close("complete")
    completed = sink.dataset["order_completed"].values
    assert np.isnat(completed[0])
    assert utc(completed[1]) == run.start + timedelta(seconds=90.5)


def test_the_dataset_is_not_there_before_the_run_has_closed_the_sink(invented_run):
    run = invented_run()
    with pytest.raises(RuntimeError, match="not closed"):
        _ = DatasetSink(run.static(), run.attributes, run.start).dataset


def test_chainage_is_a_coordinate_of_the_profile(invented_run):
    run = invented_run()
    dataset = run.write_to(DatasetSink(run.static(), run.attributes, run.start)).dataset
    assert "chainage" in dataset["water_level"].coords


@pytest.fixture
def dataset(invented_run):
    run = invented_run()
    return run.write_to(DatasetSink(run.static(), run.attributes, run.start)).dataset


def test_without_a_zone_local_time_has_the_offset_of_the_start(dataset):
    assert local_time(dataset, np.datetime64("2031-05-04T06:00", "ns")).isoformat() == "2031-05-04T08:00:00+02:00"


def test_with_a_zone_local_time_follows_its_clock_changes(dataset):
    dataset.attrs["zone"] = "CET"
    assert str(timezone_of(dataset)) == "CET"
    assert local_time(dataset, np.datetime64("2031-01-04T06:00", "ns")).isoformat() == "2031-01-04T07:00:00+01:00"
    assert local_time(dataset, np.datetime64("2031-07-04T06:00", "ns")).isoformat() == "2031-07-04T08:00:00+02:00"


def test_a_missing_file_points_to_the_unfinished_run(invented_run, tmp_path):
    run = invented_run()
    NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start).close("stopped at noon: interrupted")
    with pytest.raises(UsageError, match=r"run\.nc is no file; an unfinished run is in .*run\.nc\.partial"):
        open_run(tmp_path / "run.nc")


def test_a_file_that_is_no_netcdf_is_refused(tmp_path):
    (tmp_path / "day.toml").write_text("canal = 'canal.toml'")
    with pytest.raises(UsageError, match="no readable NetCDF file"):
        open_run(tmp_path / "day.toml")


def test_a_netcdf_file_of_another_program_is_refused(tmp_path):
    netCDF4.Dataset(tmp_path / "other.nc", "w").close()
    with pytest.raises(UsageError, match="not the file of a Toeline run"):
        open_run(tmp_path / "other.nc")


def test_a_run_of_another_version_is_refused(invented_run, tmp_path):
    run = invented_run()
    written = run.write_to(NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)).written_path
    with netCDF4.Dataset(written, "a") as file:
        file.renameVariable("escape_volume", "spilled")
    with pytest.raises(UsageError, match=r"of another version, Toeline 0\.1\.0: it has no escape_volume; run its day"):
        open_run(written)


@pytest.mark.parametrize(("place", "count"), [("pool", 3), ("time", 100), ("bay", 0)])
def test_parts_of_a_long_run_follow_one_another_and_leave_nothing_out(invented_run, monkeypatch, place, count):
    run = invented_run()
    dataset = run.write_to(DatasetSink(run.static(), run.attributes, run.start)).dataset.isel(bay=[])
    monkeypatch.setattr("toeline.results.dataset.LONG_RUN", 0.0)
    monkeypatch.setattr("toeline.results.dataset.PART", 1000.0)
    parts = list(in_parts(dataset, place, "pool_volume"))
    assert len(parts) > 1 or not count
    np.testing.assert_array_equal(np.concatenate([part[place] for part in parts]), dataset[place])


def test_rows_picked_block_by_block_are_those_of_the_whole(invented_run, monkeypatch):
    run = invented_run()
    dataset = run.write_to(DatasetSink(run.static(), run.attributes, run.start)).dataset
    monkeypatch.setattr("toeline.results.dataset.LONG_RUN", 0.0)
    monkeypatch.setattr("toeline.results.dataset.PART", 1000.0)
    rows = np.array([0, 3, 41, 99])
    np.testing.assert_array_equal(rows_at(dataset, "pool_volume", rows), dataset["pool_volume"].values[rows])


@pytest.mark.parametrize("error", [RuntimeError("NetCDF: HDF error"), AttributeError("NetCDF: Can't open attribute")])
def test_damage_met_while_opening_is_told_with_the_name_of_the_file(invented_run, tmp_path, monkeypatch, error):
    run = invented_run()
    path = run.write_to(NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)).written_path

    def damaged(*_, **__):
        raise error

    monkeypatch.setattr(dataset_module.xr, "open_dataset", damaged)
    with pytest.raises(UsageError, match=r"run\.nc is damaged and cannot be read: NetCDF: "):
        open_run(path)


def test_damage_inside_a_file_is_told_with_its_name():
    with (
        pytest.raises(UsageError, match=r"run\.nc is damaged and cannot be read: NetCDF: HDF"),
        damage_told("run.nc"),
    ):
        raise RuntimeError("NetCDF: HDF error")


def test_what_is_no_damage_is_not_told_as_such():
    with pytest.raises(RuntimeError, match="something else"), damage_told("run.nc"):
        raise RuntimeError("something else")
