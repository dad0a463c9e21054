"""A season in one process, its page at the end: seconds and peak memory of 30, 90 and 180 days, each in its own; and
what the commands that read a season without thinning take.

python -m tests.benchmarks.season
"""

import json
import resource
import subprocess
import sys
import tempfile
import time
from pathlib import Path

from tests.canals import scenario_of
from tests.seasons import EVERY_MINUTE, season

from toeline import simulate
from toeline.report.run_summary import run_summary

DAYS = (30, 90, 180)
READ_DAYS = (30, 180)
OTHER_MOVE = 0.03
"""Of the season that is compared with the first [m]."""
ONE_DAY = 1
"""Run before, so that nothing is compiled while the clock runs."""


def run_season(days: int, folder: Path) -> dict[str, float]:
    """Step a season and write its page; seconds of wall and processor time, peak memory and size of the file [MB]."""
    began, worked = time.perf_counter(), time.process_time()
    scenario = scenario_of(folder, *season(days))
    with simulate(scenario, folder / "season.nc", overwrite=True) as run:
        stepped, stepped_peak = time.perf_counter() - began, _peak()
        run_summary(run, scenario.display)
        rows = run.sizes["time"]
    return {
        "stepped": stepped,
        "whole": time.perf_counter() - began,
        "processor": time.process_time() - worked,
        "stepped_peak": stepped_peak,
        "peak": _peak(),
        "rows": rows,
        "file": (folder / "season.nc").stat().st_size / 1e6,
    }


def _peak() -> float:
    """Peak memory of this process [MB]; Linux counts it in kB."""
    return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1e3


def _in_a_process(days: int, folder: Path) -> dict[str, float]:
    command = [sys.executable, "-m", "tests.benchmarks.season", str(days), str(folder)]
    found: dict[str, float] = json.loads(subprocess.run(command, check=True, capture_output=True, text=True).stdout)
    return found


def time_the_pages(folder: Path) -> None:
    """Print the table."""
    _in_a_process(ONE_DAY, folder)
    print("season of 20 pools, thinned but around events: wall time of stepping, and with the page; processor time;")
    print("peak memory before and with the page")
    print(f"{'days':>6}{'stepped':>10}{'page':>10}{'processor':>12}{'peak':>10}{'page':>9}{'rows':>9}{'file':>10}")
    for days in DAYS:
        one = _in_a_process(days, folder)
        print(
            f"{days:>6}{one['stepped']:>8.1f} s{one['whole']:>8.1f} s{one['processor']:>10.1f} s"
            f"{one['stepped_peak']:>7.0f} MB{one['peak']:>6.0f} MB{one['rows']:>9.0f}{one['file']:>7.0f} MB"
        )


def time_the_reading(folder: Path) -> None:
    """Print what `run` with its page and every command that reads its file take, each in a process of its own."""
    _in_a_process(ONE_DAY, folder)
    print("season of 20 pools, a row every minute: processor time and peak memory of each command")
    for days in READ_DAYS:
        for name, words in _commands(days, folder).items():
            taken, peak = _measured(words, folder)
            print(f"{days:>6} d  {name:<10}{taken:>8.1f} s{peak:>7.0f} MB", flush=True)


def _commands(days: int, folder: Path) -> dict[str, list[str]]:
    """The commands by name; their files are made on the way."""
    scenario_of(folder, *season(days, **EVERY_MINUTE), name=f"first{days}")
    scenario_of(folder, *season(days, OTHER_MOVE, **EVERY_MINUTE), name=f"other{days}")
    first, other = f"first{days}.nc", f"other{days}.nc"
    return {
        "run": ["run", f"first{days}.toml"],
        "run, other": ["run", f"other{days}.toml"],
        "describe": ["describe", first],
        "report": ["report", first],
        "figures": ["figures", first, "--to", f"figures{days}"],
        "compare": ["compare", first, other],
        "orders": ["orders", first],
    }


def _measured(words: list[str], folder: Path) -> tuple[float, float]:
    """Processor time [s] and peak memory [MB] of a command that must succeed; a small process starts it, for Linux
    counts in the peak of whoever starts a process.
    """
    command = [sys.executable, "-c", _MEASURE, sys.executable, "-m", "toeline", *words]
    told = subprocess.run(command, cwd=folder, check=True, capture_output=True, text=True).stdout
    taken, peak = told.splitlines()[-1].split()
    return float(taken), float(peak) / 1e3


_MEASURE = """
import os, sys
_, status, used = os.wait4(os.spawnv(os.P_NOWAIT, sys.argv[1], sys.argv[1:]), 0)
print(used.ru_utime + used.ru_stime, used.ru_maxrss)
sys.exit(os.waitstatus_to_exitcode(status))
"""


def main() -> None:
    """The table alone."""
    with tempfile.TemporaryDirectory() as folder:
        time_the_pages(Path(folder))


if __name__ == "__main__":
    if len(sys.argv) > 1:
        print(json.dumps(run_season(int(sys.argv[1]), Path(sys.argv[2]))))
    else:
        main()
