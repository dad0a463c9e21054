"""Orders in words."""

import numpy as np
import pytest

from toeline.report.order_words import loud, move_words, order_words, reason_words
from toeline.units import Display, UnitSystem


@pytest.mark.parametrize(
    ("kind", "value", "words"),
    [
        ("opening", 0.8, "open to 0.80 m"),
        ("opening", 0.0, "close"),
        ("by", 0.1, "open by 0.10 m"),
        ("by", -0.1, "close by 0.10 m"),
        ("discharge", 7.5, "pass 7.500 m3/s"),
    ],
)
def test_an_order_says_what_is_to_be_done(kind, value, words):
    assert order_words(kind, value, Display(UnitSystem.metric)) == words


@pytest.mark.parametrize(
    ("openings", "turn", "mark", "words"),
    [
        ((0.30, 0.36), 0.005, np.nan, "open 12 turns"),
        ((0.36, 0.355), 0.005, np.nan, "close 1 turn"),
        ((0.30, 0.362), 0.005, np.nan, "open 12.4 turns"),
        ((0.30, 0.36), np.nan, 0.02, "open 3 marks to mark 18"),
        ((0.30, 0.36), 0.005, 0.02, "open 12 turns = 3 marks to mark 18"),
        ((0.30, 0.0), 0.005, 0.02, "close fully, 60 turns = 15 marks"),
        ((0.30, 0.36), np.nan, np.nan, "open by 0.060 m"),
    ],
)
def test_a_move_in_turns_marks_or_length(metric, openings, turn, mark, words):
    assert move_words(*openings, turn, mark, metric) == words


def test_lengths_in_a_reason_are_in_the_units_of_the_page():
    reason = "a move of 0.005 m is smaller than the smallest, 0.010 m"
    assert reason_words(reason, Display(UnitSystem.metric)) == reason
    assert (
        reason_words(reason, Display(UnitSystem.us_customary))
        == "a move of 0.02 ft is smaller than the smallest, 0.03 ft"
    )


def test_times_in_a_reason_are_in_hours_and_minutes(metric):
    assert reason_words("the leaf is stuck for another 195 min", metric) == "the leaf is stuck for another 3 h 15 min"


@pytest.mark.parametrize(
    ("move", "capitals"),
    [
        ("open by 0.060 m", "OPEN BY 0.060 m"),
        ("close by 0.20 ft", "CLOSE BY 0.20 ft"),
        ("open 3 marks to mark 18", "OPEN 3 MARKS TO MARK 18"),
        ("do not move", "DO NOT MOVE"),
    ],
)
def test_capitals_leave_the_unit_as_it_is_written(move, capitals):
    assert loud(move) == capitals
