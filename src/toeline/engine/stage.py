"""One implicit stage of a step: the Newton matrix of nodes and links, and its solution for levels and discharges."""

import math

from toeline.engine.gate_link import boundary_balance
from toeline.engine.reach_link import convective_target, convective_time, inertia_head, node_geometry, reach_balance
from toeline.hydraulics.gradually_varied_flow import DRY_DEPTH
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.offtake import offtake_discharge
from toeline.hydraulics.water_losses import loss_per_length
from toeline.hydraulics.weir import side_weir_discharge
from toeline.network.tables import FORCING_EVAPORATION, FORCING_GATES, FORCING_RAIN, REACH

LEVEL_CONVERGED = 1e-4
"""Last Newton update [m] of a solved stage; the convergence is quadratic, the error left far smaller."""
ITERATIONS = 12
SMALL_CORRECTION = 5e-3
"""Newton update [m] after which the derivatives of the gates are kept (choice)."""
LOWEST_DEPTH = -0.5
"""Depth [m] below which the image of an empty node is not followed."""
DEMAND_NUDGE = 1e-5
"""Step [m] of the finite difference of a delivery or an escape."""


@kernel
def set_sources(tables, state, forcing, work):
    """Deliveries, escapes and losses at the present levels: what they take from each node, with its derivative."""
    for node in range(state.nodes.size):
        work.nodes[node].source = 0.0
        work.nodes[node].source_slope = 0.0
    set_deliveries(tables, state.nodes, forcing, work, state.delivery)
    set_escapes(tables, state.nodes, work, state.escape)
    set_losses(tables, state.nodes, forcing, work, state.loss)


@kernel
def set_deliveries(tables, nodes, forcing, work, delivery):
    """Deliveries at the present levels, and what they take from each node."""
    count = tables.offtakes.size
    first_demand = FORCING_GATES + tables.leaves.size
    for k in range(count):
        take = tables.offtakes[k]
        demand, opening = forcing[first_demand + k].now, forcing[first_demand + count + k].now
        level = nodes[take.node].level
        q = offtake_discharge(take.kind, demand, take.sill_level, take.width, opening, take.coefficient, level)
        nudged = offtake_discharge(
            take.kind, demand, take.sill_level, take.width, opening, take.coefficient, level + DEMAND_NUDGE
        )
        delivery[k] = q
        work.nodes[take.node].source -= q
        work.nodes[take.node].source_slope -= (nudged - q) / DEMAND_NUDGE


@kernel
def set_escapes(tables, nodes, work, escape):
    """What flows over side weirs at the present levels, and takes from each node."""
    for k in range(tables.escapes.size):
        weir = tables.escapes[k]
        level = nodes[weir.node].level
        q = side_weir_discharge(weir.coefficient, weir.length, weir.crest_level, level, weir.outside_level)
        nudged = side_weir_discharge(
            weir.coefficient, weir.length, weir.crest_level, level + DEMAND_NUDGE, weir.outside_level
        )
        escape[k] = q
        work.nodes[weir.node].source -= q
        work.nodes[weir.node].source_slope -= (nudged - q) / DEMAND_NUDGE


@kernel
def set_losses(tables, nodes, forcing, work, loss):
    """Losses of the pools at the present levels, and what they take from each node."""
    surface_rate = forcing[FORCING_EVAPORATION].now - forcing[FORCING_RAIN].now
    for p in range(tables.pools.size):
        pool = tables.pools[p]
        loss[p] = 0.0
        if surface_rate == 0.0 and pool.seeps == 0:
            continue
        for k in range(pool.first_node, pool.last_node + 1):
            site, cell = tables.channel.nodes[k], tables.cells[k]
            section, depth = tables.channel.shapes[site.section], nodes[k].level - site.bed_level
            lost, slope = loss_per_length(section, depth, cell.seepage, surface_rate)
            loss[p] += cell.length * lost
            work.nodes[k].source -= cell.length * lost
            work.nodes[k].source_slope -= cell.length * slope


@kernel
def geometry_pass(tables, nodes, work):
    """Areas and conveyances of all nodes at their present levels."""
    for node in range(nodes.size):
        site = tables.channel.nodes[node]
        section = tables.channel.shapes[site.section]
        node_geometry(site, tables.cells[node], section, nodes[node].level, work.nodes[node])


@kernel
def reach_row(tables, before, after, work, index, seconds, head_factor, inertial):
    """Residual and derivatives of a reach link in a stage."""
    link, site_up, site_down = tables.links[index], tables.channel.nodes[index - 1], tables.channel.nodes[index]
    up, down = work.nodes[index - 1], work.nodes[index]
    level_up, level_down = after.nodes[index - 1].level, after.nodes[index].level
    q, earlier = after.links[index].discharge, before.links[index]
    left, by_up, by_q, by_down = reach_balance(
        link, site_up.transition_loss, up, down, level_up, level_down, level_up - site_up.bed_level,
        level_down - site_down.bed_level, q, work.links[index].convective_base, head_factor * earlier.convective_share,
    )  # fmt: skip
    if inertial and is_wet(site_up, site_down, level_up, level_down):
        head, head_up, head_q, head_down = stage_inertia(tables, before, work, index, q, seconds)
        left, by_up, by_q, by_down = left - head, by_up - head_up, by_q - head_q, by_down - head_down
    return left, by_up, by_q, by_down


@kernel
def is_wet(site_up, site_down, level_up, level_down):
    """Whether both ends of a reach link are deeper than the dry depth."""
    return min(level_up - site_up.bed_level, level_down - site_down.bed_level) >= DRY_DEPTH


@kernel
def stage_inertia(tables, before, work, index, q, seconds):
    """`inertia_head` of a reach link at the present areas, and its derivatives to the level above, the discharge and
    the level below; it fades with the convective head (local partial inertia, Fread et al. 1996) and where a link
    dries."""
    earlier, up, down = before.links[index], work.nodes[index - 1], work.nodes[index]
    flux = earlier.discharge / (earlier.source_area * earlier.source_area)
    head, by_q, by_mean, by_source = inertia_head(
        tables.links[index].length, earlier.convective_share, 0.5 * (up.area + down.area),
        source_area(earlier.discharge, up, down), q, flux, work.links[index].momentum_base, seconds,
    )  # fmt: skip
    by_up, by_down = 0.5 * by_mean * up.width, 0.5 * by_mean * down.width
    if earlier.discharge >= 0.0:
        return head, by_up + by_source * up.width, by_q, by_down
    return head, by_up, by_q, by_down + by_source * down.width


@kernel
def source_area(discharge, up, down):
    """Area [m²] at the end of a link that its water comes from."""
    return up.area if discharge >= 0.0 else down.area


@kernel
def assemble(tables, before, after, work, seconds, head_factor, inertial, forcing, afresh):
    """Fill the Newton matrix and right side at the present levels and discharges, and sweep it forward as it is
    made; with `afresh` the derivatives of the gates are found anew.
    """
    geometry_pass(tables, after.nodes, work)
    count = after.nodes.size
    pivot_before = x_before = 0.0
    for index in range(count + 1):
        q = after.links[index].discharge
        if tables.links[index].kind == REACH:
            left, by_up, by_q, by_down = reach_row(tables, before, after, work, index, seconds, head_factor, inertial)
        else:
            left, by_up, by_q, by_down = boundary_balance(tables, index, after.nodes, q, forcing, work, afresh)
        row, swept = work.rows[2 * index], by_q - by_up * seconds * pivot_before
        row.pivot = 1.0 / swept
        row.lower, row.upper = by_up, by_down * row.pivot
        row.x = (-left - by_up * x_before) * row.pivot
        if index == count:
            break
        node, below, cell = work.nodes[index], work.rows[2 * index + 1], tables.cells[index].length
        excess = cell * node.area - node.volume_base - seconds * (q - after.links[index + 1].discharge + node.source)
        # The pivot of the link is multiplied out: its division and the node's do not wait for each other.
        below.pivot = swept / ((cell * node.width - seconds * node.source_slope) * swept + seconds * by_down)
        below.lower, below.upper = -seconds, seconds * below.pivot
        below.x = (seconds * row.x - excess) * below.pivot
        pivot_before, x_before = below.pivot, below.x


@kernel
def correct(tables, after, work):
    """Second sweep of the solution, adding each correction as it is found, levels within half the depth or 5 cm;
    returns the largest change of a level [m] that counts.
    """
    last = after.nodes.size
    x, largest = work.rows[2 * last].x, 0.0
    after.links[last].discharge += x
    for k in range(last - 1, -1, -1):
        node, row, above = after.nodes[k], work.rows[2 * k + 1], work.rows[2 * k]
        x = row.x - row.upper * x
        depth = node.level - tables.channel.nodes[k].bed_level
        most = max(0.5 * depth, 0.05)
        change = max(min(max(x, -most), most), LOWEST_DEPTH - depth)
        row.x = change
        node.level += change
        felt = abs(change)
        if depth < DRY_DEPTH:
            felt *= min(work.nodes[k].width / tables.cells[k].dry_width, 1.0)
        largest = max(largest, felt)
        x = above.x - above.upper * x
        after.links[k].discharge += x
    return largest


@kernel
def solve_stage(tables, before, after, work, seconds, head_factor, inertial, forcing):
    """Newton's method for the levels and discharges in `after`; returns the number of solves, 0 where it failed."""
    last_change = math.inf
    for k in range(ITERATIONS):
        set_sources(tables, after, forcing, work)
        afresh = last_change > SMALL_CORRECTION
        assemble(tables, before, after, work, seconds, head_factor, inertial, forcing, afresh)
        change = correct(tables, after, work)
        if not math.isfinite(change) or (k > 5 and change > 0.9 * last_change and change > 0.05):
            return 0
        if change < LEVEL_CONVERGED:
            finish_stage(tables, before, after, work, seconds, head_factor, inertial, forcing)
            return k + 1
        last_change = change
    return 0


@kernel
def finish_stage(tables, before, after, work, seconds, head_factor, inertial, forcing):
    """Rates and volumes of a solved stage; areas follow the last correction to first order."""
    pull = 1.0 / convective_time(inertial)
    set_sources(tables, after, forcing, work)
    for k in range(after.nodes.size):
        node, scratch, change = after.nodes[k], work.nodes[k], work.rows[2 * k + 1].x
        node.width = scratch.width
        scratch.area += scratch.width * change
        scratch.inverse_area += scratch.inverse_area_slope * change
        node.net_inflow = after.links[k].discharge - after.links[k + 1].discharge + scratch.source
        node.volume = scratch.volume_base + seconds * node.net_inflow
        node.rate = node.net_inflow / (tables.cells[k].length * node.width)
    for index in range(1, after.nodes.size):
        if tables.links[index].kind != REACH:
            continue
        link, up, down = after.links[index], work.nodes[index - 1], work.nodes[index]
        target = convective_target(
            before.links[index].convective_share, link.discharge, up.inverse_area, down.inverse_area
        )
        link.convective_head = work.links[index].convective_base + head_factor * target
        link.convective_rate = (target - link.convective_head) * pull
        link.mean_area = 0.5 * (up.area + down.area)
        link.source_area = source_area(before.links[index].discharge, up, down)
        if inertial:
            site_up, site_down = tables.channel.nodes[index - 1], tables.channel.nodes[index]
            wet = is_wet(site_up, site_down, after.nodes[index - 1].level, after.nodes[index].level)
            link.imbalance = stage_inertia(tables, before, work, index, link.discharge, seconds)[0] if wet else 0.0
