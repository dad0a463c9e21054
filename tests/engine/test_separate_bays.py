"""Gates with separate bays: every bay its own opening, one headwater and one tailwater."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal

from toeline import simulate
from toeline.engine.gate_link import gate_discharge_at
from toeline.network.build import network_of

SEPARATE = {"separate_bays": True}
SAME = ("gate_opening", "gate_discharge", "pool_tail_level", "jump_end_distance", "protection_margin", "jump_power",
        "gate_flow_state", "jump_state", "balance_residual")  # fmt: skip


def run_of(folder, *orders, gate=None, name="day", openings=None, length="3 h", **tables):
    canal = stepped_canal(2, 1500.0, gate=SEPARATE if gate is None else gate)
    start = {"start": {"state": "steady", "openings": openings}} if openings else {}
    return simulate(
        scenario_of(folder, canal, day(8.0, orders=list(orders), length=length, **start, **tables), name=name)
    )


@pytest.mark.parametrize(
    "action", [{"opening": 0.7}, {"by": 0.15}, {"discharge": 7.0}], ids=lambda action: str(*action)
)
def test_bays_at_equal_openings_are_the_gate_moved_together(tmp_path, action):
    moved = order("01:00", "G0", **action)
    apart, together = run_of(tmp_path, moved), run_of(tmp_path, moved, gate={})
    for name in SAME:
        difference = np.abs(apart[name].astype(float) - together[name].astype(float))
        assert difference.max() <= 1e-12 * max(1.0, float(np.abs(together[name].astype(float)).max())), name


def test_gate_passes_the_sum_of_its_bays_each_by_the_law_at_its_opening(tmp_path):
    run = run_of(tmp_path, order("01:00", "G0", bay=1, opening=0.9), order("01:00", "G0", bay=2, opening=0.2))
    network = network_of(scenario_of(tmp_path, stepped_canal(2, 1500.0), day(8.0)).canal, 100.0)
    up, down = (float(run[f"gate_{side}water_level"][-1, 0]) for side in ("head", "tail"))
    laws = [gate_discharge_at(network.channel.shapes, network.tables.gates[0], up, down, a) / 2.0 for a in (0.9, 0.2)]
    assert run.bay.values.tolist() == ["G0, bay 1", "G0, bay 2", "G1, bay 1", "G1, bay 2"]
    assert run.bay_opening[-1, :2].values.tolist() == [0.9, 0.2]
    assert run.bay_discharge[-1, :2].values == pytest.approx(laws, rel=1e-9)
    assert run.gate_discharge[-1, 0] == pytest.approx(sum(laws), rel=1e-9)
    assert run.gate_opening[-1, 0] == pytest.approx(0.55)


def test_jet_and_jump_are_those_of_the_bay_with_the_largest_unit_discharge(tmp_path):
    """Contraction 0.61 of the wider opening; the power is that of all that the gate passes and the head lost there."""
    run = run_of(tmp_path, openings={"G0": [0.15, 0.75], "G1": 0.5}, length="30 min").isel(time=0, gate=0)
    unit_discharge = float(run.bay_discharge[1]) / 2.5
    assert run.jet_depth == pytest.approx(0.61 * 0.75, rel=1e-6)
    assert run.jet_froude_number == pytest.approx(unit_discharge / np.sqrt(9.80665 * (0.61 * 0.75) ** 3), rel=1e-5)
    assert run.jump_power == pytest.approx(9806.65 * float(run.gate_discharge * run.jump_energy_loss), rel=1e-5)


def test_uneven_bays_that_the_tailwater_reaches_are_flagged(tmp_path):
    qualities = {}
    for name, openings, level in (("even", 0.5, 1.5), ("drowned", [0.3, 0.7], 1.5), ("free", [0.3, 0.7], 0.1)):
        canal = stepped_canal(1, 1000.0, gate=SEPARATE, tail={"kind": "level", "level": level, "floor_level": 0.0})
        start = {"state": "steady", "openings": {"G0": openings}}
        run = simulate(scenario_of(tmp_path, canal, day(8.0, length="30 min", start=start)))
        qualities[name] = run.discharge_quality.attrs["flag_meanings"].split()[int(run.discharge_quality[0, 0])]
    assert qualities == {"even": "good", "drowned": "uneven_bays", "free": "good"}


def test_order_moves_the_bay_that_it_names_and_is_listed_with_it(tmp_path):
    run = run_of(tmp_path, order("01:00", "G0", bay=2, by=0.1), order("01:30", "G1", by=-0.1))
    moved = (run.bay_opening[-1] - run.bay_opening[0]).values
    assert moved == pytest.approx([0.0, 0.1, -0.1, -0.1])
    assert run.order_bay.values.tolist() == [2, 1, 2]
    assert run.order_gate.values.tolist() == ["G0", "G1", "G1"]


def test_discharge_ordered_of_one_bay_is_that_of_the_bay(tmp_path):
    quick = {**SEPARATE, "hoist_speed": "5 m/min"}
    run = run_of(
        tmp_path, order("00:10", "G0", bay=1, discharge=3.0), gate=quick, output={"every": "1 s"}, length="11 min"
    )
    standing = int(run.order_completed[0].values - run.time[0].values) // 10**9 + 1
    assert run.bay_discharge[standing, 0] == pytest.approx(3.0, rel=5e-3)


def test_steady_start_with_unequal_bays_stays_steady(tmp_path):
    run = run_of(tmp_path, openings={"G0": [0.2, 0.8], "G1": 0.5}, length="12 h")
    assert run.bay_opening[0].values.tolist() == [0.2, 0.8, 0.5, 0.5]
    assert np.abs(run.water_level - run.water_level[0]).max() <= 1e-6
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]


def test_day_goes_on_with_each_bay_where_it_was(tmp_path):
    moves = [order("+0.5 h", "G0", bay=1, by=0.3), order("+0.99 h", "G0", bay=2, by=-0.2)]
    whole = run_of(tmp_path, *moves, length="2 h", name="whole")
    canal = stepped_canal(2, 1500.0, gate=SEPARATE)
    first = scenario_of(tmp_path, canal, day(8.0, orders=moves, length="1 h"), name="first")
    simulate(first, tmp_path / "first.nc").close()
    next_start = {"period": {"start": "2031-05-04T01:00:00Z"}, "start": {"file": "first.nc"}}
    second = simulate(scenario_of(tmp_path, canal, day(8.0, length="1 h", **next_start), name="second"))
    for name in ("bay_opening", "gate_discharge", "pool_tail_level"):
        assert np.abs(whole.sel(time=second.time)[name] - second[name]).max() <= 1e-9, name


def test_rule_moves_all_bays_alike(tmp_path):
    canal = stepped_canal(2, 1500.0, gate=SEPARATE)
    rule = {"kind": "hold discharge", "gate": "G0", "target": 6.0, "every": "10 min"}
    plan = {"plans": {"ruled": {"rules": [rule]}}}
    run = simulate(scenario_of(tmp_path, canal, day(8.0, length="2 h", **plan)))
    moved = run.bay_opening.isel(bay=slice(0, 2))
    assert run.gate_discharge[-1, 0] == pytest.approx(6.0, rel=0.05)
    assert np.abs(moved[:, 0] - moved[:, 1]).max() == 0.0
    assert set(run.order_bay.values.tolist()) == {1, 2}


def test_a_stuck_bay_refuses_its_orders_and_the_other_moves(tmp_path):
    stuck = [{"gate": "G0", "bay": 2, "from": "00:30", "until": "01:30"}]
    orders = [order("01:00", "G0", by=0.1), order("01:30", "G0", bay=2, by=0.1)]
    run = run_of(tmp_path, plans={"only": {"orders": orders, "stuck": stuck}})
    assert (run.bay_opening[-1] - run.bay_opening[0]).values == pytest.approx([0.1, 0.1, 0.0, 0.0])
    assert run.order_bay.values.tolist() == [1, 2, 2]
    assert run.order_reason.values.tolist() == ["", "the leaf is stuck for another 30 min", ""]


def test_under_a_rule_the_other_bays_make_up_for_a_stuck_one(tmp_path):
    """Bay 2 stands at 0.50 m until 02:00: bay 1 gives twice what the gate needs, and both stand alike afterwards."""
    rule = {"kind": "gatekeeper rounds", "gate": "G0", "target": 0.0, "step": 0.04}
    stuck = [{"gate": "G0", "bay": 2, "from": "00:30", "until": "02:00"}]
    plan = {"rules": [rule | {"visits": ["01:00", "02:30"]}], "stuck": stuck}
    run = run_of(tmp_path, openings={"G0": 0.5, "G1": 0.5}, plans={"only": plan})
    moves = run.bay_opening.sel(time=run.time[[70, 179]], bay=["G0, bay 1", "G0, bay 2"])
    assert moves.values == pytest.approx(np.array([[0.58, 0.50], [0.58, 0.58]]))
    assert run.order_reason.values.tolist() == ["", ""]
