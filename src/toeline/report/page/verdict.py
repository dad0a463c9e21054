"""What a run comes to, in words: what goes wrong, and both hazards side by side."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.incidents import Incident
from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.series import is_any, names
from toeline.report.clock import duration_text
from toeline.report.incidents import gravity, incident_stories, worst_words
from toeline.report.layout import counted
from toeline.report.page.moments import Moments
from toeline.report.run_clock import RunClock
from toeline.report.values import value_text
from toeline.results.dataset import read_apart
from toeline.units import Display

GATES_NAMED = 4


@dataclass(frozen=True)
class Jump:
    """Where on the page something is shown: the moment, and the gate whose figures show it."""

    moment: int
    gate: int


@dataclass(frozen=True)
class Wrong:
    """One kind of thing that goes wrong at one place."""

    where: str
    what: str
    times: str
    details: tuple[str, ...]
    link: Jump | None


@dataclass(frozen=True)
class Hazard:
    """One of the two hazards: its sum in a few words, and where."""

    amount: str
    words: str


@dataclass(frozen=True)
class IncidentRow:
    """One incident as a row of the table."""

    what: str
    where: str
    times: str
    worst: str
    limit: str
    source: str
    link: Jump | None


def wrongs(run: xr.Dataset, found: Sequence[Incident], moments: Moments, display: Display) -> list[Wrong]:
    """What goes wrong, in the order in which it begins; empty where nothing was found."""
    return [
        Wrong(story.worst.where, story.worst.what, story.times, story.details, link_to(story.worst, run, moments))
        for story in incident_stories(found, RunClock(run), display)
    ]


def headline(found: Sequence[Wrong]) -> str:
    """The sum of the verdict, in a sentence or two."""
    if not found:
        return "No incident was found."
    gravest = min(found, key=lambda wrong: gravity(wrong.what))
    told = f"{gravest.where}: {gravest.what}{f', {gravest.times}' if gravest.times else ''}."
    if len(found) == 1:
        return told
    places = len({wrong.where for wrong in found})
    return f"{counted(len(found), 'thing')} go wrong at {counted(places, 'place')}. Gravest of all, {told}"


def floor_hazard(run: xr.Dataset, display: Display) -> Hazard:
    """For how long jumps left the protected floor, and by how much the worst one did."""
    gates = gate_jumps(run)
    hit = _in_states(run, gates, "beyond_protection", "swept_out_of_pool")
    nearest = _nearest(gates, display)
    if not hit:
        return Hazard(
            "no time", f"At none of {counted(len(gates), 'gate')} did a jump end beyond the protected floor. {nearest}"
        )
    longest = max(hit, key=lambda gate: gate.beyond_protection_hours)
    amount = _hours(longest.beyond_protection_hours)
    where = f"; longest below {longest.gate}" if len(hit) > 1 else ""
    return Hazard(amount, f"At {_of(hit, gates)} the jump ended beyond the protected floor{where}. {nearest}")


def people_hazard(run: xr.Dataset) -> Hazard:
    """For how long a roller stood at the gates."""
    gates = gate_jumps(run)
    hit = _in_states(run, gates, "drowned")
    if not hit:
        return Hazard(
            "no time",
            f"At none of {counted(len(gates), 'gate')} was the jump drowned. Fast water and free jumps drown people "
            "too.",
        )
    longest = max(hit, key=lambda gate: gate.roller_hours)
    where = f"; longest below {longest.gate}" if len(hit) > 1 else ""
    return Hazard(
        _hours(longest.roller_hours),
        f"At {_of(hit, gates)} a drowned jump stood as a roller at the gate, which holds people under{where}.",
    )


def _in_states(run: xr.Dataset, gates: Sequence[GateJumps], *states: str) -> list[GateJumps]:
    """The gates whose jump was in one of the states at any step: an instant counts, though it lasts no time."""
    held = is_any(read_apart(run)["jump_state"], *states)
    return [gate for place, gate in enumerate(gates) if held[:, place].any()]


def incident_rows(run: xr.Dataset, found: Sequence[Incident], moments: Moments, display: Display) -> list[IncidentRow]:
    """Every incident, in the order in which they begin."""
    clock = RunClock(run)
    return [
        IncidentRow(
            one.what,
            one.where,
            clock.span(one.start, one.end)
            if one.end > one.start
            else (clock.at(one.start) if not np.isnat(one.start) else "-"),
            _worst(one, clock, display),
            value_text(one.limit, one.unit, display),
            one.source,
            link_to(one, run, moments),
        )
        for one in found
    ]


def link_to(incident: Incident, run: xr.Dataset, moments: Moments) -> Jump | None:
    """Where the worst of an incident is shown; the gate of a pool or an offtake is the one that closes its pool."""
    if np.isnat(incident.worst_time):
        return None
    return Jump(moments.nearest(incident.worst_time, run), _gate_of(incident.where, run))


def _gate_of(where: str, run: xr.Dataset) -> int:
    """The gate at a place; of a pool or an offtake the one that closes the pool, of its upper end the one above."""
    offtakes = dict(zip(names(run["offtake"]), names(run["offtake_pool"]), strict=True))
    place, _, end = where.partition(", ")
    neighbours = names(run["gate_downstream_pool" if end == "upper end" else "gate_upstream_pool"])
    for listed, wanted in ((names(run["gate"]), where), (neighbours, offtakes.get(where, place))):
        if wanted in listed:
            return listed.index(wanted)
    return 0


def _of(hit: Sequence[GateJumps], gates: Sequence[GateJumps]) -> str:
    listed = f" ({', '.join(gate.gate for gate in hit)})" if len(hit) <= GATES_NAMED else ""
    return f"{len(hit)} of {counted(len(gates), 'gate')}{listed}"


def _nearest(gates: Sequence[GateJumps], display: Display) -> str:
    """The least protection margin of all, in words."""
    known = [gate for gate in gates if np.isfinite(gate.protection_margin.value)]
    if not known:
        return ""
    least = min(known, key=lambda gate: gate.protection_margin.value)
    value = least.protection_margin.value
    amount = display.length(abs(value))
    return f"{amount} of tailwater {'was missing' if value < 0 else 'to spare at the least'}, below {least.gate}."


def _worst(incident: Incident, clock: RunClock, display: Display) -> str:
    value = worst_words(incident, display)
    return value if value == "-" else f"{value} {clock.window(incident.worst_time, incident.window)}"


def _hours(hours: float) -> str:
    return duration_text(hours * 3600) if hours else "an instant"
