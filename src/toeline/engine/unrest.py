"""What a change leaves behind for a while: surge bounds beside the gates, and pools that settle."""

from collections.abc import Sequence

import numpy as np

from toeline.engine.gate_motion import GateMotion
from toeline.engine.output import Watch
from toeline.engine.settling import (
    LEAST_CHANGE,
    unsettle_by_level,
    unsettle_by_move,
    unsettle_by_source,
    unsettle_by_wave,
)
from toeline.engine.state import State
from toeline.hydraulics.offtake import offtake_discharge
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL, TAIL_LEVEL, Network

LEAST_ROUGHENING = 0.01
"""Relative change of Manning's n at once from which a pool is said to settle (choice)."""

SIDES = ("upstream", "downstream")


class Unrest:
    """Keeps the surge bounds and settling times in `watch`, which the output reads; times in ms of the period."""

    def __init__(self, network: Network, state: State, watch: Watch, length: int):
        self.network, self.state, self.watch, self.length = network, state, watch, length
        self._leaves = slice(FORCING_GATES, FORCING_GATES + network.leaf_count)

    def note_move(
        self, time: int, g: int, levels: tuple[float, float], opening: float, motion: GateMotion,
        openings: Sequence[float],
    ) -> None:  # fmt: skip
        """Surge bounds of a move of a leaf of gate `g` from `opening` [m] with the levels above and below it, and until
        when the pools settle; `openings` [m] are those of all gates.
        """
        unsettle_by_move(
            self.network.tables, self.state, self.watch, g, levels, (opening, float(motion.target)), np.array(openings),
            time, max(motion.until, time), self.length + 1,
        )  # fmt: skip

    def note_changes(self, time: int, before: np.ndarray, now: np.ndarray) -> None:
        """Pools that a leap of the forcing leaves settling: inflow, levels beyond the ends, deliveries."""
        changed = np.abs(now - before) > LEAST_CHANGE
        changed[self._leaves] = False
        if not changed.any():
            return
        links, openings = self.network.tables.links, self._gate_openings(before[self._leaves])
        if changed[FORCING_HEAD] and links.gate[0] < 0:
            self._more_comes_in(time, 0, now[FORCING_HEAD] - before[FORCING_HEAD], openings)
        elif changed[FORCING_HEAD]:
            self._level_leaps(time, 0, DOWNSTREAM, (before[FORCING_HEAD], now[FORCING_HEAD]), openings)
        if changed[FORCING_TAIL] and links.gate[-1] >= 0:
            self._level_leaps(time, links.gate[-1], UPSTREAM, (before[FORCING_TAIL], now[FORCING_TAIL]), openings)
        elif changed[FORCING_TAIL] and links.kind[-1] == TAIL_LEVEL:
            self._wave_comes_in(time, now[FORCING_TAIL] - before[FORCING_TAIL], openings)
        for k, node in enumerate(self.network.tables.offtakes.node):
            if changed[self._demands_of(k)].any():
                self._more_comes_in(time, node, self._taken(k, before) - self._taken(k, now), openings)

    def note_roughness(self, time: int, ratio: np.ndarray, leaf_openings: np.ndarray) -> None:
        """Pools that a change of the roughness, new over old by pool, leaves settling: their discharges leap by the
        inverse, beside gates that pass as much as before.
        """
        openings = self._gate_openings(leaf_openings)
        for pool in np.flatnonzero(np.abs(ratio - 1.0) > LEAST_ROUGHENING).tolist():
            ends, more = self.network.tables.pools[pool], 1.0 / ratio[pool] - 1.0
            discharge = self.state.links.discharge
            self._more_comes_in(time, ends.first_node, -more * discharge[ends.first_node + 1], openings)
            self._more_comes_in(time, ends.last_node, more * discharge[ends.last_node], openings)

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

    def _more_comes_in(self, time: int, node: int, change: float, openings: np.ndarray) -> None:
        """A change [m³/s] of what comes in at a node."""
        unsettle_by_source(
            self.network.tables, self.state, self.watch, int(node), float(change), openings, time, self.length + 1
        )  # fmt: skip

    def _level_leaps(
        self, time: int, g: int, way: float, beyond: tuple[float, float], openings: np.ndarray
    ) -> None:  # fmt: skip
        """A leap of the level beyond gate `g`, given before and after [m]; its wave goes the given `way`."""
        gate, level = self.network.tables.gates[g], self.state.nodes.level
        if way == DOWNSTREAM:
            before, after = ((height, level[gate.downstream_node]) for height in beyond)
        else:
            before, after = ((level[gate.upstream_node], height) for height in beyond)
        unsettle_by_level(
            self.network.tables, self.state, self.watch, int(g), before, after, way, openings, time, self.length + 1
        )  # fmt: skip

    def _wave_comes_in(self, time: int, rise: float, openings: np.ndarray) -> None:
        """A rise [m] of the level beyond an open end of the canal."""
        pool = self.network.pool_count - 1
        unsettle_by_wave(
            self.network.tables, self.state, self.watch, pool, UPSTREAM, float(rise), openings, time, self.length + 1
        )  # fmt: skip

    def _demands_of(self, k: int) -> list[int]:
        """Where the demand and the opening of an offtake stand in the forcing."""
        return [self._leaves.stop + k, self._leaves.stop + self.network.offtake_count + k]

    def _taken(self, k: int, forcing: np.ndarray) -> float:
        """What an offtake takes [m³/s] under a forcing, at the present level of its pool."""
        take, (demand, opening) = self.network.tables.offtakes[k], forcing[self._demands_of(k)]
        level = self.state.nodes.level[take.node]
        return float(
            offtake_discharge(take.kind, demand, take.sill_level, take.width, opening, take.coefficient, level)
        )

    def _gate_openings(self, leaf_openings: np.ndarray) -> np.ndarray:
        """Mean opening of every gate [m]."""
        return np.array([leaf_openings[self.network.leaves_of(g)].mean() for g in range(self.network.gate_count)])


def _seconds_left(until: np.ndarray, time: int) -> np.ndarray:
    return np.maximum(until - time, 0) / 1000.0
