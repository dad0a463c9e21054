"""The finite volumes hold what any method for the full equations must, and the day of the time loop."""

import math

import numpy as np
import pytest
from scipy.optimize import brentq
from tests.benchmarks.canal_day import CanalDay
from tests.benchmarks.finite_volume import FiniteVolumeCanal
from tests.benchmarks.test_stiff_integrator import small_day
from tests.canals import day, rectangle, stepped_canal

from toeline.constants import GRAVITY

pytestmark = pytest.mark.slow  # compiles for some seconds


@pytest.fixture(scope="module")
def quiet_canal(tmp_path_factory):
    """Makes canals without inflow, their gates shut."""

    def make(canal, seconds: float) -> FiniteVolumeCanal:
        folder = tmp_path_factory.mktemp("canal")
        full = FiniteVolumeCanal(CanalDay(folder, canal, day(8.0, length="1 h", period={"spacing": "5 m"})))
        full.legs = [full.legs[0]._replace(value=np.zeros_like(full.legs[0].value), length=seconds)]
        return full

    return make


def test_level_water_stays_level_where_the_section_changes(quiet_canal):
    full = quiet_canal(stepped_canal(1, 200.0), 600.0)
    full.set_water(3.0, 0.0)
    levels = full.levels(60.0)
    assert np.nanmax(np.abs(levels - 3.0)) <= 1e-9


def test_bore_of_a_broken_dam_has_stokers_depth_and_speed(quiet_canal):
    """Stoker 1957, from memory: the depth behind the bore balances the wave that runs back."""
    high, low, seconds = 3.0, 1.0, 60.0
    floor = [{"length": 1000.0, "section": "basin", "surface": "apron"}]
    canal = stepped_canal(1, 1001.0, floor=floor, slope=0.0)
    canal["sections"]["canal"] = rectangle(5.0)
    full = quiet_canal(canal, seconds)
    nodes = full.tables.channel.nodes
    nodes.roughness = 1e-6
    middle = 0.5 * (nodes.chainage[: full.cells.size - 1] + nodes.chainage[1 : full.cells.size])
    bed = nodes.bed_level[0]
    full.set_water(bed + np.append(np.where(middle < 500.0, high, low), low), 0.0)
    full.levels(3600.0)
    depth = full.cells.level[:-1] - bed

    def gap(y):
        wave = 2.0 * (math.sqrt(GRAVITY * high) - math.sqrt(GRAVITY * y))
        return wave - (y - low) * math.sqrt(GRAVITY * (y + low) / (2.0 * y * low))

    behind = brentq(gap, low, high)
    speed = math.sqrt(GRAVITY * behind * (behind + low) / (2.0 * low))
    assert depth[(middle > 530.0) & (middle < 720.0)] == pytest.approx(behind, rel=2e-3)
    ahead = middle[:-1] > 530.0
    front = middle[:-1][ahead][np.argmin(np.diff(depth)[ahead])]
    assert front == pytest.approx(500.0 + speed * seconds, abs=10.0)


def test_water_is_kept_and_levels_are_those_of_the_time_loop(tmp_path):
    full = FiniteVolumeCanal(small_day(tmp_path))
    before = full.cells.volume.sum()
    levels = full.levels(600.0)
    gained = full.cells.volume.sum() - before
    assert gained == pytest.approx(full.volumes_passed[0] - full.volumes_passed[-1], abs=1e-6)
    inertial = small_day(tmp_path, local_inertia=True).profiles().level[:-1]
    off = levels[:, :-1] - 0.5 * (inertial[:, :-1] + inertial[:, 1:])
    assert np.sqrt(np.nanmean(off**2)) <= 4e-3
