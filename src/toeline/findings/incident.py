"""What an incident is, and whether the water was settling meanwhile."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import is_any, names
from toeline.findings.spells import Spell


@dataclass(frozen=True)
class Measure:
    """A further worst value of an incident, with its limit where it has one."""

    name: str
    value: float
    unit: str
    limit: float | None = None


@dataclass(frozen=True)
class Incident:
    """One incident. `worst` and `limit` are in `unit`; NaN and NaT where there is no number to give.

    `settling` says that waves of a change were still travelling in a pool beside it at some time of the incident, so
    that its levels are least trustworthy; `runs_to_end` that it still went on when the run ended. Where
    a limit holds in a rolling window, `window` is its length [s], and all three times are those at which windows end.
    """

    what: str
    where: str
    start: np.datetime64
    end: np.datetime64
    worst: float
    worst_time: np.datetime64
    limit: float
    unit: str
    source: str
    settling: bool = False
    runs_to_end: bool = False
    chainage: float | None = None
    also: tuple[Measure, ...] = ()
    window: float = 0.0


class Settling:
    """When waves of a change still travelled in each pool."""

    def __init__(self, run: xr.Dataset):
        self._times = run["time"].values
        self._is_settling = is_any(run["settling"], "settling")
        self._columns = {name: column for column, name in enumerate(names(run["pool"]))}

    def during(self, spell: Spell, *pools: str) -> bool:
        """Whether one of the pools was settling at an output step of the spell; "head" and "tail" are no pools."""
        rows = slice(np.searchsorted(self._times, spell.start), np.searchsorted(self._times, spell.end, side="right"))
        return any(self._is_settling[rows, self._columns[pool]].any() for pool in pools if pool in self._columns)


def pools_beside_gates(run: xr.Dataset) -> Iterator[tuple[str, str, str]]:
    """Every gate with the pools above and below it."""
    yield from zip(
        names(run["gate"]), names(run["gate_upstream_pool"]), names(run["gate_downstream_pool"]), strict=True
    )
