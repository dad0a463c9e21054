"""How two schedules differ, in words."""

from dataclasses import replace

import numpy as np
import pytest

from toeline.findings.input_differences import InputDifference
from toeline.findings.schedule_differences import GateOrder, OrderDifference, RuleMoves, ScheduleDifference
from toeline.report.run_clock import RunClock
from toeline.report.schedule_words import MOST_TOLD, order_difference_words, schedule_words
from toeline.units import Display, UnitSystem

GATE = "Mill check"


def order(clock: str, kind: str, value: float, before: float = 0.40) -> GateOrder:
    """An order at a time of the clock at the canal, two hours ahead of UTC."""
    return GateOrder(np.datetime64(f"2031-05-04T{clock}", "ns") - np.timedelta64(2, "h"), GATE, kind, value, before)


@pytest.fixture
def clock(invented_run) -> RunClock:
    return RunClock(invented_run())


@pytest.mark.parametrize(
    ("first", "other", "words"),
    [
        (order("07:00", "by", 0.10), order("07:20", "by", 0.06),
         "B raises Mill check by 6 cm at 07:20 instead of 10 cm at 07:00"),
        (order("07:00", "by", 0.10), order("07:00", "by", 0.06),
         "B raises Mill check by 6 cm at 07:00 instead of 10 cm"),
        (order("07:00", "by", -0.025), order("07:20", "by", -0.025),
         "B lowers Mill check by 2.5 cm at 07:20 instead of 07:00"),
        (order("07:00", "by", -0.10), order("07:00", "by", 0.06),
         "B raises Mill check by 6 cm at 07:00 instead of lowering it by 10 cm"),
        (order("07:00", "opening", 0.45), order("07:10", "opening", 0.50),
         "B raises Mill check to 0.50 m at 07:10 instead of 0.45 m at 07:00"),
        (order("07:00", "opening", 0.30), order("07:10", "opening", 0.50),
         "B raises Mill check to 0.50 m at 07:10 instead of lowering it to 0.30 m at 07:00"),
        (order("07:00", "by", 0.10), order("07:00", "opening", 0.55),
         "B raises Mill check to 0.55 m at 07:00 instead of by 10 cm"),
        (order("07:00", "discharge", 8.0), order("07:30", "discharge", 8.5),
         "B sets Mill check to pass 8.500 m3/s at 07:30 instead of 8.000 m3/s at 07:00"),
        (order("07:00", "discharge", 8.0), order("07:00", "opening", 0.0),
         "B closes Mill check at 07:00 instead of setting it to pass 8.000 m3/s"),
        (order("07:00", "opening", 0.0), order("08:00", "opening", 0.0),
         "B closes Mill check at 08:00 instead of 07:00"),
        (order("07:00", "opening", 0.0), order("08:00", "opening", 0.40),
         "B holds Mill check at 0.40 m at 08:00 instead of closing it at 07:00"),
        (order("07:00", "by", 0.10), None, "B does not raise Mill check by 10 cm at 07:00"),
        (None, order("07:00", "opening", 0.0), "B also closes Mill check at 07:00"),
        (None, order("07:00", "discharge", 8.0), "B also sets Mill check to pass 8.000 m3/s at 07:00"),
    ],
)  # fmt: skip
def test_a_difference_in_words(first, other, words, clock, metric):
    assert order_difference_words("B", OrderDifference(GATE, first, other), clock, metric) == words


@pytest.mark.parametrize(
    ("first", "other", "words"),
    [
        ({}, {"status": "refused"}, "B is to raise Mill check by 10 cm at 07:00 as well (refused in B)"),
        ({"status": "refused"}, {}, "B is to raise Mill check by 10 cm at 07:00 as well (refused in the first)"),
        (None, {"status": "refused"}, "B also raises Mill check by 10 cm at 07:00 (refused in B)"),
        ({"status": "refused"}, None, "B does not raise Mill check by 10 cm at 07:00 (refused in the first)"),
        (None, {"status": "trimmed", "opening_after": 0.42},
         "B also raises Mill check by 10 cm at 07:00 (trimmed to 0.42 m)"),
    ],
)  # fmt: skip
def test_what_was_not_done_as_ordered_is_told(first, other, words, clock, metric):
    asked = order("07:00", "by", 0.10)
    pair = (None if outcome is None else replace(asked, **outcome) for outcome in (first, other))
    assert order_difference_words("B", OrderDifference(GATE, *pair), clock, metric) == words


def test_us_customary_moves_are_in_hundredths_of_a_foot(clock):
    difference = OrderDifference(GATE, order("07:00", "by", 0.3048), order("07:00", "by", 0.06096))
    words = order_difference_words("B", difference, clock, Display(UnitSystem.us_customary))
    assert words == "B raises Mill check by 0.20 ft at 07:00 instead of 1.00 ft"


def shifted(count: int, minutes: list[int]) -> tuple[OrderDifference, ...]:
    """So many orders that the other run gives so many minutes later, by turns."""
    firsts = [order(f"07:{minute:02d}", "by", 0.01) for minute in range(count)]
    others = [
        GateOrder(one.time + np.timedelta64(minutes[place % len(minutes)], "m"), GATE, "by", 0.01, 0.4)
        for place, one in enumerate(firsts)
    ]
    return tuple(OrderDifference(GATE, *pair) for pair in zip(firsts, others, strict=True))


@pytest.mark.parametrize(
    ("minutes", "words"),
    [
        ([60], "later, by 1 h"),
        ([30, 60], "later, by up to 1 h"),
        ([-30], "earlier, by 30 min"),
        ([-30, 60], "earlier or later, by up to 1 h"),
    ],
)
def test_many_differences_are_summed_up_gate_by_gate(minutes, words, clock, metric):
    count = MOST_TOLD + 1
    difference = ScheduleDifference(shifted(count, minutes), alike=0, rule_moves=())
    assert list(schedule_words("B", difference, clock, metric)) == [f"{GATE}: {count} orders {words}"]


def test_a_sum_tells_what_was_refused(clock, metric):
    first, *others = shifted(MOST_TOLD + 1, [60])
    refused = OrderDifference(GATE, first.first, replace(first.other, status="refused"))
    difference = ScheduleDifference((refused, *others), 0, ())
    [told] = schedule_words("B", difference, clock, metric)
    assert told.endswith("; 1 refused in this run")


def test_a_sum_names_what_was_changed_added_and_dropped(clock, metric):
    orders = (
        *shifted(MOST_TOLD, [10]),
        OrderDifference(GATE, order("08:00", "by", 0.1), order("08:00", "by", 0.2)),
        OrderDifference(GATE, None, order("09:00", "by", 0.1)),
        OrderDifference(GATE, order("10:00", "by", 0.1), None),
    )
    (words,) = schedule_words("B", ScheduleDifference(orders, 0, ()), clock, metric)
    assert words == (
        f"{GATE}: {MOST_TOLD} orders later, by 10 min; 1 order changed in what is asked; 1 added; 1 dropped"
    )


@pytest.mark.parametrize(
    ("first", "other", "words"),
    [
        (0, 24, "B: under the rule hold upstream level the Mill check moves 24 times"),
        (13, 1, "B: under the rule hold upstream level the Mill check moves once instead of 13 times"),
        (13, 0, "B: under the rule hold upstream level the Mill check moves at no time instead of 13 times"),
    ],
)
def test_moves_by_rules_are_counted(first, other, words, clock, metric):
    moves = RuleMoves("hold upstream level", GATE, first, other)
    assert list(schedule_words("B", ScheduleDifference((), 0, (moves,)), clock, metric)) == [words]


RULE = ("rules", "hold upstream level")


@pytest.mark.parametrize(
    ("differences", "words"),
    [
        ([InputDifference(RULE, None, {GATE: {}, "Tail gate": {}}, None)],
         ["B follows the rule hold upstream level at Mill check and Tail gate"]),
        ([InputDifference((*RULE, GATE), {"gain": 1.0}, None, None)],
         ["B does not follow the rule hold upstream level at Mill check"]),
        ([InputDifference((*RULE, GATE, "band"), 0.02, 0.03, "length")],
         ["B: rule hold upstream level at Mill check: band 0.03 m instead of 0.02 m"]),
        ([InputDifference((*RULE, GATE, "every"), 300.0, 600.0, "duration")],
         ["B: rule hold upstream level at Mill check: every 10 min instead of 5 min"]),
        ([InputDifference((*RULE, gate, "gain"), 0.4, 0.8, None) for gate in (GATE, "Heron check", "Tail gate")],
         ["B: rule hold upstream level at Mill check, Heron check and Tail gate: gain 0.8 instead of 0.4"]),
        ([InputDifference(("stuck", GATE), None, [[7_200_000, 9_000_000]], None)],
         ["B: the leaf of Mill check is stuck from 08:00 to 08:30"]),
        ([InputDifference(("stuck", GATE), [[0, 1]], None, None)], ["B: the leaf of Mill check is not stuck"]),
    ],
)  # fmt: skip
def test_what_plans_say_beside_their_orders(differences, words, clock, metric):
    difference = ScheduleDifference((), 0, (), tuple(differences))
    assert list(schedule_words("B", difference, clock, metric)) == words


def test_moves_of_a_rule_that_is_not_followed_are_not_told_again(clock, metric):
    dropped = InputDifference(RULE, {GATE: {}}, None, None)
    difference = ScheduleDifference((), 0, (RuleMoves(RULE[1], GATE, 13, 0),), (dropped,))
    assert list(schedule_words("B", difference, clock, metric)) == [
        "B does not follow the rule hold upstream level at Mill check"
    ]
