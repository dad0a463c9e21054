"""A day as it is stepped: what stands in the output at stops and at the end, and how orders are carried out."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal

from toeline import simulate


def take(**keys):
    return {"name": "T0", "pool": "P0", "chainage": 900.0, **keys}


def run_of(folder, *, orders=(), offtakes=(), gate=None, inflow=8.0, length="3 h", **tables):
    canal = stepped_canal(2, 1500.0, gate=gate, offtakes=list(offtakes))
    return simulate(scenario_of(folder, canal, day(inflow, orders=list(orders), length=length, **tables)))


def test_output_stands_at_every_step_and_at_the_very_end(tmp_path):
    run = run_of(tmp_path)
    minutes = (run.time - run.time[0]).values / np.timedelta64(1, "m")
    assert minutes.tolist() == list(range(181))
    assert run.sizes["profile_time"] == 19


def test_output_at_a_change_shows_what_holds_from_then_on(tmp_path):
    steps = {"shape": "steps", "values": [["00:00", 8.0], ["01:00", 9.0]]}
    offtake = take(kind="demand", sill_level=1.2)
    run = run_of(tmp_path, inflow=steps, offtakes=[offtake], deliveries={"T0": [["00:00", 0.2], ["02:00", 0.5]]})
    assert run.canal_inflow[59:61].values.tolist() == [8.0, 9.0]
    assert run.demand.sel(offtake="T0")[119:121].values.tolist() == [0.2, 0.5]


def test_order_by_discharge_passes_it_when_the_leaf_stands(tmp_path):
    quick, output = {"hoist_speed": "5 m/min"}, {"every": "1 s"}
    run = run_of(tmp_path, orders=[order("00:10", "G0", discharge=6.0)], gate=quick, output=output, length="11 min")
    standing = int(run.order_completed[0].values - run.time[0].values) // 10**9 + 1
    assert run.gate_discharge.sel(gate="G0")[600] == pytest.approx(8.0, rel=1e-6)
    assert run.gate_discharge.sel(gate="G0")[standing] == pytest.approx(6.0, rel=5e-3)


def test_order_by_discharge_zero_closes_the_gate(tmp_path):
    run = run_of(tmp_path, orders=[order("01:00", "G1", discharge=0.0)])
    assert run.gate_flow_state.sel(gate="G1")[-1] == 0


def test_discharge_that_no_opening_passes_is_trimmed_and_says_what_passes(tmp_path):
    run = run_of(tmp_path, orders=[order("00:10", "G0", discharge=60.0)], length="1 h")
    assert run.order_status.values.tolist() == [1]
    assert "m3/s at 2.000 m" in str(run.order_reason[0].values)
    assert run.order_opening_after[0] == 2.0


def test_move_that_goes_on_at_the_end_of_the_day_is_not_completed(tmp_path):
    run = run_of(tmp_path, orders=[order("02:59", "G0", by=0.2)], gate={"hoist_speed": "1 cm/min"})
    assert run.order_completed.isnull().all()
    assert "still moving at the end" in str(run.order_reason[0].values)


def test_order_by_counts_from_the_opening_last_ordered(tmp_path):
    slow = {"hoist_speed": "1 cm/min"}
    run = run_of(tmp_path, orders=[order("01:00", "G0", by=0.20), order("01:05", "G0", by=-0.05)], gate=slow)
    start = float(run.gate_opening.sel(gate="G0")[0])
    assert run.gate_opening.sel(gate="G0")[-1] == pytest.approx(start + 0.15)
    assert run.order_status.values.tolist() == [3, 0]


def test_pool_settles_for_one_wave_round_trip_after_a_move(tmp_path):
    run = run_of(tmp_path, orders=[order("01:00", "G0", by=0.10)], gate={"hoist_speed": "0.1 m/min"})
    settling = run.settling.sel(pool="P0").values
    assert not settling[:60].any()
    assert settling[60]
    expected = 1.0 + float(run.pool_wave_round_trip.sel(pool="P0")) / 60.0
    assert settling.sum() == pytest.approx(expected, abs=1.5)


def test_surge_bound_stands_while_the_pool_settles_and_points_both_ways(tmp_path):
    run = run_of(tmp_path, orders=[order("01:00", "G0", by=0.10)])
    up, down = (run[f"surge_height_bound_{side}"].sel(gate="G0") for side in ("upstream", "downstream"))
    assert up.min() < 0.0 < down.max()
    assert up[-1] == down[-1] == 0.0


@pytest.mark.parametrize(
    "offtake",
    [
        take(kind="demand", sill_level=1.2),
        take(kind="orifice", sill_level=1.2, width=0.5, opening=0.3),
        take(kind="weir", sill_level=2.2, width=1.0),
    ],
    ids=lambda offtake: offtake["kind"],
)
def test_ledger_closes_with_every_kind_of_offtake(tmp_path, offtake):
    deliveries = {"T0": [["00:00", 0.4], ["01:00", 0.9]]} if offtake["kind"] == "demand" else {}
    run = run_of(tmp_path, offtakes=[offtake], deliveries=deliveries, orders=[order("01:00", "G1", by=0.1)])
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]
    assert run.delivery_volume[-1, 0] > 0.0


@pytest.mark.parametrize(
    "tail",
    [
        {"kind": "level", "level": 1.5, "floor_level": 0.0},
        {"kind": "rating", "rating": [[0.0, 0.0], [1.0, 6.0], [2.0, 18.0]], "floor_level": 0.0},
        {"kind": "free overfall", "floor_level": 0.0},
        {"kind": "normal depth", "slope": 0.001, "floor_level": 0.0},
    ],
    ids=lambda tail: tail["kind"],
)
def test_ledger_closes_with_every_tail_and_the_day_stays_steady(tmp_path, tail):
    canal = stepped_canal(2, 1500.0, tail=tail)
    run = simulate(scenario_of(tmp_path, canal, day(8.0, length="3 h")))
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]
    assert np.abs(run.water_level - run.water_level[0]).max() <= 1e-6
