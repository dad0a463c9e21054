"""The steady state that a day starts from, where all or more than all of the water leaves on the way."""

import pytest
from tests.canals import day, scenario_of, stepped_canal

from toeline import simulate
from toeline.errors import ScenarioError

DEMAND = {"name": "T0", "pool": "P1", "chainage": 900.0, "kind": "demand", "sill_level": 1.0}


def start_of(folder, asked, **tables):
    canal = stepped_canal(2, 1500.0, offtakes=[DEMAND], **tables)
    return simulate(scenario_of(folder, canal, day(8.0, length="30 min", deliveries={"T0": asked}))).isel(time=0)


def test_all_water_may_be_delivered(tmp_path):
    start = start_of(tmp_path, 8.0)
    assert start.canal_outflow == pytest.approx(0.0, abs=1e-9)
    assert start.gate_opening.sel(gate="G1") == 0.0


def test_more_than_comes_in_is_refused_with_the_pool_where_it_ends(tmp_path):
    with pytest.raises(ScenarioError, match=r"deliveries down to P1, with losses and escapes, exceed the inflow of 8"):
        start_of(tmp_path, 7.9, losses={"seepage": "1 m/day"})


def test_escape_takes_what_a_gate_nearly_shut_cannot_pass(tmp_path):
    """The water stands as high over the crest as C·L·h^1.5 of the rest of the inflow needs."""
    escape = {"name": "E0", "pool": "P1", "chainage": 1500.0, "crest_level": 2.4, "length": 19.6}
    canal = stepped_canal(2, 1500.0, escapes=[escape])
    start = {"state": "steady", "openings": {"G0": 0.6, "G1": 0.02}}
    run = simulate(scenario_of(tmp_path, canal, day(8.0, length="30 min", start=start)))
    spilled = 8.0 - float(run.canal_outflow[0])
    assert 7.0 < spilled < 8.0
    assert run.pool_tail_level[0, 1] == pytest.approx(2.4 + (spilled / (1.7 * 19.6)) ** (2.0 / 3.0), abs=1e-6)
    assert abs(run.water_level - run.water_level[0]).max() <= 1e-6


def test_target_below_the_water_beyond_the_last_gate_is_refused(tmp_path):
    canal = stepped_canal(2, 1500.0, tail={"kind": "level", "level": 3.0, "floor_level": 0.0})
    start = {"state": "steady", "openings": "to hold targets"}
    with pytest.raises(
        ScenarioError, match=r"G1 passes 0\.000 m3/s closed at 0\.00 m, asked 8\.000 m3/s \(headwater 2\."
    ):
        simulate(scenario_of(tmp_path, canal, day(8.0, length="30 min", start=start)))
