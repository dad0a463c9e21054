"""How the schedules of two runs differ, order by order."""

import json

import numpy as np
import pytest
import xarray as xr

from toeline.findings.input_differences import InputDifference
from toeline.findings.schedule_differences import (
    GateOrder,
    OrderDifference,
    RuleMoves,
    paired_orders,
    schedule_difference,
)
from toeline.results.variables import ORDER_KINDS, ORDER_STATUSES

GATES = ["Orchard check", "Mill check"]


def time(clock: str) -> np.datetime64:
    return np.datetime64(f"2031-05-04T{clock}", "ns")


def order(clock: str, kind: str = "opening", value: float = 0.5, gate: str = "Mill check") -> GateOrder:
    return GateOrder(time(clock), gate, kind, value, 0.4, opening_after=0.4 + 0.05)


def run_of(*orders: GateOrder, sources: list[str] | None = None, settings: dict | None = None) -> xr.Dataset:
    """As much of a run as its orders need."""
    kinds = np.array([ORDER_KINDS.index(order.kind) for order in orders], dtype="i1")
    columns = {
        "order_time": np.array([order.time for order in orders], dtype="datetime64[ns]"),
        "order_gate": np.array([order.gate for order in orders], dtype=object),
        "order_value": np.array([order.value for order in orders], dtype=float),
        "order_opening_before": np.array([order.opening_before for order in orders], dtype=float),
        "order_bay": np.array([order.bay for order in orders], dtype=np.int32),
    }
    run = xr.Dataset({name: ("order", values) for name, values in columns.items()}, {"gate": GATES})
    run["order_kind"] = ("order", kinds, {"flag_meanings": " ".join(ORDER_KINDS)})
    run["order_status"] = ("order", np.zeros(len(orders), dtype="i1"), {"flag_meanings": " ".join(ORDER_STATUSES)})
    run["order_opening_after"] = run["order_opening_before"] + 0.05
    run["bay_gate"] = ("bay", np.array([], dtype=object))
    run["order_source"] = ("order", np.array(sources or ["schedule"] * len(orders), dtype=object))
    return run.assign_attrs(resolved_settings=json.dumps(settings or {}))


def test_bays_are_compared_each_by_itself():
    first = run_of(order("06:00", value=0.4), GateOrder(time("07:00"), "Mill check", "opening", 0.5, 0.4, 2))
    other = run_of(order("06:00", value=0.4), GateOrder(time("07:00"), "Mill check", "opening", 0.5, 0.4, 1))
    differences = schedule_difference(first, other).orders
    assert [(one.gate, one.first is None) for one in differences] == [
        ("Mill check, bay 1", True),
        ("Mill check, bay 2", False),
    ]


def test_equal_schedules_have_no_difference():
    run = run_of(order("06:00"), order("07:00", "by", 0.1))
    difference = schedule_difference(run, run)
    assert (difference.orders, difference.alike, difference.rule_moves) == ((), 2, ())


@pytest.mark.parametrize(
    ("first", "other"),
    [
        ([order("07:00", "by", 0.10)], [order("07:20", "by", 0.06)]),
        ([order("07:00")], [order("09:55")]),
        ([order("07:00", value=0.4)], [order("07:00", value=0.9)]),
        ([order("07:00", "by", 0.1)], [order("07:00", "discharge", 8.0)]),
    ],
    ids=["moved in time and size", "moved by hours", "another size", "another kind"],
)
def test_near_orders_are_told_as_one_that_was_changed(first, other):
    assert paired_orders(first, other) == [(first[0], other[0])]


@pytest.mark.parametrize(
    ("first", "other"),
    [
        ([order("06:00", value=0.4)], [order("09:00", value=0.5)]),
        ([order("06:00", "by", 0.1)], [order("07:30", "by", -0.1)]),
    ],
    ids=["far in time", "in the other sense"],
)
def test_orders_far_apart_are_one_dropped_and_one_added(first, other):
    assert paired_orders(first, other) == [(first[0], None), (None, other[0])]


def test_an_added_order_leaves_the_others_their_partners():
    steps = [order("06:00", value=0.4), order("07:00", value=0.5), order("08:00", value=0.6)]
    added = order("06:30", value=0.45)
    assert paired_orders(steps, [steps[0], added, *steps[1:]]) == [
        (steps[0], steps[0]),
        (None, added),
        (steps[1], steps[1]),
        (steps[2], steps[2]),
    ]


def test_a_dropped_order_at_the_start_is_seen():
    steps = [order("06:00", value=0.4), order("06:10", value=0.5)]
    assert paired_orders(steps, steps[1:]) == [(steps[0], None), (steps[1], steps[1])]


def test_pairs_cost_no_more_than_any_other_pairing_that_does_not_cross():
    """Against all pairings of short schedules, by brute force."""
    rng = np.random.default_rng(5)
    for _ in range(60):
        first, other = ([random_order(rng) for _ in range(rng.integers(0, 5))] for _ in range(2))
        first, other = (sorted(orders, key=lambda one: one.time) for orders in (first, other))
        assert cost_of(paired_orders(first, other)) == pytest.approx(least_cost(first, other))


def random_order(rng: np.random.Generator) -> GateOrder:
    return order(f"{rng.integers(5, 9):02d}:{rng.integers(0, 60):02d}", "by", float(rng.choice([-0.1, 0.1, 0.2])))


def cost_of(pairs: list) -> float:
    return sum(1.5 if None in pair else apart(*pair) for pair in pairs)


def apart(first: GateOrder, other: GateOrder) -> float:
    hours = abs(float((other.time - first.time) / np.timedelta64(1, "h")))
    return hours + (0.0 if first.value == other.value else 2.0 if first.value * other.value < 0 else 0.5)


def least_cost(first: list[GateOrder], other: list[GateOrder]) -> float:
    if not first or not other:
        return 1.5 * (len(first) + len(other))
    return min(
        1.5 + least_cost(first[1:], other),
        1.5 + least_cost(first, other[1:]),
        apart(first[0], other[0]) + least_cost(first[1:], other[1:]),
    )


def test_each_gate_is_compared_by_itself_from_the_head_down():
    first = run_of(order("06:00", gate="Mill check"), order("06:00", gate="Orchard check"))
    assert [one.gate for one in schedule_difference(first, run_of()).orders] == GATES
    assert schedule_difference(first, run_of()).orders[0] == OrderDifference(
        "Orchard check", order("06:00", gate="Orchard check"), None
    )


def test_moves_by_rules_are_counted_and_are_no_orders():
    rule = "hold upstream level"
    first = run_of(order("06:00"), order("06:05"), sources=["schedule", rule])
    times = ("06:05", "06:10", "06:15")
    other = run_of(order("06:00"), *map(order, times), sources=["schedule", rule, rule, rule])
    difference = schedule_difference(first, other)
    assert (difference.orders, difference.alike) == ((), 1)
    assert difference.rule_moves == (RuleMoves(rule, "Mill check", 1, 3),)


def test_rules_and_stuck_leaves_that_differ_are_found_by_kind_and_gate():
    rule = {"kind": "hold upstream level", "gate": "Mill check", "band": 0.02, "every": 300.0}
    measured = {"hold upstream level": {"band": "length", "every": "duration"}}
    first = run_of(settings={"rules": [rule], "rule_dimensions": measured})
    stuck = [
        {"gate": "Mill check", "begin": 0, "end": 60_000, "bay": 0},
        {"gate": "Mill check", "begin": 0, "end": 90_000, "bay": 2},
    ]
    other = run_of(settings={"rules": [rule | {"band": 0.03}], "stuck": stuck, "rule_dimensions": measured})
    assert schedule_difference(first, other).beside_orders == (
        InputDifference(("rules", "hold upstream level", "Mill check", "band"), 0.02, 0.03, "length"),
        InputDifference(("stuck", "Mill check"), None, [[0, 60_000]], None),
        InputDifference(("stuck", "Mill check, bay 2"), None, [[0, 90_000]], None),
    )


def test_an_order_that_one_run_refuses_is_no_order_alike():
    first, other = run_of(order("06:00"), order("07:00")), run_of(order("06:00"), order("07:00"))
    other["order_status"][1] = ORDER_STATUSES.index("refused")
    difference = schedule_difference(first, other)
    assert difference.alike == 1
    [changed] = difference.orders
    assert (changed.first.status, changed.other.status) == ("accepted", "refused")
