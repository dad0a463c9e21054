"""The page of `toeline verify`: how far the answer of a day moves, and whether it keeps its water."""

from collections.abc import Iterator, Sequence

import numpy as np

from toeline.findings.movements import BoundCheck, Movement
from toeline.findings.verification import Member, Verification
from toeline.report.clock import duration_text
from toeline.report.layout import INDENT, counted, heading, paragraph
from toeline.report.run_clock import RunClock
from toeline.report.verification_runs import (
    answer_words,
    bound_lines,
    incident_lines,
    member_lines,
    member_title,
    moved,
    moved_level,
    places_of,
)
from toeline.report.verification_tests import mass_lines, ramp_lines
from toeline.units import Display

_LEFT_OUT = (
    "All runs share the canal file, the gate laws and one-dimensional flow: a wrong roughness, gate scale or gauge "
    "zero moves them all alike and does not show here. Fronts of surges are smeared, and waves across the canal, air, "
    "debris and the doubt of gate ratings (some per cent at best, more near the modular limit) are in none of them. "
    "Small differences say that this day was computed well as it is described; they make no place safe. Verify gauges, "
    "gate scales and one jump in the field."
)


def verification_page(found: Verification, display: Display, *, width: int = 80) -> str:
    """The page in the units of `display`."""
    clock = RunClock(found.run)
    sections = (
        ("In short", _short_lines(found, display, width)),
        *((member_title(member), member_lines(member, clock, display, width)) for member in found.members),
        ("Surge bounds against inertia", bound_lines(found, clock, display, width)),
        ("Incidents in each run", incident_lines(found, width)),
        ("Mass test", mass_lines(found, width)),
        ("Ramp test", ramp_lines(found, display, width)),
        ("What this leaves out", iter([paragraph(_LEFT_OUT, width)])),
        ("Caution", iter([paragraph(found.run.attrs["comment"], width)])),
    )
    return "\n\n".join([_title(found, clock, width), *("\n".join([heading(name), *lines]) for name, lines in sections)])


def _title(found: Verification, clock: RunClock, width: int) -> str:
    run, times = found.run, found.run["time"].values
    plan = f"plan {run.attrs['plan']}" if run.attrs["plan"] else "no plan"
    step = float((times[1] - times[0]) / np.timedelta64(1, "s"))
    every = duration_text(step) if step >= 60.0 else f"{step:g} s"
    first = paragraph(f"{run.attrs['canal']}: {run.attrs['title']}", width, indent="")
    day = f"{plan}; {clock.start:%A %Y-%m-%d}, {clock.span(times[0], times[-1])}"
    how = (
        "How far the answer moves when the same day is computed in other ways. Compared every "
        f"{every}: levels at both ends of every pool; openings, discharges and jumps at every gate. A pool is settling "
        "while waves of a change travel in it, once down and back, and on through drowned gates; a gate is while a "
        "pool beside it is. Typical: 95 of 100 differences are not larger. Where water arrives some minutes earlier or "
        "later, levels differ for those minutes by the height of its front."
    )
    return "\n".join([first, paragraph(day, width), paragraph(how, width)])


def _short_lines(found: Verification, display: Display, width: int) -> Iterator[str]:
    sentences = (
        *(_level_sentence(member, found.gauge_reading, display) for member in found.members),
        _jump_sentence(found),
        _incident_sentence(found),
        _bound_sentence(found.bound_checks, display),
        answer_words(found, display),
        _test_sentence(found),
    )
    for sentence in filter(None, sentences):
        yield paragraph(f"- {sentence}", width, hanging=INDENT * 2)


def _level_sentence(member: Member, gauge_reading: float, display: Display) -> str:
    title = member_title(member).capitalize()
    if member.reason:
        return f"{title}: not run: {member.reason}."
    reading = display.level_difference(gauge_reading).replace(".0 ", " ")
    kinds = [member.movement("level", settling=settling) for settling in (False, True)]
    kinds = [movement for movement in kinds if np.isfinite(movement.typical)]
    worst = max(kinds, key=lambda movement: movement.largest.value)
    if worst.largest.value <= gauge_reading:
        return f"{title}, levels move by {moved(worst, display)} at most: no more than a gauge is read to ({reading})."
    return f"{title}, levels move {'; '.join(_level_words(movement, reading, display) for movement in kinds)}."


def _level_words(movement: Movement, reading: str, display: Display) -> str:
    while_ = "while waves travel" if movement.settling else "once settled"
    amount = f"by {moved(movement, display)} at most {while_}, typically {moved_level(movement.typical, display)}"
    if not movement.shown_hours:
        return f"{amount}: no more than a gauge is read to ({reading})"
    longest = duration_text(movement.shown_hours * 3600)
    return f"{amount}: more than a gauge is read to ({reading}) for {longest} in all at the worst place"


def _jump_sentence(found: Verification) -> str:
    parts = []
    for member in found.members:
        if not member.reason:
            hours = sum(change.settled_hours + change.settling_hours for change in member.jump_changes)
            parts.append(f"{duration_text(hours * 3600) if hours else 'never'} {member_title(member)}")
    return f"How long jumps are in another state, all gates together: {', '.join(parts)}." if parts else ""


def _incident_sentence(found: Verification) -> str:
    as_it_is, changes = set(places_of(found.incidents)), []
    for member in found.members:
        others = set(places_of(member.incidents))
        if not member.reason:
            changes += [f"{place} appears {member_title(member)}" for place in sorted(others - as_it_is)]
            changes += [f"{place} is gone {member_title(member)}" for place in sorted(as_it_is - others)]
    if changes:
        return f"Incidents: {'; '.join(changes)}."
    return "Incidents: the same in all runs; their lengths stand below." if as_it_is else "Incidents: none in any run."


def _bound_sentence(checks: Sequence[BoundCheck], display: Display) -> str:
    passed = [check for check in checks if check.excess.value > 0.0]
    if not checks:
        return ""
    if not passed:
        return "The surge bounds cover all that inertia does to the levels beside the gates that move."
    worst = max(passed, key=lambda check: check.excess.value)
    return (
        f"Inertia takes levels beyond the surge bounds at {len(passed)} of {counted(len(checks), 'place')} beside "
        f"gates that move, by {moved_level(worst.excess.value, display)} at most ({worst.side} {worst.gate})."
    )


def _test_sentence(found: Verification) -> str:
    is_closed = all(closure.is_closed for closure in found.closures.values())
    ramp = "could not be done" if found.ramp is None else "is passed" if found.ramp.is_passed else "is NOT passed"
    return f"The mass test {'is passed' if is_closed else 'is NOT passed'}; the ramp test {ramp}."
