"""How far the answer of a day moves when it is computed in other ways, and whether it keeps its water."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass

import xarray as xr

from toeline.errors import RunError, ScenarioError, UsageError
from toeline.findings.closure import closure
from toeline.findings.incidents import incidents
from toeline.findings.movements import GAUGE_READINGS, BoundCheck, bound_checks, jump_changes, movements
from toeline.findings.ramp import RampPassage
from toeline.findings.verification import Member, Setting, Verification
from toeline.scenario import Scenario
from toeline.scenario.schema.day import Period
from toeline.simulate import simulate
from toeline.studies.members import sampled, with_changes
from toeline.studies.ramp import ramp_test

LEAST_TOLERANCE, LEAST_SPACING, LEAST_LONGEST_STEP = 1e-9, 1.0, 1.0
"""What the day file allows at least [m, m, s]."""


@dataclass(frozen=True)
class _Way:
    """Another way of running a day: the overrides that make it, and what they change."""

    name: str
    overrides: tuple[str, ...]
    settings: tuple[Setting, ...]
    reason: str = ""


def verify(scenario: Scenario, progress: Callable[[float], None] | None = None) -> Verification:
    """Run a day as it is, then with local inertia, half the step and half the spacing, and test mass and a ramp.

    `progress` is called with the fraction done. Raises ScenarioError and RunError as `simulate` does for the day as it
    is; another way that cannot be run is told in its member.
    """
    period, every = scenario.day.period, scenario.day.output.every_ms
    gauge_reading = GAUGE_READINGS[scenario.display.system]
    day = with_changes(scenario, scenario.plan, *sampled(period.length_ms, every))
    ways = [_inertia(period), _half_step(period), _half_spacing(scenario)]
    parts = _parts(progress, len(ways) + 2)
    run = simulate(day, progress=next(parts))
    others = {way.name: _run_of(day, way, next(parts)) for way in ways}
    ramp, ramp_reason, ramp_failed = _ramp(day, run)
    next(parts)
    return Verification(
        run=run,
        gauge_reading=gauge_reading,
        members=tuple(_member(way, run, others[way.name], gauge_reading) for way in ways),
        incidents=tuple(incidents(run)),
        closure=closure(run),
        bound_checks=_bounds(run, others[ways[0].name], period.local_inertia),
        ramp=ramp,
        ramp_reason=ramp_reason,
        ramp_failed=ramp_failed,
    )


def _parts(progress: Callable[[float], None] | None, count: int) -> Iterator[Callable[[float], None] | None]:
    """For every run of the study, what turns its own progress into that of the whole."""
    for part in range(count):
        yield None if progress is None else _part(progress, part, count)


def _part(progress: Callable[[float], None], part: int, count: int) -> Callable[[float], None]:
    progress(part / count)
    return lambda fraction: progress((part + fraction) / count)


def _inertia(period: Period) -> _Way:
    kept = period.local_inertia
    name = "without local inertia" if kept else "local inertia"
    setting = Setting("local_inertia", float(kept), float(not kept))
    return _Way(name, (f"period.local_inertia={str(not kept).lower()}",), (setting,))


def _half_step(period: Period) -> _Way:
    """An eighth of the error a step: the error of one step goes with the third power of its length."""
    tolerance = Setting("level_tolerance", period.level_tolerance, max(period.level_tolerance / 8.0, LEAST_TOLERANCE))
    longest = Setting(
        "longest_step", period.longest_step_ms / 1000.0, max(period.longest_step_ms / 2000.0, LEAST_LONGEST_STEP)
    )
    overrides = f'period.level_tolerance="{tolerance.after!r} m"', f'period.longest_step="{longest.after:.3f} s"'
    return _Way("half the step", overrides, (tolerance, longest))


def _half_spacing(scenario: Scenario) -> _Way:
    spacing = scenario.day.period.spacing
    half = Setting("spacing", spacing, max(spacing / 2.0, LEAST_SPACING))
    reason = ""
    if scenario.start_file is not None:
        reason = "the day goes on from the end of another run, whose points lie at that run's own spacing"
    return _Way("half the spacing", (f'period.spacing="{half.after!r} m"',), (half,), reason)


def _run_of(day: Scenario, way: _Way, progress: Callable[[float], None] | None) -> xr.Dataset | RunError | None:
    """The run of a way, the reason why it could not be solved, or nothing where it is not tried."""
    if way.reason:
        return None
    try:
        return simulate(with_changes(day, day.plan, *way.overrides), progress=progress)
    except RunError as error:
        return error


def _member(way: _Way, run: xr.Dataset, other: xr.Dataset | RunError | None, gauge_reading: float) -> Member:
    if not isinstance(other, xr.Dataset):
        return Member(way.name, way.settings, reason=way.reason or str(other), failed=other is not None)
    return Member(
        way.name, way.settings, tuple(movements(run, other, gauge_reading)), tuple(jump_changes(run, other)),
        tuple(incidents(other)), closure(other),
    )  # fmt: skip


def _bounds(run: xr.Dataset, other: xr.Dataset | RunError | None, run_is_inertial: bool) -> tuple[BoundCheck, ...]:
    if not isinstance(other, xr.Dataset):
        return ()
    quasi_steady, inertial = (other, run) if run_is_inertial else (run, other)
    return tuple(bound_checks(quasi_steady, inertial))


def _ramp(day: Scenario, run: xr.Dataset) -> tuple[RampPassage | None, str, bool]:
    try:
        return ramp_test(day, run), "", False
    except UsageError as error:
        words = "; ".join(fault.message for fault in error.faults) if isinstance(error, ScenarioError) else str(error)
        return None, words, False
    except RunError as error:
        return None, str(error), True
