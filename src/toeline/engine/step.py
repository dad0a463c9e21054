"""One step of TR-BDF2: two implicit stages with the same coefficient.

With γ = 2 − √2, d = γ/2 and w = √2/4: stage at γh, V_γ = V_n + d·h·(F_n + F_γ); end, V = V_n + h·(w·F_n + w·F_γ + d·F)
(Bank et al. 1985; Hosea & Shampine 1996). Stored volumes are the state; the levels are their image.
"""

import math

from toeline.engine.gate_link import boundary_balance
from toeline.engine.reach_link import convective_share, convective_target, convective_time, wet_share
from toeline.engine.stage import geometry_pass, set_sources, solve_stage, source_area
from toeline.engine.tridiagonal import solve_with_factors
from toeline.hydraulics.gradually_varied_flow import DRY_DEPTH
from toeline.hydraulics.kernel import kernel
from toeline.network.tables import FREE_OVERFALL, REACH, TAIL_LEVEL

GAMMA = 2.0 - math.sqrt(2.0)
DIAGONAL = GAMMA / 2.0
WEIGHT = math.sqrt(2.0) / 4.0

PREDICTED = 0.02
"""Largest change of a level [m] in the first guess of a stage."""


@kernel
def set_forcing(forcing, seconds):
    """Put the forcing at a time since the start of the leg into `now`."""
    for k in range(forcing.size):
        forcing[k].now = forcing[k].value + forcing[k].rate * seconds


@kernel
def predict(tables, before, after, seconds):
    """First guess of the stage at γh: wet nodes follow their rate."""
    for k in range(before.nodes.size):
        node, change = before.nodes[k], 0.0
        if node.level - tables.channel.nodes[k].bed_level > 2.0 * DRY_DEPTH:
            change = seconds * node.rate
        after.nodes[k].level = node.level + min(max(change, -PREDICTED), PREDICTED)
        after.links[k].discharge = before.links[k].discharge
    last = before.nodes.size
    after.links[last].discharge = before.links[last].discharge


@kernel
def extrapolate(tables, start, middle, end, h):
    """First guess of the end stage: wet nodes on the cubic through the levels and rates of start and middle, no further
    than `PREDICTED` from the line through both levels; discharges on the line.
    """
    ratio, reach = (1.0 - GAMMA) / GAMMA, GAMMA * h
    bend_start, bend_middle = ratio * ratio / GAMMA, ratio / (GAMMA * GAMMA)
    for k in range(end.nodes.size):
        old, new, bend = start.nodes[k], middle.nodes[k], 0.0
        rise = new.level - old.level
        if min(old.level, new.level) - tables.channel.nodes[k].bed_level > 2.0 * DRY_DEPTH:
            bend = bend_start * (reach * old.rate - rise) + bend_middle * (reach * new.rate - rise)
        end.nodes[k].level = new.level + ratio * rise + min(max(bend, -PREDICTED), PREDICTED)
    for k in range(end.links.size):
        here, there = middle.links[k].discharge, start.links[k].discharge
        end.links[k].discharge = here + ratio * (here - there)


@kernel
def momentum_rate(link):
    """Imbalance of a reach link over the area that turns the rate of Q/A² into a head [1/m]."""
    return link.imbalance * link.mean_area / (link.source_area * link.source_area)


@kernel
def base_of_middle(before, work, seconds, scale, inertial):
    """What the stage at γh starts from."""
    for k in range(before.nodes.size):
        work.nodes[k].volume_base = before.nodes[k].volume + seconds * before.nodes[k].net_inflow
    for k in range(1, before.nodes.size):
        link = before.links[k]
        work.links[k].convective_base = scale * (link.convective_head + seconds * link.convective_rate)
        if inertial:
            work.links[k].momentum_base = momentum_rate(link)


@kernel
def base_of_end(before, middle, work, weight, scale, inertial):
    """What the stage at the end of the step starts from; `weight` = w·h."""
    for k in range(before.nodes.size):
        work.nodes[k].volume_base = before.nodes[k].volume + weight * (
            before.nodes[k].net_inflow + middle.nodes[k].net_inflow
        )
    for k in range(1, before.nodes.size):
        link, inner = before.links[k], middle.links[k]
        rate = link.convective_rate + inner.convective_rate
        work.links[k].convective_base = scale * (link.convective_head + weight * rate)
        if inertial:
            work.links[k].momentum_base = WEIGHT / DIAGONAL * (momentum_rate(link) + momentum_rate(inner))


@kernel
def try_step(tables, before, middle, after, work, forcing, start, h, inertial):
    """One step of h seconds from `before` at `start` seconds of the leg into `after`.

    Returns the number of linear solves (0 where a stage could not be solved) and the largest estimated error of a
    level [m].
    """
    seconds = DIAGONAL * h
    scale = 1.0 / (1.0 + seconds / convective_time(inertial))
    head_factor = 1.0 - scale
    base_of_middle(before, work, seconds, scale, inertial)
    set_forcing(forcing, start + GAMMA * h)
    predict(tables, before, middle, GAMMA * h)
    first = solve_stage(tables, before, middle, work, seconds, head_factor, inertial, forcing)
    if first == 0:
        return 0, math.inf
    base_of_end(before, middle, work, WEIGHT * h, scale, inertial)
    set_forcing(forcing, start + h)
    extrapolate(tables, before, middle, after, h)
    second = solve_stage(tables, before, after, work, seconds, head_factor, inertial, forcing)
    if second == 0:
        return 0, math.inf
    return first + second, step_error(tables, before, middle, after, work, h)


@kernel
def step_error(tables, before, middle, after, work, h):
    """Largest error of a level [m] by the embedded third-order formula, filtered through the stage's factors."""
    rows, third = work.rows, h / 3.0
    rows[rows.size - 1].x = 0.0
    for k in range(after.nodes.size):
        rows[2 * k].x = 0.0
        rows[2 * k + 1].x = third * (
            (4.0 * WEIGHT - 1.0) * before.nodes[k].net_inflow
            - middle.nodes[k].net_inflow
            + 2.0 * DIAGONAL * after.nodes[k].net_inflow
        )
    solve_with_factors(rows)
    largest = 0.0
    for k in range(after.nodes.size):
        felt, width, dry_width = abs(rows[2 * k + 1].x), after.nodes[k].width, tables.cells[k].dry_width
        if width < dry_width:
            felt *= width / dry_width
        largest = max(largest, felt)
    return largest


@kernel
def begin_leg(tables, state, work, forcing, inertial):
    """Evaluate everything that follows from levels, volumes, convective heads and reach discharges afresh.

    Gates, boundaries and deliveries take the forcing at the start of the leg. Returns the largest change of a discharge
    [m³/s] that this brought: large after a jump of the forcing, within Newton's tolerance elsewhere. Done at every
    stop, so that a run that starts from an end state goes on as the unbroken one.
    """
    set_forcing(forcing, 0.0)
    largest = 0.0
    for k in range(state.delivery.size):
        work.rows[k].x = state.delivery[k]
    set_sources(tables, state, forcing, work)
    for k in range(state.delivery.size):
        largest = max(largest, abs(state.delivery[k] - work.rows[k].x))
    geometry_pass(tables, state.nodes, work)
    for index in range(state.links.size):
        kind, link = tables.links[index].kind, state.links[index]
        if kind == REACH:
            restart_reach(state, work, index, inertial)
        elif kind != TAIL_LEVEL:
            left = boundary_balance(tables, index, state.nodes, link.discharge, forcing, work, True)[0]
            link.discharge -= left
            largest = max(largest, abs(left))
    for k in range(state.nodes.size):
        node = state.nodes[k]
        node.width = work.nodes[k].width
        node.net_inflow = state.links[k].discharge - state.links[k + 1].discharge + work.nodes[k].source
        node.rate = node.net_inflow / (tables.cells[k].length * node.width)
    return largest


@kernel
def calm_share(tables, state, work, index):
    """How calm a reach link is: the weight of its convective head and inertia, none where an end is dry.

    Above a free fall the critical brink does not count: that it is critical is what closes the canal there.
    """
    site_up, site_down = tables.channel.nodes[index - 1], tables.channel.nodes[index]
    wet = wet_share(state.nodes[index - 1].level - site_up.bed_level, state.nodes[index].level - site_down.bed_level)
    up, down = work.nodes[index - 1], work.nodes[index]
    is_brink = index == state.nodes.size - 1 and tables.links[index + 1].kind == FREE_OVERFALL
    return wet * convective_share(up, up if is_brink else down, state.links[index].discharge)


@kernel
def restart_reach(state, work, index, inertial):
    """What a reach link's state implies at the present areas."""
    link, up, down = state.links[index], work.nodes[index - 1], work.nodes[index]
    link.mean_area, link.source_area = 0.5 * (up.area + down.area), source_area(link.discharge, up, down)
    target = convective_target(link.convective_share, link.discharge, up.inverse_area, down.inverse_area)
    link.convective_rate = (target - link.convective_head) / convective_time(inertial)


@kernel
def start_from_levels(tables, state, work):
    """Volumes, and convective heads in balance with the discharges, of a state known by levels and discharges."""
    geometry_pass(tables, state.nodes, work)
    for k in range(state.nodes.size):
        state.nodes[k].volume = tables.cells[k].length * work.nodes[k].area
    for index in range(1, state.nodes.size):
        if tables.links[index].kind == REACH:
            link, up, down = state.links[index], work.nodes[index - 1], work.nodes[index]
            link.convective_share = calm_share(tables, state, work, index)
            link.convective_head = convective_target(
                link.convective_share, link.discharge, up.inverse_area, down.inverse_area
            )


@kernel
def accept(tables, state, middle, after, work, totals, h):
    """Take `after` as the new state, add up what came and went, and judge anew how calm each reach link is."""
    for p in range(totals.passed.size):
        end = pool_end_link(tables, p)
        totals.passed[p] += h * weighted(
            state.links[end].discharge, middle.links[end].discharge, after.links[end].discharge
        )
    add_up(totals.delivery, state.delivery, middle.delivery, after.delivery, h)
    add_up(totals.escape, state.escape, middle.escape, after.escape, h)
    add_up(totals.loss, state.loss, middle.loss, after.loss, h)
    regain = h / (h + convective_time(False))
    for k in range(state.nodes.size):
        state.nodes[k] = after.nodes[k]
    for index in range(state.links.size):
        state.links[index] = after.links[index]
        if tables.links[index].kind == REACH:
            link, calm = state.links[index], calm_share(tables, state, work, index)
            link.source_area = source_area(link.discharge, work.nodes[index - 1], work.nodes[index])
            share = link.convective_share
            link.convective_share = min(calm, share + regain * (calm - share))


@kernel
def add_up(totals, state, middle, after, h):
    """Add the volumes of a step to running totals, and take its end as the new state."""
    for k in range(totals.size):
        totals[k] += h * weighted(state[k], middle[k], after[k])
        state[k] = after[k]


@kernel
def pool_end_link(tables, p):
    """The link by which water enters pool p; behind the last pool that by which it leaves the canal."""
    return tables.pools[p].first_node if p < tables.pools.size else tables.pools[p - 1].last_node + 1


@kernel
def weighted(start, middle, end):
    """Mean over a step by the weights of the method."""
    return WEIGHT * (start + middle) + DIAGONAL * end
