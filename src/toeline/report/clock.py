"""Times and durations as people say them."""

from datetime import UTC, datetime, time, timedelta

HOURS_TOLD = 96


def later(start: datetime, seconds: float) -> datetime:
    """The local time so long after the start; elapsed time, whatever the clocks there do meanwhile."""
    return (start.astimezone(UTC) + timedelta(seconds=seconds)).astimezone(start.tzinfo)


def clock_text(moment: datetime, start: datetime) -> str:
    """A local time of a period that starts at `start`: "07:12" on its first day, with the date on others.

    The midnight that ends the first day is "24:00". Where the clocks have changed since the start, the offset from
    UTC stands beside the time.
    """
    moment = later(moment, 30).replace(second=0, microsecond=0)
    text = moment.strftime("%H:%M")
    if moment.date() > start.date():
        ends_first_day = moment.time() == time() and moment.date() == start.date() + timedelta(days=1)
        text = "24:00" if ends_first_day else moment.strftime("%Y-%m-%d %H:%M")
    return text if moment.utcoffset() == start.utcoffset() else f"{text} ({moment:%z})"


def span_text(begin: datetime, end: datetime, start: datetime) -> str:
    """From when to when, and how long that is, in a period that starts at `start`; an offset from UTC once for both."""
    elapsed = (end.astimezone(UTC) - begin.astimezone(UTC)).total_seconds()
    first, last = clock_text(begin, start), clock_text(end, start)
    if begin.utcoffset() == end.utcoffset() != start.utcoffset():
        first = first.removesuffix(f" ({begin:%z})")
    return f"{first} to {last} ({duration_text(elapsed)})"


def duration_text(seconds: float) -> str:
    """A duration to the minute: "51 min", "2 h 05 min", "24 h"; from four days on in days, "180.5 d"."""
    if 0 < seconds < 30:
        return "under 1 min"
    hours, minutes = divmod(round(seconds / 60), 60)
    if hours >= HOURS_TOLD:
        return f"{seconds / 86_400:.1f} d"
    if not hours:
        return f"{minutes} min"
    return f"{hours} h {minutes:02d} min" if minutes else f"{hours} h"
