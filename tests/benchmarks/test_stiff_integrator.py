"""The stiff integrator solves the equations of the time loop: both agree where both are tight."""

import numpy as np
import pytest
from tests.benchmarks.canal_day import CanalDay
from tests.benchmarks.stiff_integrator import Integrator
from tests.canals import day, order, stepped_canal

pytestmark = pytest.mark.slow  # compiles for some seconds


def small_day(folder, **period) -> CanalDay:
    inflow = {"shape": "steps", "values": [["00:00", 8.0], ["01:00", 9.0]]}
    canal, output = stepped_canal(2, 1500.0), {"every": "10 min", "profiles_every": "10 min"}
    orders = [order("00:33", "G0", by=0.05)]
    return CanalDay(folder, canal, day(inflow, length="3 h", period=period, output=output, orders=orders))


def test_levels_are_those_of_the_time_loop(tmp_path):
    profiles = small_day(tmp_path, level_tolerance=1e-7).profiles()
    levels = Integrator(small_day(tmp_path)).levels(1e-8, 600.0)
    assert np.ptp(profiles.level[:, 5]) > 0.02
    assert np.abs(levels - profiles.level[:-1]).max() <= 1e-5
