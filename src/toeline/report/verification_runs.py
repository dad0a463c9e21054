"""The other ways in which a day was run, one by one: what moved, where and when."""

from collections.abc import Iterable, Iterator, Sequence

import numpy as np

from toeline.findings.incidents import Incident
from toeline.findings.movements import BoundCheck, JumpChange, Movement
from toeline.findings.verification import Member, Setting, Verification
from toeline.report.clock import duration_text
from toeline.report.layout import INDENT, paragraph, table
from toeline.report.run_clock import RunClock
from toeline.units import FILE_UNITS, Display, file_factor

_NAMES = {
    "level": "levels",
    "opening": "openings",
    "discharge": "discharges",
    "jump toe": "jump toes",
    "jump end": "jump ends",
}

_MEANINGS = {
    "local inertia": "The day leaves out the time that water needs to gather and lose speed; here it is kept. What "
    "moves is what the quasi-steady answer does not tell.",
    "without local inertia": "The day keeps the time that water needs to gather and lose speed; here it is left out. "
    "What moves is what the quasi-steady answer would not tell.",
    "half the step": "A time step is as long as its error of level allows. Allowed an eighth of that error, steps are "
    "half as long, and so is the longest step. What moves is the doubt that comes from stepping.",
    "half the spacing": "Levels are computed at points along the pools. With twice as many of them, what moves is the "
    "doubt that comes from their spacing.",
}


SCALE_READING = 0.01
"""m that the scale of a gate shows (choice)."""


def member_title(member: Member) -> str:
    return member.name if member.name.startswith("without") else f"with {member.name}"


def member_lines(member: Member, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """What a way of running the day means, and how far it moves each quantity."""
    settings = "; ".join(_setting_words(setting, display) for setting in member.settings)
    yield paragraph(f"{_MEANINGS[member.name]} ({settings})", width)
    if member.reason:
        yield paragraph(f"Not run: {member.reason}.", width)
        return
    compared = [movement for movement in member.movements if _is_told(movement)]
    rows = [_movement_row(movement, clock, display) for movement in compared]
    yield table(("", "typical", "at most", "where and when"), rows, width)
    if not any(movement.settling for movement in compared):
        yield paragraph("No pool was settling at any time.", width)
    for change in member.jump_changes:
        yield paragraph(_jump_words(change), width, hanging=INDENT * 2)


def _setting_words(setting: Setting, display: Display) -> str:
    if setting.name == "local_inertia":
        return f"local_inertia = {'true' if setting.after else 'false'}"
    if setting.name == "longest_step":
        factor, unit = 60.0, "min"
    else:
        factor, unit = file_factor("length", display.system), FILE_UNITS["length"][display.system]
    return f"{setting.name} {setting.after / factor:.4g} {unit} instead of {setting.before / factor:.4g} {unit}"


def _is_told(movement: Movement) -> bool:
    """Whether there is something to compare; openings only where they differ."""
    return bool(np.isfinite(movement.typical)) and (movement.quantity != "opening" or movement.largest.value > 0.0)


def _movement_row(movement: Movement, clock: RunClock, display: Display) -> tuple[str, ...]:
    name = f"{_NAMES[movement.quantity]}, {'settling' if movement.settling else 'settled'}"
    largest = movement.largest
    place = f"{movement.where}, {clock.at(largest.time)}" if largest.value > 0.0 else "-"
    if movement.quantity == "discharge" and largest.value > 0.0 and movement.original != 0.0:
        percent = 100.0 * largest.value / abs(movement.original)
        place += f" ({f'{percent:.1f}' if percent >= 0.05 else '<0.1'} %)"
    return (name, _written(movement, movement.typical, display), moved(movement, display), place)


def moved(movement: Movement, display: Display) -> str:
    """The largest movement with its unit."""
    return _written(movement, movement.largest.value, display)


def moved_level(value: float, display: Display) -> str:
    """A difference of levels with its unit."""
    return _not_nothing(display.level_difference(value), value)


def _written(movement: Movement, value: float, display: Display) -> str:
    if movement.quantity in ("level", "opening"):
        return moved_level(value, display)
    return _not_nothing(display.discharge(value) if movement.quantity == "discharge" else display.length(value), value)


def _not_nothing(text: str, value: float) -> str:
    """A value too small to be seen in its last decimal is less than one of them."""
    number, _, unit = text.partition(" ")
    is_seen = value == 0.0 or float(number) != 0.0
    return text if is_seen else f"<{number[:-1]}1 {unit}"


def _jump_words(change: JumpChange) -> str:
    spans = ((change.settled_hours, "once settled"), (change.settling_hours, "while waves travel"))
    parts = [f"{duration_text(hours * 3600)} {word}" for hours, word in spans if hours > 0.0]
    states = f"{_state_words(change.after)} instead of {_state_words(change.before)}"
    return f"{change.gate}: the jump is in another state for {' and '.join(parts)}, mostly {states}"


def _state_words(state: str) -> str:
    return "no jump" if state == "none" else state.replace("_", " ")


def bound_lines(found: Verification, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """The surge bounds beside every gate that moved, held against the run with inertia."""
    checks = found.bound_checks
    if not checks:
        yield paragraph("No move of a gate made a bound, or there is no run with inertia to hold against it.", width)
        return
    yield paragraph(
        "A quasi-steady run makes no surge; a bound of its height stands beside every move of a gate instead. How far "
        "the run with inertia is from the quasi-steady levels while a bound stands, and whether that is ever more than "
        "the bound of that time:",
        width,
    )
    yield table(("", "bound", "difference", "beyond it"), [_bound_row(c, clock, display) for c in checks], width)
    if answer := answer_words(found, display):
        yield paragraph(answer, width)


def answer_words(found: Verification, display: Display) -> str:
    """How far apart gates stood with and without inertia; nothing where no scale would show it."""
    apart = max((member.opening_moved for member in found.members if "inertia" in member.name), default=0.0)
    if apart < SCALE_READING:
        return ""
    return (
        f"Gates stand up to {moved_level(apart, display)} apart with and without inertia: rules, and orders that give "
        "a discharge, answer the levels that they find. Part of what moves is that answer and no surge."
    )


def _bound_row(check: BoundCheck, clock: RunClock, display: Display) -> tuple[str, ...]:
    beyond = "never"
    if check.excess.value > 0.0:
        amount, passed = moved_level(check.excess.value, display), duration_text(3600 * check.hours_beyond)
        beyond = f"{amount} at {clock.at(check.excess.time)}; {passed} in all"
    sizes = (moved_level(value, display) for value in (check.bound, check.difference))
    return (f"{check.side} {check.gate}", *sizes, beyond)


def incident_lines(found: Verification, width: int) -> Iterator[str]:
    """How long every incident lasts in each run."""
    runs = {"as it is": found.incidents}
    runs |= {member_title(member): member.incidents for member in found.members if not member.reason}
    places = list(dict.fromkeys(place for incidents in runs.values() for place in places_of(incidents)))
    if not places:
        yield paragraph("None in any run. That nothing was found makes no place safe.", width)
        return
    rows = [(place, *(_duration_at(place, incidents) for incidents in runs.values())) for place in places]
    yield table(("how long in all", *runs), rows, width)


def places_of(incidents: Iterable[Incident]) -> list[str]:
    """Where and what every incident is."""
    return [f"{incident.where}: {incident.what}" for incident in incidents]


def _duration_at(place: str, incidents: Sequence[Incident]) -> str:
    spans = [i.end - i.start for i, name in zip(incidents, places_of(incidents), strict=True) if name == place]
    return duration_text(float(sum(span / np.timedelta64(1, "s") for span in spans))) if spans else "-"
