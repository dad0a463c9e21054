"""Links that are not reaches: gates and what closes the canal at its ends."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics.canal_tail import free_overfall_discharge, rating_discharge
from toeline.hydraulics.gradually_varied_flow import LEAST_CONVEYANCE, link_conveyance
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.underflow_gate import (
    LEVEL_NUDGE,
    UnderflowGate,
    discharge_and_slopes,
    gate_discharge,
    gate_flow,
)
from toeline.hydraulics.uniform_flow import conveyance
from toeline.network.tables import (
    FORCING_GATES,
    FORCING_HEAD,
    FORCING_TAIL,
    FREE_OVERFALL,
    GATE,
    INFLOW,
    NORMAL_DEPTH,
    TAIL_LEVEL,
)


@kernel
def law_of(gate):
    """The law's view of a gate row."""
    return UnderflowGate(
        gate.width, gate.sill_level, gate.floor_level, gate.upstream_bed_level, gate.contraction, gate.radius,
        gate.pinion_height, gate.discharge_factor, gate.leaf_height, gate.leaf_weir_coefficient, gate.leakage,
    )  # fmt: skip


@kernel
def gate_discharge_at(shapes, gate, level_up, level_down, opening):
    """Discharge of a gate row [m³/s] at two levels and an opening."""
    up, down = shapes[gate.upstream_section], shapes[gate.downstream_section]
    return gate_discharge(law_of(gate), up, down, level_up, level_down, opening)


@kernel
def gate_flow_at(shapes, gate, level_up, level_down, opening):
    """`GateFlow` of a gate row at two levels and an opening."""
    up, down = shapes[gate.upstream_section], shapes[gate.downstream_section]
    return gate_flow(law_of(gate), up, down, level_up, level_down, opening)


@kernel
def gate_levels(gate, level, nodes, head_level, tail_level):
    """Headwater and tailwater level [m] of a gate row, from the first `nodes` levels or the boundaries beyond."""
    up = head_level if gate.upstream_node < 0 else level[gate.upstream_node]
    down = tail_level if gate.downstream_node >= nodes else level[gate.downstream_node]
    return up, down


@kernel
def leaf_opening(forcing, gate, k):
    """Opening [m] of leaf k of a gate."""
    return forcing[FORCING_GATES + gate.first_leaf + k].now


@kernel
def gate_balance(shapes, gate, up, down, forcing, q, slopes, afresh):
    """Residual q − Q(levels) of a gate [m³/s] and its derivatives to the level above, q and the level below.

    Every leaf is at its own opening, and passes its share of what the gate would pass with all leaves there. The
    derivatives are kept in `slopes`, a row of LINK_WORK, and found anew only `afresh`: over the last small corrections
    of a stage they hardly change.
    """
    law, above, beside = law_of(gate), shapes[gate.upstream_section], shapes[gate.downstream_section]
    passed = by_up = by_down = 0.0
    for k in range(gate.leaf_count):
        opening = leaf_opening(forcing, gate, k)
        if afresh:
            discharge, slope_up, slope_down = discharge_and_slopes(law, above, beside, up, down, opening)
            by_up, by_down = by_up + slope_up, by_down + slope_down
        else:
            discharge = gate_discharge(law, above, beside, up, down, opening)
        passed += discharge
    if afresh:
        slopes.by_up, slopes.by_down = by_up / gate.leaf_count, by_down / gate.leaf_count
    return q - passed / gate.leaf_count, -slopes.by_up, 1.0, -slopes.by_down


@kernel
def tail_discharge(tables, kind, node, level):
    """Discharge [m³/s] that leaves the last node over a free overfall, by a rating or at normal depth."""
    site = tables.channel.nodes[node]
    section, depth = tables.channel.shapes[site.section], level - site.bed_level
    if kind == FREE_OVERFALL:
        return free_overfall_discharge(section, depth)
    if kind == NORMAL_DEPTH:
        return conveyance(section, site.roughness, depth) * math.sqrt(tables.tail_slope[0])
    return rating_discharge(tables.tail_rating[0], tables.tail_rating[1], level)


@kernel
def tail_level_balance(tables, link, last, level, tail_level, q, inner):
    """Head left over in the last metre before a level beyond the tail, and its derivatives as in `reach_balance`.

    Water that leaves loses its velocity head beyond; water that comes in takes its own from the level there.
    """
    site = tables.channel.nodes[last]
    section, beyond = tables.channel.shapes[site.section], tail_level - site.bed_level
    k_beyond = conveyance(section, site.roughness, beyond)
    if level >= tail_level:
        k, dk, _ = link_conveyance(
            inner.conveyance, k_beyond, inner.conveyance_slope, 0.0, level - site.bed_level, beyond
        )
    else:
        k, _, dk = link_conveyance(
            k_beyond, inner.conveyance, 0.0, inner.conveyance_slope, beyond, level - site.bed_level
        )
    if k < LEAST_CONVEYANCE:
        k, dk = LEAST_CONVEYANCE, 0.0
    loss = link.length / (k * k)
    by_level = 1.0 + q * abs(q) * 2.0 * loss / k * dk
    if q < 0.0:
        entry = inner.inverse_area / (2.0 * GRAVITY)
        loss += entry
        by_level -= q * abs(q) * inner.inverse_area_slope / (2.0 * GRAVITY)
    drive = level - tail_level
    size = max(abs(q), math.sqrt(abs(drive) / loss))
    return drive - q * abs(q) * loss, by_level, -2.0 * size * loss, 0.0


@kernel
def boundary_balance(tables, index, nodes, q, forcing, work, afresh):
    """Residual of a link that is not a reach, and its derivatives to the level above, the discharge and the level
    below.
    """
    link = tables.links[index]
    if link.kind == INFLOW:
        return q - forcing[FORCING_HEAD].now, 0.0, 1.0, 0.0
    if link.kind == GATE:
        gate = tables.gates[link.gate]
        up, down = gate_levels(gate, nodes.level, nodes.size, forcing[FORCING_HEAD].now, forcing[FORCING_TAIL].now)
        return gate_balance(tables.channel.shapes, gate, up, down, forcing, q, work.links[index], afresh)
    last = nodes.size - 1
    level = nodes[last].level
    if link.kind == TAIL_LEVEL:
        return tail_level_balance(tables, link, last, level, forcing[FORCING_TAIL].now, q, work.nodes[last])
    passed = tail_discharge(tables, link.kind, last, level)
    nudged = tail_discharge(tables, link.kind, last, level + LEVEL_NUDGE)
    return q - passed, -(nudged - passed) / LEVEL_NUDGE, 1.0, 0.0
