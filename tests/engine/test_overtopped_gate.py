"""A gate deep under water on both sides, its leaf overtopped, while next to nothing flows."""

import pytest
from tests.canals import day, order, scenario_of, stepped_canal
from tests.recorded_run import RecordedRun

from toeline.results.variables import FLOW_STATES

RISE = {"shape": "lines", "values": [["00:00", 0.6], ["02:00", 0.6], ["06:00", 5.0], ["09:00", 5.0]]}
CUT = {"shape": "steps", "values": [["00:00", 2.0], ["02:00", 0.2]]}


@pytest.fixture(scope="module", params=[False, True], ids=["quasi-steady", "local inertia"])
def run(request, tmp_path_factory):
    """The upper gate shut, then the water of the tail rises over both leaves."""
    canal = stepped_canal(2, 1000.0, drop=0.0, depth=1.4, gate={"leaf_height": 1.2, "hoist_speed": "0.5 m/min"})
    canal["tail"]["level"] = 0.6
    orders, period = [order("00:30", "G0", opening=0.0)], {"local_inertia": request.param}
    made = day(CUT, length="9 h", orders=orders, tail=RISE, period=period)
    return RecordedRun(scenario_of(tmp_path_factory.mktemp("overtopped"), canal, made))


def test_both_pools_stand_at_the_level_of_the_tail(run):
    assert run["gate_flow_state"][-1, 0] == FLOW_STATES.index("overtopped")
    assert run["pool_tail_level"][-1] == pytest.approx([5.0, 5.0], abs=2e-3)


def test_next_to_equal_levels_do_not_hold_up_the_steps(run):
    assert run.steps < 1000
    assert run.rejected < 300
