"""How far the answer moves between two runs, on numbers set by hand."""

import numpy as np
import pytest

from toeline.findings.movements import bound_checks, jump_changes, movements
from toeline.results.variables import JUMP_STATES

MINUTES = list(range(11))
SETTLING = np.array([[minute >= 8, False] for minute in MINUTES])
"""The Orchard pool settles in the last three minutes, the Mill pool never."""
GAUGE_READING = 0.01


def levels(orchard, mill=0.0):
    return np.stack(np.broadcast_arrays(np.asarray(orchard, float), np.full(len(MINUTES), mill)), axis=1)


def found(first, second, quantity, *, settling):
    (movement,) = (
        m for m in movements(first, second, GAUGE_READING) if (m.quantity, m.settling) == (quantity, settling)
    )
    return movement


@pytest.fixture
def as_it_is(run_by_hand):
    values = {"settling": SETTLING, "gate_discharge": 2.0, "jump_toe_distance": np.nan, "jump_state": 2}
    return run_by_hand(MINUTES, values=values)


@pytest.fixture
def moved(run_by_hand):
    """Levels 1, 2, ... 11 mm higher at the lower end of the Orchard pool, and one discharge and one jump elsewhere."""
    discharge = np.full((len(MINUTES), 2), 2.0)
    discharge[3, 1] = 1.7
    state = np.full((len(MINUTES), 2), 2)
    state[4:9, 0] = JUMP_STATES.index("drowned")
    values = {
        "settling": SETTLING,
        "pool_tail_level": levels(0.001 * np.arange(1, 12)),
        "gate_discharge": discharge,
        "jump_state": state,
    }
    return run_by_hand(MINUTES, values=values)


def test_a_run_does_not_move_from_itself(moved):
    assert {m.largest.value for m in movements(moved, moved, GAUGE_READING) if np.isfinite(m.typical)} == {0.0}
    assert jump_changes(moved, moved) == []


def test_levels_are_told_apart_by_the_settling_of_their_pool(as_it_is, moved, at):
    settled, settling = (found(as_it_is, moved, "level", settling=wanted) for wanted in (False, True))
    assert (settled.largest.value, settled.largest.time, settled.where) == (
        pytest.approx(0.008),
        at(7),
        "Orchard pool, lower end",
    )
    assert (settling.largest.value, settling.largest.time) == (pytest.approx(0.011), at(10))


def test_typical_is_the_95th_percentile_over_all_places(as_it_is, moved):
    settled = found(as_it_is, moved, "level", settling=False)
    everywhere = [0.001 * k for k in range(1, 9)] + [0.0] * (8 + 2 * 11)
    assert settled.typical == pytest.approx(np.percentile(everywhere, 95.0))


def test_time_beyond_the_reading_of_a_gauge_is_that_of_the_worst_place(as_it_is, moved):
    assert found(as_it_is, moved, "level", settling=False).shown_hours == 0.0
    assert found(as_it_is, moved, "level", settling=True).shown_hours == pytest.approx(0.5 / 60.0)


def test_discharges_are_held_against_their_own_gate(as_it_is, moved, at):
    settled = found(as_it_is, moved, "discharge", settling=False)
    assert (settled.largest.value, settled.largest.time) == (pytest.approx(0.3), at(3))
    assert (settled.where, settled.original) == ("Mill check", 2.0)


def test_jumps_that_only_one_run_has_are_not_compared(run_by_hand):
    first = run_by_hand([0, 1], values={"jump_toe_distance": [[3.0, np.nan], [3.0, 5.0]]})
    second = run_by_hand([0, 1], values={"jump_toe_distance": [[4.5, 9.0], [np.nan, 5.0]]})
    toe = found(first, second, "jump toe", settling=False)
    assert (toe.largest.value, toe.where) == (1.5, "Orchard check")


def test_nothing_to_compare_is_no_number(as_it_is, moved):
    assert np.isnan(found(as_it_is, moved, "jump toe", settling=False).typical)


def test_jump_states_differ_for_so_many_minutes(as_it_is, moved):
    (change,) = jump_changes(as_it_is, moved)
    assert (change.gate, change.before, change.after) == ("Orchard check", "on_apron", "drowned")
    assert [hours * 60 for hours in (change.settled_hours, change.settling_hours)] == pytest.approx([4.0, 1.0])


def test_only_common_times_are_compared(run_by_hand):
    first = run_by_hand([0, 2, 4], values={"pool_tail_level": 1.0})
    second = run_by_hand([0, 1, 2], values={"pool_tail_level": [[1.0, 1.0], [9.0, 9.0], [1.5, 1.0]]})
    assert found(first, second, "level", settling=False).largest.value == 0.5


BOUND = np.array([0.0, 0.10, 0.05, 0.0])


def bounded(run_by_hand, difference):
    """Runs of four minutes, and the bound above the Orchard check; negative as below a gate that opens."""
    bound = np.stack([-BOUND, np.zeros(4)], axis=1)
    level = np.stack([difference, np.full(4, 0.5)], axis=1)
    quasi_steady = run_by_hand(range(4), values={"surge_height_bound_upstream": bound, "gate_headwater_level": 0.0})
    return bound_checks(quasi_steady, run_by_hand(range(4), values={"gate_headwater_level": level}))


def test_a_bound_covers_what_is_within_it_while_it_stands(run_by_hand):
    (check,) = bounded(run_by_hand, np.array([0.9, -0.08, 0.04, 0.9]))
    assert (check.gate, check.side, check.bound, check.difference) == (
        "Orchard check",
        "above",
        pytest.approx(0.1),
        0.08,
    )
    assert check.excess.value == pytest.approx(-0.01)
    assert (check.hours_beyond, check.hours) == (0.0, pytest.approx(2.0 / 60.0))


def test_a_bound_that_is_passed_tells_by_how_much_and_how_long(run_by_hand, at):
    (check,) = bounded(run_by_hand, np.array([0.0, 0.08, -0.07, 0.0]))
    assert (check.excess.value, check.excess.time) == (pytest.approx(0.02), at(2))
    assert check.hours_beyond == pytest.approx(1.0 / 60.0)
