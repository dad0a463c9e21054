"""Calendars of orders: what RFC 5545 asks, read by another library than the one that writes them, and revisions."""

from datetime import UTC, datetime, timedelta

import numpy as np
import pytest
import vobject
from icalendar import Calendar

from toeline.constants import CAUTION
from toeline.report.order_calendar import Issue, issue
from toeline.report.order_sheet import order_sheets

ALARM = timedelta(minutes=15)
LONGEST_LINE = 75
"""Octets of a content line, without its break (RFC 5545, section 3.1)."""


def issued(run, earlier: Issue | None = None, alarm: timedelta | None = ALARM) -> Issue:
    """The issue of a run after an earlier one that was written and read again."""
    files = {} if earlier is None else {name: calendar.to_ical() for name, calendar in earlier.calendars.items()}
    return issue(run, order_sheets(run), {name: Calendar.from_ical(file) for name, file in files.items()}, alarm)


def file_of(issue_: Issue, whose: str = "Upper beat") -> bytes:
    return issue_.calendars[whose].to_ical()


def read(content: bytes):
    """The calendar as the other library reads it."""
    return vobject.readOne(content.decode())


def states(issue_: Issue, whose: str = "Upper beat") -> list[tuple[int, str]]:
    events = read(file_of(issue_, whose)).contents.get("vevent", [])
    return [(int(event.sequence.value), event.status.value) for event in events]


@pytest.fixture
def first(ordered_run) -> Issue:
    return issued(ordered_run())


def test_an_order_is_an_event_in_utc(first):
    event, other = read(file_of(first)).vevent_list
    assert event.dtstart.value == datetime(2031, 5, 4, 4, 30, tzinfo=UTC)
    assert event.dtend.value == datetime(2031, 5, 4, 4, 31, 30, tzinfo=UTC)
    assert event.summary.value == "Middle check: open 12 turns"
    assert event.location.value == "Middle check, Alder branch"
    assert event.uid.value != other.uid.value
    assert states(first) == [(0, "CONFIRMED"), (0, "CONFIRMED")]


def test_the_alarm_comes_before_the_order(first, ordered_run):
    alarm = read(file_of(first)).vevent_list[0].valarm
    assert (alarm.action.value, alarm.trigger.value) == ("DISPLAY", -ALARM)
    assert "valarm" not in read(file_of(issued(ordered_run(), alarm=None))).vevent_list[0].contents


def test_the_description_tells_the_readings_when_to_stop_and_the_caution(first):
    text = read(file_of(first)).vevent_list[0].description.value
    for expected in ("06:30 (times of UTC+02:00)", "above the gate", "51.40 to 51.46", "Stop and call if", CAUTION):
        assert expected in text


def test_what_the_standard_requires_of_a_calendar_is_there(first):
    calendar = read(file_of(first))
    assert calendar.version.value == "2.0"  # section 3.7.4
    assert calendar.prodid.value  # section 3.7.3
    for event in calendar.vevent_list:  # section 3.6.1: UID and DTSTAMP are required
        assert event.uid.value
        assert event.dtstamp.value.utcoffset() == timedelta(0)


def test_lines_are_folded_at_75_octets_and_end_in_carriage_return_and_line_feed(ordered_run):
    run = ordered_run(gate_gatekeeper=np.array(["Łąka Ωμέγα Щёкино " * 4 + "end", ""], object))
    content = next(iter(issued(run).calendars.values())).to_ical()
    lines = content.split(b"\r\n")
    assert content.endswith(b"\r\n")
    assert b"\n" not in content.replace(b"\r\n", b"")
    assert max(len(line) for line in lines) <= LONGEST_LINE
    for line in lines:
        line.decode()  # no letter is torn


def test_commas_semicolons_and_backslashes_are_escaped(ordered_run):
    name = "Check 3; left, \\ old"  # RFC 5545, section 3.3.11
    run = ordered_run(gate=np.array([name, "Last check"], object), order_gate=np.full(2, name, object))
    content = file_of(issued(run))
    assert b"SUMMARY:Check 3\\; left\\, \\\\ old: open 12 turns" in content
    assert read(content).vevent_list[0].summary.value == f"{name}: open 12 turns"


def test_orders_that_are_not_to_be_done_are_no_events(ordered_run):
    run = ordered_run(order_status=np.array([2, 0]), order_opening_after=np.array([0.30, 0.42]))
    (event,) = read(file_of(issued(run))).vevent_list
    assert event.dtstart.value == datetime(2031, 5, 4, 4, 45, tzinfo=UTC)


def test_a_calendar_without_orders_can_be_read(first):
    assert read(file_of(first, "Lower beat")).contents.get("vevent", []) == []


def test_the_same_run_issued_again_changes_nothing(first, ordered_run):
    again = issued(ordered_run(), first)
    assert (again.revision, file_of(again)) == (0, file_of(first))


def test_a_new_time_is_a_revision_of_the_same_event(first, ordered_run):
    later = issued(ordered_run(order_time=np.array([1860.0, 2700.0])), first)
    before, after = (read(file_of(one)).vevent_list for one in (first, later))
    assert [event.uid.value for event in before] == [event.uid.value for event in after]
    assert states(later)[0] == (1, "CONFIRMED")
    assert later.revision == 1


def test_an_event_that_does_not_change_keeps_its_sequence(first, ordered_run):
    late = ordered_run(order_time=np.array([1800.0, 9000.0]), settling=np.zeros((49, 2)))
    settled = issued(ordered_run(settling=np.zeros((49, 2))))
    assert states(issued(late, settled)) == [(0, "CONFIRMED"), (1, "CONFIRMED")]


def test_a_dropped_order_stays_as_a_cancelled_event(first, ordered_run):
    dropped = issued(ordered_run(1), first)
    assert states(dropped)[1] == (1, "CANCELLED")
    assert read(file_of(dropped)).vevent_list[1].summary.value.startswith("Cancelled: ")
    assert states(issued(ordered_run(1), dropped))[1] == (1, "CANCELLED")
    assert states(issued(ordered_run(2), dropped))[1] == (2, "CONFIRMED")


def test_another_run_is_another_revision_though_its_orders_are_the_same(first, ordered_run):
    again = issued(ordered_run(attributes={"input_hash": "1" * 64}), first)
    assert (again.revision, states(again)) == (1, [(0, "CONFIRMED"), (0, "CONFIRMED")])


def test_an_order_that_goes_to_another_gatekeeper_is_cancelled_with_the_first(first, ordered_run):
    moved = issued(ordered_run(gate_gatekeeper=np.array(["Lower beat", "Upper beat"], object)), first)
    assert states(moved, "Upper beat") == [(1, "CANCELLED"), (1, "CANCELLED")]
    uids = [event.uid.value for event in read(file_of(moved, "Lower beat")).vevent_list]
    assert uids == [event.uid.value for event in read(file_of(first)).vevent_list]


@pytest.mark.parametrize("attribute", [{"plan": "hold"}, {"canal": "Elm branch"}])
def test_calendars_of_another_plan_or_canal_are_not_revised(first, ordered_run, attribute):
    other = issued(ordered_run(1, attributes=attribute), first)
    assert (other.revision, states(other)) == (0, [(0, "CONFIRMED")])
    uids = [read(file_of(one)).vevent_list[0].uid.value for one in (first, other)]
    assert uids[0] != uids[1]
