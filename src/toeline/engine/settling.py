"""Until when a pool settles after a change, the surge that an instantaneous change could send, and what of a wave goes
on through a gate.
"""

import math

from toeline.constants import GRAVITY
from toeline.engine.gate_link import gate_discharge_at
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.kernel import inner_kernel, kernel
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM, surge_height, wave_speeds

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


@inner_kernel
def is_carried(section, discharge, depth):
    """Whether a section with this discharge is calm, so that a surge can travel both ways."""
    area, width, _, _ = geometry(section, depth)
    return area > 0.0 and discharge * discharge * width < GRAVITY * area * area * area
