"""One instant inside a step: levels and discharges interpolated, gates and jumps judged for them, a row filled."""

import math
from typing import NamedTuple

import numpy as np

from toeline.engine.gate_link import gate_discharge_at, gate_levels, leaf_opening
from toeline.engine.near_gate import judge_gate
from toeline.engine.step import DIAGONAL, GAMMA, pool_end_link, weighted
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.gradually_varied_flow import DRY_DEPTH
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.underflow_gate import CLEAR_OF_WATER, FREE, QUALITY_UNEVEN_BAYS
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL, HEAD

JET_POINTS = 400
"""Most points of a jet's profile."""

EVEN = 0.01
"""Difference of opening [m] up to which bays count as equal (choice)."""

GATE_WATCH = np.dtype(
    [
        ("surge_upstream", float),  # m, bound of the last moves
        ("surge_downstream", float),  # m
        ("surge_upstream_until", np.int64),  # ms, when the pool above has settled
        ("surge_downstream_until", np.int64),  # ms
    ]
)

BANKS = np.dtype([("bank_level", float), ("lining_level", float)])
"""Of a canal node [m], inf where none."""


POOL_VOLUMES = np.dtype([("start", float), ("middle", float), ("end", float)])
"""Of a pool [m³] in the present step."""


class Watch(NamedTuple):
    """What the output needs beside the state."""

    banks: np.recarray  # (canal nodes) of BANKS
    gates: np.recarray  # (g) of GATE_WATCH
    settled_at: np.ndarray  # (p) int64 ms
    roughness_factor: np.ndarray  # (p) 1
    start_storage: np.ndarray  # (1) m³ in the canal at the start of the day
    volumes: np.recarray  # (p) of POOL_VOLUMES, scratch
    courses: np.ndarray  # (4, n) m, levels over the present step by powers of the fraction of it
    level: np.ndarray  # (all channel nodes) m, scratch
    discharge: np.ndarray  # (n + 1) m³/s, scratch; set at gates and ends of pools
    jet: np.ndarray  # (2, JET_POINTS) chainages and depths, scratch
    free_jets: np.recarray  # (g) of FREE_JET


@kernel
def shares_at(at):
    """Weights of a step's start, its stage at γ and its end in the quadratic through all three, at a fraction of it."""
    by_start = (at - GAMMA) * (at - 1.0) / GAMMA
    by_middle = at * (at - 1.0) / (GAMMA * (GAMMA - 1.0))
    return by_start, by_middle, at * (at - GAMMA) / (1.0 - GAMMA)


@kernel
def between(shares, start, middle, end):
    """Value inside a step by the weights of `shares_at`."""
    return shares[0] * start + shares[1] * middle + shares[2] * end


@kernel
def set_courses(tables, before, after, h, courses):
    """Levels over a step as cubics in the fraction of it, Hermite's by levels and rates; drying nodes have no rates."""
    for k in range(before.nodes.size):
        old, new = before.nodes[k], after.nodes[k]
        dry = tables.channel.nodes[k].bed_level + 2.0 * DRY_DEPTH
        rise, rate_start, rate_end = new.level - old.level, 0.0, 0.0
        if old.level > dry and new.level > dry:
            rate_start, rate_end = h * old.rate, h * new.rate
        courses[0, k] = old.level
        courses[1, k] = rate_start
        courses[2, k] = 3.0 * rise - 2.0 * rate_start - rate_end
        courses[3, k] = rate_start + rate_end - 2.0 * rise


@kernel
def levels_at(tables, courses, at, tail_level, level):
    """Levels at a fraction of the step by `set_courses`; level water beyond a tail gate."""
    count = courses.shape[1]
    for k in range(count):
        level[k] = courses[0, k] + at * (courses[1, k] + at * (courses[2, k] + at * courses[3, k]))
    beyond = tail_level
    if level.size > count and tables.gates[tables.gates.size - 1].downstream_node < count:
        beyond = level[count - 1]
    for k in range(count, level.size):
        level[k] = beyond


@kernel
def fill_row(tables, before, middle, after, totals, watch, rows, time_ms, h, at, forcing):
    """Fill the next row of output; `at` is the fraction of the step, `forcing` set to that time."""
    row = rows.filled[0]
    rows.filled[0] += 1
    shares = shares_at(at)
    head_level, tail_level = forcing[FORCING_HEAD].now, forcing[FORCING_TAIL].now
    levels_at(tables, watch.courses, at, tail_level, watch.level)
    for p in range(tables.pools.size + 1):
        end = pool_end_link(tables, p)
        watch.discharge[end] = between(
            shares, before.links[end].discharge, middle.links[end].discharge, after.links[end].discharge
        )
    for g in range(tables.gates.size):
        gate, out, guard = tables.gates[g], rows.gates[row, g], watch.gates[g]
        up, down = gate_levels(gate, watch.level, before.nodes.size, head_level, tail_level)
        opening = ruling_opening(tables.channel.shapes, gate, up, down, forcing)
        passed = judge_gate(
            tables.channel, gate, up, down, opening, leaves_move(forcing, gate), watch.level, watch.jet,
            watch.free_jets[g], out,
        )  # fmt: skip
        if gate.leaf_count > 1:
            passed = fill_bays(tables, gate, up, down, forcing, rows.bays[row], out)
        watch.discharge[gate.downstream_node] = passed
        out.surge_height_bound_upstream = guard.surge_upstream if time_ms < guard.surge_upstream_until else 0.0
        out.surge_height_bound_downstream = guard.surge_downstream if time_ms < guard.surge_downstream_until else 0.0
    left = fill_offtakes(tables, before, middle, after, totals, watch, rows.offtakes[row], h, shares, forcing)
    left += fill_escapes(before, middle, after, totals, rows.escapes[row], h, shares)
    fill_gauges(tables, watch.level, rows.gauges[row], head_level)
    fill_pools(tables, before, middle, after, totals, watch, rows.pools[row], time_ms, h, shares)
    canal = rows.canal[row]
    canal.time = time_ms
    fill_canal(watch, rows.pools[row], canal, left)


@kernel
def leaves_move(forcing, gate):
    """Whether a leaf of the gate moves."""
    moving = 0
    for k in range(gate.leaf_count):
        moving += forcing[FORCING_GATES + gate.first_leaf + k].rate != 0.0
    return moving > 0


@kernel
def ruling_opening(shapes, gate, up, down, forcing):
    """Opening [m] of the bay with the largest unit discharge, by which the jump of the gate is judged."""
    ruling, most = leaf_opening(forcing, gate, 0), -1.0
    if gate.leaf_count == 1:
        return ruling
    for k in range(gate.leaf_count):
        opening = leaf_opening(forcing, gate, k)
        passed = abs(gate_discharge_at(shapes, gate, up, down, opening))
        if passed > most:
            ruling, most = opening, passed
    return ruling


@kernel
def fill_bays(tables, gate, up, down, forcing, bays, out):
    """Fill the bays of a gate that move apart, and what the gate's record says of all of them: mean opening, discharge
    and the power of that discharge. Returns the discharge [m³/s].
    """
    opened = passed = highest = 0.0
    lowest, ruling = math.inf, out.gate_discharge
    for k in range(gate.leaf_count):
        bay = bays[tables.leaves[gate.first_leaf + k].bay]
        bay.bay_opening = leaf_opening(forcing, gate, k)
        discharge = gate_discharge_at(tables.channel.shapes, gate, up, down, bay.bay_opening)
        bay.bay_discharge = discharge / gate.leaf_count
        opened += bay.bay_opening / gate.leaf_count
        highest, lowest = max(highest, bay.bay_opening), min(lowest, bay.bay_opening)
        passed += discharge
    passed /= gate.leaf_count
    out.gate_opening, out.gate_discharge = opened, passed
    if highest - lowest > EVEN and out.gate_flow_state != FREE and out.gate_flow_state != CLEAR_OF_WATER:
        out.discharge_quality = QUALITY_UNEVEN_BAYS
    if ruling != 0.0:
        out.jump_power *= passed / ruling
    return passed


@kernel
def sum_pools(tables, before, middle, after, volumes):
    """Volumes of the pools at the start, the stage at γ and the end of a step."""
    for p in range(tables.pools.size):
        start = inner = end = 0.0
        for k in range(tables.pools[p].first_node, tables.pools[p].last_node + 1):
            start += before.nodes[k].volume
            inner += middle.nodes[k].volume
            end += after.nodes[k].volume
        volumes[p].start, volumes[p].middle, volumes[p].end = start, inner, end


@kernel
def fill_pools(tables, before, middle, after, totals, watch, out, time_ms, h, shares):
    """Fill a row of pools."""
    for p in range(tables.pools.size):
        first, last = tables.pools[p].first_node, tables.pools[p].last_node
        bank = lining = math.inf
        for k in range(first, last + 1):
            bank = min(bank, watch.banks[k].bank_level - watch.level[k])
            lining = min(lining, watch.banks[k].lining_level - watch.level[k])
        pool = out[p]
        pool.settling = 1 if time_ms < watch.settled_at[p] else 0
        stored = watch.volumes[p]
        pool.pool_volume = between(shares, stored.start, stored.middle, stored.end)
        pool.pool_head_level = max(watch.level[first], tables.channel.nodes[first].bed_level)
        pool.pool_tail_level = max(watch.level[last], tables.channel.nodes[last].bed_level)
        pool.pool_inflow = watch.discharge[first]
        pool.pool_outflow = watch.discharge[last + 1]
        pool.pool_inflow_volume = passed_volume(tables, before, middle, after, totals, p, h, shares)
        pool.pool_outflow_volume = passed_volume(tables, before, middle, after, totals, p + 1, h, shares)
        pool.pool_losses = between(shares, before.loss[p], middle.loss[p], after.loss[p])
        pool.pool_loss_volume = total_at(shares, h, totals.loss[p], before.loss[p], middle.loss[p], after.loss[p])
        pool.pool_roughness_factor = watch.roughness_factor[p]
        pool.pool_bank_margin = bank if bank < math.inf else math.nan
        pool.pool_lining_margin = lining if lining < math.inf else math.nan


@kernel
def passed_volume(tables, before, middle, after, totals, p, h, shares):
    """Volume [m³] that has passed the upper end of pool p, or of the last pool's lower end behind it."""
    end = pool_end_link(tables, p)
    return total_at(
        shares, h, totals.passed[p], before.links[end].discharge, middle.links[end].discharge,
        after.links[end].discharge,
    )  # fmt: skip


@kernel
def total_at(shares, h, total, start, middle, end):
    """A running total at a fraction of the step, consistent with the stored volumes there."""
    inner = total + DIAGONAL * h * (start + middle)
    return between(shares, total, inner, total + h * weighted(start, middle, end))


@kernel
def fill_offtakes(tables, before, middle, after, totals, watch, out, h, shares, forcing):
    """Fill a row of offtakes; returns the volume delivered by all [m³]."""
    first_demand = FORCING_GATES + tables.leaves.size
    delivered = 0.0
    for k in range(before.delivery.size):
        start, inner, end = before.delivery[k], middle.delivery[k], after.delivery[k]
        take, node = out[k], tables.offtakes[k].node
        take.offtake_level = max(watch.level[node], tables.channel.nodes[node].bed_level)
        take.demand = forcing[first_demand + k].now
        take.delivery = max(between(shares, start, inner, end), 0.0)
        take.delivery_volume = total_at(shares, h, totals.delivery[k], start, inner, end)
        delivered += take.delivery_volume
    return delivered


@kernel
def fill_escapes(before, middle, after, totals, out, h, shares):
    """Fill a row of escapes; returns the volume that all have let out [m³]."""
    escaped = 0.0
    for k in range(before.escape.size):
        start, inner, end = before.escape[k], middle.escape[k], after.escape[k]
        out[k].escape_discharge = max(between(shares, start, inner, end), 0.0)
        out[k].escape_volume = total_at(shares, h, totals.escape[k], start, inner, end)
        escaped += out[k].escape_volume
    return escaped


@kernel
def fill_gauges(tables, level, out, head_level):
    """Fill a row of gauges; no reading where the bed beside the staff is dry."""
    for k in range(tables.gauges.size):
        gauge = tables.gauges[k]
        water = head_level
        if gauge.node != HEAD:
            water = level[gauge.node]
            if gauge.weight > 0.0:
                water += gauge.weight * (level[gauge.node + 1] - water)
        out[k].gauge_reading = water - gauge.zero_level if water - gauge.bed_level > DRY_DEPTH else math.nan


@kernel
def fill_canal(watch, pools, canal, left):
    """Fill what comes into, stays in and leaves the canal; `left` [m³] went to offtakes and over escapes."""
    last = pools.size - 1
    canal.canal_inflow = pools[0].pool_inflow
    canal.canal_outflow = pools[last].pool_outflow
    canal.canal_inflow_volume = pools[0].pool_inflow_volume
    canal.canal_outflow_volume = pools[last].pool_outflow_volume
    storage = lost = 0.0
    for p in range(pools.size):
        storage += pools[p].pool_volume
        lost += pools[p].pool_loss_volume
    canal.canal_storage = storage
    change = storage - watch.start_storage[0]
    canal.balance_residual = canal.canal_inflow_volume - canal.canal_outflow_volume - left - lost - change


@kernel
def fill_profile(tables, before, middle, after, watch, rows, time_ms, h, at, forcing):
    """Fill the next row of the long profile."""
    row = rows.filled[1]
    rows.filled[1] += 1
    shares = shares_at(at)
    rows.profile_time[row] = time_ms
    levels_at(tables, watch.courses, at, forcing[FORCING_TAIL].now, watch.level)
    for k in range(rows.profiles.shape[1]):
        above, below = before.links[k], before.links[k + 1]
        start = 0.5 * (above.discharge + below.discharge)
        inner = 0.5 * (middle.links[k].discharge + middle.links[k + 1].discharge)
        end = 0.5 * (after.links[k].discharge + after.links[k + 1].discharge)
        site, out = tables.channel.nodes[k], rows.profiles[row, k]
        depth = watch.level[k] - site.bed_level
        out.water_level = max(watch.level[k], site.bed_level)
        out.discharge = between(shares, start, inner, end)
        out.velocity = (
            out.discharge / geometry(tables.channel.shapes[site.section], depth)[0] if depth > DRY_DEPTH else 0.0
        )
