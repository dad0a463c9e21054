"""What a change leaves behind for a while: surge bounds beside the gates, and pools that settle."""

from collections.abc import Sequence

import numpy as np

from toeline.engine.gate_motion import GateMotion
from toeline.engine.output import Watch
from toeline.engine.settling import LEAST_CHANGE, unsettle_by_forcing, unsettle_by_move, unsettle_by_roughness
from toeline.engine.state import State
from toeline.network.tables import FORCING_GATES, Network

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
        if changed.any():
            openings = self._gate_openings(before[self._leaves])
            unsettle_by_forcing(
                self.network.tables, self.state, self.watch, before, now, openings, time, self.length + 1
            )

    def note_roughness(self, time: int, ratio: np.ndarray, leaf_openings: np.ndarray) -> None:
        """Pools that a change of the roughness, new over old by pool, leaves settling."""
        for pool in np.flatnonzero(np.abs(ratio - 1.0) > LEAST_ROUGHENING).tolist():
            unsettle_by_roughness(
                self.network.tables, self.state, self.watch, pool, float(ratio[pool]),
                self._gate_openings(leaf_openings), time, self.length + 1,
            )  # fmt: skip

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

    def _gate_openings(self, leaf_openings: np.ndarray) -> np.ndarray:
        """Mean opening of every gate [m]."""
        return np.array([leaf_openings[self.network.leaves_of(g)].mean() for g in range(self.network.gate_count)])


def _seconds_left(until: np.ndarray, time: int) -> np.ndarray:
    return np.maximum(until - time, 0) / 1000.0
