"""The owner's limits of one pool as they are drawn with its levels: lines not to be passed, and how much of a fall or
rise was used.
"""

from collections.abc import Collection, Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.watches import Watch, watches
from toeline.report.figures.drawn_steps import shown_rows
from toeline.report.style import FALL_USES, Line
from toeline.report.values import value_text
from toeline.units import Display

LEVEL_KINDS = ("above", "below", "freeboard")
CHANGE_KINDS = ("fall", "rise")


@dataclass(frozen=True)
class PoolLimits:
    """The watches of a pool: on its levels at the output steps, and on how far it fell or rose."""

    levels: tuple[Watch, ...] = ()
    changes: tuple[Watch, ...] = ()


def limits_by_pool(run: xr.Dataset, pools: Collection[str], steps: np.ndarray) -> dict[str, PoolLimits]:
    """The limits that are drawn with the levels of the pools, by their names, as far as the output steps need them.

    Of the two ends of a pool the one that came nearer to a limit on falls or rises is kept; levels that are watched at
    the upper end are not drawn.
    """
    found: dict[str, list[Watch]] = {}
    is_thinned = steps.size < run.sizes["time"]
    for watch in watches(run, pools):
        if watch.limit.kind in (*LEVEL_KINDS, *CHANGE_KINDS) and watch.limit.at != "upper end":
            found.setdefault(watch.pools[0], []).append(_thinned(watch, steps) if is_thinned else watch)
    return {pool: PoolLimits(_of_kind(listed, LEVEL_KINDS), _nearer_ends(listed)) for pool, listed in found.items()}


def _thinned(watch: Watch, steps: np.ndarray) -> Watch:
    """A watch at some of the output steps; one of a change also where it is least and greatest between them."""
    times = steps
    if watch.limit.kind in CHANGE_KINDS:
        times = np.union1d(steps, watch.times[shown_rows(watch.values, watch.times)])
    at, known = ((instants - steps[0]).astype(np.int64) for instants in (times, watch.times))
    return Watch(watch.limit, watch.where, watch.pools, times, np.interp(at, known, watch.values))


def _of_kind(listed: Sequence[Watch], kinds: Sequence[str]) -> tuple[Watch, ...]:
    return tuple(watch for watch in listed if watch.limit.kind in kinds)


def _nearer_ends(listed: Sequence[Watch]) -> tuple[Watch, ...]:
    nearest: dict[str, Watch] = {}
    for watch in _of_kind(listed, CHANGE_KINDS):
        before = nearest.get(watch.limit.subject)
        if before is None or np.nanmin(watch.margins) < np.nanmin(before.margins):
            nearest[watch.limit.subject] = watch
    return tuple(nearest.values())


def limit_level(watch: Watch, level: np.ndarray) -> np.ndarray:
    """The level [m] that the limit sets for the water, by output step, from the level there and how far it may go."""
    return level - watch.margins if watch.limit.kind == "below" else level + watch.margins


def used_share(watch: Watch) -> np.ndarray:
    """How much of the limit of a fall or rise was used, in percent, at the times of the watch."""
    return 100.0 * watch.values / watch.limit.limit


def use_lines(limits: Sequence[PoolLimits], display: Display) -> dict[str, Line]:
    """The line of every limit on falls or rises, by its subject: "fall in 1 h"."""
    subjects = {watch.limit.subject: watch.limit for of_pool in limits for watch in of_pool.changes}
    return {
        subject: Line(
            f"{subject}, of {value_text(limit.limit, limit.unit, display)}", look.colour, look.width, look.dash
        )
        for place, (subject, limit) in enumerate(subjects.items())
        for look in [FALL_USES[place % len(FALL_USES)]]
    }
