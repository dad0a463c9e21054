"""Orders as they are to be done, and the readings to expect beside the gate."""

import numpy as np
import pytest

from toeline.findings.gate_orders import FROM_SCHEDULE, gate_orders, gatekeepers, rule_moves
from toeline.findings.rounds import rounds

ALLOWANCE = 0.01
EVERY = np.arange(0, 181, 5)
ROUND_TRIP = 1200.0
ACCEPTED, TRIMMED, REFUSED, REPLACED = range(4)


def levels(*by_gate: np.ndarray) -> np.ndarray:
    return np.stack(by_gate, axis=1)


RISING = 10.0 + 0.001 * EVERY  # m, 1 mm a minute
STILL = np.full(EVERY.size, 9.0)


@pytest.fixture
def orders(run_by_hand):
    """Build a run with orders to the Orchard check at the given minutes, and give its orders."""

    def build(*minutes: float, allowance: float = ALLOWANCE, bays: tuple[int, ...] = (), **given: object):
        count = len(minutes)
        values = {
            "order_time": 60.0 * np.array(minutes),
            "order_completed": 60.0 * np.array(minutes) + 300.0,
            "order_gate": np.full(count, "Orchard check", object),
            "order_source": np.full(count, FROM_SCHEDULE, object),
            "order_opening_before": 0.40,
            "order_opening_after": 0.50,
            "gate_headwater_level": levels(RISING, STILL),
            "gate_tailwater_level": levels(STILL, STILL),
            "pool_wave_round_trip": ROUND_TRIP,
            "settling": 1,
        }
        run = run_by_hand(EVERY, values=values | given)
        return gate_orders(run.assign(order_bay=("order", list(bays) or [0] * count)), allowance)

    return build


def test_the_reading_before_is_the_level_when_the_order_comes(orders):
    (order,) = orders(60.0)
    above, below = order.sides
    assert above.before.value == pytest.approx(10.060)
    assert below.before.value == pytest.approx(9.0)


def test_the_band_is_the_change_of_a_quarter_of_an_hour_and_the_allowance(orders):
    (order,) = orders(60.0, allowance=0.02)
    above, below = order.sides
    assert above.before.band == pytest.approx(0.015 + 0.02)
    assert above.after.band == pytest.approx(0.015 + 0.02)
    assert below.before.band == pytest.approx(0.02)


def test_the_band_after_also_sees_a_change_that_comes_later(orders, at):
    steps = np.where(EVERY > 90, 9.3, 9.0)
    (order,) = orders(60.0, gate_tailwater_level=levels(steps, STILL))
    assert order.read_after == at(85)
    assert order.sides[1].after.band == pytest.approx(0.3 + ALLOWANCE)


def test_the_band_does_not_reach_across_the_move_before(orders):
    jump = np.where(EVERY >= 60, 9.3, 9.0)
    _, second = orders(50.0, 65.0, gate_tailwater_level=levels(jump, STILL))
    assert second.sides[1].before.band == pytest.approx(0.3 + ALLOWANCE)
    _, second = orders(55.0, 65.0, gate_tailwater_level=levels(jump, STILL))
    assert second.sides[1].before.band == pytest.approx(ALLOWANCE)


def test_readings_after_wait_one_round_trip_from_when_the_leaf_stands(orders, at):
    (order,) = orders(60.0)
    assert order.read_after == at(60 + 5 + 20)
    assert order.sides[0].after.value == pytest.approx(10.085)
    assert order.sides[0].after.is_settling


def test_readings_after_come_earlier_where_the_pools_have_settled(orders, at):
    settling = np.where((EVERY >= 60) & (EVERY < 75), 1, 0)[:, None] * np.ones(2, int)
    (order,) = orders(60.0, settling=settling)
    assert order.read_after == at(75)
    assert not order.sides[0].after.is_settling


def test_readings_after_come_before_the_gate_moves_again(orders, at):
    first, second = orders(60.0, 75.0)
    assert (first.read_after, first.waits_for_next_move) == (at(75), True)
    assert not second.waits_for_next_move


def test_a_refused_order_moves_nothing_and_has_no_readings(orders, at):
    first, second = orders(60.0, 75.0, order_status=np.array([ACCEPTED, REFUSED]))
    assert (first.read_after, first.waits_for_next_move) == (at(85), False)
    assert (second.sides, second.moves, second.is_refused) == ((), False, True)


def test_without_a_round_trip_the_readings_wait_until_all_has_settled(orders, at):
    settling = np.where(EVERY < 120, 1, 0)[:, None] * np.ones(2, int)
    (order,) = orders(60.0, pool_wave_round_trip=np.nan, settling=settling)
    assert order.read_after == at(120)


def test_the_surge_is_the_greatest_bound_after_the_order(orders):
    bound = levels(np.select([EVERY == 60, EVERY == 65], [0.5, 0.2], 0.1), STILL)
    (order,) = orders(60.0, surge_height_bound_downstream=bound)
    assert order.sides[1].surge == pytest.approx(0.2)


def test_bays_that_move_together_are_one_move(orders, at):
    together = orders(60.0, 60.0, 62.0, 120.0, bays=(1, 2, 3, 1))
    assert [(order.leaf, order.read_after) for order in together[:3]] == [
        ("Orchard check, bay 1", at(85)),
        ("Orchard check, bay 2", at(85)),
        ("Orchard check, bay 3", at(87)),
    ]
    assert [order.sides[0].before.band for order in together[:2]] == pytest.approx([0.015 + ALLOWANCE] * 2)


def test_orders_come_in_time_order_and_are_numbered_by_gate(orders):
    gates = np.array(["Orchard check", "Mill check", "Orchard check"], object)
    found = orders(90.0, 30.0, 60.0, order_gate=gates)
    assert [(order.gate, order.number) for order in found] == [
        ("Mill check", 1),
        ("Orchard check", 1),
        ("Orchard check", 2),
    ]


def test_moves_of_rules_are_no_orders_and_are_counted(run_by_hand):
    sources = np.array([FROM_SCHEDULE, "hold discharge", "hold discharge"], object)
    run = run_by_hand(
        EVERY,
        values={
            "order_time": np.array([0.0, 60.0, 120.0]),
            "order_gate": np.full(3, "Mill check", object),
            "order_source": sources,
        },
    )
    assert [order.number for order in gate_orders(run, ALLOWANCE)] == [1]
    assert [(moves.gate, moves.rule, moves.count) for moves in rule_moves(run)] == [("Mill check", "hold discharge", 2)]


def test_a_move_of_a_rule_ends_the_time_for_readings_after(orders, at):
    (order,) = orders(60.0, 70.0, order_source=np.array([FROM_SCHEDULE, "hold discharge"], object))
    assert order.read_after == at(70)


def test_a_staff_gauge_beside_the_gate_takes_the_place_of_the_level(run_by_hand):
    run = run_by_hand(
        EVERY,
        values={
            "order_time": np.array([3600.0]),
            "order_completed": 3600.0,
            "order_gate": np.array(["Mill check"], object),
            "order_source": np.array([FROM_SCHEDULE], object),
            "gate_headwater_level": levels(STILL, RISING),
        },
    )
    flags = {"flag_meanings": "none upstream downstream"}
    gauged = run.drop_dims("gauge", errors="ignore").assign(
        gauge=("gauge", ["Orchard staff", "Mill staff"]),
        gauge_gate=("gauge", ["Orchard check", "Mill check"]),
        gauge_side=("gauge", [1, 1], flags),
        gauge_zero_level=("gauge", [8.0, 8.5]),
        gauge_reading=(("time", "gauge"), levels(STILL - 8.0, RISING - 8.5)),
    )
    above, below = gate_orders(gauged, ALLOWANCE)[0].sides
    assert (above.gauge, above.before.value) == ("Mill staff", pytest.approx(10.06 - 8.5))
    assert below.gauge == ""


def test_each_gate_has_its_gatekeeper(run_by_hand):
    run = run_by_hand(EVERY, values={"gate_gatekeeper": np.array(["Upper beat", ""], object)})
    assert gatekeepers(run) == {"Orchard check": "Upper beat", "Mill check": ""}


def test_rounds_are_read_from_the_settings_of_the_run(run_by_hand):
    run = run_by_hand(EVERY, values={"pool_target_level": np.array([10.2, 9.1])})
    rule = (
        '{"kind": "gatekeeper rounds", "gate": "Mill check", "target": null, "band": 0.05, "step": 0.1,'
        ' "where": "above the gate", "visits": ["07:00:00", "18:30:00"], "every": null, "hours": null}'
    )
    run.attrs["resolved_settings"] = '{"rules": [{"kind": "hold discharge", "gate": "Mill check"}, ' + rule + "]}"
    (found,) = rounds(run)
    assert (found.gate, found.side, found.visits) == ("Mill check", "upstream", ("07:00", "18:30"))
    assert (found.targets, found.band, found.step) == (((0.0, 9.1),), 0.05, 0.1)
