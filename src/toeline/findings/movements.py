"""How far the answer moves from one run of a day to another: levels, discharges, jumps, inside and outside settling."""

from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal, NamedTuple

import numpy as np
import xarray as xr

from toeline.findings.series import NO_EXTREME, Extreme, greatest, hours_of_rows, meanings, names
from toeline.findings.settling import gates_settling, pools_settling
from toeline.units import UnitSystem

Quantity = Literal["level", "opening", "discharge", "jump toe", "jump end"]
Side = Literal["above", "below"]

GAUGE_READINGS = {UnitSystem.metric: 0.01, UnitSystem.us_customary: 0.003048}
"""m to which staff gauges are read: 1 cm (common practice, no source); 0.01 ft (US Reclamation, Water
Measurement Manual, ch. 10)."""

TYPICAL_SHARE = 95.0
"""Per cent of all differences that the typical one is not less than (choice)."""

_POOL_LEVELS = {"head": "pool_head_level", "lower end": "pool_tail_level"}
_GATE_VALUES: dict[Quantity, tuple[str, str]] = {
    "opening": ("gate_opening", "m"),
    "discharge": ("gate_discharge", "m3 s-1"),
    "jump toe": ("jump_toe_distance", "m"),
    "jump end": ("jump_end_distance", "m"),
}
_SIDES: dict[Side, tuple[str, str]] = {
    "above": ("surge_height_bound_upstream", "gate_headwater_level"),
    "below": ("surge_height_bound_downstream", "gate_tailwater_level"),
}


@dataclass(frozen=True)
class Movement:
    """How far one quantity moves, without its sign, over all places and all output steps of one kind of time.

    `typical` is not passed by 95 of 100 differences. `original` is the value of the first run where and when the
    difference is `largest`. All in `unit`; NaN where there is nothing to compare. `shown_hours`, of levels, is for how
    long the difference was more than a gauge is read to, at the place where that was longest.
    """

    quantity: Quantity
    unit: str
    settling: bool
    typical: float
    largest: Extreme
    where: str
    original: float
    shown_hours: float = 0.0


@dataclass(frozen=True)
class JumpChange:
    """For how many hours the state of the jump below a gate differs, and the pair of states that differs longest."""

    gate: str
    settled_hours: float
    settling_hours: float
    before: str
    after: str


@dataclass(frozen=True)
class BoundCheck:
    """The surge bound at one side of a gate against a run with local inertia, while the bound stands [m].

    `bound` and `difference` are the greatest of their kind, without sign. `excess` is the greatest difference beyond
    the bound of its time, negative where the bound covers every difference; `hours_beyond` of `hours` it did not.
    """

    gate: str
    side: Side
    bound: float
    difference: float
    excess: Extreme
    hours_beyond: float
    hours: float


class _Pair(NamedTuple):
    """A quantity in both runs, along time and place."""

    quantity: Quantity
    unit: str
    first: np.ndarray
    second: np.ndarray
    settling: np.ndarray
    places: list[str]


def movements(run: xr.Dataset, other: xr.Dataset, gauge_reading: float) -> list[Movement]:
    """How far every quantity moves from a run to another of the same gates and pools, settled and settling.

    Compared at the output times that both have; a time is settling where either run says so. `gauge_reading` [m] is the
    difference of level that a gauge can show.
    """
    run, other = _at_common_times(run, other)
    times = run["time"].values
    return [
        _movement(pair, settling, times, gauge_reading) for pair in _pairs(run, other) for settling in (False, True)
    ]


def jump_changes(run: xr.Dataset, other: xr.Dataset) -> list[JumpChange]:
    """The gates at which the jump is in another state for some time, from the head down."""
    run, other = _at_common_times(run, other)
    first, second = run["jump_state"].values, other["jump_state"].values
    settling = gates_settling(run) | gates_settling(other)
    hours, words = hours_of_rows(run["time"].values), meanings(run["jump_state"])
    found = []
    for gate, name in enumerate(names(run["gate"])):
        differs = first[:, gate] != second[:, gate]
        if differs.any():
            settled, unsettled = (
                float(hours[differs & (settling[:, gate] == wanted)].sum()) for wanted in (False, True)
            )
            states = Counter(zip(first[differs, gate].tolist(), second[differs, gate].tolist(), strict=True))
            (before, after), _ = states.most_common(1)[0]
            found.append(JumpChange(name, settled, unsettled, words[int(before)], words[int(after)]))
    return found


def bound_checks(run: xr.Dataset, inertial: xr.Dataset) -> list[BoundCheck]:
    """Whether the levels of a run with local inertia stay within those of the quasi-steady run and its surge bounds.

    One entry for each side of a gate that had a bound at some time.
    """
    run, inertial = _at_common_times(run, inertial)
    checks = (_bound_check(run, inertial, gate, side) for gate in names(run["gate"]) for side in _SIDES)
    return [check for check in checks if check is not None]


def _bound_check(run: xr.Dataset, inertial: xr.Dataset, gate: str, side: Side) -> BoundCheck | None:
    times, (bound_name, level_name) = run["time"].values, _SIDES[side]
    bound = np.abs(run[bound_name].sel(gate=gate).values.astype(float))
    stands = bound > 0.0
    if not stands.any():
        return None
    levels = (of[level_name].sel(gate=gate).values for of in (run, inertial))
    difference = np.where(stands, np.abs(np.subtract(*levels)), np.nan)
    excess, hours = difference - bound, hours_of_rows(times)
    return BoundCheck(
        gate, side, float(bound.max()), greatest(difference, times).value, greatest(excess, times),
        float(hours[excess > 0.0].sum()), float(hours[stands].sum()),
    )  # fmt: skip


def _at_common_times(run: xr.Dataset, other: xr.Dataset) -> tuple[xr.Dataset, xr.Dataset]:
    common = np.intersect1d(run["time"].values, other["time"].values)
    return run.sel(time=common), other.sel(time=common)


def _pairs(run: xr.Dataset, other: xr.Dataset) -> Iterator[_Pair]:
    first, second = (np.concatenate([of[name].values for name in _POOL_LEVELS.values()], axis=1) for of in (run, other))
    settling = np.tile(pools_settling(run) | pools_settling(other), len(_POOL_LEVELS))
    places = [f"{pool}, {end}" for end in _POOL_LEVELS for pool in names(run["pool"])]
    yield _Pair("level", "m", first, second, settling, places)
    settling = gates_settling(run) | gates_settling(other)
    for quantity, (name, unit) in _GATE_VALUES.items():
        yield _Pair(quantity, unit, run[name].values, other[name].values, settling, names(run["gate"]))


def _movement(pair: _Pair, settling: bool, times: np.ndarray, gauge_reading: float) -> Movement:
    difference = np.where(pair.settling == settling, np.abs(pair.second - pair.first), np.nan)
    if not np.isfinite(difference).any():
        return Movement(pair.quantity, pair.unit, settling, np.nan, NO_EXTREME, "", np.nan)
    row, place = np.unravel_index(np.nanargmax(difference), difference.shape)
    shown = hours_of_rows(times) @ (difference > gauge_reading) if pair.quantity == "level" else np.zeros(1)
    return Movement(
        pair.quantity, pair.unit, settling, float(np.nanpercentile(difference, TYPICAL_SHARE)),
        Extreme(float(difference[row, place]), times[row]), pair.places[place], float(pair.first[row, place]),
        float(shown.max()),
    )  # fmt: skip
