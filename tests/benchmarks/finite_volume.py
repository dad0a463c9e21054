"""The full equations of Saint-Venant by an explicit shock-capturing finite-volume method, as what they would cost.

Cells lie between the nodes of the canal, faces at its nodes. Second order: linear in every cell with the minmod
limiter (van Leer 1979), two stages in time (Shu & Osher 1988). Flux of Harten, Lax & van Leer 1983. Levels, not depths,
are carried to the faces, where both sides see one section: level water stays level (the hydrostatic reconstruction
of Audusse et al. 2004, carried over to channels). At the ends of a pool the discharge is that of gate or inflow, and
the level follows along the characteristic that leaves the pool. All sources from memory.

Wet calm canals with an inflow at the head and gates between the pools and at the tail; no offtakes.
"""

import math
from typing import NamedTuple

import numpy as np
from numba import njit
from tests.benchmarks.canal_day import CanalDay

from toeline.constants import GRAVITY
from toeline.engine.gate_link import gate_discharge_at
from toeline.engine.state import zeros
from toeline.hydraulics.cross_section import geometry, static_moment
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL

COMPILED = {"error_model": "numpy", "_nrt": False}
COURANT = 0.8
"""Step over the time in which the fastest wave crosses a cell; stable to 1."""

CELL = np.dtype(
    [
        ("volume", float),  # m³
        ("level", float),  # m, its image
        ("discharge", float),  # m³/s
        ("volume_rate", float),  # m³/s
        ("momentum_rate", float),  # m³/s², of the discharge
        ("volume_before", float),  # at the start of the step
        ("discharge_before", float),
        ("level_slope", float),  # 1, limited
        ("discharge_slope", float),  # m²/s, limited
    ]
)
"""The water between a node and the next; the last node of a pool has none."""


class Side(NamedTuple):
    """Water on one side of a face."""

    discharge: float  # m³/s
    area: float  # m²
    width: float  # m
    moment: float  # m³
    conveyance: float  # m³/s


class FiniteVolumeCanal:
    """A day of a canal, stepped by the full equations. `cells` are the state."""

    def __init__(self, day: CanalDay):
        run = day.state_at_start()
        self.tables, self.legs = day.network.tables, day.legs()
        self.cells = zeros(day.network.node_count, CELL)
        self.passed = np.zeros(day.network.pool_count + 1)
        self.volumes_passed = np.zeros(day.network.pool_count + 1)
        self.steps = 0
        level, discharge = run.state.nodes.level, run.state.links.discharge
        self.set_water(np.append(0.5 * (level[:-1] + level[1:]), level[-1]), discharge[1:])

    def set_water(self, level: np.ndarray | float, discharge: np.ndarray | float) -> None:
        """Give all cells a level [m] and a discharge [m³/s]."""
        self.cells.level, self.cells.discharge = level, discharge
        fill_volumes(self.tables, self.cells)

    def levels(self, every: float, until: float = math.inf) -> np.ndarray:
        """Step the day to its end, or for `until` seconds; levels [m] in the cells at the multiples of `every` seconds
        before that, NaN where a pool ends and there is none.
        """
        rows = []
        for leg in self.legs:
            done, end = leg.start, min(leg.start + leg.length, until)
            while done < end:
                if done % every == 0.0:
                    rows.append(self.cells.level.copy())
                stop = min(end, (math.floor(done / every) + 1.0) * every)
                self.steps += advance(
                    self.tables, self.cells, self.passed, self.volumes_passed, leg.value, leg.rate, done - leg.start,
                    stop - leg.start,
                )  # fmt: skip
                done = stop
        levels = np.array(rows)
        levels[:, self.tables.pools.last_node] = np.nan
        return levels


@njit(**COMPILED)
def cell_storage(tables, cell, level):
    """Mean area and width [m², m] of a cell at a level."""
    above, below = tables.channel.nodes[cell], tables.channel.nodes[cell + 1]
    area_above, width_above, _, _ = geometry(tables.channel.shapes[above.section], level - above.bed_level)
    area_below, width_below, _, _ = geometry(tables.channel.shapes[below.section], level - below.bed_level)
    return 0.5 * (area_above + area_below), 0.5 * (width_above + width_below)


@njit(**COMPILED)
def cell_length(tables, cell):
    return tables.channel.nodes[cell + 1].chainage - tables.channel.nodes[cell].chainage


@njit(**COMPILED)
def fill_volumes(tables, cells):
    """Volumes of all cells from their levels."""
    for pool in tables.pools:
        for k in range(pool.first_node, pool.last_node):
            cells[k].volume = cell_length(tables, k) * cell_storage(tables, k, cells[k].level)[0]


@njit(**COMPILED)
def fill_levels(tables, cells):
    """Levels of all cells from their volumes, by Newton's method."""
    for pool in tables.pools:
        for k in range(pool.first_node, pool.last_node):
            wanted = cells[k].volume / cell_length(tables, k)
            for _ in range(20):
                area, width = cell_storage(tables, k, cells[k].level)
                change = (wanted - area) / width
                cells[k].level += change
                if abs(change) < 1e-10:
                    break


@njit(**COMPILED)
def advance(tables, cells, passed, volumes_passed, value, rate, start, end):
    """Step from `start` to `end` seconds of a leg; returns the number of steps."""
    steps, t = 0, start
    while t < end:
        h = min(longest_step(tables, cells), end - t)
        for cell in cells:
            cell.volume_before, cell.discharge_before = cell.volume, cell.discharge
        find_rates(tables, cells, passed, value, rate, t)
        for p in range(passed.size):
            volumes_passed[p] += 0.5 * h * passed[p]
        for cell in cells:
            cell.volume += h * cell.volume_rate
            cell.discharge += h * cell.momentum_rate
        fill_levels(tables, cells)
        find_rates(tables, cells, passed, value, rate, t + h)
        for p in range(passed.size):
            volumes_passed[p] += 0.5 * h * passed[p]
        for cell in cells:
            cell.volume = 0.5 * (cell.volume_before + cell.volume + h * cell.volume_rate)
            cell.discharge = 0.5 * (cell.discharge_before + cell.discharge + h * cell.momentum_rate)
        fill_levels(tables, cells)
        t = end if t + h >= end else t + h
        steps += 1
    return steps


@njit(**COMPILED)
def longest_step(tables, cells):
    """Step [s] that the fastest wave allows."""
    longest = math.inf
    for pool in tables.pools:
        for k in range(pool.first_node, pool.last_node):
            area, width = cell_storage(tables, k, cells[k].level)
            speed = abs(cells[k].discharge) / area + math.sqrt(GRAVITY * area / width)
            longest = min(longest, COURANT * cell_length(tables, k) / speed)
    return longest


@njit(**COMPILED)
def find_rates(tables, cells, passed, value, rate, t):
    """Rates of volume and discharge of all cells, and what passes inflow and gates [m³/s] at t seconds of the leg."""
    find_passed(tables, cells, passed, value, rate, t)
    for p in range(tables.pools.size):
        first, last = tables.pools[p].first_node, tables.pools[p].last_node
        find_slopes(tables, cells, first, last)
        flux, force, left = pool_head(tables, cells, first, passed[p])
        for k in range(first, last):
            cell, length = cells[k], cell_length(tables, k)
            right = side_at(tables, k + 1, level_at(cell, 0.5 * length), discharge_at(cell, 0.5 * length))
            if k + 1 == last:
                next_flux, next_force = pool_tail(tables, cell, last, right, passed[p + 1])
                next_left = right
            else:
                below = cells[k + 1]
                back = -0.5 * cell_length(tables, k + 1)
                next_left = side_at(tables, k + 1, level_at(below, back), discharge_at(below, back))
                next_flux, next_force = flux_between(right, next_left)
            area = 0.5 * (left.area + right.area)
            bed = GRAVITY * (right.moment - left.moment - area * cell.level_slope * length)
            conveyance = 0.5 * (left.conveyance + right.conveyance)
            friction = GRAVITY * area * cell.discharge * abs(cell.discharge) / (conveyance * conveyance)
            cell.volume_rate = flux - next_flux
            cell.momentum_rate = (force - next_force + bed) / length - friction
            flux, force, left = next_flux, next_force, next_left


@njit(**COMPILED)
def find_passed(tables, cells, passed, value, rate, t):
    """What comes in at the head and passes the gate at the end of every pool."""
    passed[0] = value[FORCING_HEAD] + t * rate[FORCING_HEAD]
    for p in range(tables.pools.size):
        gate = tables.gates[p]
        beyond = value[FORCING_TAIL] + t * rate[FORCING_TAIL]
        if p + 1 < tables.pools.size:
            beyond = cells[tables.pools[p + 1].first_node].level
        leaf = FORCING_GATES + gate.first_leaf
        above = cells[tables.pools[p].last_node - 1].level
        passed[p + 1] = gate_discharge_at(tables.channel.shapes, gate, above, beyond, value[leaf] + t * rate[leaf])


@njit(**COMPILED)
def find_slopes(tables, cells, first, last):
    """Limited slopes in the cells of a pool, none in the cells at its ends."""
    for k in range(first, last):
        cell = cells[k]
        cell.level_slope = cell.discharge_slope = 0.0
        if first < k < last - 1:
            above, below = cells[k - 1], cells[k + 1]
            back = 0.5 * (cell_length(tables, k - 1) + cell_length(tables, k))
            ahead = 0.5 * (cell_length(tables, k) + cell_length(tables, k + 1))
            cell.level_slope = minmod((cell.level - above.level) / back, (below.level - cell.level) / ahead)
            cell.discharge_slope = minmod(
                (cell.discharge - above.discharge) / back, (below.discharge - cell.discharge) / ahead
            )


@njit(**COMPILED)
def minmod(a, b):
    if a * b <= 0.0:
        return 0.0
    return a if abs(a) < abs(b) else b


@njit(**COMPILED)
def level_at(cell, offset):
    return cell.level + offset * cell.level_slope


@njit(**COMPILED)
def discharge_at(cell, offset):
    return cell.discharge + offset * cell.discharge_slope


@njit(**COMPILED)
def side_at(tables, node, level, discharge):
    """Water at a node with a level and a discharge."""
    site = tables.channel.nodes[node]
    section, depth = tables.channel.shapes[site.section], level - site.bed_level
    area, width, perimeter, _ = geometry(section, depth)
    conveyance = area * math.exp(math.log(area / perimeter) * (2.0 / 3.0)) / site.roughness
    return Side(discharge, area, width, static_moment(section, depth), conveyance)


@njit(**COMPILED)
def momentum_flux(side):
    """V·Q + g·M [m⁴/s²]."""
    return side.discharge * side.discharge / side.area + GRAVITY * side.moment


@njit(**COMPILED)
def flux_between(left, right):
    """Flux of volume [m³/s] and of momentum [m⁴/s²] of Harten, Lax & van Leer."""
    left_velocity, right_velocity = left.discharge / left.area, right.discharge / right.area
    left_wave = math.sqrt(GRAVITY * left.area / left.width)
    right_wave = math.sqrt(GRAVITY * right.area / right.width)
    back = min(left_velocity - left_wave, right_velocity - right_wave)
    ahead = max(left_velocity + left_wave, right_velocity + right_wave)
    if back >= 0.0:
        return left.discharge, momentum_flux(left)
    if ahead <= 0.0:
        return right.discharge, momentum_flux(right)
    spread = ahead - back
    volume = (ahead * left.discharge - back * right.discharge + ahead * back * (right.area - left.area)) / spread
    momentum = ahead * momentum_flux(left) - back * momentum_flux(right)
    return volume, (momentum + ahead * back * (right.discharge - left.discharge)) / spread


@njit(**COMPILED)
def pool_head(tables, cells, first, entering):
    """Fluxes at the upper end of a pool that a discharge enters, and the water of the first cell there."""
    cell = cells[first]
    inside = side_at(tables, first, cell.level, cell.discharge)
    speed = cell.discharge / inside.area + math.sqrt(GRAVITY * inside.area / inside.width)
    level = cell.level + (entering - cell.discharge) / (speed * inside.width)
    return entering, momentum_flux(side_at(tables, first, level, entering)), inside


@njit(**COMPILED)
def pool_tail(tables, cell, last, inside, leaving):
    """Fluxes at the lower end of a pool that a discharge leaves."""
    speed = math.sqrt(GRAVITY * inside.area / inside.width) - cell.discharge / inside.area
    level = cell.level + (cell.discharge - leaving) / (speed * inside.width)
    return leaving, momentum_flux(side_at(tables, last, level, leaving))
