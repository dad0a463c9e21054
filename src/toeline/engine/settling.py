"""Until when pools settle after a change, whatever it is of; the surge that an instantaneous move could send; and what
of a wave goes on through a gate.
"""

import math

from toeline.constants import GRAVITY
from toeline.engine.gate_link import gate_discharge_at
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM, surge_height, wave_speeds

LEAST_CHANGE = 1e-9
"""Change of a discharge [m³/s], or of a level [m], below which nothing is said to settle."""

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
        guard.surge_upstream_until = unsettle_by_wave(
            tables, state, watch, pool, UPSTREAM, up, openings, moved, never
        )  # fmt: skip
    pool = pool_of(tables.pools, gate.downstream_node)
    if pool >= 0:
        guard.surge_downstream = joined_surge(guard.surge_downstream, guard.surge_downstream_until > time, down)
        guard.surge_downstream_until = unsettle_by_wave(
            tables, state, watch, pool, DOWNSTREAM, down, openings, moved, never
        )  # fmt: skip


@kernel
def unsettle_by_source(tables, state, watch, node, change, openings, time, never):
    """Have pools settle after a change [m³/s] of what comes in at a node: it goes off by two waves of one height, at
    the head of the canal by one, as in the middle of their pool. `openings` [m] are those of all gates, `never` comes
    after the end [ms of the period].
    """
    down, up = pool_admittances(tables.channel, middle_node(tables.pools, node), state)
    both = down + (up if node > 0 else 0.0)
    height = change / both if both > 0.0 else math.copysign(math.inf, change)
    if abs(change) > LEAST_CHANGE:
        pool = pool_of(tables.pools, node)
        unsettle_by_wave(tables, state, watch, pool, DOWNSTREAM, height, openings, time, never)
        unsettle_by_wave(tables, state, watch, pool, UPSTREAM, height, openings, time, never)


@kernel
def unsettle_by_level(tables, state, watch, g, levels, after, way, openings, time, never):
    """Have pools settle after a leap of the level beyond gate `g` at an end of the canal, from `levels` above and below
    it to those `after` [m]: the wave in the pool inside goes the given `way`.
    """
    gate, opening = tables.gates[g], openings[g]
    node = gate.downstream_node if way == DOWNSTREAM else gate.upstream_node
    passed = gate_discharge_at(tables.channel.shapes, gate, after[0], after[1], opening)
    change = passed - gate_discharge_at(tables.channel.shapes, gate, levels[0], levels[1], opening)
    by_up, by_down = level_slopes(tables.channel.shapes, gate, after, opening)
    down, up = pool_admittances(tables.channel, middle_node(tables.pools, node), state)
    carried = down + by_down if way == DOWNSTREAM else up + by_up
    height = way * change / carried if carried > 0.0 else math.copysign(math.inf, change)
    if abs(change) > LEAST_CHANGE:
        unsettle_by_wave(tables, state, watch, pool_of(tables.pools, node), way, height, openings, time, never)


@kernel
def unsettle_by_wave(tables, state, watch, pool, way, height, openings, time, never):
    """Have a pool settle for a round trip from a time on, and those beyond that a wave in it of a `height` [m] reaches
    on its `way`; returns until when the round trip lasts [ms of the period].
    """
    ends = tables.pools[pool]
    seconds = round_trip(tables.channel, ends.first_node, ends.last_node, state)
    if seconds == math.inf:
        watch.settled_at[pool] = max(watch.settled_at[pool], never)
        return never
    until = time + round(1000.0 * seconds)
    watch.settled_at[pool] = max(watch.settled_at[pool], until)
    unsettle_beyond(tables, state, watch, pool, way, height, openings, time, seconds)
    return until


@kernel
def pool_of(pools, node):
    """The pool of a node; -1 beyond the ends of the canal."""
    if node < 0 or node > pools[pools.size - 1].last_node:
        return -1
    pool = 0
    while pools[pool].last_node < node:
        pool += 1
    return pool


@kernel
def joined_surge(running, still_runs, height):
    """Bound [m] of a surge and one that may still run: their sum where both go one way, else the higher."""
    if not still_runs:
        return height
    if running * height >= 0.0:
        return running + height
    return running if abs(running) >= abs(height) else height


@kernel
def unsettle_beyond(tables, state, watch, pool, way, height, openings, time, seconds):
    """Pools that a wave in `pool` reaches through the gates on its `way`: all on it settle until it has run down and
    back through them; `seconds` is the round trip of the first.
    """
    step = 1 if way == DOWNSTREAM else -1
    last, k = pool, gate_below(tables, pool) - (0 if way == DOWNSTREAM else 1)
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
    if last != pool:
        for p in range(min(pool, last), max(pool, last) + 1):
            watch.settled_at[p] = max(watch.settled_at[p], time + round(1000.0 * seconds))


@kernel
def gate_below(tables, pool):
    """The gate at the lower end of a pool, were there one: gates stand between neighbouring pools."""
    return pool + 1 if tables.links[0].gate >= 0 else pool


@kernel
def share_through(tables, state, g, opening, way):
    """`passed_share` of a gate between two pools, waves as in their middle; none where one of them is dry."""
    gate = tables.gates[g]
    above = pool_admittances(tables.channel, middle_node(tables.pools, gate.upstream_node), state)
    below = pool_admittances(tables.channel, middle_node(tables.pools, gate.downstream_node), state)
    if min(above[0], above[1], below[0], below[1]) <= 0.0:
        return 0.0
    levels = state.nodes[gate.upstream_node].level, state.nodes[gate.downstream_node].level
    return passed_share(tables.channel, gate, levels, opening, above, below, way)


@kernel
def middle_node(pools, node):
    """The node in the middle of the pool of a node."""
    ends = pools[pool_of(pools, node)]
    return (ends.first_node + ends.last_node) // 2


@kernel
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
    near, far = level_slopes(channel.shapes, gate, levels, opening)
    coming, back, on = above[0], above[1], below[0]
    if way == UPSTREAM:
        near, far = far, near
        coming, back, on = below[1], below[0], above[1]
    return near * (1.0 / on + coming / (back * on)) / (1.0 + far / on + near / back)


@kernel
def level_slopes(shapes, gate, levels, opening):
    """Slopes [m²/s] of what a gate passes to the level above it and, falling, to that below; never negative."""
    here = gate_discharge_at(shapes, gate, levels[0], levels[1], opening)
    by_up = gate_discharge_at(shapes, gate, levels[0] + WAVE_NUDGE, levels[1], opening) - here
    by_down = here - gate_discharge_at(shapes, gate, levels[0], levels[1] + WAVE_NUDGE, opening)
    return max(by_up, 0.0) / WAVE_NUDGE, max(by_down, 0.0) / WAVE_NUDGE


@kernel
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


@kernel
def is_carried(section, discharge, depth):
    """Whether a section with this discharge is calm, so that a surge can travel both ways."""
    area, width, _, _ = geometry(section, depth)
    return area > 0.0 and discharge * discharge * width < GRAVITY * area * area * area
