"""Rolling windows against slow counting, window by window."""

from itertools import combinations, pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from toeline.findings.rolling import RollingWindow
from toeline.findings.spells import spells

START = np.datetime64("2031-05-04", "ns")
SECOND = np.timedelta64(1, "s")
repeatable = settings(deadline=None, derandomize=True, database=None, max_examples=150)


def instants(seconds):
    return START + np.round(np.asarray(seconds, float) * 1e9).astype(np.int64).astype("timedelta64[ns]")


def seconds_of(times):
    return (times - START) / SECOND


@st.composite
def series(draw):
    """Irregular output times [s], levels [m], and a window from less than a step to longer than the run."""
    steps = draw(st.lists(st.integers(1, 60), min_size=1, max_size=15))
    times = np.concatenate(([0.0], np.cumsum(steps)))
    levels = draw(st.lists(st.integers(-50, 50), min_size=times.size, max_size=times.size))
    return times, np.array(levels) / 100.0, float(draw(st.integers(1, 900)))


def fall_to(end, times, levels, window):
    """The largest fall inside the window that ends there: from its beginning, and from every step inside."""
    begin = max(end - window, times[0])
    heights = [np.interp(begin, times, levels)]
    heights += [level for time, level in zip(times, levels, strict=True) if begin <= time <= end]
    now = np.interp(end, times, levels)
    return max(max(heights) - now, 0.0)


def fine_grid(times, window):
    """Every second, and every instant at which a window meets a step."""
    ends = np.concatenate((np.arange(times[0], times[-1] + 1.0), times, times + window))
    return np.unique(ends[ends <= times[-1]])


@repeatable
@given(series())
def test_the_fall_in_every_window_is_that_of_slow_counting(given_series):
    times, levels, window = given_series
    rolling = RollingWindow(instants(times), window)
    expected = [fall_to(end, times, levels, window) for end in seconds_of(rolling.times)]
    np.testing.assert_allclose(rolling.falls(levels), expected, atol=1e-9)


@repeatable
@given(series())
def test_no_window_on_a_fine_grid_has_a_larger_fall(given_series):
    times, levels, window = given_series
    largest = RollingWindow(instants(times), window).falls(levels).max()
    assert largest == pytest.approx(
        max(fall_to(end, times, levels, window) for end in fine_grid(times, window)), abs=1e-9
    )


@repeatable
@given(series(), st.integers(1, 60))
def test_with_its_corners_the_fall_is_linear_wherever_it_passes_the_limit(given_series, limit_cm):
    times, levels, window = given_series
    limit = limit_cm / 100.0
    rolling = RollingWindow(instants(times), window)
    at, falls = rolling.corners(levels, rolling.falls(levels), limit)
    grid = fine_grid(times, window)
    told = np.interp(grid, seconds_of(at), falls)
    slow = np.array([fall_to(end, times, levels, window) for end in grid])
    np.testing.assert_array_equal(told > limit + 1e-6, slow > limit + 1e-6)
    np.testing.assert_allclose(np.where(slow > limit, told, 0.0), np.where(slow > limit, slow, 0.0), atol=1e-6)


@repeatable
@given(series(), st.integers(1, 60))
def test_an_incident_begins_and_ends_where_the_fall_passes_the_limit(given_series, limit_cm):
    times, levels, window = given_series
    limit = limit_cm / 100.0
    rolling = RollingWindow(instants(times), window)
    at, falls = rolling.corners(levels, rolling.falls(levels), limit)
    for spell in spells(falls > limit, at, limit - falls):
        for instant in (spell.start, spell.end):
            is_edge = instant in (at[0], at[-1])
            value = fall_to(seconds_of(instant), times, levels, window)
            assert value == pytest.approx(limit, abs=1e-6) or (is_edge and value >= limit - 1e-6)


@repeatable
@given(series())
def test_no_two_steps_within_a_window_are_further_apart_upward_than_the_largest_rise(given_series):
    times, levels, window = given_series
    rises = RollingWindow(instants(times), window).falls(-levels)
    for earlier, later in combinations(range(times.size), 2):
        if times[later] - times[earlier] <= window:
            assert levels[later] - levels[earlier] <= rises.max() + 1e-9


@repeatable
@given(series())
def test_what_adds_up_in_a_window_is_that_of_slow_counting(given_series):
    times, levels, window = given_series
    amounts = np.abs(levels[1:])
    rolling = RollingWindow(instants(times), window)
    for end, found in zip(
        seconds_of(rolling.times), rolling.sums(np.concatenate(([0.0], np.cumsum(amounts)))), strict=True
    ):
        slow = sum(
            amount * max(min(end, later) - max(end - window, earlier), 0.0) / (later - earlier)
            for (earlier, later), amount in zip(pairwise(times), amounts, strict=True)
        )
        assert found == pytest.approx(slow, abs=1e-9)


def test_a_window_shorter_than_a_step_takes_its_part_of_an_even_fall():
    rolling = RollingWindow(instants([0, 600]), 60.0)
    assert rolling.falls(np.array([1.0, 0.0])).max() == pytest.approx(0.1)


def test_a_window_longer_than_the_run_sees_all_of_it():
    rolling = RollingWindow(instants([0, 60, 120, 180]), 86_400.0)
    assert rolling.falls(np.array([1.0, 1.2, 0.9, 1.0])).tolist() == pytest.approx([0.0, 0.0, 0.3, 0.2])


def test_a_run_of_one_step_falls_by_nothing():
    rolling = RollingWindow(instants([0]), 60.0)
    times, falls = rolling.corners(np.array([5.0]), rolling.falls(np.array([5.0])), 0.1)
    assert (times.tolist(), falls.tolist()) == (instants([0]).tolist(), [0.0])
