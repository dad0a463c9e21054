"""Every limit of a run at every place it holds for: the value that it limits, all along the run."""

from collections.abc import Callable, Collection, Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import NamedTuple

import numpy as np
import xarray as xr

from toeline.findings.gate_use import seconds_avoided, seconds_near_modular_limit
from toeline.findings.incident import pools_beside_gates
from toeline.findings.level_errors import end_beds
from toeline.findings.limits import Limit, avoided_openings, limits_of_run
from toeline.findings.moves import moves_begun
from toeline.findings.rolling import RollingWindow
from toeline.findings.series import Extreme, greatest, least, names
from toeline.findings.spells import Spell, spells
from toeline.results.dataset import in_parts, values_at, values_at_nodes
from toeline.results.encoding import surface_names_of

SURGE_BOUND = "surge bound taken off"
ENDS = {"upper end": "pool_head_level", "lower end": "pool_tail_level"}


@dataclass(frozen=True)
class Watch:
    """What one limit is about at one place: `values` in the unit of the limit at `times`.

    `pools` are those whose waves blur it. `jumps` says at which rows the value changed at once, so that nothing may be
    interpolated there; `chainages` [m] where it was found; `also` holds further series [m] by name.
    """

    limit: Limit
    where: str
    pools: tuple[str, ...]
    times: np.ndarray
    values: np.ndarray
    jumps: np.ndarray | None = None
    chainages: np.ndarray | None = None
    also: tuple[tuple[str, np.ndarray], ...] = ()

    @property
    def margins(self) -> np.ndarray:
        """How far the limit is away; negative where it is passed."""
        room = self.values - self.limit.limit
        return room if self.limit.is_least else -room

    @property
    def spells(self) -> list[Spell]:
        """When the limit was passed."""
        margins = self.margins
        crossing = margins if self.jumps is None else np.where(self.jumps, np.nan, margins)
        return spells(margins < 0.0, self.times, crossing)

    def worst(self, rows: slice = slice(None)) -> Extreme:
        """The value that comes nearest to the limit, or passes it furthest."""
        extreme = least if self.limit.is_least else greatest
        return extreme(self.values[rows], self.times[rows])


def watches(run: xr.Dataset, only: Collection[str] | None = None) -> Iterator[Watch]:
    """All watches of all limits, limit by limit, or those at some places alone. A place without a value to watch is
    left out.
    """
    places = _Places(run)
    for limit in limits_of_run(run):
        for place in places.of(limit):
            if only is None or place in only:
                found = _WATCHED[limit.kind].watch(limit, place, places)
                yield from (watch for watch in found if np.isfinite(watch.values).any())


class _Places:
    """The run with what several limits need of it, each found once; of a long run a part of the places at a time."""

    def __init__(self, run: xr.Dataset):
        self.run = run
        self.times = run["time"].values
        self._part = run
        self._windows: dict[float, RollingWindow] = {}

    def of(self, limit: Limit) -> Iterator[str]:
        """The places of a limit, one after the other; `column` is for the one that was given last."""
        for part in in_parts(self.run, limit.dimension, *_WATCHED[limit.kind].variables):
            self._part, listed = part, set(names(part[limit.dimension]))
            yield from (place for place in limit.places if place in listed)

    def window(self, seconds: float) -> RollingWindow:
        if seconds not in self._windows:
            self._windows[seconds] = RollingWindow(self.times, seconds)
        return self._windows[seconds]

    def column(self, variable: str, place: str) -> np.ndarray:
        """The values of a variable at one pool, gate or offtake: a series, or one value."""
        values = self._part[variable]
        column: np.ndarray = values.values[..., names(values[values.dims[-1]]).index(place)]
        return column

    def pools_beside(self, gate: str) -> tuple[str, ...]:
        return self._beside[gate]

    @cached_property
    def _beside(self) -> dict[str, tuple[str, ...]]:
        return {gate: tuple(pools) for gate, *pools in pools_beside_gates(self.run)}

    def surge(self, pool: str) -> np.ndarray:
        """The surges [m] that may raise the water of a pool: from the gate above and from the gate below together."""
        bound = np.zeros(self.times.size)
        for gate, (above, below) in self._beside.items():
            for is_beside, side in ((below == pool, "downstream"), (above == pool, "upstream")):
                if is_beside:
                    surge = values_at(self.run, f"surge_height_bound_{side}", names(self.run["gate"]).index(gate))
                    bound += np.maximum(np.nan_to_num(surge), 0.0)
        return bound

    def bed(self, pool: str, end: str) -> float:
        """Level of the bed [m] at an end of a pool."""
        beds = end_beds(self.run, first=end == "upper end")
        return float(beds[names(self.run["pool"]).index(pool)])


def _falls(limit: Limit, pool: str, places: _Places) -> Iterator[Watch]:
    window, sign = places.window(limit.window), 1.0 if limit.kind == "fall" else -1.0
    for end, variable in ENDS.items():
        levels = sign * places.column(variable, pool)
        times, values = window.corners(levels, window.falls(levels), limit.limit)
        yield Watch(limit, f"{pool}, {end}", (pool,), times, values)


def _levels(limit: Limit, pool: str, places: _Places) -> Iterator[Watch]:
    levels = places.column(ENDS[limit.at], pool)
    if limit.is_from_target:
        distance = levels - places.column("pool_target_level", pool)
        levels = distance if limit.kind == "above" else -distance
    elif limit.measured_from == "bed":
        levels = levels - places.bed(pool, limit.at)
    yield Watch(limit, f"{pool}, {limit.at}", (pool,), places.times, levels)


def _freeboard(limit: Limit, pool: str, places: _Places) -> Iterator[Watch]:
    surge = places.surge(pool)
    values = places.column(f"pool_{limit.measured_from}_margin", pool) - surge
    jumps = np.diff(surge, prepend=surge[:1]) != 0.0
    yield Watch(limit, pool, (pool,), places.times, values, jumps=jumps, also=((SURGE_BOUND, surge),))


def _velocity(limit: Limit, pool: str, places: _Places) -> Iterator[Watch]:
    run = places.run
    surfaces = [surface_names_of(run.attrs).index(surface) for surface in limit.surfaces]
    of_pool = run["node_pool"].values == names(run["pool"]).index(pool)
    nodes = np.flatnonzero(of_pool & np.isin(run["surface"].values, surfaces))
    if not nodes.size or not run.sizes["profile_time"]:
        return
    speeds = np.nan_to_num(np.abs(values_at_nodes(run, "velocity", nodes).astype(float)))
    fastest = speeds.argmax(axis=1)
    chainages = run["chainage"].values[nodes[fastest]]
    yield Watch(limit, pool, (pool,), run["profile_time"].values, speeds.max(axis=1), chainages=chainages)


def _moves(limit: Limit, gate: str, places: _Places) -> Iterator[Watch]:
    """A move counts from when it begins until one window later."""
    begun, length = moves_begun(places.run, gate), np.timedelta64(round(limit.window * 1e9), "ns")
    times = np.unique(np.concatenate((places.times[[0, -1]], begun, begun + length)))
    times = times[times <= places.times[-1]]
    counts = np.searchsorted(begun, times, side="right") - np.searchsorted(begun, times - length, side="right")
    yield Watch(limit, gate, (), times, counts.astype(float), jumps=np.ones(times.size, dtype=bool))


def _heads(limit: Limit, offtake: str, places: _Places) -> Iterator[Watch]:
    heads = places.column("offtake_level", offtake) - places.column("offtake_sill_level", offtake)
    pool = str(places.column("offtake_pool", offtake))
    yield Watch(limit, offtake, (pool,), places.times, heads)


def _seconds(limit: Limit, gate: str, places: _Places) -> Iterator[Watch]:
    """Time that adds up in a window, at avoided openings or near the modular limit."""
    if limit.kind == "avoided opening":
        seconds = seconds_avoided(places.column("gate_opening", gate), places.times, avoided_openings(places.run)[gate])
    else:
        seconds = seconds_near_modular_limit(places.run, gate)
    window = places.window(limit.window)
    totals = np.concatenate(([0.0], np.cumsum(seconds)))
    yield Watch(limit, gate, places.pools_beside(gate), window.times, window.sums(totals))


class _Watched(NamedTuple):
    """How a kind of limit is watched, and the series that are read of every place for it."""

    watch: Callable[[Limit, str, _Places], Iterator[Watch]]
    variables: tuple[str, ...]


_BOTH_ENDS = tuple(ENDS.values())
_WATCHED = {
    "fall": _Watched(_falls, _BOTH_ENDS),
    "rise": _Watched(_falls, _BOTH_ENDS),
    "above": _Watched(_levels, _BOTH_ENDS[:1]),
    "below": _Watched(_levels, _BOTH_ENDS[:1]),
    "freeboard": _Watched(_freeboard, ("pool_bank_margin",)),
    "velocity": _Watched(_velocity, ()),
    "moves": _Watched(_moves, ()),
    "head on offtake": _Watched(_heads, ("offtake_level",)),
    "avoided opening": _Watched(_seconds, ("gate_opening",)),
    "near modular limit": _Watched(_seconds, ()),
}
