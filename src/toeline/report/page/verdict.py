"""What a run comes to, in words: what goes wrong, and both hazards side by side."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.incidents import Incident
from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.series import names
from toeline.report.clock import duration_text
from toeline.report.incidents import NOTHING_FOUND, incident_number, incident_stories
from toeline.report.layout import counted
from toeline.report.page.moments import Moments
from toeline.report.run_clock import RunClock
from toeline.units import Display

PLACES_NAMED = 4


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
    """The sum of the verdict, in one sentence."""
    if not found:
        return NOTHING_FOUND
    places = list(dict.fromkeys(wrong.where for wrong in found))
    *others, last = places if len(places) <= PLACES_NAMED else [counted(len(places), "place")]
    listed = f"{', '.join(others)} and {last}" if others else last
    return f"{counted(len(found), 'thing')} {'goes' if len(found) == 1 else 'go'} wrong, at {listed}."


def floor_hazard(run: xr.Dataset, display: Display) -> Hazard:
    """For how long jumps left the protected floor, and by how much the worst one did."""
    gates = gate_jumps(run)
    hit = [gate for gate in gates if gate.beyond_protection_hours]
    if not hit:
        return Hazard("no time", f"At none of {counted(len(gates), 'gate')} did a jump end beyond the protected floor. {_nearest(gates, display)}")
    worst = max(hit, key=lambda gate: gate.beyond_protection_hours)
    return Hazard(_hours(worst.beyond_protection_hours), f"At {_of(hit, gates)} the jump ended beyond the protected floor; longest below {worst.gate}. {_nearest(gates, display)}")


def people_hazard(run: xr.Dataset) -> Hazard:
    """For how long a roller stood at the gates."""
    gates = gate_jumps(run)
    hit = [gate for gate in gates if gate.roller_hours]
    if not hit:
        return Hazard("no time", f"At none of {counted(len(gates), 'gate')} was the jump drowned. Fast water and free jumps drown people too.")
    longest = max(gate.roller_hours for gate in hit)
    return Hazard(_hours(longest), f"At {_of(hit, gates)} the jump was drowned for some time: a roller at the gate that holds people under.")


def incident_rows(run: xr.Dataset, found: Sequence[Incident], moments: Moments, display: Display) -> list[IncidentRow]:
    """Every incident, in the order in which they begin."""
    clock = RunClock(run)
    return [
        IncidentRow(
            one.what,
            one.where,
            clock.span(one.start, one.end) if one.end > one.start else (clock.at(one.start) if not np.isnat(one.start) else "-"),
            _worst(one, clock, display),
            _number(one.limit, one.unit, display),
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
    gates, above = names(run["gate"]), names(run["gate_upstream_pool"])
    pools = dict(zip(names(run["offtake"]), names(run["offtake_pool"]), strict=True))
    pool = pools.get(where, where)
    if where in gates:
        return gates.index(where)
    return above.index(pool) if pool in above else 0


def _of(hit: Sequence[GateJumps], gates: Sequence[GateJumps]) -> str:
    listed = f" ({', '.join(gate.gate for gate in hit)})" if len(hit) <= PLACES_NAMED else ""
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
    value = _number(incident.worst, incident.unit, display)
    return value if value == "-" else f"{value} at {clock.at(incident.worst_time)}"


def _number(value: float, unit: str, display: Display) -> str:
    return incident_number(value, unit, display)


def _hours(hours: float) -> str:
    return duration_text(hours * 3600)
