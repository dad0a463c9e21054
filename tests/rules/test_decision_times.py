"""Decisions by the clock of the canal: intervals from midnight, visits, working hours, days of 23 hours."""

from datetime import datetime, time, timedelta, timezone
from types import SimpleNamespace
from zoneinfo import ZoneInfo

import pytest

from toeline.rules.decision_times import decision_times, overlap

HOUR = 3_600_000
START = datetime(2031, 5, 4, tzinfo=timezone(timedelta(hours=2)))


def hours_of(given: dict, start: datetime = START, length: int = 24) -> list[float]:
    return (decision_times(SimpleNamespace(**given), start, length * HOUR) / HOUR).tolist()


def test_intervals_count_from_midnight_whatever_the_start():
    assert hours_of({"every": 5400.0}, START.replace(hour=5), 4) == [1.0, 2.5]  # 06:00, 07:30


def test_an_interval_that_does_not_divide_the_day_begins_anew_at_midnight():
    assert hours_of({"every": 36_000.0}, length=48) == [0.0, 10.0, 20.0, 24.0, 34.0, 44.0]


def test_visits_come_every_day():
    visits = (time(7), time(18, 30))
    assert hours_of({"visits": visits}, length=48) == [7.0, 18.5, 31.0, 42.5]


def test_working_hours_leave_the_night_out():
    assert hours_of({"every": 14_400.0, "hours": (time(6), time(18))}) == [8.0, 12.0, 16.0]


def test_working_hours_may_span_midnight():
    assert hours_of({"every": 14_400.0, "hours": (time(18), time(6))}) == [0.0, 4.0, 20.0]


def test_visits_follow_the_clock_when_it_changes():
    start = datetime(2031, 3, 30, tzinfo=ZoneInfo("Europe/Berlin"))  # a day of 23 hours
    assert hours_of({"visits": (time(1), time(7))}, start, 23) == [1.0, 6.0]


@pytest.mark.parametrize(
    ("first", "second", "found"),
    [
        (None, (time(6), time(18)), True),
        ((time(6), time(18)), (time(18), time(6)), False),
        ((time(6), time(18)), (time(17), time(20)), True),
        ((time(22), time(2)), (time(1), time(3)), True),
        ((time(22), time(2)), (time(2), time(22)), False),
    ],
)
def test_overlap_of_working_hours(first, second, found):
    assert overlap(first, second) is found
