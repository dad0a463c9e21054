"""Until when a pool settles after a change, and the surge that an instantaneous change could send."""

import math

from toeline.engine.gate_link import gate_discharge_at
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM, surge_height, wave_speeds

LEAST_SURGE_DEPTH = 0.05
"""Depth [m] below which no surge bound is given: there is no pool to carry it."""


@kernel
def round_trip(channel, first, last, level, discharge):
    """Time [s] for a small wave down and back up a pool, Σ Δx/(c + V) + Σ Δx/(c − V); infinite where it is dry or critical."""
    total = 0.0
    for node in range(first, last):
        depth = 0.5 * (level[node] + level[node + 1] - channel.bed_level[node] - channel.bed_level[node + 1])
        with_flow, against = wave_speeds(channel.shapes[channel.shape[node]], discharge[node + 1], depth)
        if with_flow <= 0.0 or against <= 0.0:
            return math.inf
        step = channel.chainage[node + 1] - channel.chainage[node]
        total += step / with_flow + step / against
    return total


@kernel
def surge_bounds(channel, gates, g, level_up, level_down, opening, opening_after):
    """Heights [m] of the surges up and down the pools if gate g went from one opening to another at once, and the change of
    its discharge [m³/s]."""
    before = gate_discharge_at(channel, gates, g, level_up, level_down, opening)
    change = gate_discharge_at(channel, gates, g, level_up, level_down, opening_after) - before
    section_up, section_down = channel.shapes[gates.upstream_shape[g]], channel.shapes[gates.downstream_shape[g]]
    depth_up, depth_down = level_up - gates.law[g, 3], level_down - gates.law[g, 2]
    up = down = 0.0
    if depth_up > LEAST_SURGE_DEPTH and _is_calm(section_up, before, depth_up):
        up = surge_height(section_up, before, depth_up, change, UPSTREAM)[0]
    if depth_down > LEAST_SURGE_DEPTH and _is_calm(section_down, before, depth_down):
        down = surge_height(section_down, before, depth_down, change, DOWNSTREAM)[0]
    return up, down, change


@kernel
def _is_calm(section, discharge, depth):
    area, width, _, _ = geometry(section, depth)
    return area > 0.0 and discharge * discharge * width < 9.0 * area * area * area
