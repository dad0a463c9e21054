"""When rules decide: at intervals from midnight or at times of day, within working hours, by the clock of the canal."""

from collections.abc import Iterator
from datetime import date, datetime, time, timedelta
from types import SimpleNamespace

import numpy as np

DAY_MS = 86_400_000


def decision_times(given: SimpleNamespace, start: datetime, length_ms: int) -> np.ndarray:
    """Times [ms from the aware `start`] at or after it and before the end: every `every` seconds from midnight of each
    day, or at its `visits`, but only within `hours`; `visits` and `hours` are times of day.
    """
    visits, hours = getattr(given, "visits", None), getattr(given, "hours", None)
    times = []
    for day in _days(start, length_ms):
        midnight, next_midnight = _since(start, day, time()), _since(start, day + timedelta(days=1), time())
        if visits is not None:
            of_day = np.array([_since(start, day, visit) for visit in visits], np.int64)
        else:
            of_day = np.arange(midnight, next_midnight, round(given.every * 1000.0), dtype=np.int64)
        times.append(of_day[_within(of_day, start, day, hours)] if hours is not None else of_day)
    found = np.unique(np.concatenate(times))
    return found[(found >= 0) & (found < length_ms)]


def overlap(first: tuple[time, time] | None, second: tuple[time, time] | None) -> bool:
    """Whether two working hours have a moment in common; None is day and night."""
    if first is None or second is None:
        return True
    return any(
        begin < other_end and other_begin < end
        for begin, end in _spans(first)
        for other_begin, other_end in _spans(second)
    )


def _spans(hours: tuple[time, time]) -> list[tuple[int, int]]:
    """Working hours as spans of one day [s]."""
    begin, end = (moment.hour * 3600 + moment.minute * 60 + moment.second for moment in hours)
    return [(begin, end)] if begin < end else [(begin, DAY_MS // 1000), (0, end)]


def _days(start: datetime, length_ms: int) -> Iterator[date]:
    last = (start + timedelta(milliseconds=length_ms) + timedelta(days=1)).date()
    day = start.date()
    while day <= last:
        yield day
        day += timedelta(days=1)


def _since(start: datetime, day: date, moment: time) -> int:
    """Milliseconds from the start to a time of day there; one that the clock skips is taken an hour later."""
    there = datetime.combine(day, moment, tzinfo=start.tzinfo)
    return round((there.timestamp() - start.timestamp()) * 1000.0)


def _within(times: np.ndarray, start: datetime, day: date, hours: tuple[time, time]) -> np.ndarray:
    begin, end = (_since(start, day, moment) for moment in hours)
    if begin < end:
        return (times >= begin) & (times < end)
    return (times >= begin) | (times < end)
