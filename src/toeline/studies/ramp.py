"""The ramp test of a canal: from steady flow a tenth more water, no gate moved, until all of it comes out."""

import json
import math

import xarray as xr

from toeline.errors import UsageError
from toeline.findings.ramp import PASSED_TOLERANCE, RampPassage, ramp_passage
from toeline.hydraulics.surge import wave_speeds
from toeline.hydraulics.uniform_flow import kinematic_celerity
from toeline.network.build import network_of
from toeline.scenario import Scenario
from toeline.simulate import simulate
from toeline.studies.members import sampled, with_changes

SHARE = 0.1
"""The ramp as a share of the inflow (choice)."""
BEGINS, LASTS = 3600, 3600
"""When the ramp begins after the start, and how long it lasts [s] (choice)."""
SHORTEST, LONGEST = 86_400, 32 * 86_400
"""Lengths [s] tried, each twice the one before, until the canal is steady again (choice)."""
LEAST_FLOW = 1e-3
"""Discharge [m³/s] at head and tail below which there is no flow to ramp (choice)."""


def ramp_test(scenario: Scenario, run: xr.Dataset) -> RampPassage:
    """Send a ramp of inflow through the canal of a day; `run` is the run of that day.

    It starts from the steady flow of the day or, where the day does not start so, from steady flow at its mean inflow
    with the target levels held. A reservoir is raised by what lets a tenth more in at first; less comes in the end, as
    the water below the head gate rises too. Raises UsageError where the canal has no such flow, RunError where no step
    can be solved.
    """
    changes = [*_steady_start(scenario, run), *_first_values(scenario)]
    length = SHORTEST
    while True:
        passage = _passage_within(length, scenario, changes)
        if abs(passage.passed_share - 1.0) <= 0.1 * PASSED_TOLERANCE or length >= LONGEST:
            return passage
        length *= 2


def _steady_start(scenario: Scenario, run: xr.Dataset) -> list[str]:
    """Overrides for a start in steady flow; none where the day starts so."""
    if scenario.day.start.state == "steady":
        return []
    mean = float(run["canal_inflow"].mean())
    if mean < LEAST_FLOW:
        raise UsageError("no water flows into the canal")
    start = 'start={state="steady", openings="to hold targets"'
    if scenario.canal.head.kind == "reservoir":
        return [f'{start}, inflow="{mean!r} m3/s"}}']
    return [f"{start}}}", f'inflow="{mean!r} m3/s"']


def _first_values(scenario: Scenario) -> list[str]:
    """Overrides that keep everything at its first value of the day, and leave every plan out."""
    day = scenario.day
    series = {"deliveries": (day.deliveries, "m3/s"), "offtake_openings": (day.offtake_openings, "m")}
    kept = ["plans={}"]
    for key, (by_name, unit) in series.items():
        entries = (f'{json.dumps(name)}="{values.at(0)!r} {unit}"' for name, values in by_name.items())
        kept.append(f"{key}={{{', '.join(entries)}}}")
    if day.tail is not None:
        kept.append(f'tail="{day.tail.at(0)!r} m"')
    return kept


def _passage_within(length: int, scenario: Scenario, changes: list[str]) -> RampPassage:
    """The passage of the ramp in a run of so many seconds."""
    period = [f'period.length="{length} s"', *sampled(1000 * length, scenario.day.output.every_ms)]
    quiet = with_changes(scenario, None, *changes, *period)
    before = _start_of(quiet)
    run = simulate(with_changes(quiet, None, _ramp(quiet, before)))
    return ramp_passage(run, BEGINS, *_wave_times(quiet, run))


def _start_of(quiet: Scenario) -> xr.Dataset:
    """The first minute of the quiet day. UsageError where nothing flows through the canal."""
    minute = ['period.length="1 min"', *sampled(60_000, 60_000)]
    start = simulate(with_changes(quiet, None, *minute)).isel(time=0)
    for way in ("inflow", "outflow"):
        if float(start[f"canal_{way}"]) < LEAST_FLOW:
            end = "head" if way == "inflow" else "tail"
            raise UsageError(f"no water passes the {end} of the canal in the steady flow at the start")
    return start


def _ramp(quiet: Scenario, start: xr.Dataset) -> str:
    """The override that raises the inflow, or the reservoir, in a ramp."""
    if quiet.canal.head.kind == "inflow":
        key, unit, before = "inflow", "m3/s", float(start["canal_inflow"])
        after = (1.0 + SHARE) * before
    else:
        gate = start.isel(gate=0)
        below = max(float(gate["gate_tailwater_level"]), float(gate["gate_sill_level"]))
        key, unit, before = "head", "m", float(gate["gate_headwater_level"])
        after = before + ((1.0 + SHARE) ** 2 - 1.0) * (before - below)
    points = ((0, before), (BEGINS, before), (BEGINS + LASTS, after))
    pairs = ", ".join(f'["+{second} s", "{value!r} {unit}"]' for second, value in points)
    return f'{key}={{shape="lines", values=[{pairs}]}}'


def _wave_times(scenario: Scenario, run: xr.Dataset) -> tuple[float, float]:
    """Time [s] from head to tail of a small gravity wave, Σ Δx/(c + V), and of a slow wave, Σ Δx/(dQ/dA)."""
    channel = network_of(scenario.canal, scenario.day.period.spacing).channel
    start = run.isel(profile_time=0)
    level, discharge, chainage = (start[name].values for name in ("water_level", "discharge", "chainage"))
    fast = slow = 0.0
    for k in range(level.size - 1):
        site = channel.nodes[k]
        depth = 0.5 * (level[k] + level[k + 1] - site["bed_level"] - channel.nodes[k + 1]["bed_level"])
        flow, length = 0.5 * (discharge[k] + discharge[k + 1]), chainage[k + 1] - chainage[k]
        speed, celerity = wave_speeds(channel.shapes[site["section"]], flow, depth)[0], 0.0
        if depth > 0.0:
            celerity = kinematic_celerity(channel.shapes[site["section"]], flow, depth)
        fast += length / speed if speed > 0.0 else math.inf
        slow += length / celerity if celerity > 0.0 else math.inf
    return fast, slow
