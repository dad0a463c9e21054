"""Times and durations as people say them."""

from datetime import datetime
from zoneinfo import ZoneInfo

import pytest

from toeline.report.clock import clock_text, duration_text, later, span_text

ZONE = ZoneInfo("Europe/Rome")
SUMMER_DAY = datetime(2031, 5, 4, tzinfo=ZONE)
CHANGE_OF_CLOCKS = datetime(2031, 10, 26, tzinfo=ZONE)
"""At 03:00 summer time the clocks there go back to 02:00 (last Sunday of October; from memory)."""


@pytest.mark.parametrize(
    ("seconds", "text"),
    [
        (0, "00:00"),
        (7 * 3600 + 12 * 60 + 29, "07:12"),
        (7 * 3600 + 12 * 60 + 31, "07:13"),
        (86_400, "24:00"),
        (30 * 3600, "2031-05-05 06:00"),
    ],
)
def test_a_time_is_said_to_the_minute_and_dated_after_the_first_day(seconds, text):
    assert clock_text(later(SUMMER_DAY, seconds), SUMMER_DAY) == text


def test_the_hour_that_comes_twice_is_told_apart():
    times = [clock_text(later(CHANGE_OF_CLOCKS, hours * 3600), CHANGE_OF_CLOCKS) for hours in (2, 3)]
    assert times == ["02:00", "02:00 (+0100)"]


def test_a_span_over_the_change_of_clocks_counts_hours_that_pass():
    span = span_text(CHANGE_OF_CLOCKS, later(CHANGE_OF_CLOCKS, 4 * 3600), CHANGE_OF_CLOCKS)
    assert span == "00:00 to 03:00 (+0100) (4 h)"


def test_a_span_after_the_change_of_clocks_tells_the_offset_once():
    begin, end = (later(CHANGE_OF_CLOCKS, hours * 3600) for hours in (21, 22))
    assert span_text(begin, end, CHANGE_OF_CLOCKS) == "20:00 to 21:00 (+0100) (1 h)"


@pytest.mark.parametrize(
    ("seconds", "text"),
    [
        (0, "0 min"),
        (12, "under 1 min"),
        (51 * 60, "51 min"),
        (7500, "2 h 05 min"),
        (86_400, "24 h"),
        (180.5 * 86_400, "180.5 d"),
    ],
)
def test_a_duration_is_said_to_the_minute(seconds, text):
    assert duration_text(seconds) == text
