"""The standard day against what its solves cost at least, against a general stiff integrator and the full equations."""

from functools import partial
from pathlib import Path
from statistics import median

import numpy as np
from tests.benchmarks.canal_day import QUIET, CanalDay, standard
from tests.benchmarks.finite_volume import FiniteVolumeCanal
from tests.benchmarks.stiff_integrator import Integrator
from tests.benchmarks.stripped_kernel import prepared, solve_many
from tests.benchmarks.timing import alternated, seconds, show

REPEATS = 15
EVERY_MINUTE = {"every": "1 min", "profiles_every": "1 min"}
PROFILES_ALONE = {"every": "24 h", "profiles_every": "10 min"}
TIGHT = 1e-8
"""Tolerance of a level in one step [m] of the run that others are held against."""
TOLERANCES = [10.0 ** (-k / 8.0) for k in range(20, 48)]
"""Of the stiff integrator [m], loosest first."""
PROFILES_EVERY = 600.0
"""s"""
TOLERANCES_OF_DAY = (3e-3, 1e-2)
"""Of a level in one step [m]: the one that days have unless they say otherwise, and a looser one."""
FINE_SPACING = "25 m"


def time_the_day(folder: Path) -> None:
    """The day with and without output against the stripped kernel; how much of it is output; its error."""
    loud, quiet = standard(folder), standard(folder, output=QUIET)
    run = loud.step()
    solves, steps = int(run.pace.solves[0]), int(run.pace.steps[0])
    quiet.step()
    kernel = prepared(loud.network, loud.start.level)
    solve_many(*kernel, 1)
    times = alternated({"kernel": lambda: solve_many(*kernel, solves), "quiet": quiet.step, "loud": loud.step}, REPEATS)
    over = median(times["kernel"])
    print(f"standard day: {run.network.node_count} nodes, {steps} steps, {solves} solves; processor time")
    show("stripped kernel, as many solves", times["kernel"], over)
    show("day without output", times["quiet"], over)
    show("day with output every minute and near-gate pass", times["loud"], over)
    shares = [1.0 - without / whole for without, whole in zip(times["quiet"], times["loud"], strict=True)]
    print(f"{'output and near-gate pass, share of the day':<58}{median(shares):9.1%}   {spread(shares)}")
    error = levels_of_day(folder) - levels_of_day(folder, TIGHT)
    print(f"worst level error {1000.0 * np.abs(error).max():.3f} mm, {1000.0 * rms(error):.3f} mm rms, every minute")


def time_the_integrator(folder: Path) -> None:
    """The day at two tolerances against LSODA at its loosest that is no less accurate at worst."""
    reference, integrator = levels_of_day(folder, TIGHT), Integrator(standard(folder))
    for given in TOLERANCES_OF_DAY:
        loud = standard(folder, level_tolerance=given)
        quiet = standard(folder, output=PROFILES_ALONE, level_tolerance=given)
        allowed = np.abs(levels_of_day(folder, given) - reference).max()
        tolerance, worst = loosest(integrator, reference[:-1], allowed)
        print(
            f"stiff integrator: day at {given:.0e} m, worst level error {1000.0 * allowed:.3f} mm; LSODA at "
            f"{tolerance:.1e} m, {1000.0 * worst:.3f} mm; processor time"
        )
        integrate = partial(integrator.levels, tolerance, PROFILES_EVERY)
        times = alternated({"loud": loud.step, "quiet": quiet.step, "integrator": integrate}, REPEATS)
        over = median(times["loud"])
        show("day with output every minute and near-gate pass", times["loud"], over)
        show("day with long profiles every 10 min alone", times["quiet"], over)
        show("LSODA with long profiles every 10 min, finds no jump", times["integrator"], over)
        alone = median(times["integrator"]) / median(times["quiet"])
        print(f"{'LSODA over the day with as little output':<58}{alone:39.2f} x")


def time_the_full_equations(folder: Path) -> None:
    """The day by the full equations, on its own nodes and on four times as many."""
    for spacing in (None, FINE_SPACING):
        period = {"spacing": spacing} if spacing else {}
        day, inertial = standard(folder, **period), standard(folder, local_inertia=True, **period)
        day.step()
        full = FiniteVolumeCanal(day)
        full.levels(PROFILES_EVERY, until=PROFILES_EVERY)
        found: list[np.ndarray] = []
        took = seconds(lambda: found.append(FiniteVolumeCanal(day).levels(PROFILES_EVERY)))  # noqa: B023
        times = alternated({"day": day.step}, REPEATS)
        print(f"full equations: finite volumes at {spacing or 'the spacing of the day'}; processor time")
        show("day with output every minute and near-gate pass", times["day"], median(times["day"]))
        show("finite volumes, explicit, once", [took], median(times["day"]))
        tell_difference("quasi-steady day", found[0], day)
        tell_difference("day with local inertia", found[0], inertial)


def tell_difference(what: str, found: np.ndarray, day: CanalDay) -> None:
    """How far levels in cells are from those of a day halfway between its nodes."""
    level = day.profiles().level[:-1]
    off = (found[:, :-1] - 0.5 * (level[:, :-1] + level[:, 1:]))[:, np.isfinite(found[0, :-1])]
    print(f"levels off the {what}: {1000.0 * np.abs(off).max():.1f} mm at worst, {1000.0 * rms(off):.1f} mm rms")


def levels_of_day(folder: Path, tolerance: float | None = None) -> np.ndarray:
    """Levels [m] of all nodes at every minute of the standard day."""
    period = {} if tolerance is None else {"level_tolerance": tolerance}
    return standard(folder, output=EVERY_MINUTE, **period).profiles().level


def loosest(integrator: Integrator, reference: np.ndarray, allowed: float) -> tuple[float, float]:
    """The first tolerance [m] whose worst level error is allowed, and that error [m]."""
    for tolerance in TOLERANCES:
        worst = float(np.abs(integrator.levels(tolerance, 60.0) - reference).max())
        if worst <= allowed:
            return tolerance, worst
    raise RuntimeError(f"no tolerance of the stiff integrator gives {allowed:.1e} m")


def rms(values: np.ndarray) -> float:
    return float(np.sqrt(np.mean(values**2)))


def spread(shares: list[float]) -> str:
    return f"{min(shares):.1%} to {max(shares):.1%}"
