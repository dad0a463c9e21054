"""Incidents in words: what goes wrong, where, when, and by how much."""

from collections.abc import Collection, Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from toeline.findings.incidents import Incident, Measure
from toeline.findings.jump_incidents import JUMP_END
from toeline.report.layout import INDENT, counted, paragraph
from toeline.report.run_clock import RunClock
from toeline.report.values import value_text
from toeline.units import Display

SETTLING = (
    "Settling: waves of a change still travel through a pool beside the place; levels are least trustworthy then."
)
NOTHING_FOUND = (
    "No incident. Looked for: jumps beyond the protected floor, water above bank or lining, velocities over the limit "
    "of a surface and the limits of the canal file, where it gives them, deliveries that fall short. That nothing was "
    "found makes no place safe."
)


GRAVEST_FIRST = (
    "run stopped early",
    "water above the bank",
    "jump swept out of the pool",
    "jump beyond protection",
    "water above the lining",
)
"""Kinds of incidents that are told before the others where many are told in short; a choice of this program."""

AMOUNTS = {
    "water above the bank": "above the bank",
    "water above the lining": "above the lining",
    "jump beyond protection": "of tailwater missing",
}
"""Kinds whose worst value is a margin, and what the amount is by which the margin is missed."""

MOST_TOLD_SINGLY = 3
MOST_PLACES = 3


def incident_lines(found: Sequence[Incident], clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """All incidents of one kind at one place together, in the order in which they begin; many also in short before."""
    if not found:
        yield paragraph(NOTHING_FOUND, width)
    yield from _in_short(found, clock, display, width)
    for story in incident_stories(found, clock, display):
        times = f", {story.times}" if story.times else ""
        yield paragraph(f"{story.worst.where}: {story.worst.what}{times}", width, hanging=INDENT * 2)
        for detail in story.details:
            yield paragraph(detail, width, indent=INDENT * 2, hanging=INDENT * 3)
    if any(incident.settling for incident in found):
        yield paragraph(SETTLING, width)


def incident_words(found: Sequence[Incident]) -> str:
    """How many incidents there are and of which kinds, the gravest first, in one sentence."""
    if not found:
        return "no incident, which makes no place safe"
    kinds = sorted(dict.fromkeys(incident.what for incident in found), key=gravity)
    return f"{counted(len(found), 'incident')}: {'; '.join(kinds)}"


def worst_text(incident: Incident, display: Display) -> str:
    """The worst value of an incident: by how much a margin was missed, or the value itself; "-" where there is none."""
    is_amount = incident.what in AMOUNTS
    return display.amount(-incident.worst) if is_amount else value_text(incident.worst, incident.unit, display)


def worst_words(incident: Incident, display: Display) -> str:
    """The worst value of an incident, and of what it is the amount."""
    text = worst_text(incident, display)
    return f"{text} {AMOUNTS[incident.what]}" if text != "-" and incident.what in AMOUNTS else text


def _in_short(found: Sequence[Incident], clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """Every kind once, the gravest first: where, since when and how far."""
    groups = _together(found)
    if len(groups) <= MOST_TOLD_SINGLY:
        return
    of_kind: dict[str, list[list[Incident]]] = {}
    for group in groups:
        of_kind.setdefault(group[0].what, []).append(group)
    yield paragraph(f"In short, {counted(len(found), 'incident')}, each told below:", width)
    for what in sorted(of_kind, key=gravity):
        words = _kind_words(of_kind[what], clock, display)
        yield paragraph(f"{what}: {words}", width, indent=INDENT * 2, hanging=INDENT * 3)


def gravity(kind: str) -> int:
    """Where a kind of incidents stands among the others: the gravest have the least."""
    return (*GRAVEST_FIRST, kind).index(kind)


def _kind_words(groups: Sequence[Sequence[Incident]], clock: RunClock, display: Display) -> str:
    worst = max((incident for group in groups for incident in group), key=_excess)
    places = [group[0].where for group in groups]
    where = "; ".join(places) if len(places) <= MOST_PLACES else f"{len(places)} places"
    value = worst_words(worst, display)
    if value == "-":
        return where
    at = f" at {worst.where}" if len(places) > 1 else ""
    return f"{where}; from {clock.at(groups[0][0].start)}; worst{at} {value}"


@dataclass(frozen=True)
class IncidentStory:
    """All incidents of one kind at one place: the worst of them, when they were, and how far they went."""

    worst: Incident
    times: str
    details: tuple[str, ...]


def incident_stories(found: Sequence[Incident], clock: RunClock, display: Display) -> Iterator[IncidentStory]:
    """What goes wrong, each kind at each place once, in the order in which they begin.

    Whose a limit is stands where the limit is told first.
    """
    told: set[str] = set()
    for together in _together(found):
        worst = max(together, key=_excess)
        times = clock.spans([(incident.start, incident.end) for incident in together])
        yield IncidentStory(worst, times, tuple(_details(worst, together, clock, display, told)))
        told.add(worst.source)


def _together(found: Sequence[Incident]) -> list[list[Incident]]:
    groups: dict[tuple[str, str], list[Incident]] = {}
    for incident in found:
        groups.setdefault((incident.what, incident.where), []).append(incident)
    return list(groups.values())


def _excess(incident: Incident) -> float:
    """By how much the limit was passed, in the unit of the incident; 0 where there is no number."""
    return float(np.nan_to_num(abs(incident.worst - incident.limit)))


def _details(
    worst: Incident, together: Sequence[Incident], clock: RunClock, display: Display, told: Collection[str]
) -> Iterator[str]:
    value = worst_words(worst, display)
    if value == "-":
        yield worst.source
    else:
        place = "" if worst.chainage is None else f", chainage {display.length(worst.chainage)}"
        words = f"worst {value} {clock.window(worst.worst_time, worst.window)}{place}"
        yield words if worst.what in AMOUNTS else f"{words}; limit {_limit_words(worst, display, told)}"
    for measures in zip(*(incident.also for incident in together), strict=True):
        if words := _measure_words(_combined(measures, together.index(worst)), display):
            yield words
    ends = []
    if any(incident.settling for incident in together):
        ends.append("in part while settling")
    if together[-1].runs_to_end and value != "-":
        ends.append("still going on when the run ended")
    if ends:
        yield "; ".join(ends)


def _limit_words(worst: Incident, display: Display, told: Collection[str]) -> str:
    limit = value_text(worst.limit, worst.unit, display)
    return limit if worst.source in told else f"{limit}, {worst.source}"


def _combined(measures: Sequence[Measure], worst: int) -> Measure:
    """One measure for several incidents: volumes add up; of those with a limit the greatest stands, of others that of
    the worst incident.
    """
    if measures[0].unit == "m3":
        return Measure(measures[0].name, sum(measure.value for measure in measures), "m3")
    if measures[0].limit is None:
        return measures[worst]
    return max(measures, key=lambda measure: float(np.nan_to_num(measure.value, nan=-np.inf)))


def _measure_words(measure: Measure, display: Display) -> str:
    """A further value in words; nothing for one that adds nothing."""
    if measure.name == JUMP_END:
        return _jump_end_words(measure, display)
    if not round(measure.value, 3):
        return ""
    limit = "" if measure.limit is None else f"; limit {value_text(measure.limit, measure.unit, display)}"
    return f"{measure.name} {value_text(measure.value, measure.unit, display)}{limit}"


def _jump_end_words(measure: Measure, display: Display) -> str:
    """How far the jump reached, and how far the floor is protected."""
    if np.isnan(measure.value) or measure.limit is None:
        return ""
    floor = f"is protected to {display.distance(measure.limit)}" if measure.limit > 0.0 else "is not protected"
    return f"the jump ends up to {display.distance(measure.value)} from the gate; the floor {floor}"
