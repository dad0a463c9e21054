"""Until when a pool settles after a change, and the surge that an instantaneous change could send."""

import math

from toeline.constants import GRAVITY
from toeline.engine.gate_link import gate_discharge_at
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.kernel import inner_kernel, kernel
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM, surge_height, wave_speeds

LEAST_SURGE_DEPTH = 0.05
"""Depth [m] below which no surge bound is given: there is no pool to carry it."""


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


@inner_kernel
def is_carried(section, discharge, depth):
    """Whether a section with this discharge is calm, so that a surge can travel both ways."""
    area, width, _, _ = geometry(section, depth)
    return area > 0.0 and discharge * discharge * width < GRAVITY * area * area * area
