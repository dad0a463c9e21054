"""Starting from a finished run: the state as it was, or a clear refusal."""

from datetime import timedelta

import numpy as np
import pytest

from toeline.errors import UsageError
from toeline.results.end_state import read_end_state
from toeline.results.netcdf_writer import NetcdfSink


@pytest.fixture
def run(invented_run):
    return invented_run(steps=61)


@pytest.fixture
def path(run, tmp_path):
    run.write_to(NetcdfSink(tmp_path / "last_night.nc", run.static(), run.attributes, run.start))
    return tmp_path / "last_night.nc"


@pytest.fixture
def next_run(run):
    """What the next run says of itself when it starts where this one ends."""
    return {
        "start": run.start + timedelta(hours=1),
        "chainage": run.values("chainage"),
        "bed_level": run.values("bed_level"),
        "labels": {name: run.values(name).tolist() for name in ("gate", "bay", "offtake")},
    }


def test_the_state_comes_back_to_the_last_digit(run, path, next_run):
    state = read_end_state(path, **next_run)
    assert state.keys() == run.end_state().keys() - {"end_time"}
    for name, values in state.items():
        np.testing.assert_array_equal(values, run.end_state()[name])


def test_another_start_is_refused_with_both_times(path, next_run):
    next_run["start"] += timedelta(seconds=1)
    message = r"ends at 2031-05-04T01:00:00\+02:00, but the period starts at 2031-05-04T01:00:01\+02:00"
    with pytest.raises(UsageError, match=message):
        read_end_state(path, **next_run)


def test_the_same_instant_in_another_offset_is_accepted(path, next_run):
    next_run["start"] = next_run["start"].astimezone()
    read_end_state(path, **next_run)


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"labels": {"gate": ["Orchard check"]}}, "its gates are"),
        ({"labels": {"bay": ["Orchard check, bay 1"]}}, "its bays are"),
        ({"labels": {"offtake": []}}, "its offtakes are"),
        ({"chainage": np.arange(13) * 90.0}, "12 nodes, this canal 13: another canal, or another spacing"),
        ({"chainage": np.arange(12) * 90.0}, r"chainage of node 11 is 1100\.000 m there, 990\.000 m here"),
        ({"bed_level": np.zeros(12)}, "bed_level of node"),
    ],
)
def test_another_canal_is_refused(path, next_run, change, message):
    with pytest.raises(UsageError, match=message):
        read_end_state(path, **next_run | change)


def test_an_unfinished_run_is_refused(run, next_run, tmp_path):
    sink = NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)
    sink.close("stopped at noon: interrupted", run.end_state())
    with pytest.raises(UsageError, match="no finished run to start from; its outcome is 'stopped at noon"):
        read_end_state(sink.written_path, **next_run)


def test_state_of_a_version_that_kept_less_is_refused(run, next_run, tmp_path):
    sink = NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)
    sink.close("complete")
    with pytest.raises(UsageError, match="no end state to start from, or one of another version: end_level is missing"):
        read_end_state(sink.written_path, **next_run)
