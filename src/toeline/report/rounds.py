"""Rounds of a gatekeeper in words, for his order sheet."""

from toeline.findings.rounds import Rounds
from toeline.report.clock import duration_text
from toeline.report.run_clock import RunClock
from toeline.units import Display


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
