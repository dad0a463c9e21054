"""The near-gate pass: flow state, jump and margins of one gate at one time, from the levels of that time."""

import math

from toeline.constants import GRAVITY, WATER_DENSITY
from toeline.engine.gate_link import gate_flow_at, gate_levels, gate_of
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.gradually_varied_flow import link_force, supercritical_profile
from toeline.hydraulics.hydraulic_jump import NO_JUMP, jump_kind, subcritical_depth_of_force
from toeline.hydraulics.jump_location import (
    JUMP_DROWNED,
    JUMP_NONE,
    JUMP_SWEPT_OUT,
    drowning_depth,
    free_jump,
    jet_on_floor,
    jump_state,
    protection_margin,
    tail_depth_at,
)
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.submerged_jump import jet_force, roller_depth, roller_length, submergence
from toeline.hydraulics.underflow_gate import CLEAR_AND_DROWNED, CLOSED, DROWNED, REVERSE
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL

JET_START = 1.0
"""Distance of the contracted section from the lip, in openings (choice; common practice is 1 to 2)."""

LEAST_JET_FROUDE = 1.0 + 1e-6


@kernel
def judge_gate(tables, rows, row, g, solved_level, level, now, chainages, depths):
    """Fill one row of gate output; returns the gate's discharge [m³/s].

    `solved_level` are the unknown levels, `level` those of all channel nodes, the floor beyond a tail gate included.
    """
    gates, out, opening = tables.gates, rows.gates, now[FORCING_GATES + g]
    up, down = gate_levels(gates, g, solved_level, now[FORCING_HEAD], now[FORCING_TAIL])
    flow = gate_flow_at(tables.channel, gates, g, up, down, opening)
    out.gate_opening[row, g] = opening
    out.gate_discharge[row, g] = flow.discharge
    out.gate_flow_state[row, g] = flow.state
    out.discharge_quality[row, g] = flow.quality
    out.gate_headwater_level[row, g] = max(up, gates.law[g, 3])
    out.gate_tailwater_level[row, g] = max(down, gates.law[g, 2])
    _no_jump(out, row, g)
    if opening <= 0.0 or flow.state in (CLOSED, REVERSE) or flow.underflow <= 0.0:
        return flow.discharge
    gate = gate_of(gates, g)
    section = tables.channel.shapes[gates.downstream_shape[g]]
    step = gate.sill_level - gate.floor_level
    free = jet_on_floor(section, gate.width, flow.jet_thickness, step, flow.free_discharge)
    if free.froude > LEAST_JET_FROUDE:
        _judge_jump(tables, out, row, g, gate, section, flow, free, up, level, opening, chainages, depths)
    elif flow.state in (DROWNED, CLEAR_AND_DROWNED):
        _drowned_jump(tables, out, row, g, gate, section, flow, up, level)
    return flow.discharge


@kernel
def _no_jump(out, row, g):
    out.jump_state[row, g] = JUMP_NONE
    out.jump_kind[row, g] = NO_JUMP
    out.jump_length_quality[row, g] = 0
    out.jet_depth[row, g] = math.nan
    out.jet_froude_number[row, g] = math.nan
    out.sequent_depth[row, g] = math.nan
    out.roller_depth[row, g] = math.nan
    out.jump_toe_distance[row, g] = math.nan
    out.jump_end_distance[row, g] = math.nan
    out.tailwater_margin[row, g] = math.nan
    out.protection_margin[row, g] = math.nan
    out.jump_energy_loss[row, g] = math.nan
    out.jump_power[row, g] = math.nan


@kernel
def _judge_jump(tables, out, row, g, gate, section, flow, free, up, level, opening, chainages, depths):
    """Margins from the free jet, then the jump of the present discharge."""
    first, last = tables.gates.downstream_node[g], tables.gates.floor_last[g]
    origin = tables.channel.chainage[first]
    start = min(origin + JET_START * opening, 0.5 * (origin + tables.channel.chainage[first + 1]))
    weight = (start - origin) / (tables.channel.chainage[first + 1] - origin)
    tail_level = level[first] + weight * (level[first + 1] - level[first])
    out.tailwater_margin[row, g] = tail_level - gate.floor_level - drowning_depth(section, free)
    count, _ = supercritical_profile(
        tables.channel, first, last, start, free.full_depth, free.discharge, chainages, depths
    )
    out.protection_margin[row, g] = protection_margin(
        tables.channel, first, last, level, free.discharge, chainages, depths, count, origin + tables.gates.protection_end[g]
    )
    if flow.state in (DROWNED, CLEAR_AND_DROWNED):
        _drowned_jump(tables, out, row, g, gate, section, flow, up, level)
        return
    jet = free
    if flow.underflow < free.discharge:
        jet = jet_on_floor(section, gate.width, flow.jet_thickness, gate.sill_level - gate.floor_level, flow.underflow)
    tail = tail_depth_at(tables.channel, level, first, weight, jet.discharge)
    if jet.force <= link_force(tables.channel, first, weight, jet.discharge, tail):
        _drowned_jump(tables, out, row, g, gate, section, flow, up, level)
        return
    if jet.froude <= LEAST_JET_FROUDE:
        return
    if flow.underflow < free.discharge:
        count, _ = supercritical_profile(
            tables.channel, first, last, start, jet.full_depth, jet.discharge, chainages, depths
        )
    jump = free_jump(tables.channel, first, last, level, jet, chainages, depths, count)
    out.jet_depth[row, g] = jet.depth
    out.jet_froude_number[row, g] = jet.froude
    if math.isnan(jump.chainage):
        out.jump_state[row, g] = JUMP_SWEPT_OUT
        return
    toe = jump.chainage - origin
    end = toe if math.isnan(jump.length) else toe + jump.length
    out.jump_state[row, g] = jump_state(end, tables.gates.apron_end[g], tables.gates.protection_end[g])
    out.jump_kind[row, g] = jump_kind(jump.froude)
    out.jump_length_quality[row, g] = jump.length_quality
    out.sequent_depth[row, g] = jump.sequent
    out.jump_toe_distance[row, g] = toe
    out.jump_end_distance[row, g] = toe + jump.length
    out.jump_energy_loss[row, g] = jump.energy_loss
    out.jump_power[row, g] = WATER_DENSITY * GRAVITY * jet.discharge * jump.energy_loss


@kernel
def _drowned_jump(tables, out, row, g, gate, section, flow, up, level):
    """A roller at the gate: its depth over the jet, which keeps its thickness, its end and what it dissipates."""
    q, thickness = flow.underflow, flow.jet_thickness
    tail_depth = level[tables.gates.downstream_node[g]] - gate.floor_level
    force = jet_force(section, q, gate.width, thickness, thickness)
    sequent, _ = subcritical_depth_of_force(section, q, force)
    depth = flow.roller_depth
    if math.isnan(depth):
        depth, _ = roller_depth(section, q, gate.width, thickness, tail_depth)
    unit = q / gate.width
    tail_area = geometry(section, tail_depth)[0]
    above = tables.channel.shapes[tables.gates.upstream_shape[g]]
    up_area = geometry(above, up - gate.upstream_bed_level)[0]
    head = q * q / (2.0 * GRAVITY)
    loss = up + head / (up_area * up_area) - gate.floor_level - tail_depth - head / (tail_area * tail_area)
    out.jump_state[row, g] = JUMP_DROWNED
    out.jet_depth[row, g] = thickness
    out.jet_froude_number[row, g] = unit / (thickness * math.sqrt(GRAVITY * thickness))
    out.sequent_depth[row, g] = sequent
    out.roller_depth[row, g] = depth
    out.jump_toe_distance[row, g] = 0.0
    out.jump_end_distance[row, g] = roller_length(sequent, submergence(tail_depth, sequent))
    out.jump_length_quality[row, g] = 1
    out.jump_energy_loss[row, g] = max(loss, 0.0)
    out.jump_power[row, g] = WATER_DENSITY * GRAVITY * q * max(loss, 0.0)
