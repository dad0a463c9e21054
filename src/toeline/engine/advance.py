"""The compiled loop from one stop to the next: adaptive steps, output inside them."""

import math

import numpy as np

from toeline.engine.output import fill_profile, fill_row, set_courses, sum_pools
from toeline.engine.step import accept, begin_leg, set_forcing, try_step
from toeline.hydraulics.kernel import kernel

LEG_DONE, BLOCK_FULL, STEP_TOO_SMALL = range(3)

SHORTEST_STEP = 1e-3
"""Step [s] below which a run is given up."""
RESTART_STEP = 5.0
"""First step [s] after a jump or a kink of an opening, an inflow or a delivery (choice)."""
JUMP = 1e-4
"""Change of a discharge [m³/s] at a stop that counts as a jump (choice)."""
GROWTH = 3.0
"""Largest ratio of a step to the one before."""
END_SLACK = 1e-6
"""Time [s] below which the rest of a leg is taken along with a step."""

PACE = np.dtype(
    [
        ("tolerance", float),  # m, of a level in one step
        ("longest_step", float),  # s
        ("next_step", float),  # s, wish for the next step
        ("done", float),  # s of the leg already advanced
        ("leg_start", np.int64),  # ms from the start of the period
        ("every", np.int64),  # ms between rows
        ("profiles_every", np.int64),  # ms between profiles
        ("due", np.int64),  # ms, next row
        ("profile_due", np.int64),  # ms, next profile
        ("steps", np.int64),
        ("rejected", np.int64),
        ("solves", np.int64),
    ]
)
"""How steps are chosen, when output is due, and counts for people."""


@kernel
def advance(tables, state, middle, after, work, totals, forcing, watch, rows, paces, leg, has_kink, inertial):
    """Advance the state through a leg of `leg` seconds; call again with the same leg after BLOCK_FULL.

    Output due at or after the start and before the end of the leg goes to `rows`; that of the very end, which no leg
    begins, by a leg of no length. After a jump of the forcing, or where
    `has_kink` says that its rates are not those before, the steps start small. Returns LEG_DONE, BLOCK_FULL or
    STEP_TOO_SMALL.
    """
    pace = paces[0]
    if pace.done == 0.0 and (begin_leg(tables, state, work, forcing, inertial) > JUMP or has_kink):
        pace.next_step = min(pace.next_step, RESTART_STEP)
    while pace.done < leg:
        if not has_room(rows, pace):
            return BLOCK_FULL
        rest, wish = leg - pace.done, min(pace.next_step, pace.longest_step)
        h = step_towards(rest, wish)
        solves, error = try_step(tables, state, middle, after, work, forcing, pace.done, h, inertial)
        pace.solves += solves
        if solves == 0 or error > pace.tolerance:
            pace.rejected += 1
            pace.next_step = h * (0.25 if solves == 0 else max(step_ratio(pace.tolerance, error), 0.2))
            if pace.next_step < SHORTEST_STEP:
                return STEP_TOO_SMALL
            continue
        end = leg if h == rest else pace.done + h
        until = pace.leg_start + end * 1000.0
        write_due(tables, state, middle, after, totals, watch, rows, pace, forcing, h, until)
        accept(tables, state, middle, after, work, totals, h)
        pace.steps += 1
        grown = h * min(step_ratio(pace.tolerance, error), GROWTH)
        pace.next_step = max(grown, wish) if h < wish else grown
        pace.done = end
    if leg == 0.0:
        write_due(tables, state, state, state, totals, watch, rows, pace, forcing, 0.0, pace.leg_start + 1.0)
    return LEG_DONE


@kernel
def step_towards(rest, wish):
    """The wished step [s], stretched or halved so that no sliver of the leg is left."""
    if wish >= rest - END_SLACK:
        return rest
    return wish if wish < 0.6 * rest else 0.5 * rest


@kernel
def step_ratio(tolerance, error):
    """Ratio of the next step to this one for a third-order estimate of the error."""
    return 0.9 * (tolerance / max(error, 1e-12)) ** (1.0 / 3.0)


@kernel
def has_room(rows, pace):
    """Whether the block can take the output of one more step of the longest kind."""
    longest = math.ceil(pace.longest_step * 1000.0)
    most, most_profiles = longest // pace.every + 2, longest // pace.profiles_every + 2
    return rows.filled[0] + most <= rows.canal.size and rows.filled[1] + most_profiles <= rows.profile_time.size


@kernel
def write_due(tables, before, middle, after, totals, watch, rows, pace, forcing, h, until):
    """Rows and profiles due from the start of the step until `until` milliseconds of the period, itself left out."""
    if pace.due < until or pace.profile_due < until:
        set_courses(tables, before, after, h, watch.courses)
        sum_pools(tables, before, middle, after, watch.volumes)
    while pace.due < until:
        at = set_instant(pace, forcing, pace.due, h)
        fill_row(tables, before, middle, after, totals, watch, rows, pace.due, h, at, forcing)
        pace.due += pace.every
    while pace.profile_due < until:
        at = set_instant(pace, forcing, pace.profile_due, h)
        fill_profile(tables, before, middle, after, watch, rows, pace.profile_due, h, at, forcing)
        pace.profile_due += pace.profiles_every


@kernel
def set_instant(pace, forcing, due, h):
    """Set the forcing to an instant of the step [ms of the period]; returns the fraction of the step."""
    seconds = (due - pace.leg_start) / 1000.0
    set_forcing(forcing, seconds)
    return min(max((seconds - pace.done) / h, 0.0), 1.0) if h > 0.0 else 0.0
