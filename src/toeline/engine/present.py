"""The canal as a rule sees it: what is known of it before the day, and its state at a stop."""

from dataclasses import replace

import numpy as np

from toeline.engine.gate_link import law_of
from toeline.engine.gate_motion import GateMotion
from toeline.engine.state import State
from toeline.hydraulics.underflow_gate import gate_discharge, opening_for_discharge
from toeline.network.lead_times import pool_times
from toeline.network.tables import FORCING_HEAD, FORCING_TAIL, HEAD, Network
from toeline.network.timetable import Timetable
from toeline.rules.base import CanalFacts


def facts_at_start(network: Network, canal: CanalFacts, state: State) -> CanalFacts:
    """What a state makes of the pools of a canal; see `PoolFacts`."""
    times = pool_times(network, state.nodes.level, state.links.discharge)
    pools = {
        name: replace(
            pool,
            lead_times={"wave": float(times.wave[p]), "volume": float(times.volume[p])},
            backed_up_area=float(times.area[p]),
            wave_admittance=float(times.admittance[p]),
        )
        for p, (name, pool) in enumerate(canal.pools.items())
    }
    return replace(canal, pools=pools)


class PresentCanal:
    """The state of the canal at the last stop; see `rules.base.Present`. It holds views of arrays that are changed in
    place: reading them by name at every decision would cost more than the rules.
    """

    def __init__(
        self, network: Network, timetable: Timetable, state: State, forcing: np.recarray,
        leaves: dict[str, list[GateMotion]],
    ):  # fmt: skip
        """`leaves` are those of every gate by its name; of several the rules see the mean opening."""
        self.state, self.leaves = state, leaves
        self._level, self._volume = state.nodes["level"], state.nodes["volume"]
        self._discharge, self._forcing = state.links["discharge"], forcing["value"]
        names, gates, shapes = network.names, network.tables.gates, network.channel.shapes
        ends = network.tables.pools
        self._gates = {name: g for g, name in enumerate(names.gates)}
        self._ends = dict(
            zip(names.pools, zip(ends.first_node.tolist(), ends.last_node.tolist(), strict=True), strict=True)
        )
        self._node_count = network.node_count
        self._demands = {name: timetable.demand_of(k) for k, name in enumerate(names.offtakes)}
        self._laws = [(law_of(row), shapes[row.upstream_section], shapes[row.downstream_section]) for row in gates]
        self._links = [int(np.flatnonzero(network.tables.links.gate == g)[0]) for g in range(gates.size)]
        self._above, self._below = gates.upstream_node.tolist(), gates.downstream_node.tolist()
        self.time_ms = 0

    def headwater_level(self, gate: str) -> float:
        node = self._above[self._gates[gate]]
        return float(self._forcing[FORCING_HEAD] if node == HEAD else self._level[node])

    def tailwater_level(self, gate: str) -> float:
        node = self._below[self._gates[gate]]
        return float(self._forcing[FORCING_TAIL] if node >= self._node_count else self._level[node])

    def opening(self, gate: str) -> float:
        return _mean_opening(self.leaves[gate])

    def openings(self) -> list[float]:
        """Where the leaves of all gates are [m]."""
        return [_mean_opening(leaves) for leaves in self.leaves.values()]

    def ordered_opening(self, gate: str) -> float:
        leaves = self.leaves[gate]
        return leaves[0].ordered if len(leaves) == 1 else sum(leaf.ordered for leaf in leaves) / len(leaves)

    def discharge(self, gate: str) -> float:
        return float(self._discharge[self._links[self._gates[gate]]])

    def discharge_at(self, gate: str, opening: float) -> float:
        law = self._laws[self._gates[gate]]
        return float(gate_discharge(*law, self.headwater_level(gate), self.tailwater_level(gate), opening))

    def opening_for(self, gate: str, discharge: float) -> float:
        g = self._gates[gate]
        largest = self.leaves[gate][0].gate.max_opening
        levels = self.headwater_level(gate), self.tailwater_level(gate)
        return float(opening_for_discharge(*self._laws[g], *levels, discharge, largest)[0])

    def head_level(self, pool: str) -> float:
        return float(self._level[self._ends[pool][0]])

    def tail_level(self, pool: str) -> float:
        return float(self._level[self._ends[pool][1]])

    def volume(self, pool: str) -> float:
        first, last = self._ends[pool]
        return float(np.sum(self._volume[first : last + 1]))

    def demand(self, offtake: str, time_ms: int) -> float:
        return self._demands[offtake].at(time_ms)


def _mean_opening(leaves: list[GateMotion]) -> float:
    return leaves[0].opening if len(leaves) == 1 else sum(leaf.opening for leaf in leaves) / len(leaves)
