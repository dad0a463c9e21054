"""Rounds of a gatekeeper in words and with their blanks, for his order sheet."""

import math
from collections.abc import Iterator
from dataclasses import dataclass
from datetime import datetime, time, timedelta

from toeline.findings.rounds import Rounds
from toeline.report.clock import clock_text, duration_text
from toeline.report.layout import counted
from toeline.report.run_clock import RunClock
from toeline.units import Display

MOST_VISITS = 60
"""So many visits have a line of blanks (choice)."""

BLANKS = "read", "moved by", "opening", "signed"
"""What a gatekeeper fills in at every visit."""


@dataclass(frozen=True)
class RoundsForm:
    """The visits to one gate, each to be filled in; `left_out` counts those for which the form has no line."""

    gate: str
    visits: tuple[str, ...]
    left_out: int

    @property
    def count(self) -> int:
        """All visits."""
        return len(self.visits) + self.left_out

    @property
    def title(self) -> str:
        return f"Rounds at {self.gate}"

    @property
    def note(self) -> str:
        """What to do with visits without a line; empty where there are none."""
        return f"And {counted(self.left_out, 'more visit')}: go on by hand." if self.left_out else ""


def rounds_form(rounds: Rounds, clock: RunClock) -> RoundsForm:
    """All visits of the run, in the local time of the canal."""
    visits = [clock_text(visit, clock.start) for visit in sorted(_all_visits(rounds, clock))]
    return RoundsForm(rounds.gate, tuple(visits[:MOST_VISITS]), max(len(visits) - MOST_VISITS, 0))


def _all_visits(rounds: Rounds, clock: RunClock) -> Iterator[datetime]:
    day = clock.start.date()
    while day <= clock.end.date():
        for of_day in _times_of_day(rounds):
            visit = datetime.combine(day, of_day, tzinfo=clock.start.tzinfo)
            if clock.start <= visit < clock.end:
                yield visit
        day += timedelta(days=1)


def _times_of_day(rounds: Rounds) -> Iterator[time]:
    """As a plan gives them, or at intervals from midnight within the hours of the rounds."""
    if rounds.visits:
        yield from map(time.fromisoformat, rounds.visits)
        return
    begin, end = map(time.fromisoformat, rounds.hours or ("00:00", "00:00"))
    midnight = datetime(2000, 1, 1)
    for number in range(math.ceil(86_400 / rounds.every)):
        moment = (midnight + timedelta(seconds=number * rounds.every)).time()
        if (begin <= moment < end) if begin < end else (moment >= begin or moment < end):
            yield moment


def rounds_words(rounds: Rounds, clock: RunClock, display: Display) -> str:
    """When to visit the gate, what to read there, and what to do then."""
    place, too_high, too_low = ("above", "open", "close") if rounds.side == "upstream" else ("below", "close", "open")
    instrument = f"gauge {rounds.gauge}" if rounds.gauge else "level above datum"
    step = display.setting(rounds.step)
    return (
        f"{rounds.gate}: rounds {_visits(rounds)}. At each read {place} the gate ({instrument}). "
        f"Target {_targets(rounds, clock, display)}. Leave the gate alone within {display.length(rounds.band)} of it; "
        f"higher: {too_high} by {step}; lower: {too_low} by {step}."
    )


def _visits(rounds: Rounds) -> str:
    if rounds.visits:
        return "at " + ", ".join(rounds.visits)
    hours = f", from {rounds.hours[0]} to {rounds.hours[1]}" if rounds.hours else ", day and night"
    return f"every {duration_text(rounds.every)}{hours}"


def _targets(rounds: Rounds, clock: RunClock, display: Display) -> str:
    if len({level for _, level in rounds.targets}) == 1:
        return display.level(rounds.targets[0][1])
    since = "at" if rounds.is_sloped else "from"
    words = [f"{display.level(level)} {since} {clock.after(at)}" for at, level in rounds.targets]
    return ", ".join(words) + (", evenly in between" if rounds.is_sloped else "")
