"""Rules in a run: when they are asked, beside orders, under stuck leaves, by day and by night."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal
from tests.recorded_run import RecordedRun

from toeline.errors import RunError

HOUR = 3600.0
STEP = {"kind": "gatekeeper rounds", "gate": "G0", "target": 0.0, "step": 0.02}
"""Opens by 2 cm at every visit: the target is far below the water."""


def run_of(folder, *rules, orders=(), **plan):
    keys = day(8.0, plans={"only": {"rules": list(rules), "orders": list(orders), **plan}})
    return RecordedRun(scenario_of(folder, stepped_canal(2, 800.0), keys))


def test_rules_are_asked_at_their_visits_and_act_then(tmp_path):
    run = run_of(tmp_path, STEP | {"visits": ["06:30", "18:00"]})
    assert run["order_time"].tolist() == [6.5 * HOUR, 18 * HOUR]
    assert run["order_source"].tolist() == ["gatekeeper rounds"] * 2
    first = run["gate_opening"][run["time"] <= 6.5 * HOUR * 1000, 0]
    assert np.ptp(first) == 0.0
    assert run["gate_opening"][-1, 0] - first[0] == pytest.approx(0.04)


def test_a_rule_goes_on_from_an_order_of_the_same_moment(tmp_path):
    run = run_of(tmp_path, STEP | {"visits": ["06:30"]}, orders=[order("06:30", "G0", opening=0.60)])
    assert run["order_source"].tolist() == ["schedule", "gatekeeper rounds"]
    assert run["order_opening_after"][-1] == pytest.approx(0.62)


def test_a_stuck_leaf_refuses_orders_and_rules_alike(tmp_path):
    stuck = [{"gate": "G0", "from": "06:00", "until": "08:00"}]
    rule = STEP | {"visits": ["06:30", "08:00"]}
    run = run_of(tmp_path, rule, orders=[order("07:00", "G0", by=0.1)], stuck=stuck)
    assert run["order_status"].tolist() == [2, 2, 0]
    assert run["order_reason"].tolist() == [
        "the leaf is stuck for another 90 min", "the leaf is stuck for another 60 min", "",
    ]  # fmt: skip


def test_a_leaf_that_sticks_stops_in_mid_water(tmp_path):
    stuck = [{"gate": "G0", "from": "06:02", "until": "08:00"}]
    run = run_of(tmp_path, orders=[order("06:00", "G0", by=0.5)], stuck=stuck)
    # 0.1 m/min for two minutes
    assert run["order_opening_after"][0] - run["order_opening_before"][0] == pytest.approx(0.2)
    assert run["order_completed"].tolist() == [6 * HOUR + 120.0]
    assert run["gate_opening"][-1, 0] == pytest.approx(run["order_opening_after"][0])


def test_a_rule_shuts_its_gate_against_back_flow_and_opens_it_again(tmp_path):
    """The level beyond the tail gate rises over the pool and falls again; without a rule the gate stays as it is."""
    tail = [["00:00", 1.5], ["06:00", 1.5], ["08:00", 3.5], ["10:00", 3.5], ["12:00", 1.5]]
    runs = []
    for rules in ([], [{"kind": "hold upstream level", "gate": "G1", "gain": 0.3, "reset": "1 h"}]):
        plan = {"only": {"rules": rules}}
        keys = day(1.0, tail=tail, plans=plan, output={"every": "1 min"}, start={"state": "steady"})
        runs.append(RecordedRun(scenario_of(tmp_path, stepped_canal(2, 800.0), keys)))
    held, ruled = (run["gate_discharge"][:, 1] for run in runs)
    came_back = [-60.0 * np.minimum(passed, 0.0).sum() for passed in (held, ruled)]
    assert came_back[1] < 0.1 * came_back[0]
    at_ten, late = (ruled[runs[1]["time"] == hour * HOUR * 1000.0] for hour in (10, 18))
    assert at_ten == pytest.approx(0.0, abs=1e-9)
    assert late == pytest.approx(1.0, rel=0.05)


def test_rules_of_one_gate_by_day_and_by_night_keep_their_memories_apart(tmp_path):
    rule = {"kind": "hold upstream level", "gate": "G0"}
    run = run_of(tmp_path, rule | {"hours": ["06:00", "20:00"]}, rule | {"hours": ["20:00", "06:00"], "band": 0.05})
    labels = set(run.end_state["end_rule"].tolist())
    assert labels == {"hold upstream level, G0", "hold upstream level, G0 (2)"}


def test_a_gain_cannot_be_found_for_a_dry_pool(tmp_path):
    keys = day(8.0, start={"state": "dry"}, plans={"only": {"rules": [{"kind": "hold upstream level", "gate": "G0"}]}})
    with pytest.raises(RunError, match=r"no gain can be found .* give gain and reset in the day file"):
        RecordedRun(scenario_of(tmp_path, stepped_canal(2, 800.0), keys))
