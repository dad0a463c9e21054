"""The near-gate pass: flow state, jump and margins of one gate at one time, from the levels of that time."""

import math
from typing import NamedTuple

import numpy as np

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
    last_protected_toe,
    sequent_of_jet,
    tail_depth_at,
    tail_over,
)
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.submerged_jump import roller_depth, roller_length, submergence
from toeline.hydraulics.underflow_gate import (
    CLEAR_AND_DROWNED,
    CLOSED,
    DROWNED,
    REVERSE,
    free_jet,
    modular_limit_depth,
)

JET_START = 1.0
"""Distance of the contracted section from the lip, in openings (choice; common practice is 1 to 2)."""

LEAST_JET_FROUDE = 1.0 + 1e-6

LEVEL_GRID = 0.01
"""Spacing [m] of the headwater levels for which the needs of a free jet are worked out; what is interpolated between
them is off by less than 0.01 mm, but for a leap of the length law (choice).
"""

NEEDS = ("modular_limit_depth", "drowning_depth", "toe", "sequent")

FREE_JET = np.dtype(
    [
        ("opening", float),  # m, for which the rest holds; 0 where nothing is known yet
        ("cell", float),  # number of the grid step of the headwater level
        *((name, float) for name in NEEDS),  # m, at its lower end
        *((f"more_{name}", float) for name in NEEDS),  # m, more at its upper end
    ]
)
"""What is known of the free jet of a gate, kept from output to output."""


@kernel
def judge_gate(channel, gate, up, down, opening, moves, level, jet, known, out):
    """Fill a gate's record of output from its two levels, its opening, whether that moves, and the levels along the
    channel.

    `jet` is scratch, (2, points); `known` a row of FREE_JET, kept from call to call. Returns the discharge [m³/s].
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
    section = channel.shapes[gate.downstream_section]
    fill_margins(channel, gate, section, up, opening, moves, level, jet, known, out)
    drowned = flow.state == DROWNED or flow.state == CLEAR_AND_DROWNED
    if drowned or judge_jet(channel, gate, section, flow, level, opening, jet, out):
        drowned_jump(channel.shapes, gate, section, flow, up, down, out)
    return flow.discharge


@kernel
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


@kernel
def jet_start(channel, gate, opening):
    """Chainage [m] of the contracted section, and how far that is from the first node below the gate to the next."""
    origin, following = channel.nodes[gate.downstream_node].chainage, channel.nodes[gate.downstream_node + 1].chainage
    start = min(origin + JET_START * opening, 0.5 * (origin + following))
    return start, (start - origin) / (following - origin)


@kernel
def fill_margins(channel, gate, section, up, opening, moves, level, jet, known, out):
    """How far the tailwater stands over the depths that the free jet asks for."""
    if moves:
        free = free_jet_needs(channel, gate, section, up, opening, jet)
    else:
        free = known_free_jet(channel, gate, section, up, opening, jet, known)
    out.gate_modular_limit_level = gate.floor_level + free.modular_limit_depth
    if math.isnan(free.drowning_depth):
        return
    first = gate.downstream_node
    _, weight = jet_start(channel, gate, opening)
    tail_level = level[first] + weight * (level[first + 1] - level[first])
    out.tailwater_margin = tail_level - gate.floor_level - free.drowning_depth
    out.protection_margin = tail_over(channel, first, gate.floor_last, level, free.toe, free.sequent)


class FreeJetNeeds(NamedTuple):
    """What the free jet of a gate asks of the tailwater, by headwater and opening alone; NaN where it does not shoot or
    asks for nothing.
    """

    modular_limit_depth: float  # m, tail depth from which on it has a say in the discharge
    drowning_depth: float  # m, tail depth that just drowns the jet
    toe: float  # m, chainage of the last toe whose jump ends on the protected floor
    sequent: float  # m, tail depth asked for there


@kernel
def known_free_jet(channel, gate, section, up, opening, jet, known):
    """`FreeJetNeeds` at a headwater level, between those at two levels a grid step apart, which are worked out once.

    The grid stands fast, so that what is interpolated does not depend on what came before. Worked out at the very level
    where the two differ in kind.
    """
    cell = math.floor(up / LEVEL_GRID)
    if known.opening != opening or known.cell != cell:
        low = free_jet_needs(channel, gate, section, cell * LEVEL_GRID, opening, jet)
        high = free_jet_needs(channel, gate, section, (cell + 1.0) * LEVEL_GRID, opening, jet)
        known.opening, known.cell = opening, cell
        known.modular_limit_depth, known.drowning_depth, known.toe, known.sequent = low
        known.more_modular_limit_depth = high.modular_limit_depth - low.modular_limit_depth
        known.more_drowning_depth = high.drowning_depth - low.drowning_depth
        known.more_toe, known.more_sequent = high.toe - low.toe, high.sequent - low.sequent
    share = up / LEVEL_GRID - cell
    if math.isnan(known.more_drowning_depth + known.more_toe):
        return free_jet_needs(channel, gate, section, up, opening, jet)
    return FreeJetNeeds(
        known.modular_limit_depth + share * known.more_modular_limit_depth,
        known.drowning_depth + share * known.more_drowning_depth,
        known.toe + share * known.more_toe,
        known.sequent + share * known.more_sequent,
    )


@kernel
def free_jet_needs(channel, gate, section, up, opening, jet):
    """`FreeJetNeeds` from the jet's profile as far as the protected floor goes."""
    law, above = law_of(gate), channel.shapes[gate.upstream_section]
    _, thickness, discharge, _ = free_jet(law, above, up, opening)
    if discharge <= 0.0:
        return FreeJetNeeds(math.nan, math.nan, math.nan, math.nan)
    limit, step = modular_limit_depth(law, section, thickness, discharge), gate.sill_level - gate.floor_level
    free = jet_on_floor(section, gate.discharge_factor * gate.width, thickness, step, discharge)
    if free.froude <= LEAST_JET_FROUDE:
        return FreeJetNeeds(limit, math.nan, math.nan, math.nan)
    first, far = gate.downstream_node, gate.protection_last
    start, _ = jet_start(channel, gate, opening)
    count, _ = supercritical_profile(channel, first, far, start, free.full_depth, discharge, jet[0], jet[1])
    toe, sequent = last_protected_toe(
        channel, first, gate.floor_last, discharge, jet[0], jet[1], count,
        channel.nodes[first].chainage + gate.protection_end,
    )  # fmt: skip
    return FreeJetNeeds(limit, drowning_depth(section, free), toe, sequent)


@kernel
def judge_jet(channel, gate, section, flow, level, opening, jet, out):
    """The free jump of the present discharge; returns whether the jump is drowned after all."""
    first, last = gate.downstream_node, gate.floor_last
    start, weight = jet_start(channel, gate, opening)
    step = gate.sill_level - gate.floor_level
    present = jet_on_floor(section, gate.discharge_factor * gate.width, flow.jet_thickness, step, flow.underflow)
    if present.froude <= LEAST_JET_FROUDE and flow.underflow >= flow.free_discharge:
        return False
    tail = tail_depth_at(channel, level, first, weight, present.discharge)
    if present.force <= link_force(channel, first, weight, present.discharge, tail):
        return True
    if present.froude <= LEAST_JET_FROUDE:
        return False
    count, _ = supercritical_profile(channel, first, last, start, present.full_depth, present.discharge, jet[0], jet[1])
    jump = free_jump(channel, first, last, level, present, jet[0], jet[1], count)
    out.jet_depth = present.depth
    out.jet_froude_number = present.froude
    fill_free_jump(gate, jump, channel.nodes[first].chainage, present.discharge, out)
    return False


@kernel
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


@kernel
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
        out.sequent_depth = sequent_of_jet(section, width, thickness, step, q)
        out.jump_end_distance = roller_length(out.sequent_depth, submergence(tail_depth, out.sequent_depth))
    out.jump_length_quality = LENGTH_GOOD if out.jump_end_distance >= 0.0 else LENGTH_NOT_DEFINED
    above = shapes[gate.upstream_section]
    loss = velocity_head(above, q, up - gate.upstream_bed_level) - velocity_head(section, q, tail_depth) + up - down
    out.jump_energy_loss = max(loss, 0.0)
    out.jump_power = WATER_DENSITY * GRAVITY * q * out.jump_energy_loss


@kernel
def velocity_head(section, discharge, depth):
    """αQ²/(2gA²) [m]."""
    area = geometry(section, depth)[0]
    return section[ALPHA] * discharge * discharge / (2.0 * GRAVITY * area * area)
