"""Orders as calendar files (RFC 5545), in which a revised plan takes the place of the one before.

An event is an order that is to be done. Its UID comes from canal, day, plan, gate and the number of the order among
those to that gate, so that a new time or opening is a revision of the same event: its SEQUENCE rises by one. An order
that the revised plan does not have any more stays as a cancelled event. Times are UTC.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from uuid import NAMESPACE_URL, uuid5

import numpy as np
import xarray as xr
from icalendar import Alarm, Calendar, Event

from toeline.constants import CAUTION
from toeline.report.order_sheet import Sheet, SheetOrder
from toeline.results.dataset import utc

PRODUCT = "-//Toeline//order sheets//EN"
PLAN, REVISION, RUN = "X-TOELINE-PLAN", "X-TOELINE-REVISION", "X-TOELINE-RUN"
"""Properties of the calendar: what the next issue must know of this one."""
CONFIRMED, CANCELLED = "CONFIRMED", "CANCELLED"
OF_THE_ISSUE = ("SEQUENCE", "DTSTAMP")
"""Properties that do not change what an event tells."""


@dataclass(frozen=True)
class Issue:
    """The calendars of one issue of a plan, by the name of the sheet, and the revision they are."""

    revision: int
    calendars: Mapping[str, Calendar]


def issue(run: xr.Dataset, sheets: Sequence[Sheet], earlier: Mapping[str, Calendar], alarm: timedelta | None) -> Issue:
    """A calendar for each sheet. `earlier` are calendars of an earlier issue, by the name of the sheet.

    Those of another plan or day are not looked at.

    The revision is 0 for a first issue, and rises by one where another run or any other event is issued.
    """
    plan, digest = plan_key(run), run.attrs["input_hash"]
    known = {name: calendar for name, calendar in earlier.items() if str(calendar.get(PLAN, "")) == plan}
    before = {str(event["UID"]): event for calendar in known.values() for event in calendar.events}
    issued = {
        sheet.whose: _revised(_events(run, sheet, alarm), before, _events_of(known.get(sheet.whose)))
        for sheet in sheets
    }
    revision = max((int(str(calendar[REVISION])) for calendar in known.values()), default=-1)
    if not known or any(_differs(events, known.get(whose), digest) for whose, events in issued.items()):
        revision += 1
    return Issue(revision, {whose: _calendar(plan, digest, revision, events) for whose, events in issued.items()})


def plan_key(run: xr.Dataset) -> str:
    """What stays the same when a plan of a day is revised."""
    start = utc(run["time"].values[0]).isoformat()
    return f"{run.attrs['canal']}; {start}; {run.attrs['plan']}"


def _events_of(calendar: Calendar | None) -> dict[str, Event]:
    return {str(event["UID"]): event for event in calendar.events} if calendar is not None else {}


def _differs(events: Sequence[Event], calendar: Calendar | None, digest: str) -> bool:
    """Whether a sheet is issued otherwise than before."""
    before = _events_of(calendar)
    is_same = calendar is not None and str(calendar[RUN]) == digest
    return not is_same or {str(event["UID"]): event for event in events} != before


def _revised(fresh: Mapping[str, Event], before: Mapping[str, Event], of_sheet: Mapping[str, Event]) -> list[Event]:
    """The fresh events with their SEQUENCE, and those of the sheet that are no more, cancelled."""
    events = [_next(event, before.get(uid)) for uid, event in fresh.items()]
    return events + [_cancelled(event) for uid, event in of_sheet.items() if uid not in fresh]


def _next(event: Event, before: Event | None) -> Event:
    if before is None:
        return _numbered(event, 0)
    if _content(event) == _content(before):
        return before
    return _numbered(event, int(str(before["SEQUENCE"])) + 1)


def _cancelled(event: Event) -> Event:
    if str(event["STATUS"]) == CANCELLED:
        return event
    cancelled = _numbered(event, int(str(event["SEQUENCE"])) + 1)
    del cancelled["STATUS"], cancelled["SUMMARY"]
    cancelled.add("status", CANCELLED)
    cancelled.add("summary", f"Cancelled: {event['SUMMARY']}")
    cancelled.subcomponents = []
    return cancelled


def _numbered(event: Event, sequence: int) -> Event:
    numbered = event.copy(recursive=True)
    numbered.pop("SEQUENCE", None)
    numbered.add("sequence", sequence)
    return numbered


def _content(event: Event) -> bytes:
    """What an event tells, in the order in which it is written."""
    bare = event.copy(recursive=True)
    for name in OF_THE_ISSUE:
        bare.pop(name, None)
    return bare.to_ical()


def _calendar(plan: str, digest: str, revision: int, events: Sequence[Event]) -> Calendar:
    calendar = Calendar()
    properties = {"prodid": PRODUCT, "version": "2.0", PLAN: plan, REVISION: str(revision), RUN: digest}
    for name, value in properties.items():
        calendar.add(name, value)
    for event in events:
        calendar.add_component(event)
    return calendar


def _events(run: xr.Dataset, sheet: Sheet, alarm: timedelta | None) -> dict[str, Event]:
    """The orders of a sheet that are to be done, by UID; without SEQUENCE."""
    return {
        uid: _event(uid, run, sheet, line, alarm)
        for line in sheet.orders
        if line.order.moves
        for uid in [str(uuid5(NAMESPACE_URL, f"{plan_key(run)}; {line.order.gate}; {line.order.number}"))]
    }


def _event(uid: str, run: xr.Dataset, sheet: Sheet, line: SheetOrder, alarm: timedelta | None) -> Event:
    event = Event()
    begins, stands = line.order.time, line.order.completed
    event.add("uid", uid)
    event.add("dtstamp", made(run))
    event.add("dtstart", _whole_seconds(begins))
    if not np.isnat(stands) and _whole_seconds(stands) > _whole_seconds(begins):
        event.add("dtend", _whole_seconds(stands))
    event.add("summary", f"{line.leaf}: {line.move}")
    event.add("location", f"{line.leaf}, {sheet.canal}")
    event.add("description", "\n".join(_description(sheet, line)))
    event.add("status", CONFIRMED)
    if alarm is not None:
        event.add_component(_alarm(line, alarm))
    return event


def _whole_seconds(instant: np.datetime64) -> datetime:
    return utc(instant).replace(microsecond=0)


def _description(sheet: Sheet, line: SheetOrder) -> Iterator[str]:
    yield f"{line.at} ({sheet.day.rpartition(', ')[2]}), {line.leaf}: {line.move}. {line.openings}"
    if line.warning:
        yield line.warning
    for reading in line.readings:
        yield (
            f"{reading.place} ({reading.instrument}): before {reading.before} ({reading.before_band}), "
            f"after, {line.read_after}, {reading.after} ({reading.after_band})"
        )
    yield from line.notes
    yield f"Stop and call if {'; '.join((*line.stop, *sheet.always))}."
    yield f"Call: {sheet.call}"
    yield CAUTION


def _alarm(line: SheetOrder, before: timedelta) -> Alarm:
    alarm = Alarm()
    alarm.add("action", "DISPLAY")
    alarm.add("description", f"{line.at} {line.leaf}: {line.move}")
    alarm.add("trigger", -before)
    return alarm


def made(run: xr.Dataset) -> datetime:
    """When the run was made: a run gives the same files whenever they are written."""
    return datetime.fromisoformat(run.attrs["history"].partition(" ")[0])
