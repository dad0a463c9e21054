"""Times as planners write them."""

from datetime import UTC, datetime, time, timedelta, timezone
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.scenario.times import Clock, duration_ms, read_start, read_zone

HOUR = 3_600_000
BERLIN = ZoneInfo("Europe/Berlin")
PLUS_TWO = timezone(timedelta(hours=2))
ORDINARY = Clock(datetime(2031, 5, 4, tzinfo=PLUS_TWO), 48 * HOUR)
# The clocks of the zone go forward on 2025-03-30 and back on 2025-10-26 (tz database).
SPRING = Clock(datetime(2025, 3, 30, tzinfo=BERLIN), 24 * HOUR)
AUTUMN = Clock(datetime(2025, 10, 26, tzinfo=BERLIN), 25 * HOUR)


@pytest.mark.parametrize(
    ("when", "hours"),
    [
        ("00:00", 0),
        ("06:30", 6.5),
        ("6:30", 6.5),
        ("06:30:36", 6.51),
        ("24:00", 24),
        ("+7 h", 7),
        ("+90 min", 1.5),
        ("+1 d", 24),
        ("2031-05-04T06:30:00+02:00", 6.5),
        ("2031-05-04T04:30Z", 6.5),
        ("2031-05-04 06:30+02:00", 6.5),
        ("2031-05-05T06:30", 30.5),
        (time(6, 30), 6.5),
        (datetime(2031, 5, 5, 1), 25),
        (datetime(2031, 5, 4, 6, 30, tzinfo=timezone(timedelta(hours=1))), 7.5),
    ],
)
def test_every_form_of_a_time_counts_from_the_start(when, hours):
    assert ORDINARY.milliseconds(when) == round(hours * HOUR)


@pytest.mark.parametrize(
    ("clock", "when", "hours"),
    [
        (SPRING, "01:59", 1 + 59 / 60),
        (SPRING, "03:00", 2),
        (SPRING, "24:00", 23),
        (SPRING, "+7 h", 7),
        (SPRING, "2025-03-30T08:00:00+02:00", 7),
        (AUTUMN, "01:59", 1 + 59 / 60),
        (AUTUMN, "03:00", 4),
        (AUTUMN, "24:00", 25),
        (AUTUMN, "2025-10-26T02:30:00+02:00", 2.5),
        (AUTUMN, "2025-10-26T02:30:00+01:00", 3.5),
    ],
)
def test_days_when_the_clocks_change_have_23_or_25_hours(clock, when, hours):
    assert clock.milliseconds(when) == round(hours * HOUR)


@pytest.mark.parametrize(
    ("clock", "when", "message"),
    [
        (
            SPRING,
            "02:30",
            'found "02:30", which does not come on 2025-03-30, when the clocks change; allowed: the time '
            'from the start, such as "+7 h", or the time with its offset from UTC',
        ),
        (
            AUTUMN,
            "02:30",
            'found "02:30", which comes twice on 2025-10-26, when the clocks change; allowed: the time '
            'from the start, such as "+7 h", or the time with its offset from UTC',
        ),
        (
            ORDINARY,
            "24:01",
            'found "24:01"; a time of the first day goes from "00:00" to "24:00"; allowed after that: '
            '"+30 h" (from the start) or date and time (ISO 8601)',
        ),
        (
            ORDINARY,
            "06:75",
            'found "06:75"; a time of the first day goes from "00:00" to "24:00"; allowed after that: '
            '"+30 h" (from the start) or date and time (ISO 8601)',
        ),
        (ORDINARY, "+49 h", 'found "+49 h", which is 49 h after the start; the period ends 48 h after its start'),
        (
            ORDINARY,
            "2031-05-03T23:00",
            'found "2031-05-03T23:00", which is before the start of the period, '
            "2031-05-04T00:00:00+02:00; a time of a later day needs its date, or "
            '"+30 h" from the start',
        ),
    ],
)
def test_a_time_outside_the_day_or_the_period_is_refused(clock, when, message):
    with pytest.raises(ValueError, match=r"^found ") as raised:
        clock.milliseconds(when)

    assert str(raised.value) == message


@pytest.mark.parametrize("when", ["", "noon", "+7", "+7 hours", "7 h", "2031-05-04", "0001-01-01T00:00", 7, True, []])
def test_what_is_no_time_is_refused(when):
    with pytest.raises(ValueError, match="allowed: "):
        ORDINARY.milliseconds(when)


@given(st.integers(0, 47 * HOUR))
def test_iso_times_count_exactly_from_the_start(milliseconds):
    moment = SPRING.start.astimezone(PLUS_TWO) + timedelta(milliseconds=milliseconds)
    clock = Clock(SPRING.start, 48 * HOUR)

    assert clock.milliseconds(moment.isoformat()) == milliseconds


@pytest.mark.parametrize(
    ("text", "milliseconds"), [("15 min", 900_000), ("0.1 h", 360_000), ("1 d", 24 * HOUR), ("0.001 s", 1)]
)
def test_durations_are_whole_milliseconds(text, milliseconds):
    assert duration_ms(text) == milliseconds


@pytest.mark.parametrize(
    ("value", "zone", "start"),
    [
        (datetime(2031, 5, 4, tzinfo=PLUS_TWO), None, "2031-05-04T00:00:00+02:00"),
        ("2031-05-04T00:00:00+02:00", None, "2031-05-04T00:00:00+02:00"),
        ("2025-03-30T00:00", BERLIN, "2025-03-30T00:00:00+01:00"),
        ("2025-03-29T23:00:00+00:00", None, "2025-03-29T23:00:00+00:00"),
        (datetime(2025, 6, 1, tzinfo=PLUS_TWO), BERLIN, "2025-06-01T00:00:00+02:00"),
    ],
)
def test_a_start_keeps_its_offset_or_takes_that_of_the_zone(value, zone, start):
    assert read_start(value, zone).isoformat() == start


def test_a_start_with_a_zone_follows_its_clock():
    assert read_start(datetime(2025, 6, 1, tzinfo=PLUS_TWO), BERLIN).tzinfo is BERLIN


def test_a_start_at_a_time_that_comes_twice_is_refused():
    with pytest.raises(ValueError, match="which comes twice on 2025-10-26, when the clocks change"):
        read_start("2025-10-26T02:30", BERLIN)


@pytest.mark.parametrize("name", ["", "Europe", "../passwd", "/etc/localtime", "Nowhere/Town", 7, None, "a\0b"])
def test_what_is_no_zone_is_refused(name):
    with pytest.raises(ValueError, match="allowed: a name of the tz database"):
        read_zone(name)


def test_a_period_shortened_beside_the_file_takes_later_times_as_not_reached():
    start = datetime(2031, 5, 4, tzinfo=UTC)
    shortened = Clock(start, 3 * 3_600_000, is_shortened=True)
    assert shortened.milliseconds("06:30") == 6.5 * 3_600_000
