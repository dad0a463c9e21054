"""Rows between the time loop and the file: all of them around events, every so many minutes elsewhere."""

from collections.abc import Mapping
from typing import Protocol

import numpy as np

from toeline.results.variables import growing

_TIMES = {variable.name for variable in growing("time")}
_STATES = ("gate_opening", "bay_opening", "gate_flow_state", "jump_state")
"""A row in which one of these is not as it was in the row before is an event."""
_MARGINS = ("pool_bank_margin", "pool_lining_margin")
"""And so is one in which one of these [m] changes its sign,"""
_SPILLS = ("escape_discharge",)
"""or one of these [m³/s] begins or ends."""

_EVENTS = "thinning_events"
_WAITING = "thinning_"


class Sink(Protocol):
    """What takes the output of a run."""

    def write(self, block: Mapping[str, np.ndarray]) -> None:
        """Take the rows of a block."""
        ...


class Thinning:
    """Hands on the rows at multiples of `every` and those within `within` of an event [ms], before and after it.

    Events are moves of a leaf, changes of the state of a gate's flow or of its jump, water that passes a bank, a
    lining or the crest of an escape. The first and the last row are always handed on.
    """

    def __init__(self, sink: Sink, every: int, within: int):
        self._sink, self._every, self._within = sink, every, within
        self._waiting: dict[str, np.ndarray] = {}
        self._events = np.empty(0, np.int64)

    def write(self, block: Mapping[str, np.ndarray]) -> None:
        """Take the rows of a block; those that an event to come could still touch wait."""
        rows = {name: block[name] for name in block if name in _TIMES}
        others = {name: block[name] for name in block if name not in _TIMES}
        if rows and len(rows["time"]):
            others |= self._passed(rows)
        self._sink.write(others)

    def finish(self) -> None:
        """Hand on what waits, the last row with it; after the last block."""
        if self._waiting:
            keeps = self._is_kept(self._waiting["time"])
            keeps[-1] = True
            self._sink.write(_chosen(self._waiting, keeps))
            self._waiting = {}

    def checkpoint(self) -> dict[str, np.ndarray]:
        """What waits, and the events that it waits for, by name."""
        return {_WAITING + name: column for name, column in self._waiting.items()} | {_EVENTS: self._events}

    def go_on_from(self, checkpoint: Mapping[str, np.ndarray]) -> None:
        """Wait as at a checkpoint."""
        self._waiting = {name: checkpoint[_WAITING + name] for name in _TIMES if _WAITING + name in checkpoint}
        self._events = checkpoint[_EVENTS]

    def _passed(self, rows: dict[str, np.ndarray]) -> dict[str, np.ndarray]:
        """Put new rows behind those that wait; take off, thinned, those so old that no event can touch them."""
        before = len(self._waiting["time"]) if self._waiting else 0
        if before:
            rows = {name: np.concatenate((self._waiting[name], column)) for name, column in rows.items()}
        times = rows["time"]
        is_event = _changes(rows)[max(before - 1, 0) :]
        self._events = np.append(self._events, times[max(before, 1) :][is_event])
        old = int(np.searchsorted(times, times[-1] - self._within))
        kept = _chosen({name: column[:old] for name, column in rows.items()}, self._is_kept(times[:old]))
        self._waiting = {name: column[old:].copy() for name, column in rows.items()}
        self._events = self._events[self._events >= self._waiting["time"][0] - self._within]
        return kept

    def _is_kept(self, times: np.ndarray) -> np.ndarray:
        """Which rows stay, by their times [ms]."""
        last = np.searchsorted(self._events, times + self._within, side="right")
        first = np.searchsorted(self._events, times - self._within)
        return (times % self._every == 0) | (last > first)


def _changes(rows: Mapping[str, np.ndarray]) -> np.ndarray:
    """Whether a row is an event, for all rows but the first."""
    changed = [np.diff(rows[name], axis=0) != 0 for name in _STATES]
    changed += [np.diff(rows[name] < 0.0, axis=0) for name in _MARGINS]
    changed += [np.diff(rows[name] > 0.0, axis=0) for name in _SPILLS]
    return np.any(np.concatenate(changed, axis=1), axis=1)


def _chosen(rows: Mapping[str, np.ndarray], keeps: np.ndarray) -> dict[str, np.ndarray]:
    return {name: column[keeps] for name, column in rows.items()}
