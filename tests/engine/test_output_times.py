"""The clock of the output: whole, exact and right-continuous however it is asked for."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal
from tests.recorded_run import RecordedRun

from toeline.engine.gate_link import gate_discharge_at


def recorded(folder, length, *, output=None, orders=(), gate=None, inflow=8.0, **period):
    made = day(inflow, length=length, output=output, orders=orders, period=period)
    return RecordedRun(scenario_of(folder, stepped_canal(2, 1000.0, gate=gate), made))


@pytest.mark.parametrize(
    ("length", "every", "profiles_every"),
    [
        ("1 h", "7 min", "25 min"),  # neither divides the period
        ("1 min", "1 s", "13 s"),
        ("61 min", "61 min", "1 min"),
        ("50 h", "1 min", "24 h"),  # more rows than a block holds
        ("2 h", "2 s", "2 s"),
    ],
)
def test_rows_and_profiles_stand_at_whole_intervals_from_start_to_end(tmp_path, length, every, profiles_every):
    made = day(8.0, length=length, output={"every": every, "profiles_every": profiles_every})
    scenario = scenario_of(tmp_path, stepped_canal(1, 300.0), made)
    run, output, end = RecordedRun(scenario), scenario.day.output, scenario.day.period.length_ms
    assert run["time"].tolist() == list(range(0, end + 1, output.every_ms))
    assert run["profile_time"].tolist() == list(range(0, end + 1, output.profiles_every_ms))


def test_output_shorter_than_a_step_gives_the_values_of_coarse_output(tmp_path):
    fine = recorded(tmp_path, "2 h", output={"every": "1 s"}, orders=[order("00:30", "G0", by=0.1)])
    coarse = recorded(tmp_path, "2 h", output={"every": "10 min"}, orders=[order("00:30", "G0", by=0.1)])
    assert fine["pool_tail_level"][::600].tolist() == coarse["pool_tail_level"].tolist()


def test_opening_changed_at_once_stands_in_the_row_of_that_time(tmp_path):
    run = recorded(tmp_path, "1 h", gate={"hoist_speed": "10 m/min"}, orders=[order("00:30", "G0", opening=1.0)])
    moved = run["gate_opening"][:, 0] != run["gate_opening"][0, 0]
    assert np.flatnonzero(moved)[0] == 31
    assert run["gate_opening"][31:, 0].tolist() == [1.0] * 30


def test_opening_is_linear_in_time_at_hoist_speed(tmp_path):
    run = recorded(tmp_path, "1 h", gate={"hoist_speed": "2 cm/min"}, orders=[order("00:30", "G0", by=0.1)])
    moved = run["gate_opening"][30:37, 0] - run["gate_opening"][0, 0]
    assert moved == pytest.approx([0.0, 0.02, 0.04, 0.06, 0.08, 0.10, 0.10], abs=1e-12)


def test_gate_discharge_of_a_row_is_that_of_its_levels_and_opening(tmp_path):
    run = recorded(tmp_path, "3 h", orders=[order("00:30", "G0", by=0.1)])
    gate, shapes = run.network.tables.gates[0], run.network.tables.channel.shapes
    for k in range(0, 181, 20):
        levels = (run[f"gate_{side}water_level"][k, 0] for side in ("head", "tail"))
        passed = gate_discharge_at(shapes, gate, *levels, run["gate_opening"][k, 0])
        assert run["gate_discharge"][k, 0] == pytest.approx(passed, rel=1e-12)


def test_a_step_at_the_very_end_is_not_in_the_last_row(tmp_path):
    take = {"name": "T0", "pool": "P0", "chainage": 500.0, "kind": "demand"}
    asked = {"T0": [["00:00", 0.1], ["00:30", 0.2], ["01:00", 0.5]]}
    made = day(8.0, length="1 h", deliveries=asked)
    run = RecordedRun(scenario_of(tmp_path, stepped_canal(1, 1000.0, offtakes=[take]), made))
    assert run["demand"][[29, 30, 60], 0].tolist() == [0.1, 0.2, 0.2]
