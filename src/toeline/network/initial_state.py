"""The steady state that a day starts from, found pool by pool from the tail up."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from toeline.errors import UsageError
from toeline.hydraulics import status
from toeline.hydraulics.canal_tail import rating_level
from toeline.hydraulics.critical_flow import critical_depth
from toeline.hydraulics.gradually_varied_flow import upstream_level
from toeline.hydraulics.offtake import offtake_discharge
from toeline.hydraulics.underflow_gate import gate_discharge, opening_for_discharge
from toeline.hydraulics.uniform_flow import conveyance, normal_depth
from toeline.hydraulics.water_losses import loss_per_length
from toeline.hydraulics.weir import side_weir_discharge
from toeline.network.tables import FREE_OVERFALL, GATE, HEAD, RATING, TAIL_LEVEL, Network

PASSES = 200
DISCHARGE_AGREES = 1e-12
"""Relative error of the inflow that ends the search."""

DISCHARGE_IS_ROUNDED = 1e-9
"""Relative error of the inflow that may be left where the bounds of the search have closed: gates in a row magnify the
rounding of levels.
"""

TAIL_PASSES = 20
"""Passes for the level a metre above the tail, by the mean conveyance that the time loop takes there."""

DEEPEST = 50.0
"""Height [m] over a gate's sill up to which its headwater is looked for."""


class DeliveriesExceedInflowError(UsageError):
    """No steady state: more is asked than comes in."""


SupplyOf = Callable[[float], float]
"""What enters the canal [m³/s] at a level of its first node [m]."""

HeadwaterOf = Callable[[int, float, float], float]
"""Level above a gate [m] from its index, its discharge and the level below."""


@dataclass(frozen=True)
class Start:
    """Levels by node [m], discharges by link [m³/s] and openings of the leaves [m] of the steady state."""

    level: np.ndarray
    discharge: np.ndarray
    opening: np.ndarray


@dataclass(frozen=True)
class Demands:
    """What the offtakes ask and how far their orifices are open at the start, by offtake [m³/s, m]; evaporation less
    rain [m/s].
    """

    discharge: np.ndarray
    opening: np.ndarray
    surface_rate: float


def dry_state(network: Network, openings: np.ndarray) -> Start:
    """An empty canal: every level well below its bed, nothing flows."""
    level = network.channel.nodes.bed_level[: network.node_count] - 0.1
    return Start(level, np.zeros(network.node_count + 1), openings)


def steady_at_targets(
    network: Network, inflow: float, tail_level: float, head_level: float, demands: Demands, largest: Sequence[float]
) -> Start:
    """Steady state with every pool at its target level; `largest` are the widest openings [m].

    Raises UsageError where a pool has no target, a gate cannot pass its share, or the flow would not be calm.
    """
    names, tables = network.names, network.tables
    held = np.isin(tables.pools.last_node, tables.gates.upstream_node)
    missing = [
        name for name, z, is_held in zip(names.pools, names.target_level, held, strict=True) if is_held and np.isnan(z)
    ]
    if missing:
        raise UsageError(f'openings "to hold targets": no target_level given for {", ".join(missing)}')
    search = _Search(network, tail_level, demands)
    level, discharge = search.settle(lambda _: inflow, lambda g, q, down: names.target_level[_pool_above(network, g)])
    openings = np.array(
        [search.opening(g, level, discharge, head_level, largest[g]) for g in tables.leaves.gate.tolist()]
    )
    return Start(level, discharge, openings)


def steady_at_openings(
    network: Network, inflow: float, tail_level: float, demands: Demands, openings: np.ndarray
) -> Start:
    """Steady state for an inflow and given openings of the leaves [m]; raises UsageError where a gate cannot pass its
    share.
    """
    search = _Search(network, tail_level, demands)
    level, discharge = search.settle(lambda _: inflow, lambda g, q, down: search.headwater(g, q, down, openings))
    return Start(level, discharge, np.asarray(openings, float))


def steady_under_reservoir(
    network: Network, head_level: float, tail_level: float, demands: Demands, openings: np.ndarray
) -> Start:
    """Steady state below a reservoir with given openings: the inflow at which the head gate's headwater is the
    reservoir's.
    """
    search = _Search(network, tail_level, demands)
    level, discharge = search.settle(
        lambda down: search.passed(0, head_level, down, openings),
        lambda g, q, down: search.headwater(g, q, down, openings),
    )
    return Start(level, discharge, np.asarray(openings, float))


def _between(below: tuple[float, float], above: tuple[float, float], *, is_halved: bool) -> float:
    """A discharge between two, each with its excess: where their chord is zero, or half-way; above the one where there
    is no other.
    """
    (low, excess_low), (high, excess_high) = below, above
    if math.isinf(high):
        return low - 1.5 * excess_low
    if is_halved or math.isinf(excess_low) or math.isinf(excess_high):
        return 0.5 * (low + high)
    return low - excess_low * (high - low) / (excess_high - excess_low)


def _pool_above(network: Network, g: int) -> int:
    return int(network.pool_of(network.tables.gates.upstream_node[g]))


class _Search:
    """One canal under one tail level and one set of demands."""

    def __init__(self, network: Network, tail_level: float, demands: Demands):
        self.network, self.tail_level, self.demands = network, tail_level, demands
        self.outlets = {*network.tables.offtakes.node.tolist(), *network.tables.escapes.node.tolist()}
        self.is_losing = demands.surface_rate != 0.0 or bool(network.tables.pools.seeps.any())

    def settle(self, supply_of: SupplyOf, headwater_of: HeadwaterOf) -> tuple[np.ndarray, np.ndarray]:
        """Levels and discharges that agree with what leaves the canal at those levels.

        From a discharge at the tail, levels and what leaves there follow upward node by node; the inflow that this
        needs rises with the discharge at the tail, which is looked for between bounds.
        """
        below, above = (0.0, self._excess_of_nothing(supply_of, headwater_of)), (math.inf, math.inf)
        outflow, agrees, failure = max(-below[1], 0.0), DISCHARGE_AGREES, None
        for k in range(PASSES):
            try:
                level, discharge = self._upward(outflow, headwater_of)
                supply = supply_of(level[0])
                excess, agrees = discharge[0] - supply, DISCHARGE_AGREES * (1.0 + supply)
            except UsageError as error:
                failure, excess = failure or error, math.inf
            if abs(excess) <= agrees:
                return level, discharge
            below, above = ((outflow, excess), above) if excess < 0.0 else (below, (outflow, excess))
            if above[0] - below[0] <= agrees:
                if abs(excess) <= DISCHARGE_IS_ROUNDED * (1.0 + outflow):
                    return level, discharge
                break
            outflow = _between(below, above, is_halved=k % 3 == 2)
        raise failure or UsageError(
            "no steady state found: what leaves the canal does not settle; give openings or another start"
        )

    def _excess_of_nothing(self, supply_of: SupplyOf, headwater_of: HeadwaterOf) -> float:
        """What leaves the canal less what enters it with nothing left at the tail, negative [m³/s].

        Raises DeliveriesExceedInflowError where it is not.
        """
        level, discharge = self._upward(0.0, headwater_of)
        supply = supply_of(level[0])
        excess = discharge[0] - supply
        if excess > 1e-9:
            left = discharge - excess
            pool = int(self.network.pool_of(np.argmax(left < -1e-9) - 1))
            name = self.network.names.pools[min(pool, self.network.pool_count - 1)]
            raise DeliveriesExceedInflowError(
                f"no steady state: the deliveries down to {name}, with losses and escapes, exceed the inflow of "
                f"{supply:.3f} m3/s"
            )
        return min(float(excess), 0.0)

    def _upward(self, outflow: float, headwater_of: HeadwaterOf) -> tuple[np.ndarray, np.ndarray]:
        """Levels and discharges from a discharge at the tail up: a boundary, a gate or a reach at a time."""
        network, links = self.network, self.network.tables.links
        count = network.node_count
        level, discharge = np.full(count, np.nan), np.full(count + 1, outflow)
        for node in range(count - 1, -1, -1):
            link, q = node + 1, max(discharge[node + 1], 0.0)
            kind = links.kind[link]
            if kind == GATE:
                below = self.tail_level if link == count else level[link]
                level[node] = headwater_of(links.gate[link], q, below)
            elif link == count:
                level[node] = self._tail(kind, node, q)
            else:
                level[node] = self._upstream(node, level[link], q)
            discharge[node] = discharge[node + 1] + self._leaving(node, level[node])
        return level, discharge

    def _leaving(self, node: int, level: float) -> float:
        """What leaves a node at a level [m³/s]: losses, deliveries and escapes."""
        tables, here = self.network.tables, self.network.channel.nodes[node]
        leaving = 0.0
        if self.is_losing and node < self.network.canal_node_count:
            section, cell = self.network.channel.shapes[here.section], tables.cells[node]
            lost, _ = loss_per_length(section, level - here.bed_level, cell.seepage, self.demands.surface_rate)
            leaving = cell.length * lost
        if node not in self.outlets:
            return leaving
        for k in np.flatnonzero(tables.offtakes.node == node).tolist():
            leaving += self._delivery(k, level)
        for weir in tables.escapes[tables.escapes.node == node]:
            leaving += side_weir_discharge(
                weir.coefficient, weir.length, weir.crest_level, level, weir.outside_level
            )  # fmt: skip
        return leaving

    def _delivery(self, k: int, level: float) -> float:
        takes = self.network.tables.offtakes
        return offtake_discharge(
            takes.kind[k], self.demands.discharge[k], takes.sill_level[k], takes.width[k], self.demands.opening[k],
            takes.coefficient[k], level,
        )  # fmt: skip

    def _upstream(self, node: int, below: float, q: float) -> float:
        if q == 0.0:
            return max(below, self.network.channel.nodes.bed_level[node])
        links = self.network.tables.links
        is_brink = node == self.network.node_count - 2 and links.kind[node + 2] == FREE_OVERFALL
        z, flag = upstream_level(self.network.channel, node, below, q, links.point_loss[node + 1], not is_brink)
        if flag != status.OK:
            pool = int(self.network.pool_of(node))
            at = self.network.channel.nodes.chainage[node]
            raise UsageError(
                f"no calm steady flow of {q:.3f} m3/s in {self.network.names.pools[pool]} at chainage {at:.0f} m: "
                "the level below is too low for it (critical flow)"
            )
        return z

    def _tail(self, kind: int, node: int, q: float) -> float:
        channel, tables = self.network.channel, self.network.tables
        here = channel.nodes[node]
        section, bed, n = channel.shapes[here.section], here.bed_level, here.roughness
        if kind == TAIL_LEVEL:
            z = self.tail_level
            for _ in range(TAIL_PASSES):
                k = 0.5 * (conveyance(section, n, z - bed) + conveyance(section, n, self.tail_level - bed))
                z = self.tail_level + (q / k) ** 2 if k > 0.0 else self.tail_level
            return z
        if kind == RATING:
            return rating_level(tables.tail_rating[0], tables.tail_rating[1], q)
        if kind == FREE_OVERFALL:
            return bed + critical_depth(section, q)[0]
        return bed + normal_depth(section, n, tables.tail_slope[0], q)[0]

    def passed(self, g: int, up: float, down: float, openings: np.ndarray) -> float:
        """Discharge of a gate [m³/s] with the openings of all leaves [m]."""
        law, above, beside = self.network.gate_law(g)
        leaves = self.network.leaves_of(g)
        return sum(gate_discharge(law, above, beside, up, down, openings[leaf]) for leaf in leaves) / len(leaves)

    def headwater(self, g: int, q: float, below: float, openings: np.ndarray) -> float:
        """Level above a gate [m] at which it passes a discharge; its sill or the level below where nothing flows."""
        low = max(below, self.network.tables.gates.sill_level[g])
        if q <= 1e-12:
            return low
        high = low + DEEPEST
        if self.passed(g, high, below, openings) < q:
            mean = np.mean(openings[self.network.leaves_of(g)])
            raise UsageError(
                f"no steady state: {self.network.names.gates[g]} at an opening of {mean:.3f} m "
                f"would have to pass {q:.3f} m3/s; open it further or start otherwise"
            )
        for _ in range(80):
            middle = 0.5 * (low + high)
            low, high = (low, middle) if self.passed(g, middle, below, openings) > q else (middle, high)
        return 0.5 * (low + high)

    def opening(self, g: int, level: np.ndarray, discharge: np.ndarray, head_level: float, largest: float) -> float:
        """Opening [m] at which a gate passes its discharge at the levels beside it."""
        gates = self.network.tables.gates
        up = head_level if gates.upstream_node[g] == HEAD else level[gates.upstream_node[g]]
        link = int(np.flatnonzero(self.network.tables.links.gate == g)[0])
        down = self.tail_level if link == self.network.node_count else level[link]
        q = discharge[link]
        if q <= 1e-12:
            return 0.0
        law, above, beside = self.network.gate_law(g)
        found, passed = opening_for_discharge(law, above, beside, up, down, q, largest)
        if abs(passed - q) > 1e-6 * (1.0 + q):
            how = "fully open" if found > 0.0 else "closed"
            raise UsageError(
                f"no steady state at the target levels: {self.network.names.gates[g]} passes {passed:.3f} m3/s "
                f"{how} at {found:.2f} m, asked {q:.3f} m3/s (headwater {up:.2f} m, tailwater {down:.2f} m)"
            )
        return found
