"""The same inputs give the same numbers, compiled or not."""

import os
import subprocess
import sys

import numpy as np
import xarray as xr
from tests.canals import day, order, scenario_of, stepped_canal

from toeline import simulate

RUN_IT = (
    "import sys; from toeline import load_scenario, simulate; simulate(load_scenario(sys.argv[1]), sys.argv[2]).close()"
)


def short_day(folder):
    canal = stepped_canal(2, 400.0)
    moves = [order("00:05", "G0", by=0.15)]
    return scenario_of(folder, canal, day(8.0, length="20 min", orders=moves, output={"profiles_every": "5 min"}))


def test_same_inputs_give_the_same_numbers(tmp_path):
    first, again = simulate(short_day(tmp_path)), simulate(short_day(tmp_path))
    xr.testing.assert_equal(first, again)


def test_plain_python_gives_the_numbers_of_compiled_code(tmp_path):
    compiled, plain = simulate(short_day(tmp_path)), tmp_path / "plain.nc"
    subprocess.run(
        [sys.executable, "-c", RUN_IT, str(tmp_path / "day.toml"), str(plain)],
        env=os.environ | {"NUMBA_DISABLE_JIT": "1"}, check=True,
    )  # fmt: skip
    with xr.open_dataset(plain) as other:
        for name in ("water_level", "pool_tail_level", "gate_discharge", "jump_end_distance", "protection_margin"):
            difference = np.abs(compiled[name] - other[name]).max()
            assert not difference > 1e-9, name
            assert (compiled[name].isnull() == other[name].isnull()).all(), name
