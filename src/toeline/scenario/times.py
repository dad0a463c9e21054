"""Times as a planner writes them, as whole milliseconds from the start of the period."""

import re
from dataclasses import dataclass
from datetime import UTC, datetime, time, timedelta, tzinfo
from functools import cached_property
from typing import Any
from zoneinfo import ZoneInfo, available_timezones

from toeline.scenario.misfits import nearest, shown
from toeline.units import UnitSystem, parse_quantity, quantity_text

ALLOWED_TIMES = (
    'a time such as "06:30" (on the first day), "+7 h" (from the start) or "2031-05-04T06:30:00+02:00" (ISO 8601)'
)
FIRST_YEAR, LAST_YEAR = 1900, 2200

_CLOCK_TIME = re.compile(r"(\d{1,2}):(\d{2})(?::(\d{2}))?")
_MILLISECOND = timedelta(milliseconds=1)


def read_zone(name: Any) -> ZoneInfo:
    """Give the time zone of a name of the tz database. Raises ValueError with a sentence for the planner."""
    try:
        return ZoneInfo(name)
    except (TypeError, ValueError, KeyError, OSError):
        raise ValueError(f"found {shown(name)}; allowed: a name of the tz database{_zone_hint(name)}") from None


def _zone_hint(name: Any) -> str:
    return f"; {nearest(name, available_timezones())}" if isinstance(name, str) and len(name) > 3 else ""


def read_start(value: Any, zone: ZoneInfo | None) -> datetime:
    """Give the start of a period as an aware time: in the zone if one is given, else at its own offset."""
    moment = _iso_moment(value) if isinstance(value, str) else value
    if not isinstance(moment, datetime) or not FIRST_YEAR <= moment.year <= LAST_YEAR:
        raise ValueError(
            f"found {shown(value)}; allowed: date and time with offset from UTC, such as 2031-05-04T00:00:00+02:00, "
            f"in the years {FIRST_YEAR} to {LAST_YEAR}"
        )
    if moment.tzinfo is None:
        if zone is None:
            raise ValueError(f"found {shown(value)}; it needs its offset from UTC, as in {moment.isoformat()}+02:00")
        return _at_wall_clock(moment, zone, value)
    if zone is None:
        return moment
    return _checked_against_zone(moment, zone, value)


def _checked_against_zone(moment: datetime, zone: ZoneInfo, value: Any) -> datetime:
    local = moment.astimezone(zone)
    if local.utcoffset() != moment.utcoffset():
        raise ValueError(f'found {shown(value)}; in the zone "{zone.key}" that moment is {local.isoformat()}')
    return local


def _iso_moment(text: str) -> datetime | None:
    if "T" not in text and " " not in text:
        return None  # a date alone
    try:
        return datetime.fromisoformat(text)
    except ValueError:
        return None


def _at_wall_clock(moment: datetime, zone: tzinfo, value: Any) -> datetime:
    """Place a local time in a zone; refuse one that the clock skips or shows twice that day."""
    local = moment.replace(tzinfo=zone)
    if local.utcoffset() == local.replace(fold=1).utcoffset():
        return local
    real = local.astimezone(UTC).astimezone(zone).replace(tzinfo=None) == moment
    wrong = "comes twice" if real else "does not come"
    raise ValueError(
        f"found {shown(value)}, which {wrong} on {moment.date().isoformat()}, when the clocks change; "
        'allowed: the time from the start, such as "+7 h", or the time with its offset from UTC'
    )


@dataclass(frozen=True)
class Clock:
    """The period of a day file: turns times as written into milliseconds from its start."""

    start: datetime
    length_ms: int
    is_shortened: bool = False
    """The period was set anew beside the file: what the file says of later times is not wrong, only not reached."""

    def milliseconds(self, when: Any) -> int:
        """Give a time in milliseconds from the start.

        Raises ValueError for what is no time and for times outside the period, its two ends being inside; times after
        the end of a shortened period are taken.
        """
        since_start = self._since_start(when)
        if since_start < 0:
            raise ValueError(
                f"found {shown(when)}, which is before the start of the period, {self.start.isoformat()}; "
                'a time of a later day needs its date, or "+30 h" from the start'
            )
        if since_start > self.length_ms and not self.is_shortened:
            raise ValueError(f"found {shown(when)}, which is {self._beyond_the_end(since_start)}")
        return since_start

    def _since_start(self, when: Any) -> int:
        if isinstance(when, str) and when.startswith("+"):
            return self._from_duration(when)
        moment = self._moment(when)
        if not FIRST_YEAR <= moment.year <= LAST_YEAR:
            raise ValueError(f"found {shown(when)}; allowed: the years {FIRST_YEAR} to {LAST_YEAR}")
        return (moment.astimezone(UTC) - self._start_utc) // _MILLISECOND

    def _from_duration(self, when: str) -> int:
        try:
            return duration_ms(when[1:])
        except ValueError:
            raise ValueError(f"found {shown(when)}; allowed: {ALLOWED_TIMES}") from None

    @cached_property
    def _start_utc(self) -> datetime:
        return self.start.astimezone(UTC)

    def _moment(self, when: Any) -> datetime:
        moment = when
        if isinstance(when, str):
            moment = self._on_first_day(when) or _iso_moment(when)
        elif isinstance(when, time):
            moment = datetime.combine(self.start.date(), when)
        if not isinstance(moment, datetime):
            raise ValueError(f"found {shown(when)}; allowed: {ALLOWED_TIMES}")
        return moment if moment.tzinfo else _at_wall_clock(moment, self._zone, when)

    @property
    def _zone(self) -> tzinfo:
        zone = self.start.tzinfo
        assert zone is not None  # a start is always aware
        return zone

    def _on_first_day(self, text: str) -> datetime | None:
        """Read a time of day, "00:00" to "24:00", on the date of the start; None for another form."""
        match = _CLOCK_TIME.fullmatch(text)
        if match is None:
            return None
        hour, minute, second = (int(part or 0) for part in match.groups())
        if minute > 59 or second > 59 or (hour, minute, second) > (24, 0, 0):
            raise ValueError(
                f'found {shown(text)}; a time of the first day goes from "00:00" to "24:00"; '
                'allowed after that: "+30 h" (from the start) or date and time (ISO 8601)'
            )
        midnight = datetime.combine(self.start.date(), time())
        return midnight + timedelta(hours=hour, minutes=minute, seconds=second)

    def _beyond_the_end(self, since_start: int) -> str:
        return (
            f"{_duration_text(since_start)} after the start; "
            f"the period ends {_duration_text(self.length_ms)} after its start"
        )


def duration_ms(text: str) -> int:
    """Give a duration such as "15 min" in milliseconds. Raises ValueError naming the allowed units."""
    return round(1000 * parse_quantity(text, "duration", UnitSystem.metric))


def _duration_text(milliseconds: int) -> str:
    return quantity_text(milliseconds / 1000, "duration", UnitSystem.metric)
