"""The moments at which the page shows the canal: those of the long profiles, and the worst times of incidents."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.incidents import Incident
from toeline.report.run_clock import RunClock

MOST_PROFILE_VALUES = 800_000
"""How many levels of long profiles a page may hold (choice); of more profiles some are left out, evenly."""


@dataclass(frozen=True)
class Moments:
    """Times since the start of each run, rising; all runs of a page are shown at the same one.

    Runs that start at different times are so laid side by side by the time since their start; `labels` are by the
    clock of the first.
    """

    elapsed: np.ndarray
    labels: tuple[str, ...]

    def nearest(self, instant: np.datetime64, run: xr.Dataset) -> int:
        """The moment nearest to an instant of a run."""
        return int(np.abs(self.elapsed - (instant - run["time"].values[0])).argmin())


def moments_of(runs: Sequence[xr.Dataset], found: Sequence[Sequence[Incident]]) -> Moments:
    """The moments of runs with at least one output step each; `found` are the incidents of each."""
    elapsed = np.unique(np.concatenate([_elapsed(*pair) for pair in zip(runs, found, strict=True)]))
    clock, start = RunClock(runs[0]), runs[0]["time"].values[0]
    return Moments(elapsed, tuple(clock.at(start + since) for since in elapsed))


def _elapsed(run: xr.Dataset, found: Sequence[Incident]) -> np.ndarray:
    worst = [incident.worst_time for incident in found if not np.isnat(incident.worst_time)]
    times, profile_times = run["time"].values, run["profile_time"].values
    stride = -(-profile_times.size * run.sizes["node"] // MOST_PROFILE_VALUES) or 1
    instants = np.concatenate([profile_times[::stride], times[:1], times[-1:], np.array(worst, times.dtype)])
    since: np.ndarray = instants - times[0]
    return since


def nearest_rows(times: np.ndarray, elapsed: np.ndarray) -> np.ndarray:
    """The row of `times` (rising, datetime64) nearest to each time since the first of them; -1 where there is none."""
    if not times.size:
        return np.full(elapsed.shape, -1, dtype=np.int32)
    since = times - times[0]
    after = np.searchsorted(since, elapsed).clip(1, max(1, times.size - 1))
    before = after - 1
    after = after.clip(max=times.size - 1)
    nearer_after = np.abs(since[after] - elapsed) < np.abs(elapsed - since[before])
    return np.where(nearer_after, after, before).astype(np.int32)
