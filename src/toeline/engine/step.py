"""One step of TR-BDF2: two implicit stages with the same coefficient, each solved by Newton's method.

With γ = 2 − √2, d = γ/2 and w = √2/4: stage at γh, V_γ = V_n + d·h·(F_n + F_γ); end, V = V_n + h·(w·F_n + w·F_γ + d·F)
(Bank et al. 1985; Hosea & Shampine 1996). Stored volumes are the state; the levels are their image.
"""

import math

from toeline.constants import GRAVITY
from toeline.engine.gate_link import gate_discharge_at, gate_levels, gate_slopes, tail_discharge
from toeline.engine.reach_link import (
    CONVECTIVE_TIME,
    convective_share,
    convective_target,
    inertia_share,
    node_geometry,
    reach_balance,
)
from toeline.engine.tridiagonal import back_substitute, solve_with_factors
from toeline.hydraulics.gradually_varied_flow import DRY_DEPTH
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.offtake import offtake_discharge
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL, GATE, INFLOW, REACH, TAIL_LEVEL

GAMMA = 2.0 - math.sqrt(2.0)
DIAGONAL = GAMMA / 2.0
WEIGHT = math.sqrt(2.0) / 4.0

LEVEL_CONVERGED = 1e-4
"""Last Newton update [m] of a solved stage; the convergence is quadratic, the error left far smaller."""
ITERATIONS = 12
LOWEST_DEPTH = -0.5
"""Depth [m] below which the image of an empty node is not followed."""
DEMAND_NUDGE = 1e-5


@kernel
def set_forcing(forcing, seconds):
    """Put the forcing at a time since the start of the leg into `forcing.now`."""
    for k in range(forcing.now.size):
        forcing.now[k] = forcing.value[k] + forcing.rate[k] * seconds


@kernel
def set_sources(tables, level, now, stage, delivery):
    """Deliveries at the present levels, and what they take from each node with its derivative."""
    offtakes = tables.offtakes
    for node in range(level.size):
        stage.source[node] = 0.0
        stage.source_slope[node] = 0.0
    count = offtakes.node.size
    first_demand = FORCING_GATES + tables.gates.apron_end.size
    for k in range(count):
        node = offtakes.node[k]
        demand, opening = now[first_demand + k], now[first_demand + count + k]
        q = offtake_discharge(
            offtakes.kind[k], demand, offtakes.sill_level[k], offtakes.width[k], opening, offtakes.coefficient[k], level[node]
        )
        nudged = offtake_discharge(
            offtakes.kind[k], demand, offtakes.sill_level[k], offtakes.width[k], opening, offtakes.coefficient[k],
            level[node] + DEMAND_NUDGE,
        )  # fmt: skip
        delivery[k] = q
        stage.source[node] -= q
        stage.source_slope[node] -= (nudged - q) / DEMAND_NUDGE


@kernel
def boundary_balance(tables, stage, link, level, q, now):
    """Residual of a link that is not a reach, and its derivatives to the level above, the discharge and the level below."""
    kind = tables.links.kind[link]
    if kind == INFLOW:
        return q - now[FORCING_HEAD], 0.0, 1.0, 0.0
    if kind == GATE:
        g = tables.links.gate[link]
        up, down = gate_levels(tables.gates, g, level, now[FORCING_HEAD], now[FORCING_TAIL])
        opening = now[FORCING_GATES + g]
        passed = gate_discharge_at(tables.channel, tables.gates, g, up, down, opening)
        by_up, by_down = gate_slopes(tables.channel, tables.gates, g, up, down, opening, passed)
        return q - passed, -by_up, 1.0, -by_down
    last = level.size - 1
    if kind == TAIL_LEVEL:
        loss = tables.links.length[link] / max(stage.conveyance[last], 1e-6) ** 2
        return level[last] - now[FORCING_TAIL] - q * abs(q) * loss, 1.0, -2.0 * abs(q) * loss, 0.0
    passed = tail_discharge(tables.channel, tables.boundary, kind, last, level[last])
    nudged = tail_discharge(tables.channel, tables.boundary, kind, last, level[last] + 1e-6)
    return q - passed, -(nudged - passed) / 1e-6, 1.0, 0.0


@kernel
def _inertia(tables, stage, link, q, share, earlier_velocity, seconds):
    """Head that accelerates a link's water less what earlier stages left, and its derivatives to discharge and mean area."""
    mean = 0.5 * (stage.area[link - 1] + stage.area[link])
    mass = share * tables.links.length[link] / (GRAVITY * seconds)
    base = share * stage.momentum_base[link]
    head = mass * (q / mean - earlier_velocity * mean) - base * mean
    return head, mass / mean, -mass * (q / (mean * mean) + earlier_velocity) - base


@kernel
def assemble(tables, before, stage, level, discharge, seconds, head_factor, inertial, now):
    """Fill the Newton matrix and right side at the present levels and discharges, and sweep it forward as it is made."""
    x, pivot, lower, upper = stage.correction, stage.pivot, stage.lower, stage.upper
    count = level.size
    for node in range(count):
        node_geometry(tables.channel, tables.nodes, node, level[node], stage)
    for link in range(count + 1):
        q = discharge[link]
        if tables.links.kind[link] == REACH:
            left, by_up, by_q, by_down = reach_balance(
                tables.channel, tables.links, stage, link, level[link - 1], level[link], q,
                stage.convective_base[link], head_factor * before.convective_share[link],
            )  # fmt: skip
            if inertial:
                share = inertia_share(tables.channel, link, before.level[link - 1], before.level[link])
                earlier = before.discharge[link] / (before.mean_area[link] * before.mean_area[link])
                head, head_q, head_area = _inertia(tables, stage, link, q, share, earlier, seconds)
                left, by_q = left - head, by_q - head_q
                by_up -= 0.5 * head_area * stage.width[link - 1]
                by_down -= 0.5 * head_area * stage.width[link]
        else:
            left, by_up, by_q, by_down = boundary_balance(tables, stage, link, level, q, now)
        row = 2 * link
        if link == 0:
            pivot[0], x[0] = 1.0 / by_q, -left
        else:
            factor = by_up * pivot[row - 1]
            lower[row] = by_up
            pivot[row] = 1.0 / (by_q - factor * upper[row - 1])
            x[row] = -left - factor * x[row - 1]
        upper[row] = by_down
        if link < count:
            factor = -seconds * pivot[row]
            excess = tables.nodes.cell_length[link] * stage.area[link] - stage.volume_base[link]
            excess -= seconds * (q - discharge[link + 1] + stage.source[link])
            storage = tables.nodes.cell_length[link] * stage.width[link] - seconds * stage.source_slope[link]
            lower[row + 1] = -seconds
            pivot[row + 1] = 1.0 / (storage - factor * upper[row])
            upper[row + 1] = seconds
            x[row + 1] = -excess - factor * x[row]


@kernel
def _apply(tables, stage, level, discharge):
    """Add the correction, each level within half its depth or 5 cm; returns the largest change of a level [m] that counts."""
    x, largest = stage.correction, 0.0
    discharge[0] += x[0]
    for node in range(level.size):
        depth = level[node] - tables.channel.bed_level[node]
        most = max(0.5 * depth, 0.05)
        change = min(max(x[2 * node + 1], -most), most)
        if depth + change < LOWEST_DEPTH:
            change = LOWEST_DEPTH - depth
        x[2 * node + 1] = change
        level[node] += change
        discharge[node + 1] += x[2 * node + 2]
        dry_width = tables.nodes.dry_width[tables.channel.shape[node]]
        felt = abs(change) if depth >= DRY_DEPTH else abs(change) * min(stage.width[node] / dry_width, 1.0)
        largest = max(largest, felt)
    return largest


@kernel
def solve_stage(tables, before, after, stage, seconds, head_factor, inertial, now):
    """Newton's method for the levels and discharges in `after`; returns the number of solves, 0 where it failed."""
    level, discharge = after.level, after.discharge
    last_change = math.inf
    for k in range(ITERATIONS):
        set_sources(tables, level, now, stage, after.delivery)
        assemble(tables, before, stage, level, discharge, seconds, head_factor, inertial, now)
        back_substitute(stage.pivot, stage.upper, stage.correction)
        change = _apply(tables, stage, level, discharge)
        if not math.isfinite(change) or (k > 5 and change > 0.9 * last_change and change > 0.05):
            return 0
        if change < LEVEL_CONVERGED:
            _finish_stage(tables, before, after, stage, seconds, head_factor, inertial, now)
            return k + 1
        last_change = change
    return 0


@kernel
def _finish_stage(tables, before, after, stage, seconds, head_factor, inertial, now):
    """Rates and volumes of a solved stage; areas follow the last correction to first order."""
    set_sources(tables, after.level, now, stage, after.delivery)
    count = after.level.size
    x = stage.correction
    for node in range(count):
        change = x[2 * node + 1]
        after.width[node] = stage.width[node]
        stage.area[node] += stage.width[node] * change
        stage.inverse_area[node] += stage.inverse_area_slope[node] * change
        after.net_inflow[node] = after.discharge[node] - after.discharge[node + 1] + stage.source[node]
        after.volume[node] = stage.volume_base[node] + seconds * after.net_inflow[node]
    for link in range(1, count):
        if tables.links.kind[link] != REACH:
            continue
        q = after.discharge[link]
        target = convective_target(
            before.convective_share[link], q, stage.inverse_area[link - 1], stage.inverse_area[link]
        )
        after.convective_head[link] = stage.convective_base[link] + head_factor * target
        after.convective_rate[link] = (target - after.convective_head[link]) / CONVECTIVE_TIME
        mean = 0.5 * (stage.area[link - 1] + stage.area[link])
        after.mean_area[link] = mean
        if inertial:
            share = inertia_share(tables.channel, link, before.level[link - 1], before.level[link])
            earlier = before.discharge[link] / (before.mean_area[link] * before.mean_area[link])
            after.imbalance[link] = _inertia(tables, stage, link, q, share, earlier, seconds)[0]


@kernel
def _predict(tables, before, after, seconds):
    """First guess of the stage at γh: wet nodes follow their rate."""
    for node in range(before.level.size):
        change = 0.0
        if before.level[node] - tables.channel.bed_level[node] > 2.0 * DRY_DEPTH:
            change = seconds * before.net_inflow[node] / (tables.nodes.cell_length[node] * before.width[node])
        after.level[node] = before.level[node] + min(max(change, -0.02), 0.02)
    copy(after.discharge, before.discharge)


@kernel
def copy(to, source):
    """Copy an array without a temporary."""
    for k in range(to.size):
        to[k] = source[k]


@kernel
def try_step(tables, before, middle, after, stage, forcing, start, h, inertial):
    """One step of h seconds from `before` at `start` seconds of the leg into `after`.

    Returns the number of linear solves (0 where a stage could not be solved) and the largest estimated error of a level [m].
    """
    seconds = DIAGONAL * h
    head_factor = seconds / CONVECTIVE_TIME / (1.0 + seconds / CONVECTIVE_TIME)
    scale = 1.0 / (1.0 + seconds / CONVECTIVE_TIME)
    _base_of_middle(before, stage, seconds, scale, inertial)
    set_forcing(forcing, start + GAMMA * h)
    _predict(tables, before, middle, GAMMA * h)
    first = solve_stage(tables, before, middle, stage, seconds, head_factor, inertial, forcing.now)
    if first == 0:
        return 0, math.inf
    _base_of_end(before, middle, stage, WEIGHT * h, scale, inertial)
    set_forcing(forcing, start + h)
    _extrapolate(before.level, middle.level, after.level)
    _extrapolate(before.discharge, middle.discharge, after.discharge)
    second = solve_stage(tables, before, after, stage, seconds, head_factor, inertial, forcing.now)
    if second == 0:
        return 0, math.inf
    return first + second, _error(tables, before, middle, after, stage, h)


@kernel
def _base_of_middle(before, stage, seconds, scale, inertial):
    """What the stage at γh starts from."""
    for node in range(before.volume.size):
        stage.volume_base[node] = before.volume[node] + seconds * before.net_inflow[node]
    for link in range(before.discharge.size):
        stage.convective_base[link] = scale * (before.convective_head[link] + seconds * before.convective_rate[link])
        if inertial:
            stage.momentum_base[link] = before.imbalance[link] / before.mean_area[link]


@kernel
def _base_of_end(before, middle, stage, weight, scale, inertial):
    """What the stage at the end of the step starts from; `weight` = w·h."""
    for node in range(before.volume.size):
        stage.volume_base[node] = before.volume[node] + weight * (before.net_inflow[node] + middle.net_inflow[node])
    for link in range(before.discharge.size):
        rate = before.convective_rate[link] + middle.convective_rate[link]
        stage.convective_base[link] = scale * (before.convective_head[link] + weight * rate)
        if inertial:
            left = before.imbalance[link] / before.mean_area[link] + middle.imbalance[link] / middle.mean_area[link]
            stage.momentum_base[link] = WEIGHT / DIAGONAL * left


@kernel
def _extrapolate(start, middle, end):
    """First guess of the end stage, on the line through start and middle."""
    for k in range(end.size):
        end[k] = middle[k] + (middle[k] - start[k]) * ((1.0 - GAMMA) / GAMMA)


@kernel
def _error(tables, before, middle, after, stage, h):
    """Largest error of a level [m] by the embedded third-order formula, filtered through the stage's factors."""
    x = stage.correction
    x[x.size - 1] = 0.0
    for node in range(after.level.size):
        x[2 * node] = 0.0
        x[2 * node + 1] = (h / 3.0) * (
            (4.0 * WEIGHT - 1.0) * before.net_inflow[node] - middle.net_inflow[node] + 2.0 * DIAGONAL * after.net_inflow[node]
        )
    solve_with_factors(stage.pivot, stage.lower, stage.upper, x)
    largest = 0.0
    for node in range(after.level.size):
        dry_width = tables.nodes.dry_width[tables.channel.shape[node]]
        largest = max(largest, abs(x[2 * node + 1]) * min(after.width[node] / dry_width, 1.0))
    return largest


@kernel
def begin_leg(tables, state, stage, forcing):
    """Evaluate everything that follows from levels, volumes, convective heads and reach discharges afresh.

    Gates, boundaries and deliveries take the forcing at the start of the leg. Returns the largest change of a discharge
    [m³/s] that this brought: large after a jump of the forcing, within Newton's tolerance elsewhere. Done at every stop, so
    that a run that starts from an end state goes on as the unbroken one.
    """
    set_forcing(forcing, 0.0)
    for k in range(state.delivery.size):
        stage.correction[k] = state.delivery[k]
    set_sources(tables, state.level, forcing.now, stage, state.delivery)
    largest = 0.0
    for k in range(state.delivery.size):
        largest = max(largest, abs(state.delivery[k] - stage.correction[k]))
    for node in range(state.level.size):
        node_geometry(tables.channel, tables.nodes, node, state.level[node], stage)
        state.width[node] = stage.width[node]
    for link in range(state.discharge.size):
        kind = tables.links.kind[link]
        if kind == REACH:
            _restart_reach(tables, state, stage, link)
        elif kind != TAIL_LEVEL:
            left = boundary_balance(tables, stage, link, state.level, state.discharge[link], forcing.now)[0]
            state.discharge[link] -= left
            largest = max(largest, abs(left))
    for node in range(state.level.size):
        state.net_inflow[node] = state.discharge[node] - state.discharge[node + 1] + stage.source[node]
    return largest


@kernel
def _restart_reach(tables, state, stage, link):
    q = state.discharge[link]
    state.mean_area[link] = 0.5 * (stage.area[link - 1] + stage.area[link])
    state.convective_share[link] = convective_share(tables.channel, stage, link, q)
    target = convective_target(
        state.convective_share[link], q, stage.inverse_area[link - 1], stage.inverse_area[link]
    )
    state.convective_rate[link] = (target - state.convective_head[link]) / CONVECTIVE_TIME


@kernel
def start_from_levels(tables, state, stage):
    """Volumes, and convective heads in balance with the discharges, of a state known by levels and discharges."""
    for node in range(state.level.size):
        node_geometry(tables.channel, tables.nodes, node, state.level[node], stage)
        state.volume[node] = tables.nodes.cell_length[node] * stage.area[node]
    for link in range(1, state.level.size):
        if tables.links.kind[link] == REACH:
            share = convective_share(tables.channel, stage, link, state.discharge[link])
            state.convective_head[link] = convective_target(
                share, state.discharge[link], stage.inverse_area[link - 1], stage.inverse_area[link]
            )


@kernel
def accept(tables, state, middle, after, stage, totals, h):
    """Take `after` as the new state, add up what came and went, and judge anew how calm each reach link is."""
    totals.inflow[0] += h * _weighted(state.discharge[0], middle.discharge[0], after.discharge[0])
    out = canal_outflow_link(tables)
    totals.outflow[0] += h * _weighted(state.discharge[out], middle.discharge[out], after.discharge[out])
    for k in range(totals.delivery.size):
        totals.delivery[k] += h * _weighted(state.delivery[k], middle.delivery[k], after.delivery[k])
    copy(state.level, after.level)
    copy(state.volume, after.volume)
    copy(state.discharge, after.discharge)
    copy(state.convective_head, after.convective_head)
    copy(state.net_inflow, after.net_inflow)
    copy(state.convective_rate, after.convective_rate)
    copy(state.imbalance, after.imbalance)
    copy(state.mean_area, after.mean_area)
    copy(state.width, after.width)
    copy(state.delivery, after.delivery)
    for link in range(1, state.level.size):
        if tables.links.kind[link] == REACH:
            state.convective_share[link] = convective_share(tables.channel, stage, link, state.discharge[link])


@kernel
def canal_outflow_link(tables):
    """The link by which water leaves the canal: the last, or the tail gate where a basin stands beyond it."""
    return tables.pools.last_node[tables.pools.last_node.size - 1] + 1


@kernel
def _weighted(start, middle, end):
    return WEIGHT * (start + middle) + DIAGONAL * end
