"""Which pools a change leaves settling, how long, and the surge it could send."""

import numpy as np
import pytest
from scipy.optimize import brentq
from tests.canals import day, order, scenario_of, stepped_canal
from tests.recorded_run import RecordedRun

from toeline import simulate
from toeline.engine.gate_link import gate_discharge_at
from toeline.engine.settling import passed_share
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM

GRAVITY = 9.80665


def scenario(folder, *, inflow=8.0, orders=(), drop=0.3, **tables):
    """Three pools with output every second; a drop of 0.3 m leaves every gate drowned, one of 2.5 m free."""
    take = {"name": "T0", "pool": "P1", "chainage": 900.0, "kind": "demand", "sill_level": 2.0 * drop + 0.4}
    canal = stepped_canal(3, 1500.0, drop=drop, gate={"hoist_speed": "10 m/min"}, offtakes=[take])
    made = day(inflow, length="3 h", orders=list(orders), output={"every": "1 s"}, **tables)
    return scenario_of(folder, canal, made)


def recorded(folder, **changes):
    return RecordedRun(scenario(folder, **changes))


def settling_seconds(run) -> list[int]:
    return run["settling"].sum(axis=0).tolist()


def test_nothing_settles_on_a_quiet_day(tmp_path):
    run = recorded(tmp_path)
    assert settling_seconds(run) == [0, 0, 0]
    assert not run["surge_height_bound_upstream"].any()


def test_pools_on_both_sides_of_a_moved_gate_settle_for_one_wave_round_trip(tmp_path):
    run = simulate(scenario(tmp_path, orders=[order("00:30", "G0", by=0.05)]))
    travel = 0.05 / (10.0 / 60.0)
    first, second, _ = travel + run.pool_wave_round_trip.values
    assert run.settling.sum("time").values == pytest.approx([first, second, 0.0], abs=1.0)


def test_step_of_inflow_leaves_the_first_pool_settling(tmp_path):
    run = recorded(tmp_path, inflow={"shape": "steps", "values": [["00:00", 8.0], ["00:30", 9.0]]})
    assert [seconds > 0 for seconds in settling_seconds(run)] == [True, False, False]


def test_change_of_a_delivery_leaves_its_pool_settling(tmp_path):
    run = recorded(tmp_path, deliveries={"T0": [["00:00", 0.1], ["00:30", 0.5]]})
    assert [seconds > 0 for seconds in settling_seconds(run)] == [False, True, False]


def test_surge_bounds_fulfil_the_equations_of_a_moving_front(tmp_path):
    """Continuity and momentum over the front (Chow 1959, ch. 18), solved apart: a rectangle below the gate."""
    run = recorded(tmp_path, orders=[order("00:30", "G0", by=0.05)])
    gate, shapes, row = run.network.tables.gates[0], run.network.tables.channel.shapes, 1799
    up, down = run["gate_headwater_level"][row, 0], run["gate_tailwater_level"][row, 0]
    before, after = (gate_discharge_at(shapes, gate, up, down, run["gate_opening"][k, 0]) for k in (row, row + 60))
    width, depth = 5.0, down - gate.floor_level

    def excess_momentum(height):
        speed = (after - before) / (width * height)
        gained = after * after / (width * (depth + height)) - before * before / (width * depth)
        return 0.5 * GRAVITY * width * ((depth + height) ** 2 - depth**2) - (after - before) * speed + gained

    height = brentq(excess_momentum, 1e-4, 1.0)
    assert run["surge_height_bound_downstream"][row + 1, 0] == pytest.approx(height, rel=1e-3)
    assert run["surge_height_bound_upstream"][row + 1, 0] < 0.0


def test_bounds_of_moves_before_the_pool_has_settled_add_up(tmp_path):
    run = recorded(tmp_path, orders=[order("00:30", "G0", by=0.05), order("00:31", "G0", by=0.05)])
    bound = run["surge_height_bound_downstream"][:, 0]
    assert bound[1900] == pytest.approx(2.0 * bound[1801], rel=0.15)


def test_bounds_vanish_with_the_settling(tmp_path):
    run = recorded(tmp_path, orders=[order("00:30", "G0", by=0.05)])
    is_settling = run["settling"][:, 1] == 1
    np.testing.assert_array_equal(run["surge_height_bound_downstream"][:, 0] != 0.0, is_settling)


def test_a_large_wave_goes_on_through_a_drowned_gate_and_both_pools_settle_together(tmp_path):
    run = simulate(scenario(tmp_path, orders=[order("00:30", "G1", by=-0.40)]))
    travel = 0.40 / (10.0 / 60.0)
    above, middle, below = run.pool_wave_round_trip.values
    assert run.settling.sum("time").values == pytest.approx(
        [travel + above + middle, travel + above + middle, travel + below], rel=0.01
    )


def test_a_bound_does_not_outlast_the_first_round_trip_where_pools_settle_together(tmp_path):
    run = simulate(scenario(tmp_path, orders=[order("00:30", "G1", by=-0.40)]))
    bound = run.surge_height_bound_upstream.sel(gate="G1")
    assert int((bound != 0.0).sum()) == pytest.approx(float(run.pool_wave_round_trip[1]) + 2.4, abs=10.0)


def test_no_wave_goes_up_through_a_free_gate(tmp_path):
    run = simulate(scenario(tmp_path, drop=2.5, orders=[order("00:30", "G1", by=-0.20)]))
    assert float(run.surge_height_bound_upstream.sel(gate="G1").max()) > 0.05
    assert [seconds > 0 for seconds in run.settling.sum("time").values] == [False, True, True]


@pytest.mark.parametrize("way", [UPSTREAM, DOWNSTREAM])
def test_wave_at_a_gate_fulfils_continuity_and_the_gate_law(tmp_path, way):
    """Heights of the wave that goes on and of the one thrown back from three linear equations, solved apart."""
    run = recorded(tmp_path)
    channel, gate = run.network.channel, run.network.tables.gates[1]
    levels = [run[f"gate_{side}water_level"][0, 1] for side in ("head", "tail")]
    opening, above, below = run["gate_opening"][0, 1], (55.0, 45.0), (60.0, 40.0)

    def law(up, down):
        return gate_discharge_at(channel.shapes, gate, levels[0] + up, levels[1] + down, opening)

    by_up, by_down = (law(1e-4, 0.0) - law(-1e-4, 0.0)) / 2e-4, (law(0.0, 1e-4) - law(0.0, -1e-4)) / 2e-4
    (comes, back), (onward, _) = (above, below) if way == DOWNSTREAM else (below[::-1], above[::-1])
    near, far = (by_up, by_down) if way == DOWNSTREAM else (by_down, by_up)
    # unknown: heights thrown back and going on, change of discharge; the incoming wave is 1 m high
    equations = [[way * back, 0.0, 1.0], [0.0, -way * onward, 1.0], [-near, -far, 1.0]]
    _, passed, _ = np.linalg.solve(equations, [way * comes, 0.0, near])
    assert passed_share(channel, gate, tuple(levels), opening, above, below, way) == pytest.approx(passed, rel=1e-3)
    assert 0.1 < passed < 0.6
