"""Spells: unbroken times during which a condition holds at one place, with interpolated beginnings and ends."""

from dataclasses import dataclass

import numpy as np

Times = np.ndarray
"""datetime64, increasing."""


@dataclass(frozen=True)
class Spell:
    """Rows `first` to `last` fulfil the condition; it held from `start` to `end`, or to the end of the run."""

    first: int
    last: int
    start: np.datetime64
    end: np.datetime64
    runs_to_end: bool

    @property
    def rows(self) -> slice:
        """The rows of the spell, to cut them from any series."""
        return slice(self.first, self.last + 1)


def spells(holds: np.ndarray, times: Times, margin: np.ndarray | None = None) -> list[Spell]:
    """All spells of the boolean series `holds`, in time order.

    `margin` is a continuous series that is negative while the condition holds. Where it is finite and changes its sign
    over the step, its zero crossing is the beginning or end; elsewhere the first row at which the change is seen is.
    """
    steps = np.diff(np.concatenate(([0], np.asarray(holds, dtype=np.int8), [0])))
    firsts, afters = np.flatnonzero(steps == 1), np.flatnonzero(steps == -1)
    return [_spell(int(first), int(after), times, margin) for first, after in zip(firsts, afters, strict=True)]


def _spell(first: int, after: int, times: Times, margin: np.ndarray | None) -> Spell:
    runs_to_end = after == len(times)
    start = _change(first, times, margin)
    end = times[-1] if runs_to_end else _change(after, times, margin)
    return Spell(first, after - 1, start, end, runs_to_end)


def _change(row: int, times: Times, margin: np.ndarray | None) -> np.datetime64:
    """When the condition changed between the row before and this one."""
    if row == 0 or margin is None:
        return times[row]
    before, now = float(margin[row - 1]), float(margin[row])
    crosses = np.isfinite(before) and np.isfinite(now) and (before < 0) != (now < 0)
    if not crosses:
        return times[row]
    share = before / (before - now)
    return times[row - 1] + np.timedelta64(round(share * _nanoseconds(times[row] - times[row - 1])), "ns")


def _nanoseconds(duration: np.timedelta64) -> int:
    return int(duration / np.timedelta64(1, "ns"))
