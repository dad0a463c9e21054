"""How the time of a run grows with pools, days and spacing, and its peak memory with days."""

import resource
import subprocess
import sys
from collections.abc import Callable, Sequence
from pathlib import Path
from statistics import median

import numpy as np
from tests.benchmarks.canal_day import CanalDay
from tests.benchmarks.timing import alternated, seconds
from tests.canals import Table, day, order, scenario_of, stepped_canal

from toeline import simulate

REPEATS = 5
POOLS, DAYS, SPACINGS = (5, 10, 20, 40, 80), (1, 3, 10, 30), (400, 200, 100, 50, 25)
MEMORY_DAYS = (1, 5, 15, 30)
SEASON = (20, 180)
DAY_LENGTH = 86_400
MOVES = 20
"""Gate moves a day, however many gates: the work of every stop grows with the canal, their number does not."""


def busy_days(pools: int, days: int, spacing: float = 100.0) -> tuple[Table, Table]:
    """A canal of pools 4 km long for some days, each with 20 gate moves, taken back the next day, and two steps of
    inflow.
    """
    rng = np.random.default_rng(1)
    moves = [(1 + k) * 3600 + int(rng.integers(0, 3000)) for k in range(MOVES)]
    orders = [
        order(f"+{d * DAY_LENGTH + second} s", f"G{k % pools}", by=0.05 if d % 2 == 0 else -0.05)
        for d in range(days)
        for k, second in enumerate(moves)
    ]
    steps = [
        [f"+{d * DAY_LENGTH + hour * 3600} s", inflow]
        for d in range(days)
        for hour, inflow in ((0, 8.0), (6, 10.0), (18, 8.0))
    ]
    inflow = {"shape": "steps", "values": steps}
    period = {"spacing": f"{spacing} m"}
    return stepped_canal(pools, 4000.0), day(inflow, length=f"{24 * days} h", period=period, orders=orders)


def time_growth(folder: Path) -> None:
    print("growth: output every minute and near-gate pass, processor time")
    tell("pools, by nodes", {pools: CanalDay(folder, *busy_days(pools, 1)) for pools in POOLS}, nodes_of)
    tell("days", {days: CanalDay(folder, *busy_days(10, days)) for days in DAYS}, lambda case: case.timetable.length)
    tell(
        "spacing [m], by nodes",
        {spacing: CanalDay(folder, *busy_days(10, 1, spacing)) for spacing in SPACINGS},
        nodes_of,
    )


def nodes_of(case: CanalDay) -> int:
    return case.network.node_count


def tell(what: str, cases: dict[int, CanalDay], size: Callable[[CanalDay], float]) -> None:
    """Times of runs, and the exponent with which they grow by their size."""
    for case in cases.values():
        case.step()
    times = alternated({str(name): case.step for name, case in cases.items()}, REPEATS)
    medians = [median(taken) for taken in times.values()]
    row = ", ".join(f"{name}: {taken:.3f} s" for name, taken in zip(times, medians, strict=True))
    print(f"{what}: {row}; exponent {exponent([size(case) for case in cases.values()], medians):.2f}")


def exponent(sizes: Sequence[float], times: Sequence[float]) -> float:
    """Slope of the line through the logarithms (least squares)."""
    return float(np.polyfit(np.log(sizes), np.log(times), 1)[0])


def tell_memory(folder: Path) -> None:
    """Peak memory of runs that write their file, each in a process of its own."""
    peaks = {days: run_apart(folder, 10, days)[1] for days in MEMORY_DAYS}
    print("peak memory of a run of 10 pools that writes its file")
    print(", ".join(f"{days} d: {peak:.0f} MB" for days, peak in peaks.items()))
    by_day = np.polyfit(list(peaks), list(peaks.values()), 1)[0]
    print(f"{by_day:.2f} MB a day of the run")


def time_the_season(folder: Path) -> None:
    """Once: a long run of a larger canal, its file written."""
    taken, peak = run_apart(folder, *SEASON)
    size = (folder / "run.nc").stat().st_size / 1e6
    print("season: {} pools, {} days, output every minute, from the scenario to the file".format(*SEASON))
    print(f"{taken:.1f} s of processor time, peak memory {peak:.0f} MB, file {size:.0f} MB")


def run_apart(folder: Path, pools: int, days: int) -> tuple[float, float]:
    """Processor time [s] and peak memory [MB] of a run in a process of its own."""
    command = [sys.executable, "-m", "tests.benchmarks.growth", str(folder), str(pools), str(days)]
    taken, peak = subprocess.run(command, check=True, capture_output=True, text=True).stdout.split()
    return float(taken), float(peak)


if __name__ == "__main__":
    place, (pool_count, day_count) = Path(sys.argv[1]), map(int, sys.argv[2:])
    scenario = scenario_of(place, *busy_days(pool_count, day_count))
    print(seconds(lambda: simulate(scenario, place / "run.nc", overwrite=True).close()))
    print(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0)
