"""Several runs laid side by side: how they differ from the first, then the incidents and indicators of each.

All runs are compared over the time that every one of them covers. Better is never safe.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property, reduce
from string import ascii_uppercase

import numpy as np
import xarray as xr

from toeline.errors import UsageError
from toeline.findings.incidents import Incident, incidents
from toeline.findings.indicator import Better
from toeline.findings.indicators import indicators
from toeline.findings.input_differences import InputDifference, have_same_inputs, input_differences
from toeline.findings.result_differences import ResultDifference, result_differences
from toeline.findings.schedule_differences import ScheduleDifference, schedule_difference

LEAST_PART = 1e-3
"""Part of an indicator that counts as a difference (choice): the time step alone can make as much."""

LEAST_SECONDS = 30.0
"""Time by which an incident must last longer to count as longer (choice): half of the minute that is shown."""

LEAST_EXCESS = {"m": 0.005, "m s-1": 0.005, "m3 s-1": 0.0005}
"""By how much more an incident must pass its limit to count as worse (choice): half of what is shown of each unit."""

_CLOCKS = ("time", "profile_time", "order_time", "order_completed")


@dataclass(frozen=True)
class ComparedRun:
    """One of the runs: the letter by which it is told, its name, and what it says of itself."""

    letter: str
    name: str
    title: str
    outcome: str
    version: str
    input_hash: str
    shared_input_hash: str


@dataclass(frozen=True)
class Contrast:
    """How one run differs from the first. `inputs` are the differences beside the plan, by key.

    `first_seen` is the earliest of the largest differences of `results` to begin; None where the results are alike.
    """

    run: ComparedRun
    has_same_inputs: bool
    inputs: tuple[InputDifference, ...]
    schedule: ScheduleDifference
    results: tuple[ResultDifference, ...]

    @property
    def first_seen(self) -> ResultDifference | None:
        return min(self.results, key=lambda difference: difference.begins, default=None)


@dataclass(frozen=True)
class IncidentSum:
    """All incidents of one kind at one place in one run: how many, for how long [s], and the one that was worst."""

    count: int
    seconds: float
    worst: Incident

    @property
    def excess(self) -> float:
        """By how much the limit was passed, in the unit of the incident; 0 where there is no number."""
        return float(np.nan_to_num(abs(self.worst.worst - self.worst.limit)))

    def is_graver_than(self, other: "IncidentSum | None") -> bool:
        """Whether it is new, lasts longer, or passes its limit further than in the other run."""
        if other is None:
            return True
        is_longer = self.seconds > other.seconds + LEAST_SECONDS
        return is_longer or self.excess > other.excess + LEAST_EXCESS.get(self.worst.unit, 0.0)


@dataclass(frozen=True)
class IncidentRow:
    """One kind of incident at one place in every run; None where a run has none."""

    what: str
    where: str
    sums: tuple[IncidentSum | None, ...]

    @property
    def differs(self) -> bool:
        """Whether it is graver in one run than in another."""
        return any(one is not None and one.is_graver_than(other) for one in self.sums for other in self.sums)


@dataclass(frozen=True)
class IndicatorRow:
    """One indicator at one place ("": the whole canal) in every run; NaN where a run has none."""

    name: str
    where: str
    unit: str
    better: Better
    note: str
    values: tuple[float, ...]

    @property
    def differs(self) -> bool:
        return any(not _is_close(value, self.values[0]) for value in self.values)

    @property
    def best(self) -> tuple[bool, ...]:
        """Which runs have the best value; none where all are alike, or no value is better than another."""
        known = [value for value in self.values if not np.isnan(value)]
        if self.better == "none" or not self.differs or len(known) < 2:
            return (False,) * len(self.values)
        target = min(known) if self.better == "lower" else max(known)
        return tuple(not np.isnan(value) and _is_close(value, target) for value in self.values)


@dataclass(frozen=True)
class Comparison:
    """Runs compared with the first of them, from `start` to `end` of its clock.

    `is_by_elapsed_time` says that the runs have no time in common, so that each counts from its own start. `steps` are
    the output times that all runs have, `own_steps` those of every run.
    """

    canal: str
    runs: tuple[ComparedRun, ...]
    start: np.datetime64
    end: np.datetime64
    is_by_elapsed_time: bool
    is_cut: bool
    steps: int
    own_steps: tuple[int, ...]
    contrasts: tuple[Contrast, ...]
    incidents: tuple[IncidentRow, ...]
    indicators: tuple[IndicatorRow, ...]

    @cached_property
    def have_same_inputs(self) -> bool:
        """Whether all runs have the same inputs beside their plans."""
        return all(contrast.has_same_inputs for contrast in self.contrasts)

    @cached_property
    def is_any_graver(self) -> bool:
        """Whether a run has an incident that the first has not, or that is graver in it than in the first."""
        return any(
            one is not None and one.is_graver_than(row.sums[0]) for row in self.incidents for one in row.sums[1:]
        )

    @cached_property
    def are_alike(self) -> bool:
        """Whether all runs have the same results, incidents and indicators, whatever their orders."""
        has_results = any(contrast.results for contrast in self.contrasts)
        return not (
            has_results or any(row.differs for row in self.incidents) or any(row.differs for row in self.indicators)
        )


def compare(runs: Mapping[str, xr.Dataset]) -> Comparison:
    """Lay runs side by side, by name; the first is what the others are told from.

    Raises UsageError where there are fewer than two, or more than the letters, one is empty, or they are of different
    canals.
    """
    _refuse(runs)
    by_elapsed_time = _have_no_common_time(list(runs.values()))
    first, *others = _cut([_moved(run, next(iter(runs.values()))) if by_elapsed_time else run for run in runs.values()])
    told = [_told(letter, *item) for letter, item in zip(ascii_uppercase, runs.items(), strict=False)]
    steps = [run["time"].values for run in (first, *others)]
    return Comparison(
        canal=first.attrs["canal"],
        runs=tuple(told),
        start=first["time"].values[0],
        end=first["time"].values[-1],
        is_by_elapsed_time=by_elapsed_time,
        is_cut=any(
            cut.sizes["time"] < run.sizes["time"] for cut, run in zip((first, *others), runs.values(), strict=True)
        ),
        steps=reduce(np.intersect1d, steps).size,
        own_steps=tuple(times.size for times in steps),
        contrasts=tuple(_contrast(run, first, other) for run, other in zip(told[1:], others, strict=True)),
        incidents=tuple(_incident_rows([incidents(run) for run in (first, *others)])),
        indicators=tuple(_indicator_rows((first, *others))),
    )


def _refuse(runs: Mapping[str, xr.Dataset]) -> None:
    if not 2 <= len(runs) <= len(ascii_uppercase):
        raise UsageError(f"found {len(runs)} to compare; allowed: 2 to {len(ascii_uppercase)} runs or plans.")
    for name, run in runs.items():
        if not run.sizes["time"]:
            raise UsageError(f"{name} was stopped before anything reached the disk: there is nothing to compare.")
    canals = {name: run.attrs["canal"] for name, run in runs.items()}
    if len(set(canals.values())) > 1:
        listed = "; ".join(f"{name} on {canal}" for name, canal in canals.items())
        raise UsageError(f"the runs are of different canals and cannot be compared place by place: {listed}.")


def _have_no_common_time(runs: Sequence[xr.Dataset]) -> bool:
    """Whether the periods of the runs do not overlap: the end of one may be the start of the next."""
    return bool(max(run["time"].values[0] for run in runs) >= min(run["time"].values[-1] for run in runs))


def _moved(run: xr.Dataset, first: xr.Dataset) -> xr.Dataset:
    """The run by the clock of the first, as if both had started together."""
    lead = run["time"].values[0] - first["time"].values[0]
    return run.assign({name: run[name].copy(data=run[name].values - lead) for name in _CLOCKS})


def _cut(runs: Sequence[xr.Dataset]) -> list[xr.Dataset]:
    """The runs over the time that all of them cover."""
    start = max(run["time"].values[0] for run in runs)
    end = min(run["time"].values[-1] for run in runs)
    return [_between(run, start, end) for run in runs]


def _between(run: xr.Dataset, start: np.datetime64, end: np.datetime64) -> xr.Dataset:
    clocks = {"time": "time", "profile_time": "profile_time", "order": "order_time"}
    inside = {name: (run[clock].values >= start) & (run[clock].values <= end) for name, clock in clocks.items()}
    return run.isel({name: _span(np.flatnonzero(rows)) for name, rows in inside.items() if not rows.all()})


def _span(rows: np.ndarray) -> slice | np.ndarray:
    """Rows as a slice where they follow one another: of a file it is read at once."""
    follow = rows.size and rows[-1] - rows[0] == rows.size - 1
    return slice(int(rows[0]), int(rows[-1]) + 1) if follow else rows


def _told(letter: str, name: str, run: xr.Dataset) -> ComparedRun:
    about = run.attrs
    return ComparedRun(
        letter, name, about["title"], about["outcome"], about["source"], about["input_hash"],
        about.get("shared_input_hash", ""),
    )  # fmt: skip


def _contrast(told: ComparedRun, first: xr.Dataset, other: xr.Dataset) -> Contrast:
    has_same_inputs = have_same_inputs(first, other)
    return Contrast(
        told,
        has_same_inputs,
        () if has_same_inputs else tuple(input_differences(first, other)),
        schedule_difference(first, other),
        tuple(result_differences(first, other)),
    )


def _incident_rows(found: Sequence[Sequence[Incident]]) -> list[IncidentRow]:
    """By kind of incident in the order in which they are met, then by place."""
    kinds = dict.fromkeys((one.what, one.where) for run in found for one in run)
    return [IncidentRow(*kind, tuple(_sum_of(kind, run) for run in found)) for kind in sorted(kinds)]


def _sum_of(kind: tuple[str, str], found: Sequence[Incident]) -> IncidentSum | None:
    spells = [one for one in found if (one.what, one.where) == kind]
    if not spells:
        return None
    sums = [IncidentSum(1, float((one.end - one.start) / np.timedelta64(1, "s")), one) for one in spells]
    return IncidentSum(len(sums), sum(one.seconds for one in sums), max(sums, key=lambda one: one.excess).worst)


def _indicator_rows(runs: Sequence[xr.Dataset]) -> list[IndicatorRow]:
    """By name in the order in which they are met, then by place."""
    found = [{(one.name, one.where): one for one in indicators(run)} for run in runs]
    about = {key: one for run in reversed(found) for key, one in run.items()}
    names = {name: place for place, name in enumerate(dict.fromkeys(name for run in found for name, _ in run))}
    keys = sorted(dict.fromkeys(key for run in found for key in run), key=lambda key: names[key[0]])
    return [
        IndicatorRow(
            *key, about[key].unit, about[key].better, about[key].note,
            tuple(run[key].value if key in run else np.nan for run in found),
        )
        for key in keys
    ]  # fmt: skip


def _is_close(one: float, other: float) -> bool:
    return bool(np.isclose(one, other, rtol=LEAST_PART, atol=1e-9, equal_nan=True))
