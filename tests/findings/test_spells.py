"""Spells: where they begin and end, and when a crossing can be interpolated."""

import numpy as np
import pytest

from toeline.findings.spells import spells

TIMES = np.datetime64("2031-05-04T00:00", "ns") + np.arange(6) * np.timedelta64(60, "s")


def seconds(instant):
    return (instant - TIMES[0]) / np.timedelta64(1, "s")


def ranges(flags, margin=None):
    margin = None if margin is None else np.array(margin)
    return [(seconds(s.start), seconds(s.end)) for s in spells(np.array(flags, dtype=bool), TIMES, margin)]


def test_no_spell():
    assert ranges([0, 0, 0, 0, 0, 0]) == []


def test_spells_separated_by_gaps_are_separate():
    found = spells(np.array([0, 1, 1, 0, 1, 0], dtype=bool), TIMES)
    assert [(s.first, s.last) for s in found] == [(1, 2), (4, 4)]


def test_without_a_margin_the_steps_at_which_the_change_is_seen_count():
    assert ranges([0, 1, 1, 0, 0, 0]) == [(60.0, 180.0)]


def test_crossings_of_a_margin_are_interpolated():
    assert ranges([0, 1, 1, 0, 0, 0], [0.1, -0.3, -0.3, 0.1, 1.0, 1.0]) == [(15.0, 165.0)]


def test_a_margin_that_just_reaches_zero_ends_the_spell_there():
    assert ranges([0, 1, 1, 0, 0, 0], [0.0, -0.3, -0.3, 0.0, 1.0, 1.0]) == [(0.0, 180.0)]


@pytest.mark.parametrize("before", [np.nan, -0.1, np.inf])
def test_where_the_margin_does_not_cross_the_step_counts(before):
    assert ranges([0, 1, 1, 0, 0, 0], [before, -0.3, -0.3, np.nan, 1.0, 1.0]) == [(60.0, 180.0)]


def test_a_spell_from_the_first_row_to_the_last():
    (spell,) = spells(np.ones(6, dtype=bool), TIMES, np.full(6, -1.0))
    assert (spell.start, spell.end, spell.runs_to_end) == (TIMES[0], TIMES[-1], True)


def test_a_spell_that_ends_on_the_last_row_does_not_run_to_the_end():
    (spell,) = spells(np.array([0, 0, 0, 0, 1, 0], dtype=bool), TIMES)
    assert (spell.end, spell.runs_to_end) == (TIMES[-1], False)


def test_no_rows_no_spells():
    assert spells(np.array([], dtype=bool), TIMES[:0], np.array([])) == []
