"""One instant inside a step: levels and discharges interpolated, gates and jumps judged for them, a row filled."""

import math
from typing import NamedTuple

import numpy as np

from toeline.engine.gate_link import gate_levels
from toeline.engine.near_gate import judge_gate
from toeline.engine.step import DIAGONAL, GAMMA, canal_outflow_link, weighted
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.gradually_varied_flow import DRY_DEPTH
from toeline.hydraulics.kernel import inner_kernel
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL, GATE

JET_POINTS = 400
"""Most points of a jet's profile."""

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


class Watch(NamedTuple):
    """What the output needs beside the state."""

    banks: np.recarray  # (canal nodes) of BANKS
    gates: np.recarray  # (g) of GATE_WATCH
    settled_at: np.ndarray  # (p) int64 ms
    start_storage: np.ndarray  # (1) m³ in the canal at the start of the day
    level: np.ndarray  # (all channel nodes) m, scratch
    discharge: np.ndarray  # (n + 1) m³/s, scratch
    jet: np.ndarray  # (2, JET_POINTS) chainages and depths, scratch


@inner_kernel
def shares_at(at):
    """Weights of a step's start, its stage at γ and its end in the quadratic through all three, at a fraction of it."""
    by_start = (at - GAMMA) * (at - 1.0) / GAMMA
    by_middle = at * (at - 1.0) / (GAMMA * (GAMMA - 1.0))
    return by_start, by_middle, at * (at - GAMMA) / (1.0 - GAMMA)


@inner_kernel
def between(shares, start, middle, end):
    """Value inside a step by the weights of `shares_at`."""
    return shares[0] * start + shares[1] * middle + shares[2] * end


@inner_kernel
def levels_at(tables, before, after, h, at, tail_level, level):
    """Levels at a fraction of the step: cubic Hermite in wet nodes, linear in drying ones; level water beyond a tail
    gate.
    """
    square, cube = at * at, at * at * at
    end = 3.0 * square - 2.0 * cube
    rate_start, rate_end = h * (cube - 2.0 * square + at), h * (cube - square)
    count = before.nodes.size
    for k in range(count):
        old, new = before.nodes[k], after.nodes[k]
        dry = tables.channel.nodes[k].bed_level + 2.0 * DRY_DEPTH
        z = old.level + end * (new.level - old.level)
        if old.level > dry and new.level > dry:
            z += rate_start * old.rate + rate_end * new.rate
        level[k] = z
    beyond = tail_level
    if level.size > count and tables.gates[tables.gates.size - 1].downstream_node < count:
        beyond = level[count - 1]
    for k in range(count, level.size):
        level[k] = beyond


@inner_kernel
def fill_row(tables, before, middle, after, totals, watch, rows, time_ms, h, at, forcing):
    """Fill the next row of output; `at` is the fraction of the step, `forcing` set to that time."""
    row = rows.filled[0]
    rows.filled[0] += 1
    shares = shares_at(at)
    head_level, tail_level = forcing[FORCING_HEAD].now, forcing[FORCING_TAIL].now
    levels_at(tables, before, after, h, at, tail_level, watch.level)
    for index in range(before.links.size):
        watch.discharge[index] = between(
            shares, before.links[index].discharge, middle.links[index].discharge, after.links[index].discharge
        )
        link = tables.links[index]
        if link.kind == GATE:
            gate, out, guard = tables.gates[link.gate], rows.gates[row, link.gate], watch.gates[link.gate]
            up, down = gate_levels(gate, watch.level, before.nodes.size, head_level, tail_level)
            opening = forcing[FORCING_GATES + link.gate].now
            watch.discharge[index] = judge_gate(tables.channel, gate, up, down, opening, watch.level, watch.jet, out)
            out.surge_height_bound_upstream = guard.surge_upstream if time_ms < guard.surge_upstream_until else 0.0
            out.surge_height_bound_downstream = (
                guard.surge_downstream if time_ms < guard.surge_downstream_until else 0.0
            )
    storage = fill_pools(tables, before, middle, after, watch, rows.pools[row], time_ms, shares)
    delivered = fill_offtakes(tables, before, middle, after, totals, watch, rows.offtakes[row], h, shares, forcing)
    canal = rows.canal[row]
    canal.time = time_ms
    canal.canal_storage = storage
    fill_canal(tables, before, middle, after, totals, watch, canal, h, shares)
    change = storage - watch.start_storage[0]
    canal.balance_residual = canal.canal_inflow_volume - canal.canal_outflow_volume - delivered - change


@inner_kernel
def fill_pools(tables, before, middle, after, watch, out, time_ms, shares):
    """Fill a row of pools; returns the volume in the canal [m³]."""
    storage = 0.0
    for p in range(tables.pools.size):
        first, last = tables.pools[p].first_node, tables.pools[p].last_node
        start = inner = end = 0.0
        bank = lining = math.inf
        for k in range(first, last + 1):
            start += before.nodes[k].volume
            inner += middle.nodes[k].volume
            end += after.nodes[k].volume
            bank = min(bank, watch.banks[k].bank_level - watch.level[k])
            lining = min(lining, watch.banks[k].lining_level - watch.level[k])
        pool = out[p]
        pool.settling = 1 if time_ms < watch.settled_at[p] else 0
        pool.pool_volume = between(shares, start, inner, end)
        pool.pool_head_level = max(watch.level[first], tables.channel.nodes[first].bed_level)
        pool.pool_tail_level = max(watch.level[last], tables.channel.nodes[last].bed_level)
        pool.pool_inflow = watch.discharge[first]
        pool.pool_outflow = watch.discharge[last + 1]
        pool.pool_losses = 0.0
        pool.pool_bank_margin = bank if bank < math.inf else math.nan
        pool.pool_lining_margin = lining if lining < math.inf else math.nan
        storage += pool.pool_volume
    return storage


@inner_kernel
def total_at(shares, h, total, start, middle, end):
    """A running total at a fraction of the step, consistent with the stored volumes there."""
    inner = total + DIAGONAL * h * (start + middle)
    return between(shares, total, inner, total + h * weighted(start, middle, end))


@inner_kernel
def fill_offtakes(tables, before, middle, after, totals, watch, out, h, shares, forcing):
    """Fill a row of offtakes; returns the volume delivered by all [m³]."""
    first_demand = FORCING_GATES + tables.gates.size
    delivered = 0.0
    for k in range(before.delivery.size):
        start, inner, end = before.delivery[k], middle.delivery[k], after.delivery[k]
        take, node = out[k], tables.offtakes[k].node
        take.offtake_level = max(watch.level[node], tables.channel.nodes[node].bed_level)
        take.demand = forcing[first_demand + k].now
        take.delivery = between(shares, start, inner, end)
        take.delivery_volume = total_at(shares, h, totals.delivery[k], start, inner, end)
        delivered += take.delivery_volume
    return delivered


@inner_kernel
def fill_canal(tables, before, middle, after, totals, watch, canal, h, shares):
    """Fill what comes into and leaves the canal."""
    out = canal_outflow_link(tables)
    canal.canal_inflow = watch.discharge[0]
    canal.canal_outflow = watch.discharge[out]
    canal.canal_inflow_volume = total_at(
        shares, h, totals.canal[0], before.links[0].discharge, middle.links[0].discharge, after.links[0].discharge
    )
    canal.canal_outflow_volume = total_at(
        shares, h, totals.canal[1], before.links[out].discharge, middle.links[out].discharge, after.links[out].discharge
    )


@inner_kernel
def fill_profile(tables, before, middle, after, watch, rows, time_ms, h, at, forcing):
    """Fill the next row of the long profile."""
    row = rows.filled[1]
    rows.filled[1] += 1
    shares = shares_at(at)
    rows.profile_time[row] = time_ms
    levels_at(tables, before, after, h, at, forcing[FORCING_TAIL].now, watch.level)
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
