"""One instant inside a step: levels and discharges interpolated, gates and jumps judged for them, a row filled."""

from typing import NamedTuple

import numpy as np

from toeline.engine.near_gate import judge_gate
from toeline.engine.step import DIAGONAL, GAMMA, WEIGHT, canal_outflow_link
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.gradually_varied_flow import DRY_DEPTH
from toeline.hydraulics.kernel import kernel
from toeline.network.tables import FORCING_GATES, FORCING_TAIL, GATE


class Watch(NamedTuple):
    """What the output needs beside the state."""

    bank_level: np.ndarray  # (canal nodes) m, inf where none
    lining_level: np.ndarray  # (canal nodes) m, inf where none
    start_storage: np.ndarray  # (1) m³ in the canal at the start of the day
    surge_upstream: np.ndarray  # (g) m, bound of the last move
    surge_downstream: np.ndarray  # (g) m
    surge_until: np.ndarray  # (g, 2) int64 ms, when the pool above and below has settled
    settled_at: np.ndarray  # (p) int64 ms
    level: np.ndarray  # (all channel nodes) m, scratch
    link_discharge: np.ndarray  # (n + 1) m³/s, scratch
    chainages: np.ndarray  # scratch of the jets
    depths: np.ndarray  # scratch of the jets


@kernel
def _quadratic(at, start, middle, end):
    """Value at a fraction of the step through its start, its stage at γ and its end."""
    by_start = (at - GAMMA) * (at - 1.0) / GAMMA
    by_middle = at * (at - 1.0) / (GAMMA * (GAMMA - 1.0))
    by_end = at * (at - GAMMA) / (1.0 - GAMMA)
    return by_start * start + by_middle * middle + by_end * end


@kernel
def _levels_at(tables, before, after, h, at, now, level):
    """Levels at a fraction of the step: cubic Hermite in wet nodes, linear in drying ones."""
    square, cube = at * at, at * at * at
    end = 3.0 * square - 2.0 * cube
    rate_start, rate_end = h * (cube - 2.0 * square + at), h * (cube - square)
    for node in range(before.level.size):
        z = before.level[node] + end * (after.level[node] - before.level[node])
        dry = tables.channel.bed_level[node] + 2.0 * DRY_DEPTH
        if before.level[node] > dry and after.level[node] > dry:
            cell = tables.nodes.cell_length[node]
            z += rate_start * before.net_inflow[node] / (cell * before.width[node])
            z += rate_end * after.net_inflow[node] / (cell * after.width[node])
        level[node] = z
    beyond = now[FORCING_TAIL]
    if tables.gates.downstream_node.size > 0 and before.level.size < level.size:
        last_gate = tables.gates.downstream_node.size - 1
        if tables.gates.downstream_node[last_gate] < before.level.size:
            beyond = level[tables.gates.downstream_node[last_gate]]
    for node in range(before.level.size, level.size):
        level[node] = beyond


@kernel
def fill_row(tables, before, middle, after, totals, watch, rows, time_ms, h, at, now):
    """Fill the next row of output; `at` is the fraction of the step, `now` the forcing of that time."""
    row = rows.filled[0]
    rows.filled[0] += 1
    rows.time[row] = time_ms
    _levels_at(tables, before, after, h, at, now, watch.level)
    solved = watch.level[: before.level.size]
    for link in range(before.discharge.size):
        watch.link_discharge[link] = _quadratic(at, before.discharge[link], middle.discharge[link], after.discharge[link])
    for link in range(before.discharge.size):
        if tables.links.kind[link] == GATE:
            g = tables.links.gate[link]
            watch.link_discharge[link] = judge_gate(
                tables, rows, row, g, solved, watch.level, now, watch.chainages, watch.depths
            )
            _fill_surge(rows.gates, watch, row, g, time_ms)
    _fill_pools(tables, before, middle, after, watch, rows.pools, row, time_ms, at)
    delivered = _fill_offtakes(tables, before, middle, after, totals, rows.offtakes, row, h, at, now)
    _fill_canal(tables, before, middle, after, totals, watch, rows, row, h, at, delivered)


@kernel
def _fill_surge(out, watch, row, g, time_ms):
    out.surge_height_bound_upstream[row, g] = watch.surge_upstream[g] if time_ms < watch.surge_until[g, 0] else 0.0
    out.surge_height_bound_downstream[row, g] = watch.surge_downstream[g] if time_ms < watch.surge_until[g, 1] else 0.0


@kernel
def _fill_pools(tables, before, middle, after, watch, out, row, time_ms, at):
    for p in range(tables.pools.first_node.size):
        first, last = tables.pools.first_node[p], tables.pools.last_node[p]
        start = inner = end = 0.0
        bank = lining = np.inf
        for node in range(first, last + 1):
            start += before.volume[node]
            inner += middle.volume[node]
            end += after.volume[node]
            bank = min(bank, watch.bank_level[node] - watch.level[node])
            lining = min(lining, watch.lining_level[node] - watch.level[node])
        out.settling[row, p] = 1 if time_ms < watch.settled_at[p] else 0
        out.pool_volume[row, p] = _quadratic(at, start, inner, end)
        out.pool_head_level[row, p] = max(watch.level[first], tables.channel.bed_level[first])
        out.pool_tail_level[row, p] = max(watch.level[last], tables.channel.bed_level[last])
        out.pool_inflow[row, p] = watch.link_discharge[first]
        out.pool_outflow[row, p] = watch.link_discharge[last + 1]
        out.pool_losses[row, p] = 0.0
        out.pool_bank_margin[row, p] = bank if bank < np.inf else np.nan
        out.pool_lining_margin[row, p] = lining if lining < np.inf else np.nan


@kernel
def _total_at(at, h, total, start, middle, end):
    """A running total at a fraction of the step, consistent with the stored volumes there."""
    inner = total + DIAGONAL * h * (start + middle)
    last = total + h * (WEIGHT * (start + middle) + DIAGONAL * end)
    return _quadratic(at, total, inner, last)


@kernel
def _fill_offtakes(tables, before, middle, after, totals, out, row, h, at, now):
    """Returns the volume delivered by all offtakes [m³]."""
    first_demand = FORCING_GATES + tables.gates.apron_end.size
    delivered = 0.0
    for k in range(before.delivery.size):
        out.demand[row, k] = now[first_demand + k]
        out.delivery[row, k] = _quadratic(at, before.delivery[k], middle.delivery[k], after.delivery[k])
        volume = _total_at(at, h, totals.delivery[k], before.delivery[k], middle.delivery[k], after.delivery[k])
        out.delivery_volume[row, k] = volume
        delivered += volume
    return delivered


@kernel
def _fill_canal(tables, before, middle, after, totals, watch, rows, row, h, at, delivered):
    out, last = rows.canal, canal_outflow_link(tables)
    inflow = _total_at(at, h, totals.inflow[0], before.discharge[0], middle.discharge[0], after.discharge[0])
    outflow = _total_at(at, h, totals.outflow[0], before.discharge[last], middle.discharge[last], after.discharge[last])
    storage = 0.0
    for p in range(tables.pools.first_node.size):
        storage += rows.pools.pool_volume[row, p]
    out.canal_inflow[row] = watch.link_discharge[0]
    out.canal_outflow[row] = watch.link_discharge[last]
    out.canal_inflow_volume[row] = inflow
    out.canal_outflow_volume[row] = outflow
    out.canal_storage[row] = storage
    out.balance_residual[row] = inflow - outflow - delivered - (storage - watch.start_storage[0])


@kernel
def fill_profile(tables, before, middle, after, watch, rows, time_ms, h, at, now):
    """Fill the next row of the long profile."""
    row = rows.filled[1]
    rows.filled[1] += 1
    rows.profile_time[row] = time_ms
    _levels_at(tables, before, after, h, at, now, watch.level)
    out = rows.profiles
    for node in range(out.water_level.shape[1]):
        above = _quadratic(at, before.discharge[node], middle.discharge[node], after.discharge[node])
        below = _quadratic(at, before.discharge[node + 1], middle.discharge[node + 1], after.discharge[node + 1])
        bed = tables.channel.bed_level[node]
        area = geometry(tables.channel.shapes[tables.channel.shape[node]], watch.level[node] - bed)[0]
        out.water_level[row, node] = max(watch.level[node], bed)
        out.discharge[row, node] = 0.5 * (above + below)
        out.velocity[row, node] = 0.5 * (above + below) / area if watch.level[node] > bed + DRY_DEPTH else 0.0
