"""What a change leaves behind for a while: surge bounds beside the gates, and pools that settle."""

import math
from collections.abc import Sequence

import numpy as np

from toeline.engine.gate_motion import GateMotion
from toeline.engine.output import Watch
from toeline.engine.settling import passed_share, pool_admittances, round_trip, surge_bounds
from toeline.engine.state import State
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL, TAIL_LEVEL, Network

LEAST_CHANGE = 1e-9
"""Change of a discharge [m³/s] below which nothing is said to settle."""

LEAST_ROUGHENING = 0.01
"""Relative change of Manning's n at once from which a pool is said to settle (choice)."""

LEAST_PASSED = 0.01
"""Height [m] from which a wave counts that goes on through a gate into the pool beyond: what a gauge is read to
(choice).
"""

SIDES = {"upstream": UPSTREAM, "downstream": DOWNSTREAM}
"""Sides of a gate, and the way on which its waves leave it there."""


class Unrest:
    """Keeps the surge bounds and settling times in `watch`, which the output reads; times in ms of the period."""

    def __init__(self, network: Network, state: State, watch: Watch, length: int):
        self.network, self.state, self.watch, self.length = network, state, watch, length

    def note_move(
        self, time: int, g: int, up: float, down: float, opening: float, motion: GateMotion, openings: Sequence[float]
    ) -> None:
        """Surge bounds of a move of a leaf of gate `g` from `opening` [m] at the levels beside it, and until when the
        pools settle; `openings` [m] are those of all gates.
        """
        tables = self.network.tables
        before = self.state.links.discharge[np.flatnonzero(tables.links.gate == g)[0]]
        up_height, down_height, change = surge_bounds(
            tables.channel.shapes, tables.gates[g], up, down, before, opening, motion.target
        )
        if abs(change) < LEAST_CHANGE:
            return
        for side, height in zip(SIDES, (up_height, down_height), strict=True):
            pool, gates = self._pool_beside(g, side), self.watch.gates
            if pool is None:
                continue
            running = gates[f"surge_{side}"][g] if gates[f"surge_{side}_until"][g] > time else 0.0
            moved = max(motion.until, time)
            settled = self._settled_after(pool, moved)
            gates[f"surge_{side}"][g] = running + height if running * height >= 0.0 else max(running, height, key=abs)
            gates[f"surge_{side}_until"][g] = settled
            self._unsettle(pool, settled)
            self._unsettle_beyond(g, pool, side, height, moved, openings)

    def note_changes(self, time: int, before: np.ndarray, now: np.ndarray) -> None:
        """Pools that a change of inflow, of the tail level or of a delivery leaves settling."""
        changed = np.abs(now - before) > LEAST_CHANGE
        network, tables = self.network, self.network.tables
        first = FORCING_GATES + network.leaf_count
        pools = set()
        if changed[FORCING_HEAD] and tables.links.gate[0] < 0:
            pools.add(0)
        if changed[FORCING_TAIL] and tables.links.kind[-1] == TAIL_LEVEL:
            pools.add(len(network.names.pools) - 1)
        for k, node in enumerate(tables.offtakes.node):
            if changed[first + k] or changed[first + network.offtake_count + k]:
                pools.add(int(np.searchsorted(tables.pools.last_node, node)))
        for pool in pools:
            self._unsettle(pool, self._settled_after(pool, time))

    def note_roughness(self, time: int, ratio: np.ndarray) -> None:
        """Pools that a change of the roughness, new over old by pool, leaves settling."""
        for pool in np.flatnonzero(np.abs(ratio - 1.0) > LEAST_ROUGHENING).tolist():
            self._unsettle(pool, self._settled_after(pool, time))

    def end_state(self, time: int) -> dict[str, np.ndarray]:
        """What still runs at a time, by variable name."""
        gates = self.watch.gates
        return {
            **{f"end_surge_{side}": gates[f"surge_{side}"].copy() for side in SIDES},
            **{f"end_surge_{side}_remaining": _seconds_left(gates[f"surge_{side}_until"], time) for side in SIDES},
            "end_settling_remaining": _seconds_left(self.watch.settled_at, time),
        }

    def take_over(self, end: dict[str, np.ndarray]) -> None:
        """Go on from the end state of the run before."""
        for side in SIDES:
            self.watch.gates[f"surge_{side}"] = end[f"end_surge_{side}"]
            self.watch.gates[f"surge_{side}_until"] = np.round(end[f"end_surge_{side}_remaining"] * 1000.0)
        self.watch.settled_at[:] = np.round(end["end_settling_remaining"] * 1000.0)

    def _unsettle_beyond(
        self, g: int, pool: int, side: str, height: float, moved: int, openings: Sequence[float]
    ) -> None:
        """Pools that a wave from gate `g` reaches through the gates beyond `pool`: they and those on the way settle
        until it has run down and back through all of them.
        """
        reached, way = [pool], 1 if side == "downstream" else -1
        while 0 <= (g := g + way) < self.network.gate_count:
            beyond = self._pool_beside(g, side)
            if beyond is None or not math.isfinite(self._round_trip(beyond)):
                break
            height *= self._passed_share(g, side, openings[g])
            if abs(height) < LEAST_PASSED:
                break
            reached.append(beyond)
        if len(reached) > 1 and math.isfinite(seconds := sum(map(self._round_trip, reached))):
            for one in reached:
                self._unsettle(one, moved + round(1000.0 * seconds))

    def _passed_share(self, g: int, side: str, opening: float) -> float:
        """Share of a wave's height that goes on through a gate between two pools; none where one of them is dry."""
        gate, channel = self.network.tables.gates[g], self.network.channel
        levels = self.state.nodes.level[gate.upstream_node], self.state.nodes.level[gate.downstream_node]
        above, below = (
            pool_admittances(channel, self._middle(node), self.state)
            for node in (gate.upstream_node, gate.downstream_node)
        )
        if min(*above, *below) <= 0.0:
            return 0.0
        return float(passed_share(channel, gate, levels, opening, above, below, SIDES[side]))

    def _unsettle(self, pool: int, until: int) -> None:
        self.watch.settled_at[pool] = max(self.watch.settled_at[pool], until)

    def _pool_beside(self, g: int, side: str) -> int | None:
        """Index of the pool above ("upstream") or below a gate; None beyond the canal's ends."""
        node = self.network.tables.gates[f"{side}_node"][g]
        if node < 0 or node >= self.network.canal_node_count:
            return None
        return int(np.searchsorted(self.network.tables.pools.last_node, node))

    def _middle(self, node: int) -> int:
        """The node in the middle of the pool of a node."""
        pools = self.network.tables.pools
        ends = pools[np.searchsorted(pools.last_node, node)]
        return int(ends.first_node + ends.last_node) // 2

    def _round_trip(self, pool: int) -> float:
        ends = self.network.tables.pools[pool]
        return float(round_trip(self.network.channel, ends.first_node, ends.last_node, self.state))

    def _settled_after(self, pool: int, time: int) -> int:
        seconds = self._round_trip(pool)
        return time + round(1000.0 * seconds) if math.isfinite(seconds) else self.length + 1


def _seconds_left(until: np.ndarray, time: int) -> np.ndarray:
    return np.maximum(until - time, 0) / 1000.0
