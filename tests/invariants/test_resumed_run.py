"""A run that was stopped or killed, and gone on with, equals the unbroken one to the last bit."""

import os
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from tests.invariants.stopped_days import copies_by_count, full_day

from toeline import open_run, simulate
from toeline.errors import UsageError
from toeline.results import unfinished
from toeline.results.dataset import damage_told
from toeline.results.netcdf_writer import NetcdfSink

THINNED = {"every": "10 min", "events_every": "1 min"}


@pytest.fixture(autouse=True)
def copies(monkeypatch):
    """Checkpoints come by count of stops, not by the clock."""
    monkeypatch.setattr(NetcdfSink, "is_copy_due", copies_by_count())


def assert_same(folder: Path, name: str, other: str) -> None:
    with open_run(folder / name) as one, open_run(folder / other) as two:
        assert set(one.variables) == set(two.variables)
        for variable in one.variables:
            first, second = one[variable].values, two[variable].values
            equal = first == second if first.dtype.kind in "OUS" else _bits(first) == _bits(second)
            assert np.all(equal), variable
        differing = {key for key in one.attrs if one.attrs[key] != two.attrs.get(key)}
        assert differing <= {"history"}


def _bits(values: np.ndarray) -> np.ndarray:
    return np.ascontiguousarray(values).reshape(-1).view(np.uint8)


def stop_at(fraction: float):
    def progress(done: float) -> None:
        if done >= fraction:
            raise KeyboardInterrupt

    return progress


@pytest.mark.parametrize("local_inertia", [False, True], ids=["quasi-steady", "local inertia"])
@pytest.mark.parametrize("output", [{}, THINNED], ids=["every row", "thinned"])
def test_run_stopped_again_and_again_equals_the_unbroken_one(tmp_path, local_inertia, output):
    scenario = full_day(tmp_path, local_inertia=local_inertia, **output)
    simulate(scenario, tmp_path / "whole.nc").close()
    for fraction in (0.0, 0.2, 0.201, 0.83, 1.0):  # 0.2: while a leaf moves and the inflow rises
        with pytest.raises(KeyboardInterrupt):
            simulate(scenario, tmp_path / "parts.nc", resume=True, progress=stop_at(fraction))
    simulate(scenario, tmp_path / "parts.nc", resume=True).close()
    assert_same(tmp_path, "whole.nc", "parts.nc")
    assert sorted(path.name for path in tmp_path.glob("*.nc*")) == ["parts.nc", "whole.nc"]


@pytest.mark.skipif(os.name == "nt", reason="SIGKILL is POSIX")
def test_killed_run_gone_on_with_equals_the_unbroken_one(tmp_path):
    rng = np.random.default_rng()
    command = [sys.executable, "-m", "tests.invariants.stopped_days", str(tmp_path)]
    top = Path(__file__).parents[2]
    for _ in range(3):
        with subprocess.Popen(command, cwd=top, stdout=subprocess.PIPE, text=True) as process:
            for _ in range(int(rng.integers(30, 150))):
                process.stdout.readline()
            process.kill()
    left = sorted(path.name for path in tmp_path.glob("day.nc*"))
    assert {"day.nc.partial", "day.nc.checkpoint"} <= set(left)
    scenario = full_day(tmp_path, **THINNED)
    simulate(scenario, tmp_path / "day.nc", resume=True).close()
    simulate(scenario, tmp_path / "whole.nc").close()
    assert_same(tmp_path, "whole.nc", "day.nc")


@pytest.fixture
def stopped(tmp_path):
    """A scenario, and the file of its run that was stopped half-way."""
    scenario = full_day(tmp_path)
    with pytest.raises(KeyboardInterrupt):
        simulate(scenario, tmp_path / "run.nc", progress=stop_at(0.5))
    return scenario, tmp_path / "run.nc"


def test_copy_newer_than_its_checkpoint_is_gone_on_with(stopped, tmp_path):
    """A kill between the two leaves such a pair."""
    scenario, path = stopped
    old = path.with_name("run.nc.checkpoint").read_bytes()
    with pytest.raises(KeyboardInterrupt):
        simulate(scenario, path, resume=True, progress=stop_at(0.9))
    path.with_name("run.nc.checkpoint").write_bytes(old)
    simulate(scenario, path, resume=True).close()
    simulate(scenario, tmp_path / "whole.nc").close()
    assert_same(tmp_path, "whole.nc", "run.nc")


def test_other_inputs_are_refused_and_nothing_is_lost(stopped, tmp_path):
    _, path = stopped
    before = {name: path.with_name(name).read_bytes() for name in ("run.nc.partial", "run.nc.checkpoint")}
    other = full_day(tmp_path, every="5 min")
    with pytest.raises(UsageError, match=r"run\.nc\.partial was made from other inputs.*the day file is not the same"):
        simulate(other, path, resume=True)
    assert before == {name: path.with_name(name).read_bytes() for name in before}


def test_damaged_checkpoint_is_refused(stopped):
    scenario, path = stopped
    path.with_name("run.nc.checkpoint").write_bytes(b"PK damaged")
    with pytest.raises(UsageError, match=r"run\.nc\.checkpoint cannot be read"):
        simulate(scenario, path, resume=True)


@pytest.mark.parametrize("place", [3, 40, 5000, -40])
def test_checkpoint_of_which_a_byte_was_changed_is_refused(stopped, place):
    scenario, path = stopped
    checkpoint = path.with_name("run.nc.checkpoint")
    content = bytearray(checkpoint.read_bytes())
    content[place] ^= 1
    checkpoint.write_bytes(content)
    with pytest.raises(UsageError, match=r"run\.nc\.checkpoint cannot be read"):
        simulate(scenario, path, resume=True)


def test_run_of_edited_sources_is_refused_and_nothing_is_lost(stopped, monkeypatch):
    scenario, path = stopped
    before = {name: path.with_name(name).read_bytes() for name in ("run.nc.partial", "run.nc.checkpoint")}
    monkeypatch.setattr(unfinished, "source_digest", lambda: "of other sources")
    with pytest.raises(
        UsageError, match=r"run\.nc\.checkpoint was made .* the source code of the program is not the same"
    ):
        simulate(scenario, path, resume=True)
    assert before == {name: path.with_name(name).read_bytes() for name in before}


def test_rows_that_the_checkpoint_counts_and_the_file_has_not_are_missed(stopped):
    scenario, path = stopped
    partial = path.with_name("run.nc.partial")
    whole = partial.read_bytes()
    with pytest.raises(KeyboardInterrupt):
        simulate(scenario, path, overwrite=True, progress=stop_at(0.9))
    partial.write_bytes(whole)
    with pytest.raises(UsageError, match=r"run\.nc\.partial has \d+ rows along time, expected: \d+ or more"):
        simulate(scenario, path, resume=True)


def test_rows_that_cannot_be_read_are_told_and_nothing_is_left_half_written(stopped, tmp_path, monkeypatch):
    scenario, path = stopped

    def damaged(self, dimension, length):
        with damage_told(self.path):
            raise RuntimeError("NetCDF: HDF error")

    monkeypatch.setattr(unfinished.Unfinished, "rows", damaged)
    with pytest.raises(UsageError, match=r"run\.nc\.partial is damaged and cannot be read"):
        simulate(scenario, path, resume=True)
    assert sorted(found.name for found in tmp_path.glob("run.nc*")) == ["run.nc.checkpoint", "run.nc.partial"]


def test_run_without_a_checkpoint_begins_anew(stopped, tmp_path):
    scenario, path = stopped
    path.with_name("run.nc.checkpoint").unlink()
    simulate(scenario, path, resume=True).close()
    simulate(scenario, tmp_path / "whole.nc").close()
    assert_same(tmp_path, "whole.nc", "run.nc")


def test_a_run_begun_anew_forgets_the_checkpoint_of_the_one_it_replaces(stopped, monkeypatch):
    scenario, path = stopped
    monkeypatch.setattr(NetcdfSink, "is_copy_due", False)
    with pytest.raises(KeyboardInterrupt):
        simulate(scenario, path, overwrite=True, progress=stop_at(0.0))
    assert not path.with_name("run.nc.checkpoint").exists()


def test_finished_run_is_not_gone_on_with(stopped):
    scenario, path = stopped
    simulate(scenario, path, resume=True).close()
    with pytest.raises(UsageError, match="exists and is kept"):
        simulate(scenario, path, resume=True)


def test_history_tells_of_the_stop(stopped):
    scenario, path = stopped
    with simulate(scenario, path, resume=True) as run:
        first, second = run.attrs["history"].splitlines()
    assert first.endswith("run")
    assert second.endswith("resumed")
