"""How well levels were held: the indicators of the published canal-control test cases.

Clemmens, Kacerek, Grawitz & Schuurmans, J. Irrig. Drain. Eng. 124(1), 1998 (from memory), for the depth y over the bed
at the lower end of a pool, where the target y* is held.
"""

from collections.abc import Iterator

import numpy as np
import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.series import names
from toeline.results.dataset import in_parts

STEADY_HOURS = 2.0
"""The last hours of a run over which the steady-state error is taken."""


def greatest_error(depths: np.ndarray, target: float) -> float:
    """MAE, max|y − y*|/y*."""
    return float(np.abs(depths - target).max() / target)


def integrated_error(depths: np.ndarray, target: float) -> float:
    """IAE, (Δt/T) Σ|y − y*|/y* over all samples of a period T that begins and ends with one."""
    return float(np.abs(depths - target).sum() / target / (depths.size - 1))


def steady_state_error(last_depths: np.ndarray, target: float) -> float:
    """StE, |mean of y − y*|/y* over the samples of the last hours."""
    return float(abs(last_depths.mean() - target) / target)


def level_indicators(run: xr.Dataset) -> Iterator[Indicator]:
    """The errors of every pool with a target, as parts of its target depth; each output step is one sample."""
    if run.sizes["time"] < 2:
        return
    beds = dict(zip(names(run["pool"]), end_beds(run), strict=True))
    for part in in_parts(run, "pool", "pool_tail_level"):
        targets = zip(names(part["pool"]), part["pool_target_level"].values.tolist(), strict=True)
        for column, (pool, target) in enumerate(targets):
            if target - beds[pool] > 0.0:
                depths = part["pool_tail_level"].values[:, column] - beds[pool]
                yield from _errors(pool, depths, target - beds[pool], part["time"].values)


def _errors(pool: str, depths: np.ndarray, target: float, times: np.ndarray) -> Iterator[Indicator]:
    """The errors of one pool; `target` is a depth [m] too."""
    is_last = times >= times[-1] - np.timedelta64(round(STEADY_HOURS * 3600), "s")
    is_whole = times[-1] - times[0] >= np.timedelta64(round(STEADY_HOURS * 3600), "s")
    note = f"part of the target depth at the lower end; samples: {times.size}"
    yield Indicator("maximum absolute level error", pool, greatest_error(depths, target), "1", "lower", note)
    yield Indicator("integrated absolute level error", pool, integrated_error(depths, target), "1", "lower", note)
    if is_whole:
        yield Indicator(
            "steady-state level error", pool, steady_state_error(depths[is_last], target), "1", "lower",
            f"part of the target depth; mean of the last {STEADY_HOURS:g} h, samples: {int(is_last.sum())}",
        )  # fmt: skip


def end_beds(run: xr.Dataset, *, first: bool = False) -> np.ndarray:
    """Level of the bed [m] at the lower end of every pool, or at the upper (first); NaN for a pool without nodes."""
    beds = [run["bed_level"].values[run["node_pool"].values == pool] for pool in range(run.sizes["pool"])]
    return np.array([bed[0 if first else -1] if bed.size else np.nan for bed in beds])
