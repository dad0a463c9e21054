"""The steady state that a day starts from, found pool by pool from the tail up."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from toeline.errors import UsageError
from toeline.hydraulics import status
from toeline.hydraulics.canal_tail import rating_level
from toeline.hydraulics.critical_flow import critical_depth
from toeline.hydraulics.gradually_varied_flow import upstream_level
from toeline.hydraulics.offtake import offtake_discharge
from toeline.hydraulics.underflow_gate import UnderflowGate, gate_discharge, opening_for_discharge
from toeline.hydraulics.uniform_flow import conveyance, normal_depth
from toeline.network.tables import FREE_OVERFALL, GATE, HEAD, RATING, TAIL_LEVEL, Network

PASSES = 200
DISCHARGE_AGREES = 1e-12
"""Relative change of the deliveries from one pass to the next that ends the search."""

TAIL_PASSES = 20
"""Passes for the level a metre above the tail, by the mean conveyance that the time loop takes there."""

DEEPEST = 50.0
"""Height [m] over a gate's sill up to which its headwater is looked for."""


class DeliveriesExceedInflowError(UsageError):
    """No steady state: more is asked than comes in."""


HeadwaterOf = Callable[[int, float, float], float]
"""Level above a gate [m] from its index, its discharge and the level below."""


@dataclass(frozen=True)
class Start:
    """Levels by node [m], discharges by link [m³/s] and gate openings [m] of the steady state."""

    level: np.ndarray
    discharge: np.ndarray
    opening: np.ndarray


@dataclass(frozen=True)
class Demands:
    """What the offtakes ask and how far their orifices are open at the start, by offtake [m³/s, m]."""

    discharge: np.ndarray
    opening: np.ndarray


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
    level, discharge = search.settle(inflow, lambda g, q, down: network.names.target_level[_pool_above(network, g)])
    openings = np.array(
        [search.opening(g, level, discharge, head_level, largest[g]) for g in range(network.gate_count)]
    )
    return Start(level, discharge, openings)


def steady_at_openings(
    network: Network, inflow: float, tail_level: float, demands: Demands, openings: np.ndarray
) -> Start:
    """Steady state for an inflow and given openings; raises UsageError where a gate cannot pass its share."""
    search = _Search(network, tail_level, demands)
    level, discharge = search.settle(inflow, lambda g, q, down: search.headwater(g, q, down, openings[g]))
    return Start(level, discharge, np.asarray(openings, float))


def steady_under_reservoir(
    network: Network, head_level: float, tail_level: float, demands: Demands, openings: np.ndarray
) -> Start:
    """Steady state below a reservoir with given openings: the inflow at which the head gate's headwater is the
    reservoir's.
    """
    search = _Search(network, tail_level, demands)
    largest = search.passed(0, head_level, network.tables.gates.sill_level[0] - 1.0, openings[0])

    def is_too_much(inflow: float) -> bool:
        try:
            level, _ = search.settle(inflow, lambda g, q, down: search.headwater(g, q, down, openings[g]))
        except DeliveriesExceedInflowError:
            return False
        except UsageError:
            return True
        return inflow > search.passed(0, head_level, level[0], openings[0])

    low, high = 0.0, largest
    for _ in range(80):
        middle = 0.5 * (low + high)
        low, high = (low, middle) if is_too_much(middle) else (middle, high)
    return steady_at_openings(network, 0.5 * (low + high), tail_level, demands, openings)


def _pool_above(network: Network, g: int) -> int:
    return int(np.searchsorted(network.tables.pools.last_node, network.tables.gates.upstream_node[g]))


class _Search:
    """One canal under one tail level and one set of demands."""

    def __init__(self, network: Network, tail_level: float, demands: Demands):
        self.network, self.tail_level, self.demands = network, tail_level, demands

    def settle(self, inflow: float, headwater_of: HeadwaterOf) -> tuple[np.ndarray, np.ndarray]:
        """Levels and discharges that agree with the deliveries that they give."""
        network = self.network
        taken = self.demands.discharge.copy()
        for _ in range(PASSES):
            discharge = self._discharges(inflow, taken)
            level = self._levels(discharge, headwater_of)
            given = np.array([self._delivery(k, level) for k in range(network.offtake_count)])
            if np.all(np.abs(given - taken) <= DISCHARGE_AGREES * (1.0 + abs(inflow))):
                return level, discharge
            taken = given
        raise UsageError("no steady state found: the deliveries do not settle; give openings or another start")

    def _discharges(self, inflow: float, taken: np.ndarray) -> np.ndarray:
        network = self.network
        drawn = np.zeros(network.node_count)
        np.add.at(drawn, network.tables.offtakes.node, taken)
        discharge = inflow - np.concatenate(([0.0], np.cumsum(drawn)))
        short = discharge < -1e-9
        if short.any():
            pool = int(np.searchsorted(network.tables.pools.last_node, np.argmax(short) - 1))
            name = network.names.pools[min(pool, len(network.names.pools) - 1)]
            raise DeliveriesExceedInflowError(
                f"no steady state: the deliveries down to {name} exceed the inflow of {inflow:.3f} m3/s"
            )
        return np.maximum(discharge, 0.0)

    def _delivery(self, k: int, level: np.ndarray) -> float:
        takes = self.network.tables.offtakes
        return offtake_discharge(
            takes.kind[k], self.demands.discharge[k], takes.sill_level[k], takes.width[k], self.demands.opening[k],
            takes.coefficient[k], level[takes.node[k]],
        )  # fmt: skip

    def _levels(self, discharge: np.ndarray, headwater_of: HeadwaterOf) -> np.ndarray:
        """Levels from the tail up: a boundary, a gate or a reach at a time."""
        network, links = self.network, self.network.tables.links
        level = np.full(network.node_count, np.nan)
        for node in range(network.node_count - 1, -1, -1):
            link, q = node + 1, discharge[node + 1]
            kind = links.kind[link]
            if kind == GATE:
                below = self.tail_level if link == network.node_count else level[link]
                level[node] = headwater_of(links.gate[link], q, below)
            elif link == network.node_count:
                level[node] = self._tail(kind, node, q)
            else:
                level[node] = self._upstream(node, level[link], q)
        return level

    def _upstream(self, node: int, below: float, q: float) -> float:
        if q == 0.0:
            return max(below, self.network.channel.nodes.bed_level[node])
        links = self.network.tables.links
        is_brink = node == self.network.node_count - 2 and links.kind[node + 2] == FREE_OVERFALL
        z, flag = upstream_level(self.network.channel, node, below, q, links.point_loss[node + 1], not is_brink)
        if flag != status.OK:
            pool = int(np.searchsorted(self.network.tables.pools.last_node, node))
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

    def _law(self, g: int) -> tuple[UnderflowGate, np.ndarray, np.ndarray]:
        row, shapes = self.network.tables.gates[g], self.network.channel.shapes
        law = UnderflowGate(*(float(row[name]) for name in UnderflowGate._fields))
        return law, shapes[row.upstream_section], shapes[row.downstream_section]

    def passed(self, g: int, up: float, down: float, opening: float) -> float:
        """Discharge of a gate [m³/s]."""
        law, above, beside = self._law(g)
        return gate_discharge(law, above, beside, up, down, opening)

    def headwater(self, g: int, q: float, below: float, opening: float) -> float:
        """Level above a gate [m] at which it passes a discharge; its sill or the level below where nothing flows."""
        low = max(below, self.network.tables.gates.sill_level[g])
        if q <= 1e-12:
            return low
        high = low + DEEPEST
        if self.passed(g, high, below, opening) < q:
            raise UsageError(
                f"no steady state: {self.network.names.gates[g]} at an opening of {opening:.3f} m "
                f"would have to pass {q:.3f} m3/s; open it further or start otherwise"
            )
        for _ in range(80):
            middle = 0.5 * (low + high)
            low, high = (low, middle) if self.passed(g, middle, below, opening) > q else (middle, high)
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
        law, above, beside = self._law(g)
        found, passed = opening_for_discharge(law, above, beside, up, down, q, largest)
        if abs(passed - q) > 1e-6 * (1.0 + q):
            raise UsageError(
                f"no steady state at the target levels: {self.network.names.gates[g]} passes {passed:.3f} m3/s "
                f"fully open at {largest:.2f} m, asked {q:.3f} m3/s (headwater {up:.2f} m, tailwater {down:.2f} m)"
            )
        return found
