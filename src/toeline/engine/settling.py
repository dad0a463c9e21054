"""Until when a pool settles after a change, the surge that an instantaneous change could send, and what of a wave goes
on through a gate.
"""

import math

from toeline.constants import GRAVITY
from toeline.engine.gate_link import gate_discharge_at
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.kernel import inner_kernel, kernel
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM, surge_height, wave_speeds

LEAST_CHANGE = 1e-9
"""Change of a discharge [m³/s] below which nothing is said to settle."""

LEAST_PASSED = 0.01
"""Height [m] from which a wave counts that goes on through a gate into the pool beyond: what a gauge is read to
(choice).
"""

LEAST_SURGE_DEPTH = 0.05
"""Depth [m] below which no surge bound is given: there is no pool to carry it."""


WAVE_NUDGE = 1e-4
"""Change of level [m] over which the slopes of the gate law are taken."""


@kernel
def round_trip(channel, first, last, state):
    """Time [s] for a small wave down and back up a pool, Σ Δx/(c + V) + Σ Δx/(c − V); infinite where it is dry or
    critical.
    """
    total = 0.0
    for k in range(first, last):
        here, there = channel.nodes[k], channel.nodes[k + 1]
        depth = 0.5 * (state.nodes[k].level + state.nodes[k + 1].level - here.bed_level - there.bed_level)
        with_flow, against = wave_speeds(channel.shapes[here.section], state.links[k + 1].discharge, depth)
        if with_flow <= 0.0 or against <= 0.0:
            return math.inf
        step = there.chainage - here.chainage
        total += step / with_flow + step / against
    return total


@kernel
def unsettle_by_move(tables, state, watch, g, levels, move, openings, time, moved, never):
    """Put into `watch` the surge bounds of a move of a leaf of gate `g` and until when the pools settle.

    `levels` [m] are those above and below the gate, `move` the openings before and after [m], `openings` [m] those of
    all gates; the order came at `time` and the leaf stands at `moved`, `never` comes after the end [ms of the period].
    """
    gate, guard = tables.gates[g], watch.gates[g]
    before = state.links[gate.downstream_node].discharge
    up, down, change = surge_bounds(tables.channel.shapes, gate, levels[0], levels[1], before, move[0], move[1])
    if abs(change) < LEAST_CHANGE:
        return
    pool = pool_of(tables.pools, gate.upstream_node)
    if pool >= 0:
        guard.surge_upstream = joined_surge(guard.surge_upstream, guard.surge_upstream_until > time, up)
        guard.surge_upstream_until = unsettle(tables, state, watch, pool, moved, never)
        unsettle_beyond(tables, state, watch, g, pool, UPSTREAM, up, moved, openings)
    pool = pool_of(tables.pools, gate.downstream_node)
    if pool >= 0:
        guard.surge_downstream = joined_surge(guard.surge_downstream, guard.surge_downstream_until > time, down)
        guard.surge_downstream_until = unsettle(tables, state, watch, pool, moved, never)
        unsettle_beyond(tables, state, watch, g, pool, DOWNSTREAM, down, moved, openings)


@inner_kernel
def pool_of(pools, node):
    """The pool of a node; -1 beyond the ends of the canal."""
    if node < 0 or node > pools[pools.size - 1].last_node:
        return -1
    pool = 0
    while pools[pool].last_node < node:
        pool += 1
    return pool


@inner_kernel
def joined_surge(running, still_runs, height):
    """Bound [m] of a surge and one that may still run: their sum where both go one way, else the higher."""
    if not still_runs:
        return height
    if running * height >= 0.0:
        return running + height
    return running if abs(running) >= abs(height) else height


@inner_kernel
def unsettle(tables, state, watch, pool, time, never):
    """Have a pool settle for a round trip from a time on; returns until when [ms of the period]."""
    ends = tables.pools[pool]
    seconds = round_trip(tables.channel, ends.first_node, ends.last_node, state)
    until = time + round(1000.0 * seconds) if seconds < math.inf else never
    watch.settled_at[pool] = max(watch.settled_at[pool], until)
    return until


@inner_kernel
def unsettle_beyond(tables, state, watch, g, pool, way, height, moved, openings):
    """Pools that a wave from gate `g` reaches through the gates beyond `pool`: all on its way settle until it has run
    down and back through them.
    """
    step = 1 if way == DOWNSTREAM else -1
    ends, last = tables.pools[pool], pool
    seconds = round_trip(tables.channel, ends.first_node, ends.last_node, state)
    k = g + step
    while 0 <= k < tables.gates.size:
        beyond = pool_of(tables.pools, tables.gates[k].downstream_node if step > 0 else tables.gates[k].upstream_node)
        if beyond < 0:
            break
        ends = tables.pools[beyond]
        trip = round_trip(tables.channel, ends.first_node, ends.last_node, state)
        height *= share_through(tables, state, k, openings[k], way)
        if trip == math.inf or abs(height) < LEAST_PASSED:
            break
        seconds, last, k = seconds + trip, beyond, k + step
    if last != pool and seconds < math.inf:
        for p in range(min(pool, last), max(pool, last) + 1):
            watch.settled_at[p] = max(watch.settled_at[p], moved + round(1000.0 * seconds))


@inner_kernel
def share_through(tables, state, g, opening, way):
    """`passed_share` of a gate between two pools, waves as in their middle; none where one of them is dry."""
    gate = tables.gates[g]
    above = pool_admittances(tables.channel, middle_node(tables.pools, gate.upstream_node), state)
    below = pool_admittances(tables.channel, middle_node(tables.pools, gate.downstream_node), state)
    if min(above[0], above[1], below[0], below[1]) <= 0.0:
        return 0.0
    levels = state.nodes[gate.upstream_node].level, state.nodes[gate.downstream_node].level
    return passed_share(tables.channel, gate, levels, opening, above, below, way)


@inner_kernel
def middle_node(pools, node):
    """The node in the middle of the pool of a node."""
    ends = pools[pool_of(pools, node)]
    return (ends.first_node + ends.last_node) // 2


@inner_kernel
def surge_bounds(shapes, gate, level_up, level_down, before, opening, opening_after):
    """Heights [m] of the surges up and down the pools if a leaf of a gate went from one opening to another at once, and
    the change of the gate's discharge from `before` [m³/s]."""
    left = gate_discharge_at(shapes, gate, level_up, level_down, opening)
    change = (gate_discharge_at(shapes, gate, level_up, level_down, opening_after) - left) / gate.leaf_count
    section_up, section_down = shapes[gate.upstream_section], shapes[gate.downstream_section]
    depth_up, depth_down = level_up - gate.upstream_bed_level, level_down - gate.floor_level
    up = down = 0.0
    if depth_up > LEAST_SURGE_DEPTH and is_carried(section_up, before, depth_up):
        up = surge_height(section_up, before, depth_up, change, UPSTREAM)[0]
    if depth_down > LEAST_SURGE_DEPTH and is_carried(section_down, before, depth_down):
        down = surge_height(section_down, before, depth_down, change, DOWNSTREAM)[0]
    return up, down, change


@kernel
def passed_share(channel, gate, levels, opening, above, below, way):
    """Share of the height of a small wave on its `way` that goes on into the pool beyond a gate, the rest being thrown
    back: linear waves with the admittances T(c ± V) of both pools, and the slopes of the gate law to both levels.

    `levels` [m] are those above and below the gate, `above` and `below` pairs of `pool_admittances`.
    """
    here = gate_discharge_at(channel.shapes, gate, levels[0], levels[1], opening)
    by_up = gate_discharge_at(channel.shapes, gate, levels[0] + WAVE_NUDGE, levels[1], opening) - here
    by_down = here - gate_discharge_at(channel.shapes, gate, levels[0], levels[1] + WAVE_NUDGE, opening)
    near, far = max(by_up, 0.0) / WAVE_NUDGE, max(by_down, 0.0) / WAVE_NUDGE
    coming, back, on = above[0], above[1], below[0]
    if way == UPSTREAM:
        near, far = far, near
        coming, back, on = below[1], below[0], above[1]
    return near * (1.0 / on + coming / (back * on)) / (1.0 + far / on + near / back)


@inner_kernel
def pool_admittances(channel, node, state):
    """Discharge of a small wave over its height [m²/s], T(c + V) and T(c − V), beside a node; 0 where it is dry or
    critical.
    """
    site, level = channel.nodes[node], state.nodes[node].level
    section, depth = channel.shapes[site.section], level - site.bed_level
    with_flow, against = wave_speeds(section, state.links[node + 1].discharge, depth)
    if with_flow <= 0.0 or against <= 0.0:
        return 0.0, 0.0
    width = geometry(section, depth)[1]
    return width * with_flow, width * against


@inner_kernel
def is_carried(section, discharge, depth):
    """Whether a section with this discharge is calm, so that a surge can travel both ways."""
    area, width, _, _ = geometry(section, depth)
    return area > 0.0 and discharge * discharge * width < GRAVITY * area * area * area
