"""Links that are not reaches: gates and what closes the canal at its ends."""

import math

from toeline.hydraulics.canal_tail import free_overfall_discharge, rating_discharge
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.underflow_gate import UnderflowGate, gate_discharge, gate_flow
from toeline.hydraulics.uniform_flow import conveyance
from toeline.network.tables import FREE_OVERFALL, NORMAL_DEPTH

LEVEL_NUDGE = 1e-6
"""Step [m] of the finite differences of the gate law."""


@kernel
def gate_of(gates, g):
    """The law's view of gate g."""
    row = gates.law[g]
    return UnderflowGate(row[0], row[1], row[2], row[3], row[4], row[5], row[6], row[7], row[8], row[9], row[10])


@kernel
def gate_discharge_at(channel, gates, g, level_up, level_down, opening):
    """Discharge of gate g [m³/s] at two levels and an opening."""
    up, down = channel.shapes[gates.upstream_shape[g]], channel.shapes[gates.downstream_shape[g]]
    return gate_discharge(gate_of(gates, g), up, down, level_up, level_down, opening)


@kernel
def gate_flow_at(channel, gates, g, level_up, level_down, opening):
    """`GateFlow` of gate g at two levels and an opening."""
    up, down = channel.shapes[gates.upstream_shape[g]], channel.shapes[gates.downstream_shape[g]]
    return gate_flow(gate_of(gates, g), up, down, level_up, level_down, opening)


@kernel
def gate_levels(gates, g, level, head_level, tail_level):
    """Headwater and tailwater level [m] of gate g from the nodes or the boundaries beside it."""
    up = head_level if gates.upstream_node[g] < 0 else level[gates.upstream_node[g]]
    down = tail_level if gates.downstream_node[g] >= level.size else level[gates.downstream_node[g]]
    return up, down


@kernel
def gate_slopes(channel, gates, g, level_up, level_down, opening, discharge):
    """Derivatives of a gate's discharge to the level above (not negative) and below (not positive) [m²/s]."""
    above = gate_discharge_at(channel, gates, g, level_up + LEVEL_NUDGE, level_down, opening)
    below = gate_discharge_at(channel, gates, g, level_up, level_down + LEVEL_NUDGE, opening)
    return max(above - discharge, 0.0) / LEVEL_NUDGE, min(below - discharge, 0.0) / LEVEL_NUDGE


@kernel
def tail_discharge(channel, boundary, kind, node, level):
    """Discharge [m³/s] that leaves the last node over a free overfall, by a rating or at normal depth."""
    section = channel.shapes[channel.shape[node]]
    depth = level - channel.bed_level[node]
    if kind == FREE_OVERFALL:
        return free_overfall_discharge(section, depth)
    if kind == NORMAL_DEPTH:
        return conveyance(section, channel.roughness[node], depth) * math.sqrt(boundary.slope[0])
    return rating_discharge(boundary.rating_level, boundary.rating_discharge, level)
