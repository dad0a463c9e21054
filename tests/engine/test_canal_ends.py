"""Where the water comes from and where it goes: every head and tail, with and without a gate."""

import numpy as np
import pytest
from tests.canals import day, prismatic_canal, rectangle, scenario_of, stepped_canal, trapezoid

from toeline import simulate

SECTION = trapezoid(6.0, 1.5)
GRAVITY = 9.80665
RATING = [[0.0, 0.0], [1.0, 6.0], [2.0, 18.0]]
TAILS = {
    "level": {"kind": "level", "level": 1.0},
    "rating": {"kind": "rating", "rating": RATING},
    "free overfall": {"kind": "free overfall"},
    "normal depth": {"kind": "normal depth", "slope": 0.001},
}
RISE = {"shape": "lines", "values": [["00:00", 8.0], ["01:00", 8.0], ["02:00", 20.0]]}


@pytest.fixture(params=TAILS)
def tail(request):
    return TAILS[request.param]


def one_pool(folder, tail, inflow, length="3 h"):
    """A day in steps no longer than those of the output, so that little is interpolated."""
    canal = prismatic_canal(SECTION, 1500.0, 2e-4, tail)
    return simulate(scenario_of(folder, canal, day(inflow, length=length, period={"longest_step": "1 min"})))


def area_and_width(depth):
    return (6.0 + 1.5 * depth) * depth, 6.0 + 3.0 * depth


def test_steady_day_of_a_canal_without_a_tail_gate(tmp_path, tail):
    run = one_pool(tmp_path, tail, 8.0, "6 h")
    assert np.abs(run.water_level - run.water_level[0]).max() <= 1e-6


def test_steady_day_of_fast_flow_into_a_low_level_beyond(tmp_path):
    canal = prismatic_canal(rectangle(5.0), 3000.0, 2e-4, {"kind": "level", "level": 1.2})
    run = simulate(scenario_of(tmp_path, canal, day(12.0, length="6 h")))
    assert np.abs(run.water_level - run.water_level[0]).max() <= 1e-6


def test_ledger_of_a_canal_without_a_tail_gate(tmp_path, tail):
    run = one_pool(tmp_path, tail, RISE)
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]


def test_outflow_at_normal_depth_is_that_of_manning(tmp_path):
    run = one_pool(tmp_path, TAILS["normal depth"], RISE)
    depth = run.pool_tail_level.values[:, 0]
    area, _ = area_and_width(depth)
    radius = area / (6.0 + 2.0 * depth * np.sqrt(1.0 + 1.5**2))
    assert run.canal_outflow.values == pytest.approx(area * radius ** (2.0 / 3.0) * np.sqrt(0.001) / 0.016, abs=1e-3)


def test_outflow_over_a_free_fall_is_critical(tmp_path):
    run = one_pool(tmp_path, TAILS["free overfall"], RISE)
    area, width = area_and_width(run.pool_tail_level.values[:, 0])
    assert run.canal_outflow.values == pytest.approx(area * np.sqrt(GRAVITY * area / width), abs=1e-3)


def test_outflow_of_a_rating_goes_on_beyond_its_last_row(tmp_path):
    run = one_pool(tmp_path, TAILS["rating"], RISE)
    level = run.pool_tail_level.values[:, 0]
    expected = np.where(level < 1.0, 6.0 * level, 6.0 + 12.0 * (level - 1.0))
    assert run.canal_outflow[-1] > 18.0
    assert run.canal_outflow.values == pytest.approx(expected, abs=1e-3)


def test_steady_start_beyond_the_last_row_of_a_rating(tmp_path):
    run = one_pool(tmp_path, TAILS["rating"], 20.0)
    assert np.abs(run.water_level - run.water_level[0]).max() <= 1e-6


def reservoir_canal():
    """Two pools below a head gate."""
    canal = stepped_canal(2, 1500.0, head={"kind": "reservoir", "level": 5.2})
    below_head = canal["gates"][0] | {"name": "Head gate", "upstream": "head", "downstream": "P0", "sill_level": 1.2}
    return canal | {"gates": [below_head, *canal["gates"]]}


def reservoir_day(folder, levels):
    start = {"state": "steady", "inflow": 8.0}
    return simulate(scenario_of(folder, reservoir_canal(), day(length="4 h", start=start, head=levels)))


@pytest.mark.parametrize("opening", [0.3, 2.0], ids=["drowned", "wide open"])
def test_steady_start_below_a_reservoir_with_given_openings(tmp_path, opening):
    start = {"state": "steady", "openings": dict.fromkeys(("Head gate", "G0", "G1"), opening)}
    run = simulate(scenario_of(tmp_path, reservoir_canal(), day(length="6 h", start=start)))
    assert run.canal_inflow[0] > 3.0
    assert np.abs(run.water_level - run.water_level[0]).max() <= 1e-6


def test_head_gate_lets_in_what_the_canal_receives(tmp_path):
    run = reservoir_day(tmp_path, [["00:00", 5.2], ["01:00", 5.2], ["02:00", 5.5]])
    inflow = run.gate_discharge.sel(gate="Head gate")
    assert inflow[0] == pytest.approx(8.0, abs=1e-6)
    assert inflow[-1] > 8.3
    assert run.canal_inflow.values == pytest.approx(inflow.values, abs=1e-12)


def test_water_runs_back_into_a_reservoir_that_falls(tmp_path):
    run = reservoir_day(tmp_path, [["00:00", 5.2], ["01:00", 5.2], ["01:30", 2.0]])
    assert run.canal_inflow.min() < -1.0
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_storage[0]
