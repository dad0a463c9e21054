"""Orders become openings: travel, hoist, smallest move and avoided bands, by hand calculation."""

import math
from types import SimpleNamespace

import pytest

from toeline.engine.gate_motion import ACCEPTED, REFUSED, REPLACED, TRIMMED, GateMotion, allowed_opening
from toeline.network.timetable import Marks
from toeline.scenario import Stuck

MINUTE = 60_000


def gate(**keys):
    plain = {
        "name": "G", "max_opening": 1.8, "smallest_move": 0.01, "largest_move": None, "moves_per_hour": None,
        "hoist_speed": 0.1 / 60.0, "avoid_openings": [],
    }  # fmt: skip
    return SimpleNamespace(**plain | keys)


@pytest.mark.parametrize(
    ("wanted", "held", "status"),
    [
        (0.80, 0.80, ACCEPTED),
        (1.80, 1.80, ACCEPTED),
        (2.50, 1.80, TRIMMED),
        (-0.10, 0.00, TRIMMED),
        (0.505, 0.50, REFUSED),  # 5 mm from the opening last ordered
        (0.50, 0.50, ACCEPTED),
    ],
)
def test_travel_and_smallest_move(wanted, held, status):
    opening, became, reason, *_ = allowed_opening(gate(), wanted, ordered=0.50)
    assert (opening, became) == (pytest.approx(held), status)
    assert bool(reason) == (status != ACCEPTED)


@pytest.mark.parametrize(
    ("wanted", "held", "status"),
    [
        (0.00, 0.00, ACCEPTED),  # closing is never avoided
        (0.03, 0.04, TRIMMED),
        (0.01, 0.00, TRIMMED),
        (0.04, 0.04, ACCEPTED),  # an edge may be held
        (0.95, 0.90, TRIMMED),
        (1.05, 1.10, TRIMMED),
    ],
)
def test_avoided_bands_are_not_held(wanted, held, status):
    opening, became, *_ = allowed_opening(gate(avoid_openings=[(0.0, 0.04), (0.9, 1.1)]), wanted, ordered=0.5)
    assert (opening, became) == (pytest.approx(held), status)


def test_leaf_moves_linearly_at_hoist_speed_and_stands_on_the_millisecond():
    motion = GateMotion(gate(), 0.50)
    record = motion.order(10 * MINUTE, "opening", 0.75, 0.75)
    assert motion.until == 10 * MINUTE + 150_000  # 0.25 m at 0.10 m/min
    assert motion.opening_at(11 * MINUTE) == pytest.approx(0.60)
    assert motion.rate() == pytest.approx(0.1 / 60.0)
    motion.arrive(motion.until)
    assert not motion.is_moving
    assert record.completed == 10 * MINUTE + 150_000


@pytest.mark.parametrize(
    ("wanted", "held", "status"),
    [
        (0.75, 0.70, TRIMMED),  # the nearer edge
        (1.75, 1.70, TRIMMED),  # the other edge lies above the travel
        (0.79, 0.70, TRIMMED),  # shared by two bands
        (0.505, 0.50, REFUSED),
        (0.61, 0.60, TRIMMED),
    ],
)
def test_bands_side_by_side_and_at_the_end_of_the_travel(wanted, held, status):
    bands = [(0.60, 0.70), (0.70, 0.90), (1.70, 1.90)]
    opening, became, *_ = allowed_opening(gate(avoid_openings=bands), wanted, ordered=0.50)
    assert (opening, became) == (pytest.approx(held), status)


def test_edge_too_near_to_the_opening_last_ordered_is_refused_and_both_reasons_are_told():
    opening, status, reason, *_ = allowed_opening(gate(avoid_openings=[(0.505, 0.60)]), 0.52, ordered=0.50)
    assert (opening, status) == (0.50, REFUSED)
    assert "0.505" in reason
    assert "smallest" in reason


def test_beyond_the_travel_with_the_leaf_at_its_end_is_refused():
    assert allowed_opening(gate(), 2.5, ordered=1.8)[:2] == (1.8, REFUSED)


@pytest.mark.parametrize(
    ("distance", "speed", "milliseconds"),
    [
        (0.1234567, 0.1 / 60.0, 74_075),  # 74,074.02 ms: stands at the next whole one
        (0.1, 0.2 / 60.0, 30_000),
        (0.3, 0.03 / 60.0, 600_000),
        (0.0123, 0.005, 2_460),
    ],
)
def test_travel_time_is_told_to_the_millisecond(distance, speed, milliseconds):
    motion = GateMotion(gate(hoist_speed=speed), 0.50)
    motion.order(0, "by", distance, 0.50 + distance)
    assert motion.until == milliseconds


def test_without_a_hoist_speed_the_leaf_is_there_at_once():
    motion = GateMotion(gate(hoist_speed=None), 0.5)
    record = motion.order(0, "opening", 0.9, 0.9)
    assert (motion.opening, record.completed) == (0.9, 0)


def test_order_given_while_the_leaf_moves_replaces_the_one_before():
    motion = GateMotion(gate(), 0.50)
    first = motion.order(0, "opening", 0.80, 0.80)
    motion.arrive(MINUTE)
    second = motion.order(MINUTE, "opening", 0.50, 0.50)
    assert (first.status, first.completed, first.after) == (REPLACED, MINUTE, pytest.approx(0.60))
    assert (second.before, second.status) == (pytest.approx(0.60), ACCEPTED)
    assert motion.until == 2 * MINUTE


def test_refused_order_leaves_a_moving_leaf_alone():
    motion = GateMotion(gate(), 0.50)
    motion.order(0, "opening", 0.80, 0.80)
    motion.arrive(MINUTE)
    record = motion.order(MINUTE, "by", 0.002, motion.ordered + 0.002)
    assert record.status == REFUSED
    assert math.isnan(record.completed)
    assert motion.opening_at(3 * MINUTE) == pytest.approx(0.80)


def test_move_that_the_end_of_the_day_interrupts_says_so():
    motion = GateMotion(gate(), 0.50)
    record = motion.order(0, "opening", 0.80, 0.80)
    motion.arrive(MINUTE)
    motion.end_of_day()
    assert record.is_final
    assert math.isnan(record.completed)
    assert "still moving" in record.reason


def test_move_goes_on_on_the_next_day():
    motion = GateMotion(gate(), 0.60)
    motion.resume(target=0.80, ordered=0.80, remaining=2 * MINUTE)
    assert motion.opening_at(MINUTE) == pytest.approx(0.70)


@pytest.mark.parametrize(
    ("wanted", "held", "status", "is_limited"),
    [
        (0.58, 0.58, ACCEPTED, False),
        (0.75, 0.60, TRIMMED, True),
        (0.20, 0.40, TRIMMED, True),
        (0.60, 0.60, ACCEPTED, False),
    ],
)
def test_one_move_is_at_most_the_largest(wanted, held, status, is_limited):
    found = allowed_opening(gate(largest_move=0.10), wanted, ordered=0.50)
    assert (found.opening, found.status, found.is_limited) == (pytest.approx(held), status, is_limited)


def test_a_largest_move_that_ends_in_an_avoided_band_stops_before_it():
    found = allowed_opening(gate(largest_move=0.10, avoid_openings=[(0.58, 0.70)]), 0.90, ordered=0.50)
    assert found.opening == pytest.approx(0.58)


@pytest.mark.parametrize(
    ("wanted", "held"),
    [
        (0.512, 0.51),
        (0.513, 0.515),
        (0.515, 0.515),
        (0.012, 0.0),  # inside the band from 0 to 2.2 cm: closed is nearer than the mark above the band
        (0.018, 0.025),  # the first mark above the band
        (1.799, 1.8),  # the end of travel may be held
    ],
)
def test_openings_are_rounded_to_marks_that_may_be_held(wanted, held):
    found = allowed_opening(
        gate(avoid_openings=[(0.0, 0.022)]), wanted, ordered=0.80, marks=Marks(0.005, "whole turns")
    )
    assert found.opening == pytest.approx(held)
    assert bool(found.rounding) == (abs(held - wanted) > 1e-6)


def test_rounding_of_an_order_is_listed():
    motion = GateMotion(gate(), 0.50, Marks(0.005, "whole turns"))
    record = motion.order(0, "opening", 0.553, 0.553)
    assert (record.status, record.after) == (TRIMMED, pytest.approx(0.555))
    assert record.reason == "rounded to whole turns of 0.005 m"


def test_moves_an_hour_are_counted_for_orders_and_rules_alike():
    motion = GateMotion(gate(moves_per_hour=2, hoist_speed=None), 0.50)
    assert motion.order(0, "opening", 0.55, 0.55).status == ACCEPTED
    assert motion.propose(10 * MINUTE, "hold discharge", 0.60)[0].status == ACCEPTED
    record, is_limited = motion.propose(59 * MINUTE, "hold discharge", 0.65)
    assert (record.status, record.source, is_limited) == (REFUSED, "hold discharge", True)
    assert record.reason == "2 moves in an hour are the most"
    assert motion.order(60 * MINUTE, "opening", 0.65, 0.65).status == ACCEPTED  # an hour after the first


def test_moves_of_the_hour_before_the_start_count():
    motion = GateMotion(gate(moves_per_hour=1), 0.50)
    motion.resume(target=0.50, ordered=0.50, remaining=0, moves=[-20 * MINUTE])
    assert motion.order(39 * MINUTE, "opening", 0.60, 0.60).status == REFUSED
    assert motion.order(40 * MINUTE, "opening", 0.60, 0.60).status == ACCEPTED


@pytest.mark.parametrize("wanted", [0.505, 0.50])
def test_a_proposal_that_moves_nothing_leaves_no_record(wanted):
    assert GateMotion(gate(), 0.50).propose(0, "hold discharge", wanted) == (None, False)


def test_a_proposal_beyond_travel_from_its_end_leaves_no_record_but_is_limited():
    assert GateMotion(gate(), 1.80).propose(0, "hold discharge", 2.0) == (None, True)


STUCK = [Stuck("G", 10 * MINUTE, 40 * MINUTE)]


def test_a_stuck_leaf_refuses_orders():
    motion = GateMotion(gate(), 0.50, stuck=STUCK)
    record = motion.order(10 * MINUTE, "opening", 0.60, 0.60)
    assert (record.status, record.reason) == (REFUSED, "the leaf is stuck for another 30 min")
    assert motion.order(40 * MINUTE, "opening", 0.60, 0.60).status == ACCEPTED


def test_a_leaf_that_sticks_on_its_way_stands_there():
    motion = GateMotion(gate(), 0.50, stuck=STUCK)
    record = motion.order(9 * MINUTE, "opening", 0.80, 0.80)
    motion.arrive(10 * MINUTE)
    motion.halt_if_stuck(10 * MINUTE)
    assert (motion.is_moving, motion.ordered) == (False, pytest.approx(0.60))
    assert (record.status, record.after, record.completed) == (TRIMMED, pytest.approx(0.60), 10 * MINUTE)
    assert record.reason == "the leaf stuck at an opening of 0.600 m"
