"""A long run killed without warning leaves a file that opens and holds all but the last seconds."""

import os
import signal
import subprocess
import sys
import time

import numpy as np
import pytest
import xarray as xr
from tests.canals import day, scenario_of, stepped_canal


@pytest.mark.skipif(os.name == "nt", reason="SIGKILL is POSIX")
def test_killed_run_leaves_what_was_done(tmp_path):
    ripple = [[f"+{h} h", 8.0 + 0.3 * (h % 2)] for h in range(24 * 200)]
    scenario_of(tmp_path, stepped_canal(4, 2000.0), day({"shape": "lines", "values": ripple}, length="4800 h"))
    partial = tmp_path / "day.nc.partial"
    command = [sys.executable, "-m", "toeline", "run", "day.toml"]
    process = subprocess.Popen(command, cwd=tmp_path, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
    try:
        while process.poll() is None and steps_in(partial) < 5000:
            time.sleep(0.2)
        assert process.poll() is None, "the run ended before it could be killed"
    finally:
        process.send_signal(signal.SIGKILL)
        process.wait()
    with xr.open_dataset(partial) as run:
        assert run.sizes["time"] >= 5000
        assert np.isfinite(run.pool_tail_level).all()
        assert (np.diff(run.time) == np.timedelta64(1, "m")).all()
    assert not (tmp_path / "day.nc").exists()


def steps_in(partial) -> int:
    if not partial.exists():
        return 0
    with xr.open_dataset(partial) as run:
        return run.sizes["time"]
