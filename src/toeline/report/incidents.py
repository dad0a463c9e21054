"""Incidents in words: what goes wrong, where, when, and by how much."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from toeline.findings.incidents import Incident, Measure
from toeline.report.layout import INDENT, paragraph
from toeline.report.run_clock import RunClock
from toeline.report.values import value_text
from toeline.units import Display

SETTLING = (
    "Settling: waves of a gate move still travel through a pool beside the place; levels are least trustworthy then."
)
NOTHING_FOUND = (
    "No incident. Looked for: jumps beyond the protected floor, water above bank or lining, velocities over the limit "
    "of a surface and the limits of the canal file, where it gives them, deliveries that fall short. That nothing was "
    "found makes no place safe."
)


def incident_lines(found: Sequence[Incident], clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """All incidents of one kind at one place together, in the order in which they begin."""
    if not found:
        yield paragraph(NOTHING_FOUND, width)
    for story in incident_stories(found, clock, display):
        times = f", {story.times}" if story.times else ""
        yield paragraph(f"{story.worst.where}: {story.worst.what}{times}", width, hanging=INDENT * 2)
        for detail in story.details:
            yield paragraph(detail, width, indent=INDENT * 2, hanging=INDENT * 3)
    if any(incident.settling for incident in found):
        yield paragraph(SETTLING, width)


@dataclass(frozen=True)
class IncidentStory:
    """All incidents of one kind at one place: the worst of them, when they were, and how far they went."""

    worst: Incident
    times: str
    details: tuple[str, ...]


def incident_stories(found: Sequence[Incident], clock: RunClock, display: Display) -> Iterator[IncidentStory]:
    """What goes wrong, each kind at each place once, in the order in which they begin."""
    for together in _together(found):
        worst = max(together, key=_excess)
        times = clock.spans([(incident.start, incident.end) for incident in together])
        yield IncidentStory(worst, times, tuple(_details(worst, together, clock, display)))


def _together(found: Sequence[Incident]) -> list[list[Incident]]:
    groups: dict[tuple[str, str], list[Incident]] = {}
    for incident in found:
        groups.setdefault((incident.what, incident.where), []).append(incident)
    return list(groups.values())


def _excess(incident: Incident) -> float:
    """By how much the limit was passed, in the unit of the incident; 0 where there is no number."""
    return float(np.nan_to_num(abs(incident.worst - incident.limit)))


def _details(worst: Incident, together: Sequence[Incident], clock: RunClock, display: Display) -> Iterator[str]:
    value = value_text(worst.worst, worst.unit, display)
    if value != "-":
        place = "" if worst.chainage is None else f", chainage {display.length(worst.chainage)}"
        limit = value_text(worst.limit, worst.unit, display)
        yield f"worst {value} {clock.window(worst.worst_time, worst.window)}{place}; limit {limit}, {worst.source}"
    else:
        yield worst.source
    for measures in zip(*(incident.also for incident in together), strict=True):
        yield _measure_words(_combined(measures, together.index(worst)), display)
    if any(incident.settling for incident in together):
        yield "in part while settling"
    if together[-1].runs_to_end and value != "-":
        yield "still going on when the run ended"


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
    limit = "" if measure.limit is None else f"; limit {value_text(measure.limit, measure.unit, display)}"
    return f"{measure.name} {value_text(measure.value, measure.unit, display)}{limit}"
