"""The roughness calendar as the factors of one run: on which midnights they change, and to what."""

from collections.abc import Iterator
from datetime import UTC, date, datetime, time, timedelta
from itertools import pairwise
from typing import NamedTuple

import numpy as np

from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.roughness import RoughnessEntry

MILLISECOND = timedelta(milliseconds=1)


class RoughnessChange(NamedTuple):
    """From a time [ms from the start] on, the factors on Manning's n by pool."""

    time: int
    factors: np.ndarray


def roughness_changes(canal: Canal, start: datetime, length_ms: int) -> tuple[RoughnessChange, ...]:
    """The factors at the start of a period, and at every midnight of its clock on which one of them changes."""
    changes: list[RoughnessChange] = []
    for day, begin in _days(start, length_ms):
        factors = np.array([factor_on(day, canal.roughness_calendar, pool.name) for pool in canal.pools])
        if not changes or not np.array_equal(factors, changes[-1].factors):
            changes.append(RoughnessChange(begin, factors))
        if not canal.roughness_calendar:
            break
    return tuple(changes)


def _days(start: datetime, length_ms: int) -> Iterator[tuple[date, int]]:
    """Every date of a period, and when it begins there [ms from the start, 0 for the first]."""
    day, begin = start.date(), 0
    while begin < length_ms:
        yield day, begin
        day += timedelta(days=1)
        midnight = datetime.combine(day, time(), start.tzinfo)
        begin = (midnight.astimezone(UTC) - start.astimezone(UTC)) // MILLISECOND


def factor_on(day: date, calendar: list[RoughnessEntry], pool: str) -> float:
    """The factor of a pool on a day: that of the latest entry, or on the line from it to the next; 1 before any.

    Where a day of every year and one of this year fall together, the latter counts.
    """
    entries = [entry for entry in calendar if entry.pools is None or pool in entry.pools]
    by_date: dict[date, RoughnessEntry] = {}
    for entry in sorted(entries, key=lambda entry: entry.day.year or 0):
        by_date |= dict.fromkeys(entry.day.dates(range(day.year - 1, day.year + 2)), entry)
    dates = sorted(by_date)
    past = [at for at in dates if at <= day]
    if not past:
        return 1.0
    latest = by_date[past[-1]]
    following = next((after for before, after in pairwise(dates) if before == past[-1]), None)
    if latest.shape == "steps" or following is None:
        return latest.factor
    share = (day - past[-1]) / (following - past[-1])
    return latest.factor + share * (by_date[following].factor - latest.factor)
