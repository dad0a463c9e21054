"""The compiled loop from one stop to the next: adaptive steps, output inside them."""

import math
from typing import NamedTuple

import numpy as np

from toeline.engine.output import fill_profile, fill_row
from toeline.engine.step import accept, begin_leg, set_forcing, try_step
from toeline.hydraulics.kernel import kernel

LEG_DONE, BLOCK_FULL, STEP_TOO_SMALL = range(3)

SHORTEST_STEP = 1e-3
"""Step [s] below which a run is given up."""
RESTART_STEP = 2.0
"""First step [s] after a jump of an opening, an inflow or a delivery (choice)."""
JUMP = 1e-4
"""Change of a discharge [m³/s] at a stop that counts as a jump (choice)."""
GROWTH = 3.0
END_SLACK = 1e-6
"""Time [s] below which a rest of a leg is taken along with the step."""


class Pace(NamedTuple):
    """How steps are chosen, and counts for people."""

    tolerance: np.ndarray  # (1) m, of a level in one step
    longest: np.ndarray  # (1) s
    next_step: np.ndarray  # (1) s, wish for the next step
    done: np.ndarray  # (1) s of the leg already advanced
    counts: np.ndarray  # (3) int64: steps, rejected, linear solves


class Appointments(NamedTuple):
    """When output is due, in whole milliseconds from the start of the period."""

    leg_start: np.ndarray  # (1) int64
    every: np.ndarray  # (2) int64: rows, profiles
    due: np.ndarray  # (2) int64: next row, next profile


@kernel
def advance(tables, state, middle, after, stage, totals, forcing, watch, rows, pace, appointments, leg, inertial):
    """Advance the state through a leg of `leg` seconds; call again with the same leg after BLOCK_FULL.

    Output due at or after the start and before the end of the leg goes to `rows`. After a jump of the forcing the steps
    start small. Returns LEG_DONE, BLOCK_FULL or STEP_TOO_SMALL.
    """
    if pace.done[0] == 0.0 and begin_leg(tables, state, stage, forcing) > JUMP:
        pace.next_step[0] = min(pace.next_step[0], RESTART_STEP)
    while pace.done[0] < leg:
        if not _room_for_a_step(rows, pace, appointments):
            return BLOCK_FULL
        rest = leg - pace.done[0]
        wish = min(pace.next_step[0], pace.longest[0])
        h = rest if wish >= rest - END_SLACK else (wish if wish < 0.6 * rest else 0.5 * rest)
        solves, error = try_step(tables, state, middle, after, stage, forcing, pace.done[0], h, inertial)
        pace.counts[2] += solves
        if solves == 0 or error > pace.tolerance[0]:
            pace.counts[1] += 1
            shrink = 0.25 if solves == 0 else max(0.9 * (pace.tolerance[0] / error) ** (1.0 / 3.0), 0.2)
            pace.next_step[0] = h * shrink
            if pace.next_step[0] < SHORTEST_STEP:
                return STEP_TOO_SMALL
            continue
        end = leg if h == rest else pace.done[0] + h
        _write_due(tables, state, middle, after, totals, watch, rows, pace, appointments, forcing, h, end)
        accept(tables, state, middle, after, stage, totals, h)
        pace.counts[0] += 1
        growth = min(0.9 * (pace.tolerance[0] / max(error, 1e-12)) ** (1.0 / 3.0), GROWTH)
        pace.next_step[0] = max(h * growth, wish) if h < wish else h * growth
        pace.done[0] = end
    return LEG_DONE


@kernel
def _room_for_a_step(rows, pace, appointments):
    """Whether the block can take the output of one more step of the longest kind."""
    longest = int(math.ceil(pace.longest[0] * 1000.0))
    most, most_profiles = longest // appointments.every[0] + 2, longest // appointments.every[1] + 2
    return rows.filled[0] + most <= rows.time.size and rows.filled[1] + most_profiles <= rows.profile_time.size


@kernel
def _write_due(tables, state, middle, after, totals, watch, rows, pace, appointments, forcing, h, end):
    """Rows and profiles due from the start of the step until just before its end."""
    start_ms, start = appointments.leg_start[0], pace.done[0]
    for k in range(2):
        while True:
            due = (appointments.due[k] - start_ms) / 1000.0
            if due >= end:
                break
            at = min(max((due - start) / h, 0.0), 1.0)
            set_forcing(forcing, due)
            if k == 0:
                fill_row(
                    tables, state, middle, after, totals, watch, rows, appointments.due[0], h, at, forcing.now
                )
            else:
                fill_profile(tables, state, middle, after, watch, rows, appointments.due[1], h, at, forcing.now)
            appointments.due[k] += appointments.every[k]


@kernel
def write_now(tables, state, totals, watch, rows, forcing, time_ms, profile):
    """Row, and profile if asked for, of the state as it stands; `forcing.now` is that of the time."""
    fill_row(tables, state, state, state, totals, watch, rows, time_ms, 0.0, 0.0, forcing.now)
    if profile:
        fill_profile(tables, state, state, state, watch, rows, time_ms, 0.0, 0.0, forcing.now)
