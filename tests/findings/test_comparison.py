"""Runs side by side."""

import numpy as np
import pytest

from toeline.errors import UsageError
from toeline.findings.comparison import IndicatorRow, compare
from toeline.results.variables import JUMP_STATES

MINUTES = range(0, 181, 5)
BEYOND = JUMP_STATES.index("beyond_protection")


@pytest.fixture
def morning(run_by_hand):
    """A run of three hours, steady unless a test says otherwise."""

    def build(minutes=MINUTES, attributes=None, **values):
        run = run_by_hand(minutes, values={"gate_discharge": 8.0, "delivery": 0.4, "demand": 0.4, **values})
        run.attrs |= attributes or {}
        return run

    return build


def jump_beyond(first: int, last: int, margin: float = -0.10) -> dict[str, np.ndarray]:
    """The jump of the Orchard check ends beyond the protection from one row to another."""
    is_beyond = np.zeros((len(MINUTES), 2), dtype=bool)
    is_beyond[first : last + 1, 0] = True
    return {"jump_state": np.where(is_beyond, BEYOND, 0), "protection_margin": np.where(is_beyond, margin, 0.2)}


def test_equal_runs_are_alike(morning):
    found = compare({"a": morning(), "b": morning()})
    assert (found.are_alike, found.is_any_graver, found.have_same_inputs) == (True, False, True)
    assert found.contrasts[0].results == ()
    assert found.contrasts[0].first_seen is None
    assert not any(any(row.best) for row in found.indicators)


def test_the_largest_difference_is_told_with_place_time_and_beginning(morning, at):
    discharge = np.full((len(MINUTES), 2), 8.0)
    discharge[4:, 1] = 8.2
    discharge[10, 1] = 7.5
    found = compare({"a": morning(), "b": morning(gate_discharge=discharge)})
    (difference,) = found.contrasts[0].results
    assert (difference.quantity, difference.where, difference.unit) == ("discharge", "Mill check", "m3 s-1")
    assert (difference.first, difference.other, difference.difference) == pytest.approx((8.0, 7.5, -0.5))
    assert (difference.time, difference.begins) == (at(50), at(20))
    assert not found.are_alike


def test_what_the_time_step_alone_can_make_is_no_difference(morning):
    assert compare({"a": morning(), "b": morning(pool_tail_level=0.004, gate_discharge=8.004)}).are_alike


def test_the_cause_is_told_before_the_effect(morning):
    found = compare({"a": morning(gate_opening=0.3), "b": morning(gate_opening=0.4, gate_discharge=9.0)})
    assert found.contrasts[0].first_seen.quantity == "opening"


def test_where_only_one_run_has_a_value_nothing_is_compared(morning):
    assert compare({"a": morning(), "b": morning(jump_end_distance=12.0)}).contrasts[0].results == ()


@pytest.mark.parametrize(
    ("first", "other", "is_graver"),
    [
        ({}, jump_beyond(3, 6), True),
        (jump_beyond(3, 6), {}, False),
        (jump_beyond(3, 6), jump_beyond(3, 6), False),
        (jump_beyond(3, 6), jump_beyond(3, 8), True),
        (jump_beyond(3, 6), jump_beyond(3, 6, margin=-0.20), True),
        (jump_beyond(3, 6, margin=-0.20), jump_beyond(3, 5), False),
    ],
    ids=["new", "gone", "the same", "longer", "further", "shorter and less"],
)
def test_an_incident_is_graver_when_new_longer_or_further_over_its_limit(morning, first, other, is_graver):
    found = compare({"a": morning(**first), "b": morning(**other)})
    assert found.is_any_graver == is_graver
    assert found.are_alike == (first.keys() == other.keys() and not any_unequal(first, other))


def any_unequal(first, other) -> bool:
    return any((first[name] != other[name]).any() for name in first)


def test_incidents_of_one_kind_and_place_are_added_up(morning):
    twice = {name: np.where(np.arange(len(MINUTES))[:, None] > 18, jump_beyond(25, 26)[name], values)
             for name, values in jump_beyond(3, 6).items()}  # fmt: skip
    found = compare({"a": morning(**twice), "b": morning()})
    row = next(row for row in found.incidents if row.what == "jump beyond protection")
    assert (row.where, row.sums[0].count, row.sums[1]) == ("Orchard check", 2, None)
    assert row.sums[0].seconds == pytest.approx(sum_of_spells(twice["protection_margin"][:, 0]))


def sum_of_spells(margin: np.ndarray) -> float:
    """Seconds below zero of a series of straight lines through samples 5 minutes apart, by fine sampling."""
    fine = np.interp(np.arange(0, 180 * 60), np.array(MINUTES) * 60, margin)
    return float((fine < 0).sum())


@pytest.mark.parametrize(
    ("better", "values", "best"),
    [
        ("lower", (3.0, 1.0, 2.0), (False, True, False)),
        ("higher", (3.0, 1.0, 3.0), (True, False, True)),
        ("none", (3.0, 1.0, 2.0), (False, False, False)),
        ("lower", (2.0, 2.0, 2.0), (False, False, False)),
        ("lower", (2.0, np.nan, 1.0), (False, False, True)),
        ("lower", (2.0, np.nan, np.nan), (False, False, False)),
    ],
)
def test_the_best_value(better, values, best):
    assert IndicatorRow("an indicator", "", "1", better, "", values).best == best


def test_runs_of_unequal_length_are_compared_over_the_time_of_both(morning, at):
    late = np.full((len(MINUTES), 2), 8.0)
    late[-3:] = 20.0
    found = compare({"a": morning(gate_discharge=late), "b": morning(range(0, 91, 5))})
    assert (found.start, found.end, found.is_cut) == (at(0), at(90), True)
    assert found.are_alike


def test_other_output_times_are_compared_at_the_common_ones(morning):
    found = compare({"a": morning(), "b": morning(range(0, 181, 10))})
    assert (found.steps, found.own_steps, found.is_cut) == (19, (37, 19), False)


def test_runs_of_another_date_are_each_counted_from_their_start(morning, at):
    later = morning(gate_discharge=9.0)
    later = later.assign_coords(time=later.time + np.timedelta64(90, "D"))
    found = compare({"a": morning(), "b": later})
    assert (found.is_by_elapsed_time, found.start, found.end) == (True, at(0), at(180))
    assert found.contrasts[0].first_seen.begins == at(0)


def test_a_run_that_stopped_early_is_compared_and_told(morning, run_by_hand):
    stopped = run_by_hand(range(0, 91, 5), values={"gate_discharge": 8.0}, outcome="stopped at 07:30: no step")
    found = compare({"a": morning(), "b": stopped})
    assert found.runs[1].outcome.startswith("stopped")
    assert found.is_any_graver


def test_a_run_without_any_step_is_refused(morning, run_by_hand):
    with pytest.raises(UsageError, match="b was stopped before anything reached the disk"):
        compare({"a": morning(), "b": run_by_hand((), values={})})


def test_runs_of_different_canals_are_refused(morning):
    with pytest.raises(UsageError, match=r"different canals.*b on Alder branch"):
        compare({"a": morning(), "b": morning(attributes={"canal": "Alder branch"})})


@pytest.mark.parametrize("count", [0, 1, 27])
def test_there_must_be_two_runs_and_no_more_than_letters(morning, count):
    with pytest.raises(UsageError, match=f"found {count} to compare; allowed: 2 to 26"):
        compare({str(number): morning() for number in range(count)})


def test_other_inputs_are_told(morning):
    found = compare({"a": morning(), "b": morning(attributes={"shared_input_hash": "1" * 64})})
    assert not found.have_same_inputs
    assert not found.contrasts[0].has_same_inputs
