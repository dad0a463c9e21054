"""The near-gate pass: flow state, jump and margins of one gate at one time, from the levels of that time."""

import math

from toeline.constants import GRAVITY, WATER_DENSITY
from toeline.engine.gate_link import gate_flow_at, law_of
from toeline.hydraulics.cross_section import ALPHA, geometry
from toeline.hydraulics.gradually_varied_flow import link_force, supercritical_profile
from toeline.hydraulics.hydraulic_jump import (
    LENGTH_GOOD,
    LENGTH_NOT_DEFINED,
    NO_JUMP,
    jump_kind,
)
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
from toeline.hydraulics.kernel import inner_kernel
from toeline.hydraulics.submerged_jump import roller_depth, roller_length, submergence
from toeline.hydraulics.underflow_gate import CLEAR_AND_DROWNED, CLOSED, DROWNED, REVERSE, modular_limit_depth

JET_START = 1.0
"""Distance of the contracted section from the lip, in openings (choice; common practice is 1 to 2)."""

LEAST_JET_FROUDE = 1.0 + 1e-6


@inner_kernel
def judge_gate(channel, gate, up, down, opening, level, jet, out):
    """Fill a gate's record of output from its two levels, its opening and the levels along the channel.

    `jet` is scratch, (2, points). Returns the discharge [m³/s].
    """
    flow = gate_flow_at(channel.shapes, gate, up, down, opening)
    out.gate_opening = opening
    out.gate_discharge = flow.discharge
    out.gate_flow_state = flow.state
    out.discharge_quality = flow.quality
    out.gate_headwater_level = max(up, gate.upstream_bed_level)
    out.gate_tailwater_level = max(down, gate.floor_level)
    no_jump(out)
    if opening <= 0.0 or flow.state == CLOSED or flow.state == REVERSE or flow.underflow <= 0.0:
        return flow.discharge
    section, step = channel.shapes[gate.downstream_section], gate.sill_level - gate.floor_level
    width = gate.discharge_factor * gate.width
    if flow.state != CLEAR_AND_DROWNED:  # whose jet is not the free one
        limit = modular_limit_depth(law_of(gate), section, flow.jet_thickness, flow.free_discharge)
        out.gate_modular_limit_level = gate.floor_level + limit
    free = jet_on_floor(section, width, flow.jet_thickness, step, flow.free_discharge)
    drowned = flow.state == DROWNED or flow.state == CLEAR_AND_DROWNED
    if free.froude > LEAST_JET_FROUDE:
        drowned = judge_jet(channel, gate, section, flow, free, level, opening, drowned, jet, out)
    if drowned:
        drowned_jump(channel.shapes, gate, section, flow, up, down, out)
    return flow.discharge


@inner_kernel
def no_jump(out):
    """A record that says that there is no jump."""
    out.jump_state = JUMP_NONE
    out.jump_kind = NO_JUMP
    out.jump_length_quality = LENGTH_NOT_DEFINED
    out.gate_modular_limit_level = math.nan
    out.jet_depth = math.nan
    out.jet_froude_number = math.nan
    out.sequent_depth = math.nan
    out.roller_depth = math.nan
    out.jump_toe_distance = math.nan
    out.jump_end_distance = math.nan
    out.tailwater_margin = math.nan
    out.protection_margin = math.nan
    out.jump_energy_loss = math.nan
    out.jump_power = math.nan


@inner_kernel
def judge_jet(channel, gate, section, flow, free, level, opening, drowned, jet, out):
    """Margins from the free jet, then the free jump of the present discharge; returns whether the jump is drowned."""
    first, last = gate.downstream_node, gate.floor_last
    origin, following = channel.nodes[first].chainage, channel.nodes[first + 1].chainage
    start = min(origin + JET_START * opening, 0.5 * (origin + following))
    weight = (start - origin) / (following - origin)
    tail_level = level[first] + weight * (level[first + 1] - level[first])
    out.tailwater_margin = tail_level - gate.floor_level - drowning_depth(section, free)
    far = gate.protection_last if drowned else last
    count, _ = supercritical_profile(channel, first, far, start, free.full_depth, free.discharge, jet[0], jet[1])
    out.protection_margin = protection_margin(
        channel, first, last, level, free.discharge, jet[0], jet[1], count, origin + gate.protection_end
    )
    if drowned:
        return True
    present = free
    if flow.underflow < free.discharge:
        step = gate.sill_level - gate.floor_level
        present = jet_on_floor(section, free.width, flow.jet_thickness, step, flow.underflow)
    tail = tail_depth_at(channel, level, first, weight, present.discharge)
    if present.force <= link_force(channel, first, weight, present.discharge, tail):
        return True
    if present.froude <= LEAST_JET_FROUDE:
        return False
    if flow.underflow < free.discharge:
        count, _ = supercritical_profile(
            channel, first, last, start, present.full_depth, present.discharge, jet[0], jet[1]
        )
    jump = free_jump(channel, first, last, level, present, jet[0], jet[1], count)
    out.jet_depth = present.depth
    out.jet_froude_number = present.froude
    fill_free_jump(gate, jump, origin, present.discharge, out)
    return False


@inner_kernel
def fill_free_jump(gate, jump, origin, discharge, out):
    """A free jump, or a jet that leaves the channel."""
    if math.isnan(jump.chainage):
        out.jump_state = JUMP_SWEPT_OUT
        return
    toe = jump.chainage - origin
    end = toe if math.isnan(jump.length) else toe + jump.length
    out.jump_state = jump_state(end, gate.apron_end, gate.protection_end)
    out.jump_kind = jump_kind(jump.froude)
    out.jump_length_quality = jump.length_quality
    out.sequent_depth = jump.sequent
    out.jump_toe_distance = toe
    out.jump_end_distance = toe + jump.length
    out.jump_energy_loss = jump.energy_loss
    out.jump_power = WATER_DENSITY * GRAVITY * discharge * jump.energy_loss


@inner_kernel
def drowned_jump(shapes, gate, section, flow, up, down, out):
    """A roller at the gate: its depth over the jet, which keeps its thickness, its end and what it dissipates.

    The free sequent depth that submergence counts from is that of the jet on the floor; a jet slower than critical
    has none.
    """
    q, thickness, tail_depth = flow.underflow, flow.jet_thickness, down - gate.floor_level
    width, step = gate.discharge_factor * gate.width, gate.sill_level - gate.floor_level
    out.jump_state = JUMP_DROWNED
    out.jump_toe_distance = 0.0
    out.jet_depth = thickness
    out.jet_froude_number = q / (width * thickness * math.sqrt(GRAVITY * thickness))
    out.roller_depth = flow.roller_depth
    if math.isnan(flow.roller_depth):
        out.roller_depth, _ = roller_depth(section, q, width, thickness, tail_depth)
    if out.jet_froude_number > LEAST_JET_FROUDE:
        out.sequent_depth = drowning_depth(section, jet_on_floor(section, width, thickness, step, q))
        out.jump_end_distance = roller_length(out.sequent_depth, submergence(tail_depth, out.sequent_depth))
    out.jump_length_quality = LENGTH_GOOD if out.jump_end_distance >= 0.0 else LENGTH_NOT_DEFINED
    above = shapes[gate.upstream_section]
    loss = velocity_head(above, q, up - gate.upstream_bed_level) - velocity_head(section, q, tail_depth) + up - down
    out.jump_energy_loss = max(loss, 0.0)
    out.jump_power = WATER_DENSITY * GRAVITY * q * out.jump_energy_loss


@inner_kernel
def velocity_head(section, discharge, depth):
    """αQ²/(2gA²) [m]."""
    area = geometry(section, depth)[0]
    return section[ALPHA] * discharge * discharge / (2.0 * GRAVITY * area * area)
